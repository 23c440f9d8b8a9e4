"""Reads scripts line by line in bounded memory.  Knows bytes, lines and what may be wrong with a file; knows no syntax.

Bytes that are no UTF-8 are kept as `surrogateescape` keeps them, so that the parser can point at each; a byte
order mark at the start falls away; CR LF and a lone CR end a line as LF does.
"""

from __future__ import annotations

import os
import sys
from codecs import getincrementaldecoder
from collections.abc import Callable, Iterator
from io import IncrementalNewlineDecoder
from typing import BinaryIO

from attrs import frozen

BLOCK = 1 << 16
LONGEST_LINE = 4_000_000
"""A line of more code points than this is left out, so that no file can eat the memory."""

STANDARD_INPUT = "-"
_UTF_16 = (b"\xff\xfe", b"\xfe\xff")


@frozen
class Fault:
    """What is wrong with a file as a whole, or with a line of it that is not kept."""

    name: str
    message: str
    line: int | None = None


class Unreadable(Exception):
    """The file gives nothing, or nothing more, to read."""

    def __init__(self, fault: Fault) -> None:
        super().__init__(fault.message)
        self.fault = fault


def _nothing() -> None:
    pass


class Script:
    """One script as it is read: its name, how far the reading has come, and the lines that were left out.

    `before_read` is called before every request to the operating system, which may take as long as the
    writer at the other end of a pipe pleases: the place to hand over what is done so far.
    Raises Unreadable where the file cannot be opened.
    """

    def __init__(self, name: str, before_read: Callable[[], None] = _nothing) -> None:
        self.name = name
        self.faults: list[Fault] = []
        self.read = 0
        self._before_read = before_read
        self._handle = _opened(name)
        self.size = _size(self._handle)

    def _block(self) -> bytes:
        self._before_read()
        try:
            while (block := self._handle.read(BLOCK)) is None:  # a pipe that its other user made non-blocking
                _await(self._handle)
        except OSError as trouble:
            raise Unreadable(_fault(trouble)) from trouble
        self.read += len(block)
        return block

    def lines(self) -> Iterator[str]:
        """The lines without their ends.  Raises Unreadable where the reading fails on the way."""
        decoder = IncrementalNewlineDecoder(getincrementaldecoder("utf-8")("surrogateescape"), translate=True)
        block = self._block()
        if b"\0" in block or block.startswith(_UTF_16):
            what = "in UTF-16, not UTF-8" if block.startswith(_UTF_16) else "binary: it holds a NUL byte"
            raise Unreadable(Fault("binary-file", f"the file is {what}"))
        block = block.removeprefix(b"\xef\xbb\xbf")
        count, held, overlong = 0, "", False
        while True:
            *whole, tail = decoder.decode(block, final=not block).split("\n")
            for line in whole:
                line, held = held + line, ""
                count += 1
                if overlong or len(line) > LONGEST_LINE:
                    self._leave_out(count)
                    overlong, line = False, ""
                yield line
            held = "" if overlong else held + tail
            if len(held) > LONGEST_LINE:
                overlong, held = True, ""
            if not block:
                break
            block = self._block()
        if overlong:
            self._leave_out(count + 1)
        if held:
            yield held

    def _leave_out(self, line: int) -> None:
        message = f"the line has more than {LONGEST_LINE:,} characters and is left out"
        self.faults.append(Fault("long-line", message, line))

    def close(self) -> None:
        """Gives the file back; standard input stays open."""
        if self.name != STANDARD_INPUT:
            self._handle.close()


def _opened(name: str) -> BinaryIO:
    if name == STANDARD_INPUT:
        if sys.stdin is None:
            raise Unreadable(Fault("unreadable-file", "standard input is closed"))
        return open(sys.stdin.fileno(), "rb", buffering=0, closefd=False)
    try:
        return open(name, "rb", buffering=0)
    except OSError as trouble:
        raise Unreadable(_fault(trouble)) from trouble


def _size(handle: BinaryIO) -> int:
    """The size of a regular file; 0 where it is not known."""
    try:
        return os.fstat(handle.fileno()).st_size
    except OSError:
        return 0


def _fault(trouble: OSError) -> Fault:
    reason = (trouble.strerror or str(trouble)).lower()
    if isinstance(trouble, FileNotFoundError):
        return Fault("missing-file", "there is no file of that name")
    if isinstance(trouble, IsADirectoryError):
        return Fault("folder-for-file", "this is a folder; name the scripts in it")
    return Fault("unreadable-file", f"the file cannot be read: {reason}")


def _await(handle: BinaryIO) -> None:
    from select import select

    select([handle.fileno()], [], [])
