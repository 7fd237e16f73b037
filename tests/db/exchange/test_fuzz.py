"""Files that went wrong on the way: every one is read or refused, and nothing else happens."""

from __future__ import annotations

import datetime as dt
import random
from pathlib import Path

import pytest

from db.documents import BridgeDoc
from db.errors import BedstoneError
from db.exchange import check_visit, read_bridge, read_visit

NAMES = "girder,state,quantity,support,at,height,value,sd,unit,instrument,remark,repeats,zero_after,gaps"
TABLE = f"""{NAMES},gaps_before,corner_spacing
north,T1,compression,pier 1,,,1.42,0.05,mm,gap gauge,,,,,,
north,T1,deflection,,6,,2.31,0.1,mm,,"dial gauge 3, rusty",,,,,
north,T1,strain,,6,-0.62,120,2,microstrain,,,,,,,
north,T1,deflection,,20,,,0.1,mm,,,1.1;1.2;1.1,0.1,,,
north,T1,compression,pier 2,,,,0.05,mm,,,,,30.0;30.2;29.5;29.7,31.0;31.2;31.0;31.2,0.32
"""
ODD = [
    '"',
    "'",
    "[",
    "]]",
    "\n",
    "\r",
    "=",
    "nan",
    "inf",
    "-",
    "1e999",
    "…",
    "\\u0000",
    "{}",
    "0x" + "f" * 4000,
]
ODD += ["true", "1979-05-27", "[[girder]]", "9" * 4400, "🌉", ",", ";", '"""', "#", "\t", "e", "0"]


def broken(data: bytes, rng: random.Random) -> bytes:
    """The same file after an accident."""
    kind = rng.randrange(6)
    place = rng.randrange(len(data))
    if kind == 0:
        return data[:place]
    if kind == 1:
        flipped = bytearray(data)
        for _ in range(rng.randint(1, 4)):
            flipped[rng.randrange(len(data))] ^= 1 << rng.randrange(8)
        return bytes(flipped)
    if kind == 2:
        lines = data.splitlines(keepends=True)
        del lines[rng.randrange(len(lines))]
        return b"".join(lines)
    if kind == 3:
        lines = data.splitlines(keepends=True)
        lines.insert(rng.randrange(len(lines)), rng.choice(lines))
        return b"".join(lines)
    if kind == 4:
        length = rng.randint(1, 40)
        return data[:place] + data[place + length :]
    return data[:place] + rng.choice(ODD).encode() + data[place + rng.randint(0, 3) :]


def read_broken(count: int, seed: int, folder: Path, bridge: BridgeDoc, visit_text: str) -> tuple[int, int]:
    """Read broken files; return how many were taken and how many were refused."""
    rng = random.Random(seed)
    with_table = visit_text.replace("[visit]", '[visit]\nreadings = "v.csv"', 1)
    sound = {"b.toml": bridge.text, "v.toml": with_table, "v.csv": TABLE}
    taken = refused = 0
    for _ in range(count):
        victim = rng.choice(sorted(sound))
        for name, text in sound.items():
            data = text.encode()
            (folder / name).write_bytes(broken(data, rng) if name == victim else data)
        try:
            if victim == "b.toml":
                read_bridge(folder / "b.toml")
            else:
                visit = read_visit(folder / "v.toml")
                check_visit(visit, bridge, today=dt.date(2025, 1, 1), file="v.toml")
            taken += 1
        except BedstoneError as error:
            refused += 1
            assert str(error).isprintable()
            assert len(str(error)) < 1500
            assert error.remedy
    return taken, refused


def test_the_sound_files_are_taken(tmp_path: Path, bridge: BridgeDoc, visit_text: str) -> None:
    assert read_broken(0, 1, tmp_path, bridge, visit_text) == (0, 0)
    (tmp_path / "v.csv").write_text(TABLE, encoding="utf-8")
    text = visit_text.replace("[visit]", '[visit]\nreadings = "v.csv"', 1)
    (tmp_path / "v.toml").write_text(text, encoding="utf-8")
    check_visit(read_visit(tmp_path / "v.toml"), bridge, today=dt.date(2025, 1, 1), file="v.toml")


def test_broken_files_are_read_or_refused(tmp_path: Path, bridge: BridgeDoc, visit_text: str) -> None:
    taken, refused = read_broken(300, 7, tmp_path, bridge, visit_text)
    assert taken > 20
    assert refused > 100


@pytest.mark.campaign
@pytest.mark.parametrize("seed", range(5))
def test_thousands_of_broken_files_are_read_or_refused(
    seed: int, tmp_path: Path, bridge: BridgeDoc, visit_text: str
) -> None:
    taken, refused = read_broken(1000, seed, tmp_path, bridge, visit_text)
    assert taken + refused == 1000
