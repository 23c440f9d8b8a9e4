"""Floor 1: what is said about the input.  A diagnostic is a value; printing is somebody else's job."""
