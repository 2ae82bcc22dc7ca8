"""One module per design standard; the rule set names the one that judges. Standards do not import each other."""
