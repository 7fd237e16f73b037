"""A live load that names a published model: what the file's form allows. The names are no matter of the record."""

from __future__ import annotations

import pytest

from db.documents import LiveDoc
from db.errors import BedstoneError
from db.exchange import parse_bridge


def live_of(bridge_text: str, rows: str) -> tuple[LiveDoc, ...]:
    start, end = bridge_text.index("[[live]]"), bridge_text.index("[factors]")
    text = f"{bridge_text[:start]}[[live]]\n{rows}\n{bridge_text[end:]}"
    return parse_bridge(text, file="bridge.toml").live


def test_a_model_stands_in_place_of_a_vehicle(bridge_text: str) -> None:
    (live,) = live_of(bridge_text, 'id = "trains"\nmodel = "lm71"\ntrack = "careful"')
    assert (live.model, live.track, live.dynamic, live.vehicle) == ("lm71", "careful", None, "")


@pytest.mark.parametrize(("written", "read"), [("0", 0.0), ("0.3", 0.3)])
def test_a_given_allowance_is_kept_apart_from_none(bridge_text: str, written: str, read: float) -> None:
    (live,) = live_of(bridge_text, f'id = "trains"\nmodel = "lm71"\ndynamic = {written}')
    assert live.dynamic == read


def test_a_vehicle_without_allowance_has_none_as_before(bridge_text: str) -> None:
    (live,) = live_of(bridge_text, 'id = "trains"\nvehicle = "ballast wagon"')
    assert (live.model, live.dynamic, live.count) == (None, 0.0, 1)


BAD = {
    'model = "lm71"\nvehicle = "ballast wagon"': 'live "t", vehicle: it cannot stand beside a published model',
    'model = "lm71"\ncount = 2': 'live "t", count: it cannot stand beside a published model',
    'model = "lm71"\npitch = "12 m"': 'live "t", pitch: it cannot stand beside a published model',
    'model = "lm71"\ntrack = "good"': 'live "t", track: "good" is not known here',
    'model = "lm71"\ndynamic = -0.1': 'live "t", dynamic: -0.1 is no dynamic allowance',
    'model = "lm71"\ndynamic = "0.3"': 'live "t", dynamic: "0.3" is not a number',
    "model = 71": 'live "t", model: 71 is not text',
    'model = ""': 'live "t", model: it is empty',
    'vehicle = "ballast wagon"\ntrack = "careful"': 'live "t", track: it belongs to a published model',
    'modle = "lm71"': 'unknown field "modle" (did you mean "model"?)',
    "": 'live "t", vehicle: it is missing',
}


@pytest.mark.parametrize(("rows", "said"), BAD.items(), ids=list(BAD))
def test_a_wrong_form_is_one_line(bridge_text: str, rows: str, said: str) -> None:
    with pytest.raises(BedstoneError) as error:
        live_of(bridge_text, f'id = "t"\n{rows}')
    line = str(error.value)
    assert line.startswith("bridge.toml, ")
    assert said in line
    assert "\n" not in line
