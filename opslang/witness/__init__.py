"""Floor 1: the independent witness.  Imports ground only and shares no formula with the laws."""
