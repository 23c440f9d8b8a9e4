"""Integer expressions in symbols: n, 2i(p-1), |x|, 2^j.  Knows no operations."""
