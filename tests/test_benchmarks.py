"""The benchmarks measure what `opslang run` does, and the short program they compare with gives the same answers."""

from __future__ import annotations

import json
import subprocess
import sys
from pathlib import Path
from typing import Any

import pytest
from benchmarks import measure, short, workloads

from opslang.front.batch import run
from opslang.front.statement import Settings
from opslang.tables.engine import Engine
from opslang.tables.evaluation import Evaluation
from opslang.tables.ring2 import Ring2

ROOT = Path(__file__).resolve().parent.parent


def test_a_run_calls_the_functions_that_are_measured(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsysbinary: Any
) -> None:
    words: list[tuple[int, ...]] = []
    monomials: list[int] = []
    word, cartan = Evaluation.word, Ring2.cartan

    def spied_word(self: Evaluation, letters: tuple[int, ...]) -> Any:
        words.append(letters)
        return word(self, letters)

    def spied_cartan(self: Ring2, k: int, monomial: int) -> Any:
        monomials.append(k)
        return cartan(self, k, monomial)

    monkeypatch.setattr(Evaluation, "word", spied_word)
    monkeypatch.setattr(Ring2, "cartan", spied_cartan)
    script = tmp_path / "a.ops"
    script.write_text("Sq^2 Sq^4\nSq^4 Sq^4 Sq^2\nSq^5(iota_3^2 iota_4)\n", encoding="utf-8")
    assert run((str(script),), Settings()) == 0
    assert words == [(2, 4), (4, 4, 2)]
    assert monomials == [5]
    words.clear()
    monomials.clear()
    measure.job("opslang", "pairs", [4])()
    measure.job("opslang", "cartan", [6])()
    assert words == workloads.pairs(4)
    assert len(monomials) == 30


@pytest.mark.parametrize("p", [2, 3])
def test_the_short_program_agrees(p: int) -> None:
    words = workloads.words(60, 60) + workloads.pairs(30) if p == 2 else workloads.odd_words(6, 80)
    engine = Engine(p, 10**9)
    walk = Evaluation(engine, engine.ring(900))
    for word in words:
        value = walk.word(word)
        ours = {walk.algebra.unpack(x): 1 if p == 2 else value[x] for x in value}
        assert ours == (short.squares(word) if p == 2 else short.powers(word, p)), word


@pytest.mark.parametrize(
    "arguments",
    [
        ["short", "words", "20"],
        ["opslang", "falling", "4", "60"],
        ["opslang", "series", "40"],
        ["opslang", "script", "20"],
    ],
)
def test_a_measurement_is_one_json_line(arguments: list[str]) -> None:
    done = subprocess.run(
        [sys.executable, "-m", "tests.benchmarks.measure", *arguments],
        cwd=ROOT,
        capture_output=True,
        text=True,
        check=True,
    )
    found = json.loads(done.stdout)
    assert found["seconds"] > 0
    assert found["peak_kb"] > 0


def test_memory_stays_flat_over_a_long_script(tmp_path: Path) -> None:
    """Ten times the lines, the same peak (a tenth of tolerance for what is remembered from line to line)."""
    peaks = []
    for lines in (2_000, 20_000):
        script = tmp_path / f"{lines}.ops"
        script.write_text("let x, y in H^2\n" + "Sq^2(x y) = x^2 y + Sq^1 x Sq^1 y + x y^2\n" * lines, encoding="utf-8")
        probe = (
            "import resource,subprocess,sys;"
            "subprocess.run(sys.argv[1:],stdout=subprocess.DEVNULL,check=True);"
            "print(resource.getrusage(resource.RUSAGE_CHILDREN).ru_maxrss)"
        )
        command = [sys.executable, "-c", probe, sys.executable, "-m", "opslang", "run", str(script)]
        peaks.append(int(subprocess.run(command, cwd=ROOT, capture_output=True, text=True, check=True).stdout))
    assert peaks[1] < 1.1 * peaks[0], peaks
