"""The corpus of drafts: its marks can be read and stand where they say, and its slips are what they claim to be."""

from __future__ import annotations

import os
import shutil
import subprocess
from collections import Counter
from pathlib import Path

import pytest
from drafts.corpus import GIVEN, JUDGED, VERDICTS, Draft, Mark, drafts, offset_of
from drafts.slip_kinds import KINDS
from drafts.slips import Slip, candidates, may_plant, plant
from drafts.squares import differ, read_relation

DRAFTS = drafts()
MARKS = [mark for draft in DRAFTS for mark in draft.marks]
WANTED = "OPSLANG_COMPILE_DRAFTS"


@pytest.mark.parametrize("draft", DRAFTS, ids=lambda draft: draft.name)
def test_every_quote_stands_at_its_place(draft: Draft) -> None:
    for mark in draft.marks:
        text = draft.source(mark.file)
        start = offset_of(text, mark.line, mark.column)
        assert text[start : start + len(mark.quote)] == mark.quote, f"{mark.file}:{mark.line}:{mark.column}"


@pytest.mark.parametrize("draft", DRAFTS, ids=lambda draft: draft.name)
def test_marks_do_not_overlap(draft: Draft) -> None:
    for file in {mark.file for mark in draft.marks}:
        text = draft.source(file)
        end = 0
        for mark in draft.marks:
            if mark.file == file:
                start = offset_of(text, mark.line, mark.column)
                assert start >= end, f"{file}:{mark.line}:{mark.column}"
                end = start + len(mark.quote)


def test_the_fields_of_the_marks() -> None:
    for mark in MARKS:
        assert mark.verdict in VERDICTS and mark.given in GIVEN and mark.judged in JUDGED, mark
        assert mark.quote and mark.reason and mark.kind and mark.needs, mark
        assert (mark.severity in ("error", "warning")) == (mark.verdict == "false"), mark
        assert mark.verdict == "undecidable" or mark.judged == "formula by formula", mark


def test_there_are_enough_of_each() -> None:
    by_hand = [mark for mark in MARKS if mark.judged == "formula by formula"]
    verdicts = Counter(mark.verdict for mark in by_hand)
    assert len(DRAFTS) >= 12
    assert len(by_hand) >= 600 and verdicts["false"] >= 60 and verdicts["undecidable"] >= 80
    assert sum(mark.relation for mark in MARKS) >= 400
    assert all(any(mark.verdict == "false" for mark in draft.marks) for draft in DRAFTS)


@pytest.mark.parametrize("mark", [mark for mark in MARKS if read_relation(mark.quote)], ids=lambda mark: mark.quote)
def test_numeric_relations_are_marked_as_they_act(mark: Mark) -> None:
    """Squares on products of classes of degree one (Cartan's formula alone) agree with the verdict."""
    relation = read_relation(mark.quote)
    assert relation is not None
    if mark.kind == "adem" and mark.verdict != "undecidable":
        assert differ(*relation) == (mark.verdict == "false")


def test_the_same_seed_plants_the_same_slips() -> None:
    first, second = plant(7, 40), plant(7, 40)
    assert first == second and len(first) == 40
    assert first != plant(8, 40)


def test_slips_stand_in_true_formulas_and_change_nothing_else() -> None:
    by_name = {draft.name: draft for draft in DRAFTS}
    for slip in candidates():
        text = by_name[slip.draft].source(slip.file)
        start = offset_of(text, slip.line, slip.column)
        assert may_plant(slip.mark) and slip.formula != slip.original
        assert slip.source == text[:start] + slip.formula + text[start + len(slip.original) :]
        place = offset_of(slip.source, slip.at_line, slip.at_column)
        assert start <= place <= start + len(slip.formula)


def test_every_kind_can_be_planted() -> None:
    kinds = Counter(slip.kind for slip in candidates())
    assert set(kinds) == set(KINDS)
    assert {slip.kind for slip in plant(1, 100)} == set(KINDS)


def test_slips_by_evaluation_act_differently() -> None:
    slips = [slip for slip in candidates() if slip.certainty == "evaluation"]
    assert len(slips) >= 50
    for slip in slips:
        relation = read_relation(slip.formula)
        assert relation is not None and differ(*relation), slip.formula


def test_brackets_balance_after_a_slip() -> None:
    def count(slip: Slip, text: str) -> list[int]:
        return [text.count(opening) - text.count(closing) for opening, closing in ("{}", "()", "[]")]

    for slip in candidates():
        assert count(slip, slip.formula) == count(slip, slip.original), slip.formula


@pytest.mark.skipif(WANTED not in os.environ, reason=f"slow; set {WANTED} to run pdflatex on the drafts")
@pytest.mark.skipif(shutil.which("pdflatex") is None, reason="pdflatex is not installed")
@pytest.mark.parametrize("draft", DRAFTS, ids=lambda draft: draft.name)
def test_the_drafts_compile(draft: Draft, tmp_path: Path) -> None:
    for file in draft.folder.iterdir():
        shutil.copy(file, tmp_path)
    command = ["pdflatex", "-interaction=nonstopmode", "-halt-on-error", draft.main]
    done = subprocess.run(command, cwd=tmp_path, capture_output=True, text=True, errors="replace", timeout=120)
    assert done.returncode == 0, done.stdout[-2000:]
