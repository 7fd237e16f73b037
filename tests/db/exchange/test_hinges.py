"""Internal hinges in a bridge file: what is read, what is refused, and where readings may not stand."""

from __future__ import annotations

import datetime as dt

import numpy as np
import pytest
from hypothesis import assume, given
from hypothesis import strategies as st

from assess.girder import Girder, Piece
from db.documents import SpanDoc, SupportDoc
from db.errors import BedstoneError
from db.exchange import check_visit, parse_bridge, parse_visit
from db.exchange.fields import Fields
from db.exchange.hinges_toml import refuse_mechanism
from tests.db.conftest import changed, line_of
from tests.girder.strategies import PLAIN, moves_freely, with_hinges

MIDDLE = '  length = "15 m"\n  section = "mid"\n'
FIRST = '  length = "12 m"\n  section = "mid"\n'
PIN = '  kind = "pin"'


def hinged(text: str, written: str, span: str = MIDDLE) -> str:
    return changed(text, span, f"{span}  hinges = {written}\n")


def test_hinges_are_read_in_metres_from_the_left_end_of_their_span(bridge_text: str) -> None:
    doc = parse_bridge(hinged(bridge_text, '["11.5 m", "3500 mm"]'), file="bridge.toml")
    assert doc.girders[0].spans[1].hinges == (3.5, 11.5)
    assert doc.girders[0].hinges == (15.5, 23.5)


def test_a_file_without_hinges_has_none(bridge_text: str) -> None:
    assert parse_bridge(bridge_text, file="bridge.toml").girders[0].hinges == ()
    assert parse_bridge(hinged(bridge_text, "[]"), file="bridge.toml").girders[0].hinges == ()


@pytest.mark.parametrize(
    ("written", "told"),
    [
        ('"3.5 m"', "it is not a list of places"),
        ("[3.5]", "hinges"),
        ('["3.5"]', "hinges"),
        ('["3.5 kN"]', "hinges"),
        ('["… m"]', "placeholder"),
        ('["0 m"]', '"0 m" does not lie inside the span (0 to 15 m'),
        ('["15 m"]', "does not lie inside the span"),
        ('["-1 m"]', "does not lie inside the span"),
        ('["16 m"]', "does not lie inside the span"),
        ('["14.995 m"]', "does not lie inside the span"),
        ('["3.5 m", "11.5 m", "3.5 m"]', "two hinges stand on one place (3.5 m)"),
        ('["3.5 m", "7 m", "11.5 m"]', "the hinges make a mechanism"),
    ],
)
def test_wrong_hinges_are_refused_in_one_line(written: str, told: str, bridge_text: str) -> None:
    line = line_of(lambda: parse_bridge(hinged(bridge_text, written), file="bridge.toml"))
    assert line.startswith('bridge.toml, girder "north", span 2, hinges')
    assert told in line


def test_a_mechanism_names_the_span_whose_hinge_makes_it(bridge_text: str) -> None:
    text = hinged(hinged(bridge_text, '["4 m"]', FIRST), '["3.5 m", "11.5 m"]')
    line = line_of(lambda: parse_bridge(text, file="bridge.toml"))
    assert line.startswith('bridge.toml, girder "north", span 2, hinges: the hinges make a mechanism')


def test_a_clamped_end_lets_one_hinge_more_in(bridge_text: str) -> None:
    last = changed(bridge_text, PIN, '  rotation = "fixed"\n' + PIN)
    text = hinged(last, '["3.5 m", "11.5 m"]')
    at = text.rindex(FIRST) + len(FIRST)
    both = text[:at] + '  hinges = ["5 m"]\n' + text[at:]
    assert parse_bridge(both, file="bridge.toml").girders[0].hinges == (15.5, 23.5, 32.0)
    loose = changed(both, '  rotation = "fixed"\n', "")
    assert "span 3, hinges: the hinges make a mechanism" in line_of(
        lambda: parse_bridge(loose, file="bridge.toml")
    )


@PLAIN
@given(
    st.lists(st.floats(3.0, 40.0), min_size=1, max_size=5),
    st.lists(st.tuples(st.integers(0, 4), st.integers(1, 19)), min_size=1, max_size=6, unique=True),
    st.lists(st.booleans(), min_size=6, max_size=6),
)
def test_a_file_is_refused_exactly_where_the_parts_could_move(
    lengths: list[float], chosen: list[tuple[int, int]], held: list[bool]
) -> None:
    chosen = sorted((j, i) for j, i in chosen if j < len(lengths))
    assume(chosen)
    n = len(lengths) + 1
    rotation = np.where(held[:n], np.inf, 0.0)
    at = [sum(lengths[:j]) + i / 20.0 * lengths[j] for j, i in chosen]
    spans = [
        SpanDoc(length=a, section="s", hinges=tuple(i / 20.0 * a for k, i in chosen if k == j))
        for j, a in enumerate(lengths)
    ]
    supports = [SupportDoc(id=f"{i}", kind="pin", rotation=float(r)) for i, r in enumerate(rotation)]
    fields = [Fields({}, file="f", path="p", known="hinges") for _ in spans]
    girder = Girder(tuple((Piece(length=a, flexural=1.0),) for a in lengths), rotation)
    if moves_freely(with_hinges(girder, at)):
        with pytest.raises(BedstoneError, match="mechanism"):
            refuse_mechanism(fields, spans, supports)
    else:
        refuse_mechanism(fields, spans, supports)


@pytest.mark.parametrize(
    ("rows", "told"),
    [
        (
            'quantity = "rotation"\nat = "15.5 m"\nvalue = "0.4 mrad"\nsd = "0.01 mrad"',
            "a rotation is read beside",
        ),
        (
            'quantity = "strain"\nheight = "-0.6 m"\nat = "15.5 m"\nvalue = "9 microstrain"\nsd = "2 microstrain"',
            "a strain is read beside a hinge, not on it (15.5 m)",
        ),
    ],
)
def test_rotation_and_strain_are_read_beside_a_hinge(
    rows: str, told: str, bridge_text: str, visit_text: str
) -> None:
    bridge = parse_bridge(hinged(bridge_text, '["3.5 m"]'), file="bridge.toml")

    def check(rows: str) -> None:
        text = f'{visit_text}\n[[reading]]\ngirder = "north"\nstate = "T1"\n{rows}\n'
        visit = parse_visit(text, file="visit.toml")
        check_visit(visit, bridge, today=dt.date(2026, 1, 1), file="visit.toml")

    assert told in line_of(lambda: check(rows))
    check(rows.replace("15.5 m", "15.51 m"))
    check('quantity = "deflection"\nat = "15.5 m"\nvalue = "2 mm"\nsd = "0.1 mm"')
