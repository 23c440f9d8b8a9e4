"""Reference computations for the tests, with general libraries or by other theorems.  Imports nothing of opslang."""
