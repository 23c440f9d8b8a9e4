"""Floor 2: the typed intermediate representation.  Does not know the syntax."""
