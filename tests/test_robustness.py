"""Hostile input, from end to end: the real command, real files, real signals.

Each of these is to end within two seconds on an idle machine; the tests allow ten, since test machines are
shared, and a test that took longer than two says so in its report.
"""

from __future__ import annotations

import errno
import json
import os
import random
import signal
import subprocess
import time
import warnings
from collections.abc import Iterator
from contextlib import suppress
from functools import partial
from pathlib import Path

import pytest
from command import COMMAND, Ran, environment, start
from command import opslang as untimed

opslang = partial(untimed, timed=True)
BUDGET = 2.0
ALLOWED = 10.0


def timely(ran: Ran) -> Ran:
    """Passes a run on, if it was not too long."""
    assert ran.seconds < ALLOWED
    if ran.seconds > BUDGET:
        warnings.warn(f"took {ran.seconds:.1f} s, more than the {BUDGET} s of an idle machine", stacklevel=2)
    assert "Traceback" not in ran.err
    return ran


# --- large statements ---------------------------------------------------------------------------


def test_an_admissible_word_of_length_forty_is_answered() -> None:
    word = " ".join(f"Sq^{{{2**k}}}" for k in range(39, -1, -1))
    ran = timely(opslang("eval", word))
    assert ran.status == 0 and ran.out.startswith("Sq^549755813888 Sq^274877906944")


def test_a_word_of_length_forty_that_vanishes_is_answered() -> None:
    ran = timely(opslang("eval", "Sq^1 " * 40))  # Sq^1 Sq^1 = 0 (Mosher and Tangora 1968, chapter 3)
    assert ran.status == 0 and ran.out.startswith("0 ")


def test_a_random_word_of_length_forty_is_answered_or_refused_in_time() -> None:
    chance = random.Random(20)
    for _ in range(3):
        ran = timely(opslang("eval", " ".join(f"Sq^{chance.randint(1, 60)}" for _ in range(40))))
        assert ran.status == 0 or (ran.status == 2 and "--limit" in ran.err)


@pytest.mark.parametrize("prime", [2, 3, 7])
def test_an_index_of_a_million(prime: int) -> None:
    head = "Sq" if prime == 2 else "P"
    ran = timely(opslang("eval", "--prime", str(prime), f"{head}^1000000", f"{head}^{{1000000}} iota_5"))
    assert ran.status == 0 and ran.out.splitlines()[0].startswith(f"{head}^1000000")
    assert ran.out.splitlines()[-1].startswith("0 ")
    ran = timely(opslang("eval", "--prime", str(prime), f"{head}^1000000 {head}^999999"))
    assert ran.status == 0 or (ran.status == 2 and "--limit" in ran.err)


def test_a_hundred_nested_brackets() -> None:
    ran = timely(opslang("eval", "(" * 100 + "Sq^2 Sq^2" + ")" * 100))
    assert ran.status == 0 and ran.out.startswith("Sq^3 Sq^1 ")
    ran = timely(opslang("eval", "(" * 100 + "Sq^2 Sq^2" + ")" * 99))
    assert ran.status == 2 and "argument:1:" in ran.err


def test_five_thousand_nested_brackets_are_answered_or_refused() -> None:
    ran = timely(opslang("run", "-", stdin="(" * 5000 + "Sq^2 Sq^2" + ")" * 5000 + "\nSq^1 iota_1\n"))
    assert "iota_1^2" in ran.out


def test_a_line_of_a_megabyte_is_answered_or_refused_in_time() -> None:
    terms = ["Sq^2 Sq^2 x"] * 70_001
    ran = timely(opslang("run", "-", stdin="let x in H^3\n" + " + ".join(terms) + "\nSq^1 x\n"))
    assert ran.status == 0 or ran.err.startswith("-:2:1: error: long-statement: ")
    assert max(map(len, ran.err.splitlines()), default=0) < 300
    assert [line.split("  ")[0] for line in ran.out.splitlines()][-1] == "Sq^1 x"


def test_a_line_of_ninety_kilobytes_is_answered() -> None:
    ran = timely(opslang("run", "-", stdin="let x in H^3\n" + " + ".join(["Sq^2 Sq^2 x"] * 6_001) + "\n"))
    assert ran.status == 0 and ran.out.startswith("Sq^3 Sq^1 x ")


def test_a_fault_far_out_in_a_long_line_is_shown_in_a_window() -> None:
    ran = timely(opslang("run", "-", stdin="let x in H^3\n" + "x + " * 20_000 + "Sq4 x" + "\nSq^1 x\n"))
    assert ran.status == 2 and ran.err.startswith("-:2:80001: error: ")
    assert max(map(len, ran.err.splitlines())) < 300 and "Sq4 x" in ran.err
    assert "Sq^1 x" in ran.out


def test_an_overlong_line_is_refused_and_the_rest_runs() -> None:
    ran = timely(opslang("run", "-", stdin="x" * 4_100_000 + "\nSq^2 iota_2\n"))
    assert ran.status == 2 and ran.err.startswith("-:1:1: error: long-line: ") and ran.out.startswith("iota_2^2")
    ran = timely(opslang("run", "--output", "jsonl", "-", stdin="x" * 4_100_000 + "\nSq^2 iota_2\n"))
    assert [json.loads(line)["name"] for line in ran.out.splitlines()] == ["long-line", None]


@pytest.mark.parametrize(
    "line",
    [
        "iota_10^1000000",
        "(Sq^1 + Sq^2)^1000000",
        "Sq^{10^100} iota_3",
        "Sq^{9^9^9^9} iota_3",
        "x^{-1}",
        "beta_{1000000} iota_2",
        "Q_1000000",
        "Q_200 iota_3",
        "chi(Sq^{1000000})",
        "series K(Z/2, 30) to 1000000",
        "basis H^1000000(K(Z/2, 40))",
        "on K(Z^1000000, 3)",
        "on K(Z/" + "9" * 3000 + ", 3)",
        "prime 1000000007",
        "prime 18446744073709551557",
        "prime " + "7" * 5000,
        "Sq iota_100000",
        "why Sq^100 Sq^99 Sq^98 Sq^97 Sq^96",
        "Sq^" + "9" * 5000,
        "\x1b[2J Sq^1 \x07",
        "Sq^1 \u202e iota_1",
        "Sq^1 \u200biota_1",
    ],
)
def test_a_hostile_line_ends_in_time_and_the_next_one_runs(line: str) -> None:
    ran = timely(opslang("run", "-", stdin=line + "\nprime 2\non K(Z/2, 2)\nSq^2 iota_2\n"))
    assert ran.status in (0, 2) and ran.out.rstrip().splitlines()[-1].startswith("iota_2^2")
    assert "\x1b" not in ran.err and "\x07" not in ran.err


# --- bytes --------------------------------------------------------------------------------------


def test_a_binary_file(tmp_path: Path) -> None:
    (tmp_path / "a.ops").write_bytes(bytes(range(256)) * 64)
    ran = timely(opslang("run", "a.ops", "-", cwd=tmp_path, stdin="Sq^2 iota_2\n"))
    assert ran.status == 2 and ran.err.startswith("a.ops: error: binary-file: ") and ran.out.startswith("iota_2^2")


def test_invalid_utf_8_is_placed_and_the_rest_runs(tmp_path: Path) -> None:
    (tmp_path / "a.ops").write_bytes(b"Sq^1 iota_1\nSq^1 \xff iota_1\nSq^2 iota_2\n")
    ran = timely(opslang("run", "a.ops", cwd=tmp_path))
    assert ran.status == 2 and ran.err.startswith("a.ops:2:6: error: ") and "\\xff" in ran.err
    assert [line.split()[0] for line in ran.out.splitlines()] == ["iota_1^2", "iota_2^2"]
    ran = timely(opslang("run", "--output", "jsonl", "a.ops", cwd=tmp_path))
    assert [json.loads(line)["verdict"] for line in ran.out.splitlines()] == ["ok", "error", "ok"]


def test_byte_order_mark_line_ends_and_no_last_line_end(tmp_path: Path) -> None:
    (tmp_path / "a.ops").write_bytes(b"\xef\xbb\xbfSq^1 iota_1\r\nSq^2 iota_2")
    ran = timely(opslang("run", "a.ops", cwd=tmp_path))
    assert (ran.status, ran.err) == (0, "")
    assert [line.split()[0] for line in ran.out.splitlines()] == ["iota_1^2", "iota_2^2"]


def test_a_file_name_of_odd_bytes(tmp_path: Path) -> None:
    name = os.fsencode(tmp_path) + b"/\xff\x1b.ops"
    Path(os.fsdecode(name)).write_bytes(b"Sq^1 +\n")
    for form in ("text", "jsonl"):
        ran = timely(opslang("run", "--output", form, os.fsdecode(name)))
        assert ran.status == 2 and "\x1b" not in ran.err and "\x1b" not in ran.out


def test_noise_never_ends_in_a_traceback() -> None:
    chance = random.Random(1812)
    letters = "Sq^PQ_{}()+-=*,;:'&$\\%# iota_3 beta chi let on why basis \n\t1234 ι₃⊗∪\ud7ff\U0001d53d"
    lines = ["".join(chance.choices(letters, k=chance.randint(1, 60))) for _ in range(400)]
    data = "\n".join(lines).encode("utf-8", "surrogatepass")
    ran = timely(opslang("run", "-", stdin=data))
    assert ran.status in (0, 1, 2) and "internal-fault" not in ran.err


# --- files --------------------------------------------------------------------------------------


def test_folder_vanished_and_unreadable_files_do_not_stop_the_others(tmp_path: Path) -> None:
    (tmp_path / "folder").mkdir()
    os.symlink("round.ops", tmp_path / "round.ops")
    (tmp_path / "good.ops").write_text("Sq^2 iota_2\n")
    names = ["folder", "gone.ops", "round.ops", "good.ops"]
    if os.geteuid() != 0:  # root may read anything
        (tmp_path / "locked.ops").write_text("Sq^2 iota_2\n")
        (tmp_path / "locked.ops").chmod(0)
        names.insert(0, "locked.ops")
    ran = timely(opslang("run", *names, cwd=tmp_path))
    said = dict(line.split(": error: ", 1) for line in ran.err.splitlines()[:-1])
    assert said["folder"].startswith("folder-for-file: ") and said["gone.ops"].startswith("missing-file: ")
    assert said["round.ops"].startswith("unreadable-file: ") and said.get("locked.ops", "unreadable-file").startswith(
        "unr"
    )
    assert ran.err.splitlines()[-1] == f"opslang: {len(names) - 1} of {len(names)} files could not be read"
    assert ran.status == 2 and ran.out.startswith("iota_2^2")


def test_a_file_that_vanishes_while_its_turn_is_awaited(tmp_path: Path) -> None:
    (tmp_path / "b.ops").write_text("Sq^2 iota_2\n")
    with start("run", "-", "b.ops", cwd=tmp_path) as process:
        (tmp_path / "b.ops").unlink()
        out, err = process.communicate(b"Sq^1 iota_1\n", timeout=ALLOWED)
    assert process.returncode == 2 and out.startswith(b"iota_1^2") and b"b.ops: error: missing-file: " in err


@pytest.mark.skipif(not os.path.exists("/dev/full"), reason="there is no /dev/full on this system")
@pytest.mark.parametrize(
    "arguments", [["eval", "Sq^1 iota_2"], ["run", "-"], ["run", "--jobs", "2", "-"], ["explain"], ["--help"]]
)
def test_a_full_device(arguments: list[str]) -> None:
    with open("/dev/full", "wb") as full:
        done = subprocess.run(
            [*COMMAND, *arguments],
            input=b"Sq^1 iota_2\n" * 5,
            stdout=full,
            stderr=subprocess.PIPE,
            env=environment(),
            timeout=ALLOWED,
            check=False,
        )
    reason = os.strerror(errno.ENOSPC).lower()
    assert done.stderr.decode() == f"opslang: error: output-failed: standard output cannot be written: {reason}\n"
    assert done.returncode == 2


def shell(line: str) -> subprocess.CompletedProcess[bytes]:
    """Runs a line of sh in which OPSLANG stands for the command."""
    line = line.replace("OPSLANG", " ".join(COMMAND))
    return subprocess.run(["sh", "-c", line], capture_output=True, env=environment(), timeout=ALLOWED, check=False)


def test_closed_streams() -> None:
    done = shell("OPSLANG eval 'Sq^1 iota_2' >&-")
    assert done.returncode == 2 and done.stderr == b"opslang: error: output-failed: standard output is closed\n"
    done = shell("OPSLANG eval 'Sq^1 +' 'Sq^2 iota_2' 2>&-")
    assert done.returncode == 2 and done.stdout.startswith(b"iota_2^2") and done.stderr == b""
    done = shell("OPSLANG run - <&-")
    assert done.returncode == 2 and done.stderr == b"-: error: unreadable-file: standard input is closed\n"
    assert shell("OPSLANG run - <&- >&- 2>&-").returncode == 2


def test_a_closed_pipe_ends_quietly(tmp_path: Path) -> None:
    (tmp_path / "a.ops").write_text("Sq^2 Sq^2 iota_3\n" * 20_000)
    for options in ("", "--jobs 2", "--output jsonl"):
        done = shell(f"OPSLANG run {options} {tmp_path}/a.ops | head -n 1")
        assert done.returncode == 0 and done.stderr == b"" and b"Sq" in done.stdout
    done = shell(f"(OPSLANG run {tmp_path}/a.ops; echo $? >&2) | head -n 1")
    assert done.stderr == b"0\n"
    assert shell("OPSLANG --help | true").stderr == b""


# --- signals ------------------------------------------------------------------------------------

LONG = b"why Sq^6 Sq^4 Sq^3 (iota_2 iota_3 iota_4 iota_5)\n"


def wait_for(process: subprocess.Popen[bytes], line: bytes) -> None:
    """Reads standard output until a line begins as wanted."""
    assert process.stdout is not None
    while not (read := process.stdout.readline()).startswith(line):
        assert read, "the command ended too early"


@pytest.fixture
def waiting() -> Iterator[subprocess.Popen[bytes]]:
    """A run that has answered one statement and waits for the next."""
    with start("run", "-") as process:
        assert process.stdin is not None
        process.stdin.write(b"Sq^1 iota_1\nSq^1 iota_1\n\n")
        process.stdin.flush()
        wait_for(process, b"iota_1^2")
        yield process
        process.kill()


def test_an_interrupt_while_it_waits(waiting: subprocess.Popen[bytes]) -> None:
    begun = time.monotonic()
    waiting.send_signal(signal.SIGINT)
    _, err = waiting.communicate(timeout=ALLOWED)
    assert waiting.returncode == 130 and err == b"opslang: interrupted\n" and time.monotonic() - begun < BUDGET * 5


def test_an_end_asked_for_by_sigterm(waiting: subprocess.Popen[bytes]) -> None:
    waiting.send_signal(signal.SIGTERM)
    _, err = waiting.communicate(timeout=ALLOWED)
    assert waiting.returncode == 143 and err == b""


def test_an_interrupt_of_a_run_with_workers() -> None:
    with start("run", "--jobs", "2", "-") as process:
        assert process.stdin is not None
        process.stdin.write(b"Sq^1 iota_1\n" * 40)
        process.stdin.flush()
        wait_for(process, b"iota_1^2")
        process.send_signal(signal.SIGINT)
        _, err = process.communicate(timeout=ALLOWED)
        assert process.returncode == 130 and err == b"opslang: interrupted\n"


def test_a_worker_that_is_lost_is_reported() -> None:
    with start("run", "--jobs", "2", "-") as process:
        assert process.stdin is not None
        process.stdin.write(b"Sq^1 iota_1\n" * 40)
        process.stdin.flush()
        wait_for(process, b"iota_1^2")
        for worker in children(process.pid):
            with suppress(ProcessLookupError):  # the first process ends the others once it notices
                os.kill(worker, signal.SIGKILL)
        _, err = process.communicate(b"Sq^1 iota_1\n" * 40, timeout=ALLOWED)
        assert process.returncode == 2 and err.startswith(b"opslang: error: worker-lost: ")


def children(process: int) -> list[int]:
    """The processes that a process has started."""
    listed = subprocess.run(["ps", "-o", "pid=", "--ppid", str(process)], capture_output=True, text=True, check=True)
    return [int(number) for number in listed.stdout.split()]
