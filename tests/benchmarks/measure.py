"""One measurement in its own process: `python -m tests.benchmarks.measure PROGRAM WORKLOAD [NUMBERS]`, one JSON line.

PROGRAM is `opslang`, through the function that `opslang run` calls, or `short`, the baseline.
"""

from __future__ import annotations

import json
import resource
import sys
import time
from collections.abc import Callable
from typing import Any

from tests.benchmarks import short, workloads

NO_LIMIT = 10**15


def _engine(prime: int, top: int) -> Any:
    from opslang.tables.engine import Engine
    from opslang.tables.evaluation import Evaluation

    engine = Engine(prime, NO_LIMIT)
    return Evaluation(engine, engine.ring(top))


def _words(program: str, words: list[workloads.Word], prime: int) -> Callable[[], int]:
    if program == "short":
        normal = short.squares if prime == 2 else short.powers
        return lambda: sum([len(normal(word)) for word in words])
    walk = _engine(prime, 900)
    return lambda: sum([len(walk.word(word)) for word in words])


def _cartan(program: str, low: int) -> Callable[[], int]:
    from opslang.ir.tree import Class

    ring = _engine(2, 900).ring
    places = []
    for word in workloads.GENERATORS:
        element = ring.generator(Class("iota", 3, 0, 3))
        for token in reversed(word):
            element = ring.letter(token, element)
        places.append(min(element))
    jobs = [(k, sum(e * x for e, x in zip(powers, places))) for k, powers in workloads.monomials(low=low)]
    return lambda: sum([len(ring.letter(k, {monomial})) for k, monomial in jobs])


def _series(to: int) -> Callable[[], int]:
    import opslang

    spaces = [f"K({group}, {n})" for n in range(1, 9) for group in ("Z/2", "Z")]
    return lambda: sum([opslang.series(space, to)[-1] % 2 for space in spaces])


def _script(lines: int) -> Callable[[], int]:
    from opslang.ground.source import Source
    from opslang.pipeline import Session
    from opslang.render.show import show
    from opslang.syntax.layout import chunks

    text = workloads.script(lines).splitlines(keepends=True)

    def work() -> int:
        session = Session()
        sources: list[Source] = list(chunks(text, "script"))
        return sum([len(show(session.run(source))) for source in sources])

    return work


def job(program: str, workload: str, numbers: list[int]) -> Callable[[], int]:
    """What is to be timed."""
    match workload:
        case "pairs":
            return _words(program, workloads.pairs(*numbers), 2)
        case "words":
            return _words(program, workloads.words(*numbers), 2)
        case "falling":
            return _words(program, workloads.falling(*numbers), 2)
        case "odd":
            return _words(program, workloads.odd_words(*numbers), 3)
        case "cartan":
            return _cartan(program, *numbers)
        case "series":
            return _series(*numbers)
        case "script":
            return _script(*numbers)
    raise SystemExit(f"no workload is called {workload}")


def main(argv: list[str]) -> None:
    """Measure and print."""
    work = job(argv[0], argv[1], [int(word) for word in argv[2:]])
    start = time.process_time()
    answer = work()
    seconds = time.process_time() - start
    peak = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss
    print(json.dumps({"seconds": seconds, "answer": answer, "peak_kb": peak}))


if __name__ == "__main__":
    main(sys.argv[1:])
