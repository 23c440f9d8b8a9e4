"""Puts certain mends into the author's files.  Knows bytes and places; knows no mathematics.

A file is written as a whole or not at all, with its encoding, its byte order mark and its line ends; what was not
mended keeps every byte. Before it is written the mended text is linted: a mend that does not take its finding away,
or brings a new one, is not written."""

from __future__ import annotations

import codecs
import json
import os
import stat
from collections.abc import Iterable
from tempfile import NamedTemporaryFile

from opslang.lint.reading.document import File
from opslang.lint.reading.project import load
from opslang.lint.result import Row
from opslang.lint.run import lint_text


def mend(rows: Iterable[Row]) -> dict[str, list[Row]]:
    """Writes the certain mends among the rows; gives those written, by path.  Raises OSError where a file cannot be."""
    wanted: dict[str, list[Row]] = {}
    for row in rows:
        if row.certain and row.mend is not None and row.path:
            wanted.setdefault(row.path, []).append(row)
    return {path: done for path, found in wanted.items() if (done := _mend_file(path, found))}


def _mend_file(path: str, rows: list[Row]) -> list[Row]:
    with open(path, "rb") as stream:
        before = stream.read()
    file = load(path)
    chosen = _apart(sorted(rows, key=lambda row: (row.start, row.end)))
    mended = _replaced(file.text, chosen, path)
    if not chosen or mended == file.text or not _better(file.text, mended, path):
        return []
    data = _spliced(file, before, chosen)
    if data is not None:
        _write(path, data)
    return chosen if data is not None else []


def _apart(rows: list[Row]) -> list[Row]:
    """The rows without those that overlap an earlier one."""
    kept: list[Row] = []
    for row in rows:
        if not kept or row.start >= kept[-1].end:
            kept.append(row)
    return kept


def _replaced(text: str, rows: list[Row], path: str) -> str:
    parts = []
    at = 0
    for row in rows:
        parts += [text[at : row.start], written(row.mend or "", path)]
        at = row.end
    return "".join([*parts, text[at:]])


def written(mend: str, path: str) -> str:
    """A mend as it stands in a file of that kind: in a notebook all text is inside JSON strings."""
    return json.dumps(mend, ensure_ascii=False)[1:-1] if path.lower().endswith(".ipynb") else mend


def _better(before: str, after: str, path: str) -> bool:
    """Whether the mended text has fewer findings, and none of a name that it did not have."""
    old, new = lint_text(before, path), lint_text(after, path)
    if old.failure or new.failure or new.checked < old.checked:
        return False
    names = [row.name for row in old.findings]
    return len(new.findings) < len(names) and {row.name for row in new.findings} <= set(names)


def _spliced(file: File, before: bytes, rows: list[Row]) -> bytes | None:
    """The bytes of the mended file: those of the old one but for the mended stretches; None where that cannot be
    done.
    """
    encoding = file.encoding
    head = b""
    if encoding == "utf-8" and file.mark:
        head, before = codecs.BOM_UTF8, before[3:]
    if encoding == "utf-16":
        head, before = before[:2], before[2:]
        encoding = "utf-16-le" if head == codecs.BOM_UTF16_LE else "utf-16-be"
    raw = before.decode(encoding)
    places = _raw_places(raw, sorted({at for row in rows for at in (row.start, row.end)}))
    parts, at = [], 0
    for row in rows:
        text = written(row.mend or "", file.path).replace("\n", file.newline)
        parts += [raw[at : places[row.start]], text]
        at = places[row.end]
    try:
        return head + "".join([*parts, raw[at:]]).encode(encoding)
    except UnicodeEncodeError:
        return None


def _raw_places(raw: str, offsets: list[int]) -> dict[int, int]:
    """Offsets in the text with \\n as line ends, as offsets in the text as it is in the file."""
    if "\r" not in raw:
        return {at: at for at in offsets}
    places: dict[int, int] = {}
    waiting = list(reversed(offsets))
    seen = at = 0
    while waiting:
        while waiting and waiting[-1] == seen:
            places[waiting.pop()] = at
        at += 2 if raw[at : at + 2] == "\r\n" else 1
        seen += 1
    return places


def _write(path: str, data: bytes) -> None:
    """Puts the bytes in place of the file at once; the file keeps its rights, a link stays a link."""
    real = os.path.realpath(path)
    mode = stat.S_IMODE(os.stat(real).st_mode)
    if not os.access(real, os.W_OK):
        raise PermissionError(13, "permission denied", path)
    with NamedTemporaryFile(dir=os.path.dirname(real), prefix=".", suffix=".mended", delete=False) as stream:
        try:
            stream.write(data)
            stream.flush()
            os.fsync(stream.fileno())
            os.chmod(stream.name, mode)
            os.replace(stream.name, real)
        except BaseException:
            os.unlink(stream.name)
            raise
