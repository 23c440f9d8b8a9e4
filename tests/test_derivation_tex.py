"""Derivations as text, records and TeX; the TeX is compiled where a TeX is installed."""

from __future__ import annotations

import json
import re
import shutil
import subprocess
from pathlib import Path

import pytest

from opslang import Script
from opslang.ir import tree as ir
from opslang.laws.book import BOOK
from opslang.render.derivation import align, items, lines
from opslang.rewrite.engine import derive

TRIPLE = ir.Composite((2, 2, 2), 6)


def test_a_derivation_names_the_law_its_instance_and_its_binomials() -> None:
    """Sq^2 Sq^2 Sq^2 = Sq^5 Sq^1 (Mosher and Tangora 1968, ch. 3: from the relations for Sq^2 Sq^2 and Sq^2 Sq^3)."""
    derivation, _ = derive(TRIPLE, 2)
    assert "\n".join(lines(derivation, "text", 80)) == (
        "   Sq^2 Sq^2 Sq^2\n"
        "1. the Adem relation, a = 2, b = 2: Sq^2 Sq^2 = Sq^3 Sq^1\n"
        "   mod 2: C(1,2) = 0, C(0,0) = 1\n"
        "   = Sq^2 Sq^3 Sq^1\n"
        "2. the Adem relation, a = 2, b = 3: Sq^2 Sq^3 = Sq^5 + Sq^4 Sq^1\n"
        "   mod 2: C(2,2) = 1, C(1,0) = 1\n"
        "   = Sq^5 Sq^1 + Sq^4 Sq^1 Sq^1\n"
        "3. the Adem relation, a = 1, b = 1: Sq^1 Sq^1 = 0\n"
        "   mod 2: C(0,1) = 0\n"
        "   = Sq^5 Sq^1"
    )
    assert lines(derivation, "unicode", 80)[0].strip() == "Sq² Sq² Sq²"


def test_no_step_says_so_and_an_unfinished_one_too() -> None:
    assert "canonical" in lines(derive(ir.Composite((3, 1), 4), 2)[0])[-1]
    assert "not written out" in lines(derive(TRIPLE, 2, fuel=1)[0])[-1]
    assert r"\cdots" in align(derive(TRIPLE, 2, fuel=1)[0])


def test_a_first_line_that_is_too_long_is_not_shown_as_zero() -> None:
    derivation, _ = derive(ir.Composite((1,) * 300, 300), 2)
    (row,) = lines(derivation)
    assert row.strip() == "... not written out to its end: its first line has a word of more than 250 letters"
    assert "0" not in align(derivation)


def test_items_are_plain_data() -> None:
    found = items(derive(TRIPLE, 2)[0])
    assert json.loads(json.dumps(found)) == found
    first = found[0]
    assert first["law"] == "adem" and first["bindings"] == {"p": 2, "a": 2, "b": 2, "x": "1"}
    assert first["binomials"] == [[1, 2, 0], [0, 0, 1]] and first["instance"] == "Sq^2 Sq^2 = Sq^3 Sq^1"
    assert [item["after"] for item in found[:-1]] == [item["before"] for item in found[1:]]


def test_lines_fit_the_width_where_terms_do() -> None:
    derivation, _ = derive(ir.Composite((12, 11, 10), 33), 2)
    for width in (60, 80, 120):
        assert max(map(len, lines(derivation, "text", width))) <= width


def test_steps_that_give_zero_by_one_law_share_a_number() -> None:
    script = Script(let=["x in H^2", "y in H^3"])
    rows = script.explain("Sq^3 x + Sq^4 y").lines
    assert [row for row in rows if re.match(r"\d", row)] == ["1-2. instability:"]


EXPRESSIONS = [
    (2, "", "Sq^2 Sq^2 Sq^2"),
    (2, "", "Sq^4 Sq^4 Sq^4 Sq^4"),
    (2, "", "chi(Sq^4 Sq^3)"),
    (2, "", "Q_2"),
    (2, "let x in H^2\nlet y in H^3", "Sq^3 Sq^2(x y)"),
    (2, "let x in H^2", "Sq(x^6)"),
    (2, "let x in H^4", "beta_2(x^2)"),
    (2, "let gamma' in H^2\nlet alpha_1' in H^1(X; Z/4)", "Sq^2(gamma' (beta_2 alpha_1') alpha_1')"),
    (3, "", "P^4 beta P^2 P^1"),
    (3, "let x in H^2\nlet y in H^3", "Q_1(x y) + 2 beta(y P^1 x)"),
    (5, "let x in H^4", "P^2(x^3) + P x"),
    (2, "", "Sq^13 Sq^12 Sq^11"),
    (2, "let x in H^2", "Sq^5 x + Sq^6 x"),
    (2, "on BO(5)", "Sq^3 w_5"),
    (2, "on BO(5)", "Sq^2 Sq^3 w_5"),
    (2, "on BSpin", "Sq^1 w_16 w_4 + Sq^4 w_13 w_4"),
    (2, "on thom(BO(3))", "Sq^2(w_2 U)"),
    (2, "on thom(BO(3))", "U^2"),
    (2, "on RP^5 x CP^2", "Sq^2(x^3 y)"),
    (2, "on RP^3", "Sq^1(x^3)"),
    (2, "on BU", "Sq^3 c_2"),
    (3, "on BU(4)", "P^1 c_2"),
    (3, "on BSO(6)", "P^1 p_2"),
    (3, "on thom(BSp(2))", "P^2 U"),
    (3, "on lens(9)", "beta_2(x y^2)"),
]


def source() -> str:
    """A document with the derivations, every law's formula, and titles as text."""
    parts = [r"\documentclass{article}\usepackage{amsmath}\allowdisplaybreaks\begin{document}"]
    for prime, setting, expression in EXPRESSIONS:
        script = Script(prime)
        script.run(setting)
        parts.append(script.explain(expression).latex)
    for law in BOOK:
        parts.append(rf"{law.title}: $\displaystyle {law.formula}$\par")
    return "\n\n".join([*parts, r"\end{document}"])


def test_brackets_balance_in_the_tex() -> None:
    """What can be checked without a TeX: braces, environments, one alignment column more than ampersands allow."""
    text = source()
    assert text.count("{") == text.count("}")
    assert text.count(r"\begin{") == text.count(r"\end{")
    assert "_" not in "".join(re.findall(r"\\text\{([^}]*)\}", text))


def test_the_tex_compiles(tmp_path: Path) -> None:
    if not shutil.which("pdflatex"):
        pytest.skip("NO TEX HERE: pdflatex is not installed, so the TeX of derivations was not compiled")
    (tmp_path / "d.tex").write_text(source(), encoding="utf-8")
    command = ["pdflatex", "-interaction=nonstopmode", "-halt-on-error", "d.tex"]
    done = subprocess.run(
        command, cwd=tmp_path, capture_output=True, text=True, errors="replace", timeout=120, check=False
    )
    assert done.returncode == 0, done.stdout[-2000:]
    log = (tmp_path / "d.log").read_text(encoding="utf-8", errors="replace")
    assert "Undefined control sequence" not in log and (tmp_path / "d.pdf").stat().st_size > 1000
    # A derivation stays on its page: no row more than a few letters too wide.
    wide = [float(points) for points in re.findall(r"Overfull \\hbox \(([\d.]+)pt too wide\) detected", log)]
    assert max(wide, default=0) < 40, wide
