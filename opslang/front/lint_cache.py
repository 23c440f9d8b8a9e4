"""Results kept from earlier runs.  Knows digests and files; knows nothing of what a result says.

A result is kept under the digest of the draft's bytes, its name, and the program itself, together with the digests of
all files that were read with it; it is used only while all of them are as they were.  The folder may be deleted at
any time; one that cannot be read or written is no error."""

from __future__ import annotations

import json
import os
from functools import lru_cache
from hashlib import sha256
from pathlib import Path

from opslang.lint.result import Report, packed, unpacked


def digest(data: bytes) -> str:
    """The name of some bytes."""
    return sha256(data).hexdigest()


def digest_of(path: str) -> str:
    """The digest of a file, or the empty text where it cannot be read."""
    try:
        with open(path, "rb") as stream:
            return digest(stream.read())
    except OSError:
        return ""


@lru_cache(maxsize=1)
def program() -> str:
    """The digest of this installation: its own files, by name, size and time."""
    import opslang

    own = Path(opslang.__file__).parent
    files = sorted(path for path in own.rglob("*.py"))
    facts = [f"{path.relative_to(own)} {path.stat().st_size} {path.stat().st_mtime_ns}" for path in files]
    return digest("\n".join([opslang.__version__, *facts]).encode())


class Cache:
    """The results kept in a folder; None as folder keeps nothing."""

    def __init__(self, folder: Path | None, options: str = "") -> None:
        self._folder = folder
        self._options = options

    def _place(self, path: str) -> Path | None:
        if self._folder is None:
            return None
        own = digest_of(path)
        key = digest("\0".join((program(), self._options, os.path.abspath(path), path, own)).encode(errors="replace"))
        return self._folder / key[:2] / f"{key[2:34]}.json" if own else None

    def get(self, path: str) -> Report | None:
        """The result kept for a draft, if nothing that it rests on has changed."""
        place = self._place(path)
        if place is None:
            return None
        try:
            report = unpacked(json.loads(place.read_text(encoding="utf-8")))
        except (OSError, ValueError, TypeError):
            return None
        return report if all(digest_of(name) == kept for name, kept in report.files) else None

    def put(self, path: str, report: Report) -> None:
        """Keep a result.  Not one that a missing file might change tomorrow."""
        place = self._place(path)
        if place is None or report.failure or any(row.name == "file-not-found" for row in report.notices):
            return
        try:
            place.parent.mkdir(parents=True, exist_ok=True)
            fresh = place.with_suffix(f".{os.getpid()}")
            fresh.write_text(json.dumps(packed(report)), encoding="utf-8")
            os.replace(fresh, place)
        except OSError:
            pass
