"""The general relations as they are written with symbols, and what a draft may get wrong in them."""
