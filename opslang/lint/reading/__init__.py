"""Reading a draft: text and formulas in order, macros expanded, each token with its place in the author's file.

Knows TeX, Markdown and notebooks as far as finding mathematics asks; knows no mathematics.
"""

from __future__ import annotations

from opslang.lint.reading.document import (
    Directive,
    Document,
    Environment,
    File,
    Formula,
    Notice,
    Piece,
    Text,
    Token,
    Where,
    extent,
)
from opslang.lint.reading.draft import read, read_file, read_text
from opslang.lint.reading.notebook import cell_at

__all__ = [
    "Directive",
    "Document",
    "Environment",
    "File",
    "Formula",
    "Notice",
    "Piece",
    "Text",
    "Token",
    "Where",
    "cell_at",
    "extent",
    "read",
    "read_file",
    "read_text",
]
