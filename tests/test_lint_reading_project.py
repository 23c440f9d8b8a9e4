"""Drafts of several files: what is drawn in, and a chapter that is read with its main file's macros."""

from __future__ import annotations

import os
from pathlib import Path

import pytest

from opslang.lint.reading import Document, read


def write(folder: Path, files: dict[str, str]) -> None:
    """Lay out a project."""
    for name, text in files.items():
        path = folder / name
        path.parent.mkdir(parents=True, exist_ok=True)
        path.write_text(text, encoding="utf-8")


def shown(document: Document) -> list[tuple[str, str]]:
    """Each formula as the words it comes to, with the name of its file."""
    return [
        ("".join(token.text for token in formula.tokens), os.path.basename(document.files[formula.file].name))
        for formula in document.formulas()
    ]


MAIN = r"""\documentclass[12pt]{article}
\usepackage{amsmath,ours}
\input{macros}
\begin{document}
$\Sq1$
\include{chapters/one}
\input chapters/two
$\last$
\input{missing}
\end{document}
"""
PROJECT = {
    "main.tex": MAIN,
    "ours.sty": r"\RequirePackage{deeper}\newcommand{\own@in}{s}\newcommand{\styled}{\own@in}",
    "deeper.sty": r"\newcommand{\deep}{d}",
    "macros.tex": r"\newcommand{\Sq}[1]{S^{#1}}",
    "chapters/one.tex": r"\newcommand{\last}{l} One $\Sq2\styled\deep$.",
    "chapters/two.tex": "% !TEX root = ../main.tex\nTwo $\\Sq{34}$.",
}


def test_files_are_drawn_in_where_they_are_named(tmp_path: Path) -> None:
    write(tmp_path, PROJECT)
    document = read(str(tmp_path / "main.tex"))
    assert shown(document) == [
        ("S^{1}", "main.tex"),
        ("S^{2}sd", "one.tex"),
        ("S^{34}", "two.tex"),
        ("l", "main.tex"),
    ]
    assert [(notice.name, document.place(notice).line) for notice in document.notices] == [("file-not-found", 9)]
    two = list(document.formulas())[2]
    assert (document.place(two).line, document.place(two).column) == (2, 5)


def test_a_style_file_alone_has_nothing_to_say(tmp_path: Path) -> None:
    write(tmp_path, {"a.tex": r"\usepackage{b}$\x$", "b.sty": r"\newcommand{\x}{y} $z$ \def\@p{$q$}"})
    assert shown(read(str(tmp_path / "a.tex"))) == [("y", "a.tex")]


@pytest.mark.parametrize(
    "head",
    [
        "% !TEX root = ../main.tex\n",
        "%!TeX Root = ../main\n",
        "\\documentclass[../main.tex]{subfiles}\n\\begin{document}\n",
        "",
    ],
)
def test_a_chapter_alone_knows_the_macros_of_its_root(tmp_path: Path, head: str) -> None:
    write(tmp_path, PROJECT | {"chapters/two.tex": head + "Two $\\Sq{34}\\deep$."})
    document = read(str(tmp_path / "chapters" / "two.tex"))
    assert shown(document) == [("S^{34}d", "two.tex")]
    assert document.notices == ()


def test_definitions_after_begin_document_of_the_root(tmp_path: Path) -> None:
    main = "\\documentclass{book}\\begin{document}\\input{m}\\input{c}\\end{document}"
    write(tmp_path, {"main.tex": main, "m.tex": r"\newcommand{\x}{y}", "c.tex": r"\section{C} $\x$"})
    assert shown(read(str(tmp_path / "c.tex"))) == [("y", "c.tex")]


def test_files_that_draw_in_each_other(tmp_path: Path) -> None:
    write(tmp_path, {"a.tex": r"$a$\input{b}", "b.tex": r"$b$\input{a}\input{b}"})
    assert shown(read(str(tmp_path / "a.tex"))) == [("a", "a.tex"), ("b", "b.tex")]


def test_folders_pipes_and_strange_names_are_passed_over(tmp_path: Path) -> None:
    (tmp_path / "d.tex").mkdir()
    os.mkfifo(tmp_path / "p.tex")
    write(tmp_path, {"a.tex": "\\input{d}\\input{p}\\input{}\\input{\0}\\input{a\nb}\\input $x$ \\usepackage{} $y$"})
    assert [text for text, _ in shown(read(str(tmp_path / "a.tex")))] == ["x", "y"]


def test_without_following(tmp_path: Path) -> None:
    write(tmp_path, PROJECT)
    document = read(str(tmp_path / "main.tex"), follow=False)
    assert [text for text, _ in shown(document)] == ["\\Sq1", "\\last"]
    assert len(document.files) == 1 and document.notices == ()


def test_a_file_that_is_not_there(tmp_path: Path) -> None:
    with pytest.raises(OSError, match="no such file"):
        read(str(tmp_path / "no.tex"))
