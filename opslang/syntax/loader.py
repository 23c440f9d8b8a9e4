"""Finds the grammar and makes the parser of it, once a process.  Knows files; knows no rule of the grammar.

The grammar lies in the package where opslang is installed, and in the folder `grammar/` beside the package in a
checkout.  Building the tables takes some 0.1 s, so they are kept in the user's cache folder, under a name made from
the grammar's text and the versions of lark and Python; a cache that cannot be read or written is no error.
"""

from __future__ import annotations

import os
import sys
from collections.abc import Iterator
from functools import lru_cache
from hashlib import sha256
from importlib.resources import files
from io import BytesIO
from pathlib import Path
from tempfile import NamedTemporaryFile
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from lark import Lark

NAME = "opslang.lark"


def _places() -> Iterator[Path]:
    package = Path(str(files("opslang")))
    yield package / "grammar" / NAME
    yield package.parent / "grammar" / NAME


def grammar_text() -> str:
    """The text of the grammar.  Raises FileNotFoundError where the installation lacks it."""
    for place in _places():
        if place.is_file():
            return place.read_text(encoding="utf-8")
    raise FileNotFoundError(f"the grammar {NAME} is missing from this installation of opslang")


def build(text: str, strict: bool = False) -> Lark:
    """The parser of a grammar.  Raises lark's GrammarError where the grammar has a conflict."""
    from lark import Lark

    return Lark(text, parser="lalr", lexer="basic", keep_all_tokens=True, maybe_placeholders=False, strict=strict)


def cache_folder() -> Path | None:
    """Where tables are kept (the XDG base directory specification); None where there is no home."""
    chosen = os.environ.get("XDG_CACHE_HOME")
    if chosen and os.path.isabs(chosen):
        return Path(chosen) / "opslang"
    home = os.path.expanduser("~")
    return Path(home) / ".cache" / "opslang" if os.path.isabs(home) else None


@lru_cache(maxsize=1)
def parser() -> Lark:
    """The parser of opslang's grammar: from the cache, or built and put there."""
    import lark

    text = grammar_text()
    key = "\0".join((text, lark.__version__, sys.version)).encode()
    folder = cache_folder()
    if folder is None:
        return build(text)
    place = folder / f"grammar-{sha256(key).hexdigest()[:32]}.bin"
    kept = _kept(place)
    if kept is not None:
        return kept
    made = build(text)
    _keep(made, place)
    return made


def _kept(place: Path) -> Lark | None:
    from lark import Lark

    try:
        return Lark.load(BytesIO(place.read_bytes()))
    except Exception:  # whatever a damaged file does to the reader of it: the tables are built afresh
        return None


def _keep(made: Lark, place: Path) -> None:
    """Writes the tables whole or not at all."""
    try:
        place.parent.mkdir(parents=True, exist_ok=True)
        with NamedTemporaryFile(dir=place.parent, delete=False) as file:
            made.save(file)
        os.replace(file.name, place)
    except OSError:
        return
