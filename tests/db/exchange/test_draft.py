from __future__ import annotations

import re
import tomllib

import pytest

from db.exchange import draft_bridge, parse_bridge
from db.prior_doc import PriorDoc
from tests.db.conftest import line_of

EXAMPLES = {
    "GPa": "205",
    "m^4": "0.0118",
    "kN m": "5100",
    "kN/mm": "150",
    "kN/m": "36.5",
    "kN": "200",
}


def filled(text: str) -> str:
    """The draft with every placeholder replaced as its comment says."""
    text = re.sub(r'"… ([^"]+)"', lambda m: f'"{EXAMPLES[m[1]]} {m[1]}"', text)
    return text.replace('"…"', '"mine"')


@pytest.mark.parametrize("spans", ["18 m", "12 m, 15 m, 12 m", "59 ft,60 ft", "12000 mm , 15 m"])
def test_a_filled_in_draft_is_accepted(spans: str) -> None:
    doc = parse_bridge(filled(draft_bridge(spans)), file="my-bridge.toml")
    count = spans.count(",") + 1
    assert len(doc.girders[0].spans) == count
    assert len(doc.girders[0].supports) == count + 1
    assert [f'length = "{x.strip()}"' in doc.text for x in spans.split(",")] == [True] * count


def test_each_placeholder_left_over_is_named() -> None:
    whole = filled(draft_bridge("12 m, 15 m"))
    draft = draft_bridge("12 m, 15 m")
    checked = 0
    for ours, theirs in zip(whole.splitlines(), draft.splitlines(), strict=True):
        if ours != theirs and not theirs.startswith("#"):
            name = theirs.split("=")[0].strip()
            line = line_of(lambda o=ours, t=theirs: parse_bridge(whole.replace(o, t, 1), file="m.toml"))  # type: ignore[misc]
            assert "placeholder" in line
            assert name in line
            checked += 1
    assert checked >= 12


def test_a_draft_as_it_comes_is_refused() -> None:
    line = line_of(lambda: parse_bridge(draft_bridge("12 m"), file="my-bridge.toml"))
    assert line.startswith("my-bridge.toml, bridge, id")


def test_every_optional_field_of_the_draft_is_read_when_its_comment_sign_goes() -> None:
    text = filled(draft_bridge("12 m, 15 m"))
    optional = re.compile(r"^( *)# (?=\[{0,2}[\w.]+(?:\]{1,2}| = ))", re.MULTILINE)
    doc = parse_bridge(optional.sub(r"\1", text), file="my-bridge.toml")
    assert doc.visit_interval_years == 2.0
    assert doc.girders[0].spans[-1].pieces
    assert doc.girders[0].supports[-1].temperature_coefficient is not None
    assert len(doc.girders[0].permanent) == 2
    assert [(p.name, p.yield_strength) for p in doc.sections[0].plates] == [("flange", pytest.approx(235e3))]
    assert doc.sections[0].losses
    assert doc.girders[0].supports[-1].pad is not None
    assert doc.girders[0].unknowns == ("pads", "settlements")
    assert [(g.quantity, g.support) for g in doc.girders[0].gauges] == [("compression", "abutment 1")]
    assert doc.vehicles[0].plan_positions == (4.0, 8.0)
    assert doc.prior == PriorDoc(sustained_ratio=0.7)


def test_every_value_has_its_comment() -> None:
    text = draft_bridge("12 m")
    tomllib.loads(text)
    for name in ("E", "I", "stiffness", "live_share", "uniform", "axles", "dynamic", "permanent", "live"):
        assert re.search(rf"^ *{name} = .*#", text, re.MULTILINE), name


@pytest.mark.parametrize(
    "spans", ["", "12", "12 m,", "12 m; 15 m", "12 m + 3 m", "-3 m", "0 m", "a", "1 m," * 70]
)
def test_wrong_spans_are_refused(spans: str) -> None:
    assert line_of(lambda: draft_bridge(spans)).startswith("--spans")
