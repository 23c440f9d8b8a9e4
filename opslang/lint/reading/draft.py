"""Reading a draft of any kind: the one way in.  Knows which reader belongs to which file."""

from __future__ import annotations

import gc
import json
import os

from opslang.lint.reading.document import Document, File, Notice, Token
from opslang.lint.reading.lexer import lex
from opslang.lint.reading.markdown import tokens_of
from opslang.lint.reading.notebook import notebook_tokens
from opslang.lint.reading.project import Project, decode, load
from opslang.lint.reading.reader import Reader

MARKDOWN = frozenset({".md", ".markdown", ".mdown", ".myst", ".qmd", ".rmd"})


def read(path: str, follow: bool = True) -> Document:
    """The draft in a file, by its ending .md, .markdown, .myst, .ipynb, or else as TeX.

    `follow` says whether files that it names are read too.  Raises OSError when the file itself cannot be read;
    anything wrong inside it becomes a notice.
    """
    return read_file(load(path), follow)


def read_text(text: str | bytes, name: str = "-", follow: bool = False) -> Document:
    """A draft given as text (standard input, an editor); `name` decides what it is, as in `read`."""
    data = text if isinstance(text, bytes) else text.encode("utf-8", "surrogatepass")
    if isinstance(text, bytes):
        return read_file(decode(data, name, ""), follow)
    return read_file(File(name, text.replace("\r\n", "\n").replace("\r", "\n")), follow)


def read_file(file: File, follow: bool = True) -> Document:
    """The draft in a file whose text is there already."""
    collecting = gc.isenabled()
    gc.disable()  # many thousands of small tuples and no cycles: looking for some would take a fifth of the time
    try:
        return _read(file, follow)
    finally:
        if collecting:
            gc.enable()


def _read(file: File, follow: bool) -> Document:
    ending = os.path.splitext(file.name)[1].lower()
    if ending in MARKDOWN:
        return _read_tokens(file, tokens_of(file.text))
    if ending == ".ipynb":
        return _read_notebook(file)
    return _read_tex(file, follow)


def _read_tex(file: File, follow: bool) -> Document:
    """A TeX draft: its root's definitions first, then the file itself."""
    project = Project(file, follow)
    reader = Reader(project)
    root = project.root()
    if root is not None:
        project.folders.append(os.path.dirname(root))
        reader.learn(root)
    tokens = lex(file.text, 0, package=file.name.endswith((".sty", ".cls")))
    whole = any(token.text == "\\documentclass" or token.text == "\\documentstyle" for token in tokens)
    reader.intake.open(tokens, 0, silent=whole)
    reader.run()
    return _document(reader, file)


def _read_tokens(file: File, tokens: list[Token]) -> Document:
    reader = Reader(Project(file, follow=False))
    reader.intake.open(tokens, 0, silent=False)
    reader.run()
    return _document(reader, file)


def _read_notebook(file: File) -> Document:
    try:
        json.loads(file.text)
    except (ValueError, RecursionError):
        trouble = Notice("not-a-notebook", "the file is not valid JSON and was not read", 0, 0, 0)
        return Document((file,), (), (trouble,))
    return _read_tokens(file, notebook_tokens(file.text))


def _document(reader: Reader, file: File) -> Document:
    notices = list(reader.notices)
    if file.encoding == "latin-1":
        notices.insert(0, Notice("not-utf-8", "the file is not UTF-8 and was read as Latin-1", 0, 0, 0))
    return Document(tuple(reader.project.files), tuple(reader.page.pieces), tuple(notices))
