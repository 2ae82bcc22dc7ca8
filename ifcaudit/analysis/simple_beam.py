"""Simply supported beams under piecewise-linear and point loads, exact, many at once."""
