"""Cohomology operations on the classes of Eilenberg–MacLane spaces: a language and its compiler."""

__version__ = "0.1.0"
