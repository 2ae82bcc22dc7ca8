"""One module per file written."""
