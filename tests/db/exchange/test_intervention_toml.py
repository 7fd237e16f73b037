"""What has been done to bearings, as a bridge file says it."""

from __future__ import annotations

import datetime as dt
from collections.abc import Callable

import pytest

from db.errors import BedstoneError
from db.exchange import check_interventions, parse_bridge
from tests.db.conftest import changed, line_of

GOOD = """[[intervention]]
date = 2019-10-04
kind = "replaced"
girder = "north"
support = "pier 1"
remark = "new pad, same drawing"

[[intervention]]
date = 2012-03-01
kind = "shimmed"
girder = "north"
support = "east abutment"

"""


Written = Callable[..., str]


@pytest.fixture
def written(bridge_text: str) -> Callable[..., str]:
    """The example bridge with two interventions, some of their words replaced."""
    return lambda *changes: bridge_text + "\n" + changed(GOOD, *changes)


def test_interventions_stand_by_date(written: Written) -> None:
    first, second = parse_bridge(written(), file="b.toml").interventions
    assert (first.date, first.kind, first.support, first.remark) == (
        dt.date(2012, 3, 1), "shimmed", "east abutment", "",
    )  # fmt: skip
    assert (second.date, second.kind, second.girder) == (dt.date(2019, 10, 4), "replaced", "north")


def test_a_file_without_any_has_none(bridge_text: str) -> None:
    assert parse_bridge(bridge_text, file="b.toml").interventions == ()


BAD = {
    "unknown kind": ('"replaced"', '"renewed"', "replaced"),
    "unknown support": ('"pier 1"', '"pier 9"', "pier 9"),
    "unknown girder": ('girder = "north"\nsupport = "pier 1"', 'girder = "west"\nsupport = "pier 1"', "west"),
    "no date": ("date = 2019-10-04\n", "", "date"),
    "date as text": ("2019-10-04", '"4 Oct"', "date"),
    "a pin replaced": ('support = "pier 1"', 'support = "east abutment"', "is no pad"),
    "unknown field": ("remark", "remarks", "remarks"),
}


@pytest.mark.parametrize(("old", "new", "said"), BAD.values(), ids=BAD.keys())
def test_a_wrong_one_is_refused_in_one_line(old: str, new: str, said: str, written: Written) -> None:
    line = line_of(lambda: parse_bridge(written(old, new), file="b.toml"))
    assert said in line
    assert "intervention 1" in line


def test_the_same_one_twice_is_refused(written: Written) -> None:
    twice = written("2012-03-01", "2019-10-04", "shimmed", "replaced", "east abutment", "pier 1")
    assert "stands in the file twice" in line_of(lambda: parse_bridge(twice, file="b.toml"))


@pytest.mark.parametrize(
    ("date", "said"), [("1980-01-01", "before the bridge was built"), ("2101-01-01", "in the future")]
)
def test_a_day_that_cannot_be_is_refused(date: str, said: str, written: Written) -> None:
    bridge = parse_bridge(written("2019-10-04", date), file="b.toml")
    with pytest.raises(BedstoneError, match=said):
        check_interventions(bridge, today=dt.date(2026, 1, 1), file="b.toml")
