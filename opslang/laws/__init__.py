"""Floor 3: the mathematical rules, each stated once, as values.  Imports ground and ir."""
