"""Reading a draft of any kind: the one way in.  Knows which reader belongs to which file."""

from __future__ import annotations

import os

from opslang.lint.reading.document import Document, File, Notice
from opslang.lint.reading.lexer import lex
from opslang.lint.reading.project import Project, decode, load
from opslang.lint.reading.reader import Reader


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


def read_file(file: File, follow: bool) -> Document:
    """The draft in a file whose text is there already."""
    return read_tex(file, follow)


def read_tex(file: File, follow: bool = True) -> Document:
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
    notices = list(reader.notices)
    if file.encoding == "latin-1":
        notices.insert(0, Notice("not-utf-8", "the file is not UTF-8 and was read as Latin-1", 0, 0, 0))
    return Document(tuple(project.files), tuple(reader.page.pieces), tuple(notices))
