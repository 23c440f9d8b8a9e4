"""How diagnostics look: the GNU form, the marks, what cannot be shown raw.

The form is that of the GNU Coding Standards, "Formatting Error Messages"; widths are those of Unicode's
East Asian Width (UAX 11), common practice for terminals.
"""

from __future__ import annotations

import re

from hypothesis import given, settings
from hypothesis import strategies as st

from opslang.ground.source import Source
from opslang.report.diagnostic import Diagnostic, Label, error, warning
from opslang.report.render import cells, excerpt, render, render_file, visible


def test_the_gnu_form_with_the_place_marked() -> None:
    text = "Sq^2 Sq^2 iota_3 = Sq^3 iota_3"
    found = error(
        "degrees-differ", "the right side has degree 6", (19, 30), "an equation is possible in one degree only"
    )
    assert render(found, Source("paper.ops", text, 2)) == "\n".join(
        [
            "paper.ops:2:20: error: degrees-differ: the right side has degree 6",
            "    Sq^2 Sq^2 iota_3 = Sq^3 iota_3",
            "                       ~~~~~~~~~~~",
            "    an equation is possible in one degree only",
        ]
    )


def test_one_character_and_the_end_of_a_line_are_marked_by_a_caret() -> None:
    assert excerpt("a + b", 2, 3, 80) == ("a + b", "  ^")
    assert excerpt("a + b", 5, 5, 80) == ("a + b", "     ^")
    assert excerpt("", 0, 0, 80) == ("", "^")


def test_marks_line_up_under_wide_and_combining_characters_and_tabs() -> None:
    assert excerpt("漢字 = x", 5, 6, 80) == ("漢字 = x", "       ^")
    assert excerpt("e\u0301\u0302 = x", 6, 7, 80) == ("e\u0301\u0302 = x", "    ^")
    assert excerpt("\tx\ty", 3, 4, 80) == ("    x   y", "        ^")
    assert excerpt("字", 0, 1, 80) == ("字", "~~")


def test_control_characters_and_bad_bytes_are_escaped() -> None:
    line = "x\x1b[31m\x07 \udcff\u202ey"
    text, marks = excerpt(line, len(line) - 1, len(line), 80)
    assert text == "x\\x1b[31m\\x07 \\xff\\u202ey"
    assert marks == " " * (len(text) - 1) + "^"
    said = render(error("n", "no \x1b[2J here", (0, 1), "nor \x1b here"), Source("a\x1bb.ops", line))
    assert said.isprintable() is False and said.replace("\n", "").isprintable()


def test_a_long_line_is_cut_to_a_window_around_the_place() -> None:
    line = "x + " * 250_000 + "QQ" + " + y" * 250_000
    text, marks = excerpt(line, 1_000_000, 1_000_002, 60)
    assert len(text) <= 60 and text.startswith("...") and text.endswith("...")
    at = marks.index("~")
    assert marks.count("~") == 2 and text[at : at + 2] == "QQ"


def test_a_span_over_several_lines_is_marked_on_its_first() -> None:
    source = Source("a.ops", "(a +\nb", 7)
    said = render(
        Diagnostic("error", "unclosed", "never closed", (0, 6), labels=(Label((5, 6), "the line ends here"),)), source
    )
    assert said.splitlines() == [
        "a.ops:7:1: error: unclosed: never closed",
        "    (a +",
        "    ~~~~",
        "a.ops:8:1: note: the line ends here",
        "    b",
        "    ^",
    ]


def test_files_have_no_column_and_overlong_messages_lose_their_middle() -> None:
    assert render_file("missing-file", "there is none", "a.ops") == "a.ops: error: missing-file: there is none"
    assert render_file("long-line", "too long", "a.ops", 3) == "a.ops:3:1: error: long-line: too long"
    assert len(render_file("n", "x" * 100_000, "a.ops")) < 1_000


def test_colour_is_given_in_as_a_function() -> None:
    said = render(warning("n", "m", (0, 1), "h"), Source("f", "x"), lambda role, text: f"<{role}|{text}>")
    assert said.splitlines() == ["<place|f:1:1:> <warning|warning:> n: m", "    x", "    <mark|^>", "    <help|h>"]


@settings(deadline=None, max_examples=150)
@given(st.text(max_size=60), st.integers(0, 60), st.integers(0, 60), st.integers(20, 90))
def test_nothing_raw_ever_comes_out_and_the_window_is_kept(line: str, start: int, length: int, room: int) -> None:
    line = re.sub(r"[\r\n]", " ", line)
    start = min(start, len(line))
    text, marks = excerpt(line, start, min(len(line), start + length), room)
    assert text.isprintable() and cells(text) <= room
    assert set(marks) <= set(" ~^") and marks.strip() and cells(marks) <= room + 1
    assert visible(line).isprintable()
