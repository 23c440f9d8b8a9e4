"""Benchmarks: ratios in one run, each side a fresh process, medians of five: `python -m tests.benchmarks`."""
