"""The table of DEVELOPERS.md: `python -m tests.benchmarks` (some minutes), with `--quick` in one."""

from __future__ import annotations

import datetime
import json
import subprocess
import sys
from math import log
from statistics import median
from typing import Any

from tests.benchmarks import workloads

QUICK = "--quick" in sys.argv
ROUNDS = 3 if QUICK else 5


def measure(*words: object) -> dict[str, Any]:
    """One fresh process."""
    command = [sys.executable, "-m", "tests.benchmarks.measure", *map(str, words)]
    return json.loads(subprocess.run(command, capture_output=True, text=True, check=True).stdout)


def medians(*words: object) -> tuple[float, int, int]:
    """Median seconds, the answer, and the median peak in KB of fresh processes."""
    found = [measure(*words) for _ in range(ROUNDS)]
    return median(m["seconds"] for m in found), found[0]["answer"], int(median(m["peak_kb"] for m in found))


def whole(command: list[str], text: str | None = None) -> tuple[float, int]:
    """Median CPU seconds and peak KB of a whole process."""
    probe = (
        "import resource,subprocess,sys;"
        "subprocess.run(sys.argv[1:],stdout=subprocess.DEVNULL,stderr=subprocess.DEVNULL);"
        "u=resource.getrusage(resource.RUSAGE_CHILDREN);print(u.ru_utime+u.ru_stime,u.ru_maxrss)"
    )
    found = []
    for _ in range(ROUNDS):
        done = subprocess.run(
            [sys.executable, "-c", probe, *command], input=text, capture_output=True, text=True, check=True
        )
        seconds, peak = done.stdout.split()
        found.append((float(seconds), int(peak)))
    return median(s for s, _ in found), int(median(p for _, p in found))


def against_short() -> None:
    """Normal forms against the short program."""
    print("| work | opslang, s | short program, s | ratio | peak, MB |\n|---|---|---|---|---|")
    rows: list[tuple[str, tuple[object, ...]]] = [
        ("p = 2: all pairs a + b <= 160", ("pairs",)),
        ("p = 2: 1,500 words of 3 to 6 letters", ("words",)),
        ("p = 2: 20 falling words, 5 letters, degree 200", ("falling", 5, 200)),
        ("p = 3: 60 denser words", ("odd",)),
    ]
    if not QUICK:
        rows.append(("p = 2: 20 falling words, 6 letters, degree 160", ("falling", 6, 160)))
    for title, words in rows:
        ours, answer, peak = medians("opslang", *words)
        theirs, other, _ = medians("short", *words)
        if answer != other:
            raise SystemExit(f"{title}: the two programs disagree")
        print(f"| {title} | {ours:.3f} | {theirs:.3f} | {theirs / ours:.0f} times faster | {peak / 1024:.0f} |")


def against_pass() -> None:
    """Whole commands against an interpreter that does nothing."""
    nothing, empty = whole([sys.executable, "-c", "pass"])
    print(f"\n`python -c pass`: {nothing * 1000:.0f} ms, {empty / 1024:.0f} MB\n")
    print("| command | times `pass` | peak / empty |\n|---|---|---|")
    run = [sys.executable, "-m", "opslang"]
    for title, command in (
        ("`opslang eval 'Sq^2 Sq^2 iota_3'`", [*run, "eval", "Sq^2 Sq^2 iota_3"]),
        ("`opslang --help`", [*run, "--help"]),
    ):
        seconds, peak = whole(command)
        print(f"| {title} | {seconds / nothing:.1f} | {peak / empty:.1f} |")
    seconds, _, peak = medians("opslang", "series", 400)
    print(f"| sixteen series to degree 400 | {seconds / nothing:.1f} | {peak / empty:.1f} |")
    seconds, _, peak = medians("opslang", "falling", 6, 400)
    print(f"| 20 falling words, 6 letters, degree 400 | {seconds / nothing:.1f} | {peak / empty:.1f} |")


def growth() -> None:
    """How costs grow over three doublings: the fitted exponent of the last two."""
    print("\n| work | 1 | 2 | 4 | 8 | exponent |\n|---|---|---|---|---|---|")
    for title, words in (
        ("falling words of 4 letters, degree 100 …", lambda k: ("falling", 4, 100 * k)),
        ("series to degree 200 …", lambda k: ("series", 200 * k)),
        ("a script of 500 lines …", lambda k: ("script", 500 * k)),
        ("Cartan, 30 monomials, k from 6 …", lambda k: ("cartan", 6 * k)),
    ):
        seconds = [medians("opslang", *words(k))[0] for k in (1, 2, 4, 8)]
        exponent = log(seconds[3] / seconds[1]) / log(4)
        print(f"| {title} | " + " | ".join(f"{s:.3f}" for s in seconds) + f" | {exponent:.1f} |", flush=True)


if __name__ == "__main__":
    print(f"{datetime.date.today()}, CPython {sys.version.split()[0]}, medians of {ROUNDS} fresh processes")
    print(f"{len(workloads.pairs())} pairs, {len(workloads.words())} words\n", flush=True)
    against_short()
    against_pass()
    growth()
