"""The author's own comments that the linter does not understand."""

from __future__ import annotations

from opslang.lint.rule import LintRule

RULE = LintRule(
    name="unread-directive",
    title="a comment for the linter is not understood",
    why="A declaration that is not understood would be missed without a word, and what rests on it would not "
    "be checked.",
    bad=("% opslang: lett x in H^2\n$x$",),
    good=("% opslang: let x in H^2\n$x$", "% opslang: skip\n$x$"),
    severity="warning",
    rank=5,
    source="common practice",
)
