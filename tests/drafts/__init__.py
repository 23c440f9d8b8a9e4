"""Invented drafts with every formula judged by hand, and a program that plants slips in them: see `slips.py`."""
