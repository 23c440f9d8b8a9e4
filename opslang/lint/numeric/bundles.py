"""Relations between characteristic classes: decided in the cohomology of the space that classifies the bundle.

What holds in H^*(BO) holds for every bundle; what fails there may hold for oriented ones, or for those of small rank.
So a relation is false only where the draft says which bundles it speaks of, or where it fails for all kinds.  The Wu
classes are given by w = Sq(v), the dual ones by w times their sum = 1 (Wu 1950; Milnor and Stasheff 1974, sections 4
and 11)."""

from __future__ import annotations

from collections.abc import Callable

from attrs import evolve

from opslang.lint.context.names import names_of
from opslang.lint.model import ClassName, Factor, Known, Sum
from opslang.lint.numeric.rules_given import changed

Answer = Callable[[Known], "object"]
DUAL = "bar w"
DUAL_CLASSES = ("omega_1 = w_1", "omega_2 = w_1^2 + w_2", "omega_3 = w_1^3 + w_3")
WU_CLASSES = ("v_1 = w_1", "v_2 = w_2 + w_1^2", "v_3 = w_1 w_2", "v_4 = w_4 + w_3 w_1 + w_2^2 + w_1^4")
KINDS = {"w": ("BO", "BSO", "BSpin"), "c": ("BU",)}
HIGHEST = 40


def family_of(left: Sum, right: Sum, known: Known) -> str:
    """The letter of the characteristic classes that occur, w (with v) or c; empty where there are none."""
    names = [*names_of(left), *names_of(right)]
    letters = {
        name.letter for name in names if name.letter in known.families and name.letter in ("w", "v", "c") and name.index
    }
    letters -= {name.letter for name in names if name.spelling in known.classes and name.letter != "w"}
    letters |= {"w"} if any(name.letter == DUAL for name in names) and "w" in known.families else set()
    letters = {"w" if letter == "v" else letter for letter in letters}
    families = {name.family for name in names if name.letter in ("w", "c")}
    return letters.pop() if len(letters) == 1 and len(families) <= 1 else ""


def in_space(known: Known, letter: str, space: str) -> Known:
    """What is known, with the classes of the letter taken in the cohomology of a space."""
    lines = [f"on {space}"]
    if letter == "w" and "v" in known.families:
        lines += [f"let {line}" for line in WU_CLASSES]
    if letter == "w":
        lines += [f"let {line}" for line in DUAL_CLASSES]
    kept = {spelling: fact for spelling, fact in known.classes.items() if not spelling.startswith((letter + "_", "v_"))}
    families = {name: fact for name, fact in known.families.items() if name not in (letter, "v")}
    return evolve(known, script=(*known.script, *lines), classes=kept, families=families)


def undualised(tree: Sum) -> Sum:
    """The tree with the dual classes under the name that they have in scripts."""
    return changed(tree, lambda factor: _dual(factor))


def _dual(factor: Factor) -> Factor | None:
    if isinstance(factor, ClassName) and factor.letter == DUAL:
        return ClassName("omega", factor.index, at=factor.at)
    return None


def said_space(known: Known, letter: str) -> str:
    """The space that the draft names for the classes of the letter."""
    family = known.families.get(letter)
    return family.space if family is not None else ""


def has_space(known: Known) -> bool:
    """Whether the author's own declarations choose a space."""
    return any(line.startswith("on ") for line in known.script)
