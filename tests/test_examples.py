"""The scripts of examples/ through the real command line, with their whole output as golden files.

A golden file is changed by hand, after its difference has been read and its mathematics checked.
"""

from __future__ import annotations

import subprocess
import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parent.parent
SCRIPTS = sorted((ROOT / "examples").glob("*.ops"))


@pytest.mark.parametrize("output", ["text", "jsonl"])
@pytest.mark.parametrize("script", SCRIPTS, ids=lambda path: path.stem)
def test_output_is_the_golden_file(script: Path, output: str) -> None:
    done = subprocess.run(
        [sys.executable, "-m", "opslang", "run", "--output", output, "--width", "100", f"examples/{script.name}"],
        cwd=ROOT,
        capture_output=True,
        text=True,
        check=False,
    )
    golden = ROOT / "tests" / "golden" / f"{script.stem}.{output}"
    assert done.stdout == golden.read_text(encoding="utf-8")
    assert done.returncode == 0, done.stderr


def test_there_are_three_scripts_of_work_and_each_has_both_golden_files() -> None:
    names = {script.stem for script in SCRIPTS}
    assert {"adem_table", "two_stage", "odd_prime"} <= names
    assert {path.stem for path in (ROOT / "tests" / "golden").glob("*.text")} == names
