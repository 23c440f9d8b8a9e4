"""The linter on the corpus of drafts: no false alarm, and floors under what is understood and found.

The floors are what is reached today.  They may only rise; the goals stand beside them.  Run with -s to see the table.
"""

from __future__ import annotations

import pytest
from drafts.corpus import drafts
from drafts.measuring import Table, hits, measured, share, whole
from drafts.slips import plant

SLIPS = 60
FLOOR_UNDERSTOOD = 94.0  # goal: 85 % of the rows with a relation
FLOOR_CHECKED = 88.0
FLOOR_FOUND = 92.0  # of what is false in the drafts as they stand; goal: 95 %
FLOOR_PLANTED = 88.0  # goal: 95 % of the planted slips


def line(name: str, table: Table) -> str:
    return (
        f"{name:20} {table.relations:5} {table.understood:10} {table.checked:7} {table.false:5} {table.found:5} "
        f"{len(table.alarms):6}"
    )


@pytest.mark.parametrize("name", [draft.name for draft in drafts()])
def test_no_false_alarm(name: str) -> None:
    table = measured(next(draft for draft in drafts() if draft.name == name))
    said = [
        f"{row.file}:{row.line}:{row.column}: {row.name}: {row.message} | {mark and mark.reason}"
        for row, mark in table.alarms
    ]
    assert said == []


def test_the_table_of_the_drafts() -> None:
    print(f"\n{'draft':20} {'rows':>5} {'understood':>10} {'checked':>7} {'false':>5} {'found':>5} {'alarms':>6}")
    for draft in drafts():
        print(line(draft.name, measured(draft)))
    table = whole()
    print(line("all", table))
    understood, checked = share(table.understood, table.relations), share(table.checked, table.relations)
    found = share(table.found, table.false)
    print(f"understood {understood:.1f} %, checked {checked:.1f} %, found {found:.1f} %")
    assert understood >= FLOOR_UNDERSTOOD
    assert checked >= FLOOR_CHECKED
    assert found >= FLOOR_FOUND


def test_planted_slips_are_found() -> None:
    results = list(hits(plant(7, SLIPS)))
    missed = [slip for slip, rows in results if not rows]
    found = share(len(results) - len(missed), len(results))
    print(f"\nplanted {len(results)}, found {found:.1f} %")
    for slip in missed:
        print(f"missed: {slip.kind}: {slip.draft}:{slip.line}: {slip.formula[:70]!r}")
    assert found >= FLOOR_PLANTED
