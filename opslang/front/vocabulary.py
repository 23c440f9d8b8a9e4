"""The shell's own statements: their words and how each is written.  A table; knows nothing of what they do."""

from __future__ import annotations

SHELL_WORDS: dict[str, str] = {
    "help": "help, help why, help excess",
    "explain": "explain, explain sorts-differ",
    "declared": "declared",
    "results": "results",
    "undo": "undo",
    "notation": "notation text, notation unicode, notation latex",
    "keys": "keys emacs, keys vi",
    "copy": "copy, copy that_3",
    "save": "save FILE, save over FILE",
    "read": "read FILE",
    "limit": "limit, limit 30000000",
    "afresh": "afresh",
    "leave": "leave",
}
"""First words of the statements that only the shell knows, each with the ways to write it."""

ALSO_LEAVE = frozenset(("exit", "quit"))
"""What people type who have not read that the word is `leave`."""

FOR_HELP = "?"
"""A sign that stands for the word `help`."""

BRIEF_LEAVE = "q"
"""Leaves too, where nothing of that name is declared."""

NOTATIONS = ("text", "unicode", "latex")
KEYS = ("emacs", "vi")


def shell_statement(text: str) -> tuple[str, str] | None:
    """Word and argument of a statement of the shell; None for a line of the language."""
    text = text.split("#", 1)[0].strip()
    if text.startswith(FOR_HELP):
        return "help", text.strip(FOR_HELP + " \t")
    words = text.split(None, 1)
    if not words:
        return None
    word = "leave" if words[0] in ALSO_LEAVE and len(words) == 1 else words[0]
    if word == "why" and len(words) == 1:
        return "why", ""
    if word not in SHELL_WORDS:
        return None
    return word, words[1].strip() if len(words) > 1 else ""
