"""Floor 5: statements that need the engine before they can be answered: maps, bundles, comparisons of spaces."""
