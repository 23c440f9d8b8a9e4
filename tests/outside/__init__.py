"""Reference computations for the tests, made with other people's libraries or by other theorems.  Imports nothing of opslang."""
