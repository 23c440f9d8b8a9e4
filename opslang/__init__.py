"""Cohomology operations on the classes of Eilenberg–MacLane spaces: a language and its compiler.

The names of `opslang.api` are reached from here; they are imported when first asked for, so that the command line
starts without them.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

__version__ = "0.1.0"

if TYPE_CHECKING:
    from opslang.api import (
        Comparison,
        Explanation,
        Factor,
        Normal,
        OpslangError,
        Parsed,
        Script,
        Term,
        basis,
        compare,
        explain,
        normalise,
        parse,
        series,
    )

__all__ = [
    "Comparison",
    "Explanation",
    "Factor",
    "Normal",
    "OpslangError",
    "Parsed",
    "Script",
    "Term",
    "basis",
    "compare",
    "explain",
    "normalise",
    "parse",
    "series",
]


def __getattr__(name: str) -> Any:
    if name in __all__:
        from opslang import api

        return getattr(api, name)
    raise AttributeError(f"module 'opslang' has no attribute {name!r}")


def __dir__() -> list[str]:
    return [*__all__, "__version__"]
