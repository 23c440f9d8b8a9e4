"""Floor 7: the only rooms that print, read files or end the process."""
