"""Floor 3: from surface to typed tree.  Sorts, degrees, primes, spaces and names are settled here."""
