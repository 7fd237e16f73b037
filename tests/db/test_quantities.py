from __future__ import annotations

import contextlib
import math
from collections.abc import Callable
from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from db.errors import BedstoneError
from db.quantities import DIMENSIONS, read_number, read_quantity, to_si, to_unit
from tests.db.conftest import line_of

KIP = 4.4482216152605  # kN: 0.45359237 kg x 9.80665 m/s2, exact by definition
INCH = 0.0254  # m, exact by definition

GOOD = [
    ("18 m", "length", 18.0),
    ("+18.0e0 m", "length", 18.0),
    ("18m", "length", 18.0),
    ("  18 m  ", "length", 18.0),
    ("18\u00a0m", "length", 18.0),
    ("-620 mm", "length", -0.62),
    ("62 cm", "length", 0.62),
    ("59 ft", "length", 59 * 12 * INCH),
    ("1 in", "length", INCH),
    (".5 inch", "length", INCH / 2),
    ("50 µm", "length", 50e-6),
    ("200 kN", "force", 200.0),
    ("200 N", "force", 0.2),
    ("2 MN", "force", 2000.0),
    ("3 kip", "force", 3 * KIP),
    ("3 kips", "force", 3 * KIP),
    ("3000 lbf", "force", 3 * KIP),
    ("5100 kN m", "moment", 5100.0),
    ("5100 kNm", "moment", 5100.0),
    ("5100 kN*m", "moment", 5100.0),
    ("5100 kN·m", "moment", 5100.0),
    ("5100 kN * m", "moment", 5100.0),
    ("10 kip ft", "moment", 10 * KIP * 12 * INCH),
    ("10 kip-ft", "moment", 10 * KIP * 12 * INCH),
    ("150 kN/mm", "stiffness", 150e3),
    ("150 kN / mm", "stiffness", 150e3),
    ("9.5 kN/m", "line load", 9.5),
    ("1 kip/in", "stiffness", KIP / INCH),
    ("205 GPa", "stress", 205e6),
    ("205000 MPa", "stress", 205e6),
    ("205000 N/mm^2", "stress", 205e6),
    ("205000 N/mm2", "stress", 205e6),
    ("205000 N/mm²", "stress", 205e6),
    ("5 kN/m2", "stress", 5.0),
    ("5 kPa", "stress", 5.0),
    ("1 ksi", "stress", KIP / INCH**2),
    ("1000 psi", "stress", KIP / INCH**2),
    ("0.021 m^2", "area", 0.021),
    ("21000 mm^2", "area", 0.021),
    ("1 in^2", "area", INCH**2),
    ("0.0118 m^4", "second moment", 0.0118),
    ("1.18e10 mm^4", "second moment", 0.0118),
    ("1.18e6 cm⁴", "second moment", 0.0118),
    ("1 in^4", "second moment", INCH**4),
    ("0.4 mrad", "angle", 4e-4),
    ("0.0004 rad", "angle", 4e-4),
    ("180 deg", "angle", math.pi),
    ("0.4 mm/m", "angle", 4e-4),
    ("2e5 kN m / rad", "rotational stiffness", 2e5),
    ("1 kip in/rad", "rotational stiffness", KIP * INCH),
    ("200 kN m/mrad", "rotational stiffness", 2e5),
    ("120 microstrain", "strain", 120e-6),
    ("120 µε", "strain", 120e-6),
    ("0.00012 strain", "strain", 120e-6),
    ("0.12 mm/m", "strain", 120e-6),
    ("13 degC", "temperature", 13.0),
    ("-13 °C", "temperature", -13.0),
    ("50 degF", "temperature", 10.0),
    ("286.15 K", "temperature", 13.0),
    ("0.5 percent / K", "temperature coefficient", 0.005),
    ("0.5 %/°C", "temperature coefficient", 0.005),
    ("0.9 percent/degF", "temperature coefficient", 0.9e-2 * 1.8),
    ("0.005 1/K", "temperature coefficient", 0.005),
    ("1.2e-5 / K", "temperature coefficient", 1.2e-5),  # what the error about an expansion says to write
    ("1.2e-5/K", "temperature coefficient", 1.2e-5),
    ("0.005 K^-1", "temperature coefficient", 0.005),
    ("24 months", "duration", 2.0),
    ("2 years", "duration", 2.0),
    ("1 year", "duration", 1.0),
]

BAD = [
    ("5 ft 3 in", "length"),
    ("12 m + 3 m", "length"),
    ("12 m - 3 m", "length"),
    ("2 * 3 m", "length"),
    ("2*3 m", "length"),
    ("6/2 m", "length"),
    ("2**3 m", "length"),
    ("12 3 m", "length"),
    ("1 000 m", "length"),
    ("1_000 m", "length"),
    ("1,5 m", "length"),
    ("1.5.2 m", "length"),
    ("nan m", "length"),
    ("inf m", "length"),
    ("-inf m", "length"),
    ("1e999 m", "length"),
    ("1e-999 m", "length"),
    ("0x12 m", "length"),
    ("１８ m", "length"),
    ("18", "length"),
    ("m", "length"),
    ("", "length"),
    ("   ", "length"),
    ("18 metre(s)", "length"),
    ("18 (m)", "length"),
    ("18 m;", "length"),
    ("18 kN", "length"),
    ("18 m -m", "area"),
    ("18 m - m", "area"),
    ("18 m-3", "length"),
    ("18 m m", "length"),
    ("18 /m", "length"),
    ("18 m/", "length"),
    ("18 furlongs", "length"),
    ("18 microstrain m", "length"),
    ("__import__('os').getcwd() m", "length"),
    ("18 m.__class__", "length"),
    ("18 m\x00", "length"),
    ("18 m\x1b[31m", "length"),
    ("1" * 70 + " m", "length"),
    ("… m", "length"),
    ("... m", "length"),
    ("1e308 GPa", "stress"),
    ("5 kN m", "rotational stiffness"),
    ("5 kN m rad", "moment"),
    ("5 kN / m rad", "stiffness"),
    ("5 percent percent", "strain"),
    ("5 percent", "angle"),
    ("5 microstrain", "angle"),
    ("5 rad", "strain"),
    ("5 K", "temperature coefficient"),
    ("5 1", "strain"),
]


@pytest.mark.parametrize(("text", "dimension", "si"), GOOD)
def test_the_trades_spellings_become_si(text: str, dimension: str, si: float) -> None:
    read = read_quantity(text, dimension)
    assert read.si == pytest.approx(si, rel=1e-12, abs=1e-13 if dimension == "temperature" else 0.0)
    assert read.text == text.strip()


@pytest.mark.parametrize(("text", "dimension"), BAD)
def test_anything_but_one_number_and_one_unit_is_refused(text: str, dimension: str) -> None:
    line = line_of(lambda: read_quantity(text, dimension, file="bridge.toml", field="girder, length"))
    assert line.startswith("bridge.toml, girder, length: ")
    assert DIMENSIONS[dimension].example in line


@pytest.mark.parametrize(
    "value", [18, 18.0, True, 0, None, ["18 m"], {"m": 18}, pytest.param(16**5000, id="huge")]
)
def test_a_bare_number_is_refused_with_a_right_example(value: object) -> None:
    line = line_of(lambda: read_quantity(value, "length", file="f", field="length", example="13.4 m"))
    assert '"13.4 m"' in line


@pytest.mark.parametrize("text", ["26 t", "500 kg", "12 lb", "3 tonnes", "1 g"])
def test_a_mass_is_not_a_force(text: str) -> None:
    line = line_of(lambda: read_quantity(text, "force"))
    assert "mass" in line
    assert "kN" in line


def test_a_mass_per_length_is_not_a_line_load() -> None:
    assert "mass" in line_of(lambda: read_quantity("600 kg/m", "line load"))


def test_a_decimal_comma_is_named() -> None:
    with pytest.raises(BedstoneError) as caught:
        read_quantity("1,5 mm", "length")
    assert str(caught.value).startswith('"1,5 mm" has a comma in its number; put a point there')


def test_a_near_spelling_is_suggested() -> None:
    assert "percent" in line_of(lambda: to_si(1.0, "percnt / K", "temperature coefficient"))


finite = st.floats(allow_nan=False, allow_infinity=False, min_value=-1e200, max_value=1e200)


@settings(deadline=None)
@given(value=finite, case=st.sampled_from(GOOD))
def test_any_float_and_unit_comes_back(value: float, case: tuple[str, str, float]) -> None:
    text, dimension, _ = case
    unit = read_quantity(text, dimension).unit
    if abs(value) < 1e-200:
        value = 0.0
    back = to_unit(to_si(value, unit, dimension), unit)
    assert back == pytest.approx(value, rel=1e-14, abs=1e-12 if dimension == "temperature" else 0.0)


@settings(deadline=None)
@given(value=finite, dimension=st.sampled_from(sorted(DIMENSIONS)))
def test_a_number_as_written_is_read_exactly(value: float, dimension: str) -> None:
    if 0.0 < abs(value) < 1e-200:
        return
    text = f"{value!r} {DIMENSIONS[dimension].si}"
    assert read_quantity(text, dimension).si == pytest.approx(value, rel=1e-14)


@settings(deadline=None)
@given(
    left=st.integers(-99, 99),
    operator=st.sampled_from(["+", "-", "*", "/", "**", "^", "%", "//", " ", ",", "e", "(", ";"]),
    right=st.integers(0, 99),
    unit=st.sampled_from(["m", "mm", "ft"]),
    between=st.booleans(),
)
def test_an_operator_between_two_numbers_is_refused(
    left: int, operator: str, right: int, unit: str, between: bool
) -> None:
    first = f"{left} {unit}" if between else str(left)
    if operator == "e" and not between:
        return  # 3e2 m is one number
    if operator == "^" and between and right in (1, 2, 3, 4, 6):
        return  # m^2 m is one unit, of another dimension
    with pytest.raises(BedstoneError):
        read_quantity(f"{first} {operator} {right} {unit}", "length")


@settings(deadline=None)
@given(st.text(max_size=80))
def test_no_text_does_anything_but_read_or_be_refused(text: str) -> None:
    for dimension in ("length", "temperature coefficient"):
        try:
            assert math.isfinite(read_quantity(text, dimension).si)
        except BedstoneError as error:
            assert "\n" not in str(error)


@settings(deadline=None)
@given(st.text(alphabet="mkNin/·* 12^-%°CKradeg", max_size=20))
def test_no_unit_text_evaluates(text: str) -> None:
    with contextlib.suppress(BedstoneError):
        assert math.isfinite(read_quantity(f"1 {text}", "stiffness").si)


@pytest.mark.parametrize("text", ["1.42", "-1.42", " 1e-3 ", "5"])
def test_a_cell_is_one_number(text: str) -> None:
    assert read_number(text) == float(text)


@pytest.mark.parametrize("text", ["", "1,42", "1.42 mm", "nan", "inf", "1e999", "1+1", "=1", "1 2", "--1"])
def test_a_cell_that_is_not_one_number_is_refused(text: str) -> None:
    assert line_of(lambda: read_number(text, file="v.csv", field="row 2, sd")).startswith("v.csv, row 2, sd:")


def test_importing_the_module_does_not_import_pint(fresh_imports: Callable[[str], set[str]]) -> None:
    assert "pint" not in fresh_imports("import db.quantities")


def test_the_module_is_where_units_are() -> None:
    """Only this module names pint; the rest of the room goes through it."""
    room = Path(__file__).parents[2] / "db"
    users = {str(p.relative_to(room)) for p in room.rglob("*.py") if "import pint" in p.read_text("utf-8")}
    assert users == {"quantities.py"}
