"""From the tokens of a formula to its statements.  Knows TeX tokens and the shapes of formulas, no degrees."""

from __future__ import annotations

from opslang.lint.formula.statements import statements_of

__all__ = ["statements_of"]
