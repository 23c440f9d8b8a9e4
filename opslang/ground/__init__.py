"""Floor 0: numbers and text.  Imports nothing of ours."""
