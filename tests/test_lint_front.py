"""`opslang lint` as it is called: what it writes, what it gives back, what it leaves alone."""

from __future__ import annotations

import errno
import json
import os
import stat
from pathlib import Path

import pytest
from command import ROOT, opslang

from opslang.front.lint_files import Since, drafts
from opslang.front.mend import mend
from opslang.lint.result import Report, Row, packed, unpacked
from opslang.lint.rule import register
from opslang.lint.run import lint, lint_text

HEAD = "\\documentclass{article}\n\\newcommand{\\Sq}{\\mathrm{Sq}}\n\\begin{document}\n"
FALSE = HEAD + "We have $\\Sq^2\\Sq^3=\\Sq^5$ here.\n\\end{document}\n"
TRUE = HEAD + "We have $\\Sq^2\\Sq^2=\\Sq^3\\Sq^1$ here.\n\\end{document}\n"
KEYS = ["file", "line", "column", "end_line", "end_column", "severity", "name", "message", "formula", "mend"]


@pytest.fixture
def folder(tmp_path: Path) -> Path:
    (tmp_path / "false.tex").write_text(FALSE, encoding="utf-8")
    (tmp_path / "true.tex").write_text(TRUE, encoding="utf-8")
    return tmp_path


def run(*arguments: str, cwd: Path, stdin: str = ""):  # type: ignore[no-untyped-def]
    return opslang("lint", *arguments, cwd=cwd, stdin=stdin, env={"XDG_CACHE_HOME": str(cwd / ".cache")})


def test_the_gnu_form(folder: Path) -> None:
    ran = run("false.tex", cwd=folder)
    lines = ran.out.splitlines()
    assert ran.status == 1 and ran.err == ""
    assert lines[0] == "false.tex:4:10: error: false-relation: the two sides are different operations"
    assert lines[1] == "    We have $\\Sq^2\\Sq^3=\\Sq^5$ here."
    assert lines[2] == "             ~~~~~~~~~~~~~~~~"
    assert "Sq^5 + Sq^4 Sq^1" in lines[3]
    assert lines[-1] == "1 formula checked, 0 not checked, 1 finding in 1 file"


def test_a_true_draft_is_well(folder: Path) -> None:
    ran = run("true.tex", cwd=folder)
    assert (ran.status, ran.err) == (0, "")
    assert ran.out == "1 formula checked, 0 not checked, 0 findings in 1 file\n"


def test_one_bad_file_stops_nothing(folder: Path) -> None:
    (folder / "binary.tex").write_bytes(b"\0\1\2")
    ran = run("missing.tex", "binary.tex", "false.tex", cwd=folder)
    assert ran.status == 2
    assert "missing.tex: error: missing-file" in ran.err and "binary.tex: error: binary-file" in ran.err
    assert "false.tex:4:10" in ran.out and "2 files could not be read" in ran.out


def test_a_folder_is_searched_in_order_and_nothing_said_twice(folder: Path) -> None:
    (folder / "main.tex").write_text(HEAD + "\\input{a part}\\input{part}\n\\end{document}\n", encoding="utf-8")
    (folder / "part.tex").write_text("And $\\Sq^1\\Sq^2=0$.\n", encoding="utf-8")
    (folder / ".hidden").mkdir()
    (folder / ".hidden" / "x.tex").write_text(FALSE, encoding="utf-8")
    ran = run("--output", "jsonl", ".", cwd=folder)
    found = [json.loads(line) for line in ran.out.splitlines()]
    assert [row["file"] for row in found] == ["false.tex", "part.tex"]
    assert found[1]["formula"] == "\\Sq^1\\Sq^2=0"


def test_json_lines_have_the_keys_and_no_others(folder: Path) -> None:
    ran = run("--output", "jsonl", "false.tex", cwd=folder)
    (row,) = [json.loads(line) for line in ran.out.splitlines()]
    assert list(row) == KEYS
    assert (row["line"], row["column"], row["end_line"], row["end_column"]) == (4, 10, 4, 26)
    assert row["severity"] == "error" and row["formula"] == "\\Sq^2\\Sq^3=\\Sq^5" and row["mend"] is None


def test_standard_input_and_its_name(folder: Path) -> None:
    ran = run("-", cwd=folder, stdin=FALSE)
    assert ran.status == 1 and ran.out.startswith("-:4:10: error: false-relation:")
    markdown = "# A note\n\nWe have $\\mathrm{Sq}^2\\mathrm{Sq}^3=\\mathrm{Sq}^5$.\n"
    ran = run("--as", "note.md", "-", cwd=folder, stdin=markdown)
    assert ran.status == 1 and ran.out.startswith("note.md:3:10: error: false-relation:")


def test_a_notebook(folder: Path) -> None:
    cell = {
        "cell_type": "markdown",
        "metadata": {},
        "source": ["We have $\\mathrm{Sq}^2\\mathrm{Sq}^3=\\mathrm{Sq}^5$."],
    }
    book = {"cells": [cell], "metadata": {}, "nbformat": 4, "nbformat_minor": 5}
    (folder / "book.ipynb").write_text(json.dumps(book, indent=1), encoding="utf-8")
    ran = run("--output", "jsonl", "book.ipynb", cwd=folder)
    assert ran.status == 1 and json.loads(ran.out)["name"] == "false-relation"


def test_coverage_says_why_not(folder: Path) -> None:
    text = HEAD + "Then $\\Sq^2 x=0$ and $\\Sq^1\\Sq^1=0$.\n\\end{document}\n"
    (folder / "draft.tex").write_text(text, encoding="utf-8")
    ran = run("--coverage", "draft.tex", cwd=folder)
    assert "draft.tex:4:7: note: checked: sorts and degrees fit" in ran.out and "needed: the degree of x" in ran.out
    assert "draft.tex:4:23: note: checked: true" in ran.out
    assert ran.status == 0


def test_explain(folder: Path) -> None:
    ran = run("--explain", "false-relation", cwd=folder)
    assert ran.status == 0 and ran.out.startswith("false-relation: ") and "Not said of:" in ran.out
    assert opslang("explain", "false-relation").out == ran.out
    ran = run("--explain", "fals-relation", cwd=folder)
    assert ran.status == 2 and "Did you mean false-relation" in ran.err
    assert run(cwd=folder).status == 2


# --- SARIF --------------------------------------------------------------------------------------


def sarif(text: str) -> dict:  # type: ignore[type-arg]
    import jsonschema

    log = json.loads(text)
    schema = json.loads((ROOT / "tests" / "data" / "sarif" / "sarif-2.1.0-rtm.5.json").read_text(encoding="utf-8"))
    jsonschema.validate(log, schema)
    return log  # type: ignore[no-any-return]


def test_sarif_is_valid(folder: Path) -> None:
    ran = run("--output", "sarif", "--coverage", ".", "missing.tex", cwd=folder)
    log = sarif(ran.out)
    (only,) = log["runs"]
    assert ran.status == 2 and only["columnKind"] == "unicodeCodePoints"
    first = only["results"][0]
    assert (first["ruleId"], first["level"]) == ("false-relation", "error")
    assert only["tool"]["driver"]["rules"][first["ruleIndex"]]["id"] == "false-relation"
    region = first["locations"][0]["physicalLocation"]["region"]
    assert (region["startLine"], region["startColumn"], region["endColumn"]) == (4, 10, 26)
    assert {result["kind"] for result in only["results"] if "kind" in result} == {"pass"}
    assert only["invocations"][0]["executionSuccessful"] is False
    assert "missing-file" in only["invocations"][0]["toolExecutionNotifications"][0]["message"]["text"]


def test_sarif_of_nothing_is_valid(folder: Path) -> None:
    log = sarif(run("--output", "sarif", "true.tex", cwd=folder).out)
    assert log["runs"][0]["results"] == []
    assert {rule.name for rule in register()} <= {rule["id"] for rule in log["runs"][0]["tool"]["driver"]["rules"]}


# --- mends --------------------------------------------------------------------------------------


def test_mends_are_written_once_and_nothing_else_changes(tmp_path: Path) -> None:
    text = (
        "\ufeff% é\r\n\\newcommand{\\Sq}{\\mathrm{Sq}}\r\nWe have "
        "$\\Sq^12=\\Sq^4\\Sq^8+\\Sq^{11}\\Sq^1+\\Sq^{10}\\Sq^2$.\r\n"
    )
    path = tmp_path / "draft.tex"
    path.write_bytes(text.encode("utf-8"))
    path.chmod(0o640)
    before = lint(str(path))
    assert mend(before.findings)
    after = path.read_bytes().decode("utf-8")
    assert after == text.replace("\\Sq^12", "\\Sq^{12}")
    assert stat.S_IMODE(path.stat().st_mode) == 0o640
    assert not mend(lint(str(path)).findings)
    assert sorted(os.listdir(tmp_path)) == ["draft.tex"]


def test_a_mend_that_cannot_be_written_is_said(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capfdbinary: pytest.CaptureFixture[bytes]
) -> None:
    from opslang.front.cli import opslang as command

    def full(*arguments: object) -> None:
        raise OSError(errno.ENOSPC, os.strerror(errno.ENOSPC))

    text = "\\newcommand{\\Sq}{\\mathrm{Sq}}\nWe have $\\Sq^12=\\Sq^4\\Sq^8+\\Sq^{11}\\Sq^1+\\Sq^{10}\\Sq^2$.\n"
    path = tmp_path / "draft.tex"
    path.write_text(text, encoding="utf-8")
    monkeypatch.setattr("opslang.front.mend.os.replace", full)
    command.main(["lint", "--no-cache", "--mend", str(path)], standalone_mode=False)
    assert b"error: unwritable-file: the file cannot be written: no space left" in capfdbinary.readouterr().err
    assert path.read_text(encoding="utf-8") == text
    assert os.listdir(tmp_path) == ["draft.tex"]


def test_a_missing_comma_is_put_in(tmp_path: Path) -> None:
    text = (
        HEAD + "For $K(\\mathbb{Z},5)$ they are "
        "$\\iota_5,\\ \\Sq^2\\iota_5\\ \\Sq^3\\iota_5,\\ \\Sq^4\\iota_5$.\n\\end{document}\n"
    )
    path = tmp_path / "draft.tex"
    path.write_text(text, encoding="utf-8")
    ran = run("--mend", "draft.tex", cwd=tmp_path)
    assert path.read_text(encoding="utf-8") == text.replace("\\Sq^2\\iota_5\\ ", "\\Sq^2\\iota_5,\\ ")
    assert ran.status == 0 and "1 mended" in ran.out
    assert run("draft.tex", cwd=tmp_path).status == 0


def row_for(path: Path, text: str, old: str, new: str) -> Row:
    at = text.index(old)
    return Row(
        str(path),
        1,
        1,
        1,
        1,
        "error",
        "false-relation",
        "",
        old,
        new,
        certain=True,
        start=at,
        end=at + len(old),
        path=str(path),
    )


@pytest.mark.parametrize("encoding", ["utf-8", "latin-1", "utf-16"])
def test_a_mend_keeps_encoding_and_line_ends(tmp_path: Path, encoding: str) -> None:
    text = "% caf\xe9\n\\newcommand{\\Sq}{\\mathrm{Sq}}\n$\\Sq^2\\Sq^3=\\Sq^5$ and $\\Sq^1\\Sq^1=0$\n"
    path = tmp_path / "draft.tex"
    path.write_bytes(text.replace("\n", "\r\n").encode(encoding))
    new = "\\Sq^2\\Sq^3=\\Sq^5+\\Sq^4\\Sq^1"
    assert mend([row_for(path, text, "\\Sq^2\\Sq^3=\\Sq^5", new)])
    assert path.read_bytes().decode(encoding) == text.replace("\\Sq^2\\Sq^3=\\Sq^5", new).replace("\n", "\r\n")


def test_a_mend_that_makes_it_worse_is_not_written(tmp_path: Path) -> None:
    path = tmp_path / "draft.tex"
    path.write_text(FALSE, encoding="utf-8")
    assert not mend([row_for(path, FALSE, "\\Sq^2\\Sq^3=\\Sq^5", "\\Sq^2\\Sq^3=\\Sq^6")])
    assert not mend([row_for(path, FALSE, "\\Sq^2\\Sq^3=\\Sq^5$", "{")])
    assert path.read_text(encoding="utf-8") == FALSE


def test_a_mend_in_a_notebook_is_escaped(tmp_path: Path) -> None:
    cell = {"cell_type": "markdown", "metadata": {}, "source": ["$\\mathrm{Sq}^2\\mathrm{Sq}^3=\\mathrm{Sq}^5$"]}
    text = json.dumps({"cells": [cell], "metadata": {}, "nbformat": 4, "nbformat_minor": 5})
    path = tmp_path / "book.ipynb"
    path.write_text(text, encoding="utf-8")
    old = "\\\\mathrm{Sq}^5"
    assert mend([row_for(path, text, old, "\\mathrm{Sq}^5+\\mathrm{Sq}^4\\mathrm{Sq}^1")])
    (source,) = json.loads(path.read_text(encoding="utf-8"))["cells"][0]["source"]
    assert source == "$\\mathrm{Sq}^2\\mathrm{Sq}^3=\\mathrm{Sq}^5+\\mathrm{Sq}^4\\mathrm{Sq}^1$"


# --- many files ---------------------------------------------------------------------------------


def test_the_order_does_not_depend_on_the_processes(tmp_path: Path) -> None:
    for number in range(12):
        (tmp_path / f"{number:02}.tex").write_text(FALSE if number % 3 else TRUE, encoding="utf-8")
    one = run("--jobs", "1", "--no-cache", ".", cwd=tmp_path)
    two = run("--jobs", "2", "--no-cache", ".", cwd=tmp_path)
    again = run(".", cwd=tmp_path)
    assert one.out == two.out == again.out and one.status == two.status == 1
    assert run(".", cwd=tmp_path).out == one.out


def test_what_is_kept_goes_with_any_file_that_was_read(tmp_path: Path) -> None:
    (tmp_path / "main.tex").write_text(HEAD + "\\input{part}\n\\end{document}\n", encoding="utf-8")
    (tmp_path / "part.tex").write_text("$\\Sq^1\\Sq^2=\\Sq^3$\n", encoding="utf-8")
    assert run("main.tex", cwd=tmp_path).status == 0
    assert list((tmp_path / ".cache").rglob("*.json"))
    (tmp_path / "part.tex").write_text("$\\Sq^1\\Sq^2=0$\n", encoding="utf-8")
    assert run("main.tex", cwd=tmp_path).status == 1
    for kept in (tmp_path / ".cache").rglob("*.json"):
        kept.write_text("[1, 2", encoding="utf-8")
    assert run("main.tex", cwd=tmp_path).status == 1


def test_only_what_has_changed(folder: Path) -> None:
    os.utime(folder / "true.tex", (1_000_000_000, 1_000_000_000))
    ran = run("--since", "2020-01-01", ".", cwd=folder)
    assert ran.out.endswith("in 1 file\n")
    assert not Since("2020-01-01").changed(str(folder / "true.tex"))
    ran = run("--since", "yesterdayish", ".", cwd=folder)
    assert ran.status == 2 and "neither a date" in ran.err


def test_a_file_is_named_once(folder: Path) -> None:
    names = [name for name, _ in drafts([str(folder), str(folder / "true.tex")])]
    assert names == [str(folder / "false.tex"), str(folder / "true.tex")]


def test_reports_survive_packing() -> None:
    report = lint_text(FALSE, "a.tex")
    assert unpacked(json.loads(json.dumps(packed(report)))) == report
    for bad in (None, [], [0] * 10, [1, 2], packed(Report("x"))[:-1]):
        with pytest.raises((ValueError, TypeError)):
            unpacked(bad)


@pytest.mark.parametrize(
    "text",
    [
        "",
        "$",
        "\\",
        "$\\Sq^",
        "\\begin{align}",
        "$\\Sq^{99999999999999999999}x=0$",
        "$" + "(" * 3000 + "$",
        "\udc80$x$",
    ],
)
def test_nothing_breaks_the_linter(text: str) -> None:
    assert lint_text(text, "a.tex").failure is None


def test_the_derivation_is_shown_when_asked_for(folder: Path) -> None:
    assert "Adem relation" not in run("false.tex", cwd=folder).out
    assert "Adem relation" in run("--why", "false.tex", cwd=folder).out
    log = sarif(run("--why", "--output", "sarif", "false.tex", cwd=folder).out)
    assert "Adem" in "\n".join(log["runs"][0]["results"][0]["properties"]["derivation"])
