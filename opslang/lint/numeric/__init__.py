"""Closed formulas computed: numbers in all indices, every class known.  Knows the engines through a session."""
