"""Floor 2: from text to surface nodes.  Has never heard of degrees, sorts or primes."""
