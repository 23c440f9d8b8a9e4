"""What the draft says of its classes, spaces, primes and conventions, place by place.  Nothing is invented."""
