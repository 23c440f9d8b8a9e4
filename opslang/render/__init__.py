"""Floor 4: canonical elements and derivations as text, Unicode, TeX and records."""
