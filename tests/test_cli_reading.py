"""Reading scripts: lines out of bytes, in bounded memory, and everything that may be wrong with a file."""

from __future__ import annotations

import os
from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from opslang.front import reading
from opslang.front.reading import Script, Unreadable


def lines_of(path: Path, data: bytes) -> list[str]:
    path.write_bytes(data)
    script = Script(str(path))
    try:
        return list(script.lines())
    finally:
        script.close()


@pytest.mark.parametrize(
    ("data", "lines"),
    [
        (b"", []),
        (b"a", ["a"]),
        (b"a\n", ["a"]),
        (b"a\r\nb\rc\n\nd", ["a", "b", "c", "", "d"]),
        (b"\xef\xbb\xbfa\n", ["a"]),
        (b"a\n\xef\xbb\xbfb\n", ["a", "\ufeffb"]),
        (b"\xff\xc3(\n\xce\xb9\n", ["\udcff\udcc3(", "ι"]),
        ("x\u2028y\x0bz\n".encode(), ["x\u2028y\x0bz"]),
    ],
)
def test_lines(tmp_path: Path, data: bytes, lines: list[str]) -> None:
    assert lines_of(tmp_path / "a.ops", data) == lines


@settings(deadline=None, max_examples=60)
@given(st.lists(st.sampled_from([b"a", b"\n", b"\r", b"\r\n", "ι₃".encode(), b"\xff", b"\xe2\x82"])), st.integers(1, 5))
def test_the_size_of_the_blocks_does_not_matter(
    tmp_path_factory: pytest.TempPathFactory, parts: list[bytes], size: int
) -> None:
    path = tmp_path_factory.mktemp("blocks") / "a.ops"
    data = b"".join(parts)
    whole = data.decode("utf-8", "surrogateescape").replace("\r\n", "\n").replace("\r", "\n").split("\n")
    if not whole[-1]:
        whole.pop()
    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(reading, "BLOCK", size)
        assert lines_of(path, data) == whole


def test_an_overlong_line_is_left_out_and_named(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(reading, "LONGEST_LINE", 50)
    monkeypatch.setattr(reading, "BLOCK", 16)
    path = tmp_path / "a.ops"
    path.write_bytes(b"a\n" + b"x" * 200 + b"\n" + b"y" * 50 + b"\n" + b"z" * 51)
    script = Script(str(path))
    assert list(script.lines()) == ["a", "", "y" * 50]
    assert [(fault.name, fault.line) for fault in script.faults] == [("long-line", 2), ("long-line", 4)]


def test_an_endless_line_takes_no_memory(tmp_path: Path) -> None:
    import tracemalloc

    path = tmp_path / "a.ops"
    with path.open("wb") as sparse:
        sparse.write(b"x" * reading.BLOCK)
        sparse.truncate(60_000_000)
    script = Script(str(path))
    tracemalloc.start()
    assert list(script.lines()) == []
    _, peak = tracemalloc.get_traced_memory()
    tracemalloc.stop()
    assert [fault.line for fault in script.faults] == [1]
    assert peak < 30_000_000


@pytest.mark.parametrize(
    ("data", "says"), [(b"\x7fELF\0\1", "NUL byte"), (b"\xff\xfeS\0q\0", "UTF-16"), (b"\xfe\xff\0S\0q", "UTF-16")]
)
def test_binary_files_are_refused(tmp_path: Path, data: bytes, says: str) -> None:
    with pytest.raises(Unreadable) as refusal:
        lines_of(tmp_path / "a.ops", data)
    assert refusal.value.fault.name == "binary-file" and says in refusal.value.fault.message


def test_files_that_are_none(tmp_path: Path) -> None:
    round_link = tmp_path / "round"
    os.symlink(round_link, round_link)
    for path, name in (
        (tmp_path / "none", "missing-file"),
        (tmp_path, "folder-for-file"),
        (round_link, "unreadable-file"),
    ):
        with pytest.raises(Unreadable) as refusal:
            Script(str(path))
        assert refusal.value.fault.name == name


def test_what_is_done_is_handed_over_before_a_read_that_may_wait(tmp_path: Path) -> None:
    calls: list[int] = []
    path = tmp_path / "a.ops"
    path.write_bytes(b"a\nb\n")
    script = Script(str(path), lambda: calls.append(1))
    list(script.lines())
    assert len(calls) == 2
