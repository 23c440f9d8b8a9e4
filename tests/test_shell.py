"""The shell as its user meets it, on a real pseudo-terminal.

The values are those of the batch runs, which test_facts.py holds against published ones.
"""

from __future__ import annotations

import json
import os
import re
import shutil
import subprocess
import sys
from base64 import b64encode
from pathlib import Path
from time import monotonic, perf_counter, sleep

import pytest
from command import ROOT, environment, opslang
from documentation import blocks
from terminal import PATIENCE, Terminal

if sys.platform == "win32":
    pytest.skip("pseudo-terminals are those of POSIX", allow_module_level=True)

SLOW = "(Sq^1 + Sq^2 + Sq^4 + Sq^8 + Sq^16 + Sq^32 + Sq^64)^24"
"""More work than any test waits for."""

WORK = (
    ("# a morning's work", 1),
    ("let x, y in H^2", 1),
    ("Sq^2 Sq^2 iota_3", 2),
    ("Sq^2 that", 3),
    ("Sq^2 (x y) = x^2 y + Sq^1 x Sq^1 y + x y^2", 3),
    ("Sq^2 Sq^2 = Sq^3", 4),
    ("Sq^4 that_3", 5),
    ("space X = K(Z/4, 3) x K(Z, 5)", 5),
    ("on X", 5),
    ("beta_2 iota_3", 6),
    ("let u = Sq^2 iota_3 + iota_5", 6),
    ("Sq^2 u", 7),
    ("why Sq^2 Sq^2 iota_3", 8),
    ("basis H^6(X)", 8),
    ("series K(Z, 3) to 9", 8),
    ("prime 3", 8),
    ("P^1 P^1", 9),
    ("P^1 that", 10),
    ("P^1 beta P^1 = beta P^2 + P^2 beta", 10),
    ("Q_1 = P^1 beta - beta P^1", 10),
)
"""Twenty lines, each with the number of the prompt after it: a result was found where the number rises."""


def test_a_session_of_twenty_lines_is_saved_and_answered_alike(tmp_path: Path) -> None:
    with Terminal(tmp_path, rows=60) as terminal:
        terminal.at_prompt(1)
        for line, number in WORK:
            terminal.enter(line, number)
        terminal.enter("save work.ops", 10)
        terminal.sees("statements saved in work.ops")
        before = (tmp_path / "work.ops").read_text()
        terminal.enter("Sq^1 iota_1", 10)
        terminal.enter("save work.ops", 10)
        terminal.sees("work.ops exists and is left as it is")
        terminal.enter("results", 10)
        terminal.press("\x04")
        assert terminal.ends() == 0
        shown = terminal.text()
    assert (tmp_path / "work.ops").read_text() == before
    results = re.findall(r"^that_\d+ +(.*)$", shown, re.M)
    ran = opslang("run", "--output", "jsonl", "work.ops", cwd=tmp_path)
    records = [json.loads(line) for line in ran.out.splitlines()]
    assert ran.status == 1 and not [record for record in records if record["verdict"] == "error"]
    kinds = ("element", "derivation")
    assert results == [r["text"] for r in records if r["kind"] in kinds or r["verdict"] == "false"]
    assert len(results) == 9
    assert f"{len(records)} statements saved" in shown
    assert "# a morning's work" in before and "that" not in before


def test_a_long_computation_says_so_and_can_be_stopped(tmp_path: Path) -> None:
    with Terminal(tmp_path, "shell", "--limit", "1000000000") as terminal:
        terminal.at_prompt(1)
        terminal.enter("let x in H^2", 1)
        terminal.enter("Sq^1 x", 2)
        started = monotonic()
        terminal.press(SLOW + "\r")
        terminal.sees("Ctrl-C stops it")
        assert monotonic() - started > 0.4
        terminal.press("\x03")
        pressed = monotonic()
        terminal.sees("stopped after")
        terminal.at_prompt(2)
        assert monotonic() - pressed < 3
        assert "Ctrl-C stops it" not in terminal.text() and "Traceback" not in terminal.text()
        terminal.enter("Sq^2 x + that^2", 3)  # declarations, results and engine are as before
        terminal.sees("x^2 + (Sq^1 x)^2")
        terminal.enter("Sq^16 Sq^16 = chi(chi(Sq^16 Sq^16))", 3)
        terminal.sees("true ")


def test_the_limit_holds_as_in_batch(tmp_path: Path) -> None:
    with Terminal(tmp_path, "shell", "--limit", "1000", "--keys", "vi") as terminal:
        terminal.at_prompt(1)
        terminal.enter(SLOW, 1)
        terminal.sees("too-large", "`limit 10000` raises it")
        terminal.enter("limit 2000", 1)
        terminal.enter(SLOW, 1)
        terminal.sees("`limit 20000` raises it")


def test_history_outlives_the_sitting_and_is_searched(tmp_path: Path) -> None:
    with Terminal(tmp_path) as terminal:
        terminal.at_prompt(1)
        terminal.enter("Sq^4 Sq^2 iota_4", 2)
        terminal.enter("let z in H^7", 2)
        terminal.press("\x04")
        assert terminal.ends() == 0
    (kept,) = tmp_path.glob("state/opslang/history")
    assert kept.stat().st_mode & 0o077 == 0
    with Terminal(tmp_path) as terminal:
        terminal.at_prompt(1)
        terminal.press("\x1b[A")
        terminal.sees("let z in H^7")
        terminal.press("\x15")
        terminal.press("\x12")
        terminal.press("Sq^2 io")
        terminal.sees("ops 1> Sq^4 Sq^2 iota_4")
        terminal.press("\r")
        terminal.press("\r")
        terminal.at_prompt(2)
        terminal.sees("degree 10")


def test_a_place_that_takes_no_history_is_no_error(tmp_path: Path) -> None:
    (tmp_path / "state").write_text("a file where a folder should be")
    with Terminal(tmp_path) as terminal:
        terminal.at_prompt(1)
        terminal.enter("Sq^1 Sq^1", 2)
        terminal.press("\x1b[A")
        terminal.sees("ops 2> Sq^1 Sq^1")
        assert "rror" not in terminal.text()


def test_tab_completes(tmp_path: Path) -> None:
    with Terminal(tmp_path) as terminal:
        terminal.at_prompt(1)
        terminal.press("Sq^2 \\iota\t")
        terminal.sees("ops 1> Sq^2 ι")
        terminal.press("_2 + \\be\t")
        terminal.sees("ι_2 + β")
        terminal.press("\x15")
        terminal.enter("let omega in H^3", 1)
        terminal.press("ser\t K\t7) to 3\x15om\t")
        terminal.sees("ops 1> omega")
        terminal.press("\x15not\tlat\t")
        terminal.sees("ops 1> notationlat")
        terminal.press("\x15notation lat\t\r")
        terminal.at_prompt(1)
        terminal.enter("Sq^3 omega", 2)
        terminal.sees("\\omega^{2}")
        terminal.press("on th\tBSp\t")
        terminal.until(lambda: terminal.bottom() == "BSpin   BSp")
        terminal.press("\x15on BO(3)\r")
        terminal.at_prompt(2)
        terminal.press("Sq^1 w\t")
        terminal.sees("ops 2> Sq^1 w_")
        terminal.press("\t")
        terminal.until(lambda: terminal.bottom() == "w_1   w_2   w_3")


def test_the_bottom_line_says_what_the_input_is(tmp_path: Path) -> None:
    with Terminal(tmp_path) as terminal:
        terminal.at_prompt(1)
        terminal.until(lambda: terminal.bottom() == "prime 2")
        terminal.enter("on K(Z/2, 3)", 1)
        terminal.press("Sq^4 Sq^2 iota_3")
        terminal.until(
            lambda: re.fullmatch(r"class, degree 9 +prime 2   on K\(Z/2, 3\)", terminal.bottom()) is not None
        )
        terminal.press(" + Sq^1")
        terminal.until(lambda: "column 20: an operation is added to a class" in terminal.bottom())
        terminal.press("(")
        terminal.until(lambda: "goes on in the next line" in terminal.bottom())
        terminal.press("\x15" + SLOW)
        terminal.until(lambda: "operation, of several degrees" in terminal.bottom())
        terminal.press("\x15Sq^1 Sq^1 = Sq^3")
        terminal.until(lambda: "relation of operations: degrees 2 and 3 differ" in terminal.bottom())


def test_forty_columns(tmp_path: Path) -> None:
    with Terminal(tmp_path, columns=90, rows=24) as terminal:
        terminal.at_prompt(1)
        terminal.enter("on K(Z/2, 3)", 1)
        terminal.screen.resize(24, 40)
        terminal.process.setwinsize(24, 40)
        terminal.press("Sq^8 Sq^4 Sq^2 iota_3")
        terminal.until(lambda: re.fullmatch(r"class, degree 17 +prime 2", terminal.bottom()) is not None)
        assert "Sq^8 Sq^4 Sq^2 iota_3" in terminal.text()
        terminal.enter("", 2)
        terminal.enter("Sq^2 Sq^2 iota_3 + Sq^3 Sq^1 iota_3 + x", 2)
        terminal.sees("unknown-name")
        terminal.enter("help excess", 2)
        terminal.sees("Example:")
        terminal.enter("declared", 2)
        assert all(len(line) <= 40 for line in terminal.text().splitlines())
        terminal.sees("on K(Z/2, 3): iota_3")


PASTE = "let x in H^2\nlet y in H^3\n\nSq^2 x\nSq^3 y\nSq^2 (\n  x y\n)\n# done\nx y +\n y x"


def test_ten_lines_pasted_at_once(tmp_path: Path) -> None:
    with Terminal(tmp_path) as terminal:
        terminal.at_prompt(1)
        terminal.press("\x1b[200~" + PASTE.replace("\n", "\r") + "\x1b[201~")
        terminal.sees("y x")
        assert "degree" not in terminal.text()  # nothing runs before Enter
        terminal.press("\r")
        terminal.at_prompt(5)
        terminal.sees("x^2 ", "y^2 ", "(Sq^1 x) Sq^1 y", "degree 7", "0 ")


def test_what_is_pasted_behind_a_space_that_cannot_be_read_is_not_run(tmp_path: Path) -> None:
    with Terminal(tmp_path) as terminal:
        terminal.at_prompt(1)
        terminal.enter("on RP^4", 1)
        terminal.press("\x1b[200~on RQ^2\rx^4\rx^3\x1b[201~\r")
        terminal.sees("unknown-space", "what follows it is not run")
        terminal.at_prompt(1)
        terminal.enter("x^4", 2)
        terminal.sees("x^4 ")


TEX = r"""$$
\mathrm{Sq}^{2}\,\mathrm{Sq}^{2}\left( \iota_{3} \right)
  = \operatorname{Sq}^3 \mathrm{Sq}^{1} \iota_3 .
$$"""


def test_tex_pasted_from_a_paper(tmp_path: Path) -> None:
    with Terminal(tmp_path) as terminal:
        terminal.at_prompt(1)
        terminal.press("\x1b[200~" + TEX + "\x1b[201~\r")
        terminal.sees("true ")
        terminal.at_prompt(1)
        terminal.press("\x1b[200~" + r"\mathrm{Sq}^2\Bigl(\alpha\smile\beta_2 \gamma\Bigr)" + "\x1b[201~\r")
        terminal.sees("alpha is not declared")


def test_prose_pasted_from_a_paper(tmp_path: Path) -> None:
    prose = "the relation $\\mathrm{Sq}^2\\mathrm{Sq}^2 = \\mathrm{Sq}^3\\mathrm{Sq}^1$ implies that $k$ is even"
    with Terminal(tmp_path) as terminal:
        terminal.at_prompt(1)
        terminal.press("\x1b[200~" + prose + "\x1b[201~\r")
        terminal.sees("the words around the formula are left out, and so is k", "true ")
        terminal.at_prompt(1)


def test_an_invalid_byte_is_pointed_at(tmp_path: Path) -> None:
    with Terminal(tmp_path) as terminal:
        terminal.at_prompt(1)
        terminal.press(b"Sq^1 iota_2 + \xff\r")
        terminal.sees("invalid-byte")
        terminal.at_prompt(1)
        terminal.enter("Sq^2 iota_2", 2)
        assert "Traceback" not in terminal.text()


def test_the_end_of_input_and_the_ways_to_leave(tmp_path: Path) -> None:
    for keys in ("\x04", "leave\r", "quit\r", "q\r"):
        with Terminal(tmp_path) as terminal:
            terminal.at_prompt(1)
            terminal.press("half a li\x03")
            terminal.until(lambda: terminal.text().count("ops 1>") == 2)  # Ctrl-C drops the line
            terminal.at_prompt(1)
            terminal.press(keys)
            assert terminal.ends() == 0
            assert "Traceback" not in terminal.text()


def test_undo_listing_and_copying(tmp_path: Path) -> None:
    with Terminal(tmp_path, NO_COLOR="1") as terminal:
        terminal.at_prompt(1)
        terminal.enter("let x in H^2", 1)
        terminal.enter("let c in H^3(X; Z/4)", 1)
        terminal.enter("Sq^2 x", 2)
        terminal.enter("beta_2 c", 3)
        terminal.enter("declared", 3)
        terminal.sees("let c: class, degree 3, the reduction of a Z/4 class")
        terminal.enter("undo", 3)
        terminal.sees("taken back: let c in H^3(X; Z/4)", "and what rests on it (that_2): beta_2 c")
        terminal.enter("that_2", 3)
        terminal.sees("result 2 was taken back by `undo`")
        terminal.enter("Sq^1 that_1 + c", 3)
        terminal.sees("c is not declared")
        terminal.enter("copy that_1", 3)
        assert b64encode(b"x^{2}") in terminal.raw
        terminal.enter("notation unicode", 3)
        terminal.enter("Sq^2 Sq^2 iota_5", 4)
        terminal.sees("Sq³ Sq¹ ι₅")
        colours = re.findall(rb"\x1b\[([0-9;]*)m", terminal.raw)
        assert not [code for code in colours if re.search(rb"(^|;)(3[0-7]|9[0-7]|[34]8)(;|$)", code)]


def test_the_keys_of_vi(tmp_path: Path) -> None:
    with Terminal(tmp_path) as terminal:
        terminal.at_prompt(1)
        terminal.enter("keys vi", 1)
        terminal.until(lambda: terminal.bottom().startswith("insert"))
        terminal.press("Sq^2 iota_2")
        terminal.sees("Sq^2 iota_2")
        terminal.press("\x1b")
        terminal.until(lambda: "command" in terminal.bottom())
        terminal.press("r3\r")
        terminal.at_prompt(2)
        terminal.sees("Sq^2 iota_3 ")
        terminal.enter("keys emacs", 2)
        terminal.press("iota_2\x01Sq^1 \r")
        terminal.at_prompt(3)
        terminal.sees("Sq^1 iota_2 ")


def test_a_long_derivation_is_paged(tmp_path: Path) -> None:
    pager = tmp_path / "pager"
    pager.write_text("#!/bin/sh\necho paged $(wc -l)\n")
    pager.chmod(0o755)
    with Terminal(tmp_path, rows=12, PAGER=str(pager)) as terminal:
        terminal.at_prompt(1)
        terminal.enter("Sq^2 Sq^2 Sq^2 Sq^2 iota_7", 2)
        terminal.enter("why", 2)
        terminal.sees("paged ")


def test_without_a_terminal_it_is_a_script(tmp_path: Path) -> None:
    script = "Sq^2 Sq^2 iota_3\nhelp\n"
    assert opslang(stdin=script).out == "Sq^3 Sq^1 iota_3            degree 7   excess 2\n"
    ran = opslang("shell", "--prime", "3", "--output", "latex", stdin="P^1 P^1\n")
    assert ran.out == "2\\,\\mathcal{P}^{2}\n" and ran.err == "" and ran.status == 0
    with Terminal(tmp_path, TERM="dumb") as terminal:
        terminal.press("Sq^2 Sq^2 iota_3\n")
        terminal.sees("Sq^3 Sq^1 iota_3            degree 7   excess 2")
        terminal.press("\x04")
        assert terminal.ends() == 0
        assert b"\x1b" not in terminal.raw


def test_the_first_prompt_comes_soon(tmp_path: Path) -> None:
    """At most 30 times what the bare interpreter takes; the best of some runs of each, since machines are shared."""
    bare, prompt = [], []
    for _ in range(4):
        start = perf_counter()
        subprocess.run([sys.executable, "-c", "pass"], check=True)
        bare.append(perf_counter() - start)
        start = perf_counter()
        with Terminal(tmp_path) as terminal:
            terminal.until(lambda: b"1>" in terminal.raw)
            prompt.append(perf_counter() - start)
            terminal.at_prompt(1)
    assert min(prompt) <= 30 * min(bare)


@pytest.mark.skipif(shutil.which("tmux") is None, reason="tmux is not installed")
def test_in_tmux(tmp_path: Path) -> None:
    """A terminal written by others, which answers for itself."""

    def tmux(*arguments: str) -> str:
        command = ["tmux", "-S", str(tmp_path / "socket"), "-f", os.devnull, *arguments]
        env = environment(HOME=str(tmp_path), XDG_STATE_HOME=str(tmp_path / "state"))
        return subprocess.run(command, env=env, capture_output=True, text=True, timeout=PATIENCE, check=True).stdout

    def shows(text: str) -> None:
        end = monotonic() + PATIENCE
        while text not in (screen := tmux("capture-pane", "-p")):
            assert monotonic() < end, screen
            sleep(0.1)

    tmux("new-session", "-d", "-x", "80", "-y", "20", sys.executable, "-m", "opslang")
    try:
        shows("ops 1>")
        tmux("send-keys", "Sq^2 Sq^2 \\iota", "Tab", "_3", "Enter")
        shows("Sq^3 Sq^1 iota_3            degree 7   excess 2")
        tmux("resize-window", "-x", "40", "-y", "20")
        tmux("send-keys", "Sq^1 that")
        shows("class, degree 8")
        tmux("send-keys", "Enter")
        shows("ops 3>")
        tmux("send-keys", "C-d")
    finally:
        subprocess.run(["tmux", "-S", str(tmp_path / "socket"), "kill-server"], capture_output=True, check=False)


def test_the_session_in_the_readme_goes_as_it_stands_there(tmp_path: Path) -> None:
    ((_, session),) = [block for block in blocks(ROOT / "README.md", "text") if block[1].startswith("ops 1>")]
    with Terminal(tmp_path, columns=80, rows=60) as terminal:
        terminal.at_prompt(1)
        for prompt, line in re.findall(r"^ops (\d+)> (.*)$", session, re.M):
            terminal.at_prompt(int(prompt))
            terminal.press(line + "\r")
            terminal.sees(line)
        terminal.sees("saved in")
        shown = terminal.text()
    assert session in shown + "\n"
    assert "Sq^2 r_1" in (tmp_path / "morning.ops").read_text()


def test_a_terminal_of_another_encoding(tmp_path: Path) -> None:
    with Terminal(tmp_path, "shell", "--output", "unicode", PYTHONIOENCODING="latin-1") as terminal:
        terminal.at_prompt(1)
        terminal.enter("Sq^2 x + Sq^2 iota_4", 1)
        terminal.enter("Sq^2 iota_4", 2)
        terminal.sees("u03b9")
        terminal.press("Sq^1 \\iot\t_4")
        terminal.sees("Sq^1 \\iota_4")  # the sign cannot be shown
        assert "Traceback" not in terminal.text()
