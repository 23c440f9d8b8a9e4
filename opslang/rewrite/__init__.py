"""Floor 4: the engine that explains.  Finds derivations by trying the laws; computes no coefficient of its own."""
