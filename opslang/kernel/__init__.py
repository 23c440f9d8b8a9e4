"""Floor 4: replays derivations.  Imports laws and terms; has never heard of the engine that finds them."""
