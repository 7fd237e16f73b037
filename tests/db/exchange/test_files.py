from __future__ import annotations

import os
from pathlib import Path

import pytest

from db.exchange import read_bridge, read_visit
from db.exchange.files import LARGEST
from tests.db.conftest import DATA, line_of

READERS = pytest.mark.parametrize("read", [read_bridge, read_visit])
JUNK = {
    "nothing": b"",
    "binary": bytes(range(256)) * 8,
    "picture": b"\x89PNG\r\n\x1a\n" + bytes(100),
    "UTF-16": "format = 1".encode("utf-16"),
    "Latin-1": 'format = 1\n[bridge]\nid = "gründel"'.encode("latin-1"),
    "a NUL": b"format = 1\n# \x00\n",
    "an escape": b"format = 1\n# \x1b[31m\n",
    "cut off": b'format = 1\n[bridge]\nid = "quill',
    "prose": b"see the drawing",
    "a list": b"format = 1\nbridge = [1, 2]\nvisit = [1, 2]\n",
}


@READERS
@pytest.mark.parametrize("what", JUNK)
def test_junk_is_refused_in_one_line(read: object, what: str, tmp_path: Path) -> None:
    path = tmp_path / "file.toml"
    path.write_bytes(JUNK[what])
    assert line_of(lambda: read(path)).startswith(str(path))  # type: ignore[operator]


def test_the_other_kind_of_file_is_recognised() -> None:
    assert "bedstone visit log" in line_of(lambda: read_bridge(DATA / "visit-example.toml"))
    assert "bedstone bridge add" in line_of(lambda: read_visit(DATA / "bridge-example.toml"))


@READERS
def test_what_is_no_file_is_refused(read: object, tmp_path: Path) -> None:
    os.mkfifo(tmp_path / "pipe")
    for path, says in [
        (tmp_path, "folder"),
        (tmp_path / "none.toml", "no such file"),
        (tmp_path / "pipe", "regular"),
        (Path("a\x00b"), "a?b"),
        (tmp_path / ("x" * 300), "x"),
    ]:
        assert says in line_of(lambda path=path: read(path))  # type: ignore[misc, operator]


@READERS
def test_an_unreadable_file_is_refused(read: object, tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def refuse(path: Path) -> bytes:
        raise PermissionError(13, "Permission denied", str(path))

    (tmp_path / "b.toml").write_text("format = 1")
    monkeypatch.setattr(Path, "read_bytes", refuse)
    assert "Permission denied" in line_of(lambda: read(tmp_path / "b.toml"))  # type: ignore[operator]


@READERS
def test_an_enormous_file_is_not_even_read(read: object, tmp_path: Path) -> None:
    with (tmp_path / "b.toml").open("wb") as file:
        file.truncate(LARGEST + 1)
    assert "20 MB" in line_of(lambda: read(tmp_path / "b.toml"))  # type: ignore[operator]
