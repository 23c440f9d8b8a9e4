"""Floor 4: the fast engine.  Works on packed words and packed monomials; explains nothing."""
