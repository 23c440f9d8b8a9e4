"""Floor 3: the named spaces.  One file a family; each says its classes, its relations, its operations and their
source."""
