"""The command line as its user meets it: commands, options, exit statuses, streams.

Check values: Sq^2 Sq^2 = Sq^3 Sq^1 and Sq^3 Sq^2 = 0 (Mosher and Tangora 1968, chapter 3); P^1 P^1 = 2 P^2 at 3
(Steenrod and Epstein 1962, chapter VI).
"""

from __future__ import annotations

import json
import os
import pty
import re
import subprocess
import sys
from pathlib import Path

import pytest
from command import COMMAND, environment, opslang

import opslang as package

SCRIPT = """\
# a few relations
let x in H^2
Sq^2 Sq^2 iota_3
Sq^2 Sq^2 = Sq^3 Sq^1
Sq^2 x
"""


@pytest.fixture
def script(tmp_path: Path) -> Path:
    path = tmp_path / "a.ops"
    path.write_text(SCRIPT)
    return path


def test_a_script_runs(script: Path) -> None:
    ran = opslang("run", str(script))
    assert ran.status == 0 and ran.err == ""
    assert "Sq^3 Sq^1 iota_3" in ran.out and "true" in ran.out and "x^2" in ran.out


def test_a_line_is_answered() -> None:
    ran = opslang("eval", "Sq^2 Sq^2 iota_3")
    assert (ran.status, ran.err) == (0, "")
    assert ran.out.startswith("Sq^3 Sq^1 iota_3 ")


def test_each_argument_of_eval_is_a_line_or_lines() -> None:
    together = opslang("eval", "let y in H^3", "Sq^3 y\nSq^4 y").out
    assert together == opslang("eval", "let y in H^3", "Sq^3 y", "Sq^4 y").out != ""


def test_an_expression_may_begin_with_a_minus_sign() -> None:
    assert opslang("eval", "--prime", "3", "-beta iota_4").out.startswith(("2 beta iota_4", "-beta iota_4"))
    assert opslang("eval", "--", "-iota_3").status == 0


def test_prime_space_and_declarations_of_eval() -> None:
    assert opslang("eval", "--prime", "3", "P^1 P^1").out.startswith("2 P^2 ")
    assert opslang("eval", "--on", "K(Z, 3)", "Sq^1 iota_3").out.startswith("0 ")
    ran = opslang("eval", "--let", "x in H^2", "--let", "u = Sq^1 x", "u x", "Sq^1(x u)")
    assert (ran.status, ran.err) == (0, "") and "Sq^1 x" in ran.out


def test_a_bad_space_or_declaration_stops_eval_with_its_place() -> None:
    ran = opslang("eval", "--on", "K(Z/2", "Sq^1 iota_3")
    assert ran.status == 2 and ran.out == "" and re.match(r"--on:1:\d+: error: [a-z-]+: ", ran.err)
    ran = opslang("eval", "--let", "x in H^", "x")
    assert ran.status == 2 and ran.out == "" and re.match(r"--let:1:\d+: error: [a-z-]+: ", ran.err)


def test_output_choices(script: Path) -> None:
    assert "Sq³" in opslang("eval", "--output", "unicode", "Sq^2 Sq^2 iota_3").out
    assert "\\mathrm{Sq}" in opslang("eval", "--output", "latex", "Sq^2 Sq^2 iota_3").out
    ran = opslang("run", "--output", "jsonl", str(script))
    records = [json.loads(line) for line in ran.out.splitlines()]
    assert [record["line"] for record in records] == [2, 3, 4, 5]
    assert {record["file"] for record in records} == {str(script)}
    assert records[1]["text"] == "Sq^3 Sq^1 iota_3" and records[2]["verdict"] == "true" and ran.err == ""


@pytest.mark.parametrize(
    ("text", "status"),
    [
        ("Sq^2 Sq^2 iota_3", 0),
        ("Sq^3 Sq^2 = 0", 0),
        ("Sq^2 Sq^2 = Sq^4", 1),
        ("Sq^2 +", 2),
        ("Sq^2 Sq^2 = Sq^4\nSq^2 + iota_3", 2),
        ("", 0),
        ("# nothing", 0),
    ],
)
def test_exit_status(text: str, status: int) -> None:
    assert opslang("run", "-", stdin=text + "\n").status == status


def test_diagnostics_go_to_standard_error_and_results_to_standard_output() -> None:
    ran = opslang("run", "-", stdin="Sq^2 + iota_3\nSq^2 iota_2\n")
    assert ran.err.startswith("-:1:") and ": error: " in ran.err and "~" in ran.err
    assert ran.out.startswith("iota_2^2") and "error" not in ran.out


def test_in_records_the_diagnostics_live_in_the_records() -> None:
    ran = opslang("run", "--output", "jsonl", "-", "no-such.ops", stdin="Sq^2 + iota_3\nSq^2 iota_2\n")
    first, second = map(json.loads, ran.out.splitlines())
    assert first["verdict"] == "error" and first["name"] and first["message"] and second["verdict"] == "ok"
    assert ran.err.splitlines() == [
        "no-such.ops: error: missing-file: there is no file of that name",
        "opslang: 1 of 2 files could not be read",
    ]
    assert ran.status == 2


def test_scripts_begin_afresh(script: Path) -> None:
    ran = opslang("run", str(script), "-", stdin="Sq^1 x\n")
    assert ran.status == 2 and "-:1:6: error: " in ran.err


@pytest.mark.parametrize(
    ("arguments", "says"),
    [
        (["evla", "x"], "Did you mean 'eval'?"),
        (["run", "--limt", "5", "x"], "'--limit'"),
        (["eval", "--lett", "x in H^2", "x"], "'--let'"),
        (["run"], "Missing argument 'SCRIPT...'"),
        (["eval", "--prime", "4", "x"], "4 is not a prime"),
        (["eval", "--output", "html", "x"], "'html' is not one of"),
        (["run", "--jobs", "0", "-"], "0 is not in the range"),
        (["explain", "missing-fiel"], "Did you mean missing-file"),
    ],
)
def test_misuse_is_named_and_has_status_two(arguments: list[str], says: str) -> None:
    ran = opslang(*arguments)
    assert ran.status == 2 and says in ran.err and ran.out == "" and "Traceback" not in ran.err


def test_version_and_help() -> None:
    assert opslang("--version").out == f"opslang {package.__version__}\n"
    page = opslang("--help")
    assert page.status == 0 and all(word in page.out for word in ("run", "eval", "explain", "shell", "130"))
    assert "--jobs" in opslang("run", "--help").out


def test_explain() -> None:
    page = opslang("explain", "missing-file")
    assert page.status == 0 and "opslang run no-such-script.ops" in page.out
    law = opslang("explain", "adem").out
    assert "binom" in law and "Steenrod and Epstein 1962" in law and "Sq^2 Sq^2" in law
    names = opslang("explain").out
    assert "adem" in names and "missing-file" in names and "interrupted" in names
    assert max(map(len, names.splitlines())) <= 80


def test_without_a_command_standard_input_is_a_script() -> None:
    assert opslang(stdin="Sq^2 iota_2\n").out == opslang("shell", stdin="Sq^2 iota_2\n").out != ""
    assert opslang(stdin="Sq^2 = Sq^1\n").status == 1


def test_workers_give_the_same_bytes(tmp_path: Path) -> None:
    lines = []
    for number in range(150):
        lines += [
            f"let x_{number} in H^{2 + number % 5}",
            f"Sq^{number % 7} x_{number}",
            f"Sq^2 Sq^{number} = Sq^{number + 2}",
        ]
        if number % 20 == 7:
            lines += ["Sq^1 +", "prime 3" if number % 40 == 7 else "prime 2", "P^1 iota_4", "Sq^1 iota_4"]
    (tmp_path / "a.ops").write_text("\n".join(lines))
    (tmp_path / "b.ops").write_text("let u = Sq^1 iota_2\nu\n" * 40)
    names = ["a.ops", "none.ops", "b.ops"]
    for form in ("text", "jsonl"):
        one = opslang("run", "--output", form, *names, cwd=tmp_path)
        two = opslang("run", "--output", form, "--jobs", "3", *names, cwd=tmp_path)
        assert (one.status, one.out, one.err) == (two.status, two.out, two.err)
        assert one.status == 2 and len(one.out.splitlines()) > 300
    assert opslang("run", "--jobs", "2", "-", stdin=SCRIPT).out == opslang("run", "-", stdin=SCRIPT).out


def on_a_terminal(*arguments: str, **env: str) -> bytes:
    """What the command writes when its standard error is a terminal."""
    main, other = pty.openpty()
    try:
        with subprocess.Popen(
            [*COMMAND, *arguments],
            stdin=subprocess.DEVNULL,
            stdout=subprocess.PIPE,
            stderr=other,
            env=environment(**env),
        ) as process:
            os.close(other)
            said = b""
            while True:
                try:
                    piece = os.read(main, 4096)
                except OSError:  # Linux says so when the other end is closed
                    break
                if not piece:
                    break
                said += piece
            process.communicate(timeout=30)
        return said
    finally:
        os.close(main)


def test_colour_only_on_a_terminal_and_only_if_wanted() -> None:
    line = ("eval", "Sq^1 +")
    assert b"\x1b[" in on_a_terminal(*line, TERM="xterm")
    assert b"\x1b[" not in on_a_terminal(*line, TERM="xterm", NO_COLOR="1")
    assert b"\x1b[" not in on_a_terminal(*line, TERM="dumb")
    assert b"\x1b[" not in on_a_terminal(*line, "--colour", "never", TERM="xterm")
    assert "\x1b[" not in opslang(*line).err
    assert "\x1b[" in opslang(*line, "--color", "always").err
    plain = re.sub(r"\x1b\[[0-9;]*m", "", opslang(*line, "--colour", "always").err)
    assert plain == opslang(*line).err  # colour is never the only sign


def test_progress_shows_on_a_terminal_after_half_a_second(tmp_path: Path) -> None:
    said = subprocess.run(
        [sys.executable, "-c", PROGRESS], env=environment(), capture_output=True, check=True, timeout=30
    )
    assert said.stderr == b"\r3 statements, 1 with errors, 0 s\r" + b" " * 32 + b"\r"
    assert b"statements" not in on_a_terminal("eval", "Sq^1 iota_1", TERM="xterm")


PROGRESS = """
import sys, time
from opslang.front import progress
from opslang.front.statement import Answer
progress.on_terminal = lambda stream: stream is sys.stderr
progress.DELAY = 0.05
line = progress.Progress()
for status in (0, 2, 1):
    line.count(Answer(status=status, statement=True))
with line:
    time.sleep(0.08)
"""


def test_python_minus_m_and_the_installed_name_are_one(tmp_path: Path) -> None:
    from importlib.metadata import PackageNotFoundError, entry_points

    try:
        found = [point.value for point in entry_points(group="console_scripts") if point.name == "opslang"]
    except PackageNotFoundError:
        found = []
    import tomllib

    from command import ROOT

    declared = tomllib.loads((ROOT / "pyproject.toml").read_text())["project"]["scripts"]["opslang"]
    assert declared == "opslang.__main__:main" and set(found) <= {declared}
