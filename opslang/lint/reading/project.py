"""Files on disk: reads them whatever their bytes, and finds those that a draft draws in.

Knows folders and encodings; knows of TeX only how it names files.
"""

from __future__ import annotations

import os
import re
from functools import lru_cache
from typing import TYPE_CHECKING

from opslang.lint.reading.document import File, Token
from opslang.lint.reading.lexer import lex

if TYPE_CHECKING:
    from opslang.lint.reading.reader import Reader

LARGEST = 20_000_000
"""Files of more bytes are not read."""
DEEPEST = 30
_MAGIC = re.compile(r"^\s*%+\s*!\s*TEX\s+root\s*=\s*(.+?)\s*$", re.IGNORECASE | re.MULTILINE)
_SUBFILE = re.compile(r"^[^%\n]*\\documentclass\s*\[([^\]\n]+)\]\s*\{subfiles\}", re.MULTILINE)
_DEFINES = re.compile(r"\\(?:newcommand|def|DeclareMathOperator|let|renewcommand)\b")
_HEADING = re.compile(r"\\(?:chapter|section|begin)\b")
_DRAWN = re.compile(r"\\(?:input|include|subfile)\s*\{?\s*([^\s{}%]+)")


def decode(data: bytes, name: str, path: str = "") -> File:
    """Bytes as a file: UTF-8, or Latin-1 when they are not; line ends become \\n, a byte order mark goes."""
    mark = data.startswith(b"\xef\xbb\xbf")
    if mark:
        data = data[3:]
    encoding = "utf-8"
    try:
        if data[:2] in (b"\xff\xfe", b"\xfe\xff"):
            encoding, mark = "utf-16", True
        text = data.decode(encoding)
    except UnicodeDecodeError:
        encoding = "latin-1"
        text = data.decode(encoding)
    newline = "\n"
    if "\r" in text:
        newline = "\r\n" if "\r\n" in text else "\r"
        text = text.replace("\r\n", "\n").replace("\r", "\n")
    return File(name, text, path, encoding, newline, mark)


def load(path: str, name: str | None = None) -> File:
    """A file of that path.  Raises OSError when there is none or it is no regular file or too large."""
    if not os.path.isfile(path):
        raise FileNotFoundError(f"{name or path}: no such file")
    if os.path.getsize(path) > LARGEST:
        raise OSError(f"{name or path}: the file is larger than {LARGEST // 1_000_000} MB")
    with open(path, "rb") as stream:
        return decode(stream.read(), name or path, path)


class Project:
    """The files of one draft: those read so far, and the folders in which further ones are looked for."""

    def __init__(self, first: File, follow: bool = True) -> None:
        self.files: list[File] = [first]
        self.numbers: dict[str, int] = {os.path.realpath(first.path): 0} if first.path else {}
        self.folders: list[str] = [os.path.dirname(first.path)] if first.path or follow else []
        self.follow = follow

    def number_of(self, path: str) -> int:
        """The number of a file, reading it if it is new.  Raises OSError."""
        real = os.path.realpath(path)
        number = self.numbers.get(real)
        if number is None:
            name = os.path.normpath(path)
            self.files.append(load(path, name))
            number = self.numbers[real] = len(self.files) - 1
        return number

    def find(self, name: str, endings: tuple[str, ...], near: str = "") -> str | None:
        """The path of a file of that name, seen from the draft's folder or that of the file naming it."""
        if not self.follow or not name or "\0" in name:
            return None
        for folder in dict.fromkeys([*self.folders, os.path.dirname(near)]):
            for ending in endings:
                path = os.path.join(folder, name + ending)
                if os.path.isfile(path):
                    return path
        return None

    def draw_in(self, reader: Reader, name: str, token: Token) -> None:
        """\\input: the tokens of that file come next."""
        path = self.find(name, (".tex", "", ".ltx"), self.files[token.file].path)
        if path is None:
            if self.follow and not reader.intake.silent:
                reader.notice("file-not-found", f"{name} was not found and what it defines is not known", token)
            return
        if reader.only_definitions and not self._only_defines(path):
            return
        self._open(reader, path, token, reader.intake.silent, package=False)

    def _only_defines(self, path: str) -> bool:
        """Whether a file drawn in by the body of the main file is one of definitions and no chapter."""
        try:
            text = self.files[self.number_of(path)].text
        except OSError:
            return False
        return _DEFINES.search(text) is not None and _HEADING.search(text) is None

    def packages(self, reader: Reader, names: list[str], ending: str) -> None:
        """\\usepackage: the definitions of a style file that lies beside the draft."""
        for name in reversed(names):
            path = self.find(name, (ending,))
            if path is not None:
                self._open(reader, path, None, silent=True, package=True)

    def _open(self, reader: Reader, path: str, token: Token | None, silent: bool, package: bool) -> None:
        intake = reader.intake
        try:
            number = self.number_of(path)
        except OSError as trouble:
            if token is not None:
                reader.notice("file-not-read", str(trouble), token)
            return
        if len(intake.frames) > DEEPEST or any(frame.file == number for frame in intake.frames):
            return
        if package and number in reader.packages_read:
            return
        reader.packages_read.add(number)
        intake.open(lex(self.files[number].text, number, package=package), number, silent)

    def root(self) -> str | None:
        """The main file of which the first file is a part, named in it or found beside it; None if it is one itself."""
        first = self.files[0]
        if not first.path or not self.follow:
            return None
        folder = os.path.dirname(first.path)
        named = _MAGIC.search(first.text, 0, 2000) or _SUBFILE.search(first.text, 0, 2000)
        if named is not None:
            path = os.path.join(folder, named.group(1).strip().strip("\"'"))
            path = path if os.path.isfile(path) else path + ".tex"
            same = os.path.realpath(path) == os.path.realpath(first.path)
            return path if os.path.isfile(path) and not same else None
        if "\\documentclass" in first.text or "\\begin{document}" in first.text:
            return None
        return self._root_beside(first, folder)

    def _root_beside(self, first: File, folder: str) -> str | None:
        wanted = os.path.splitext(os.path.realpath(first.path))[0]
        for place in (folder, os.path.join(folder, os.pardir)):
            try:
                names = sorted(name for name in os.listdir(place or ".") if name.endswith((".tex", ".ltx")))[:60]
            except OSError:
                continue
            for name in names:
                path = os.path.join(place, name)
                if os.path.realpath(path) != os.path.realpath(first.path) and wanted in _drawn_in(path):
                    return path
        return None


def _drawn_in(path: str) -> frozenset[str]:
    """The files, without their endings, that a main file draws in; none when it is no main file."""
    try:
        status = os.stat(path)
    except OSError:
        return frozenset()
    return _drawn_in_version(path, status.st_mtime_ns, status.st_size)


@lru_cache(maxsize=500)
def _drawn_in_version(path: str, changed: int, size: int) -> frozenset[str]:
    try:
        text = load(path).text
    except OSError:
        return frozenset()
    if "\\documentclass" not in text:
        return frozenset()
    folder = os.path.dirname(path)
    names = (os.path.join(folder, name) for name in _DRAWN.findall(text) if "\0" not in name)
    return frozenset(os.path.splitext(os.path.realpath(name))[0] for name in names)
