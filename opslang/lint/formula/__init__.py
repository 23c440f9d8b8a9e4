"""From the tokens of a formula to its statements.  Knows TeX tokens and the shapes of formulas, no degrees."""
