from __future__ import annotations

import pytest

from db.exchange.readings_csv import parse_readings
from tests.db.conftest import changed, line_of

NAMES = "girder,state,quantity,support,at,value,sd,unit,instrument,remark"
TABLE = f"""{NAMES}
north,T1,compression,pier 1,,1.42,0.05,mm,gap gauge,
north,T1,deflection,,6,2.31,0.1,mm,,"dial gauge 3, rusty"
north,T1,rotation,pier 1,,0.4,0.01,mrad,,NA
"""

BAD = {
    "no header": (NAMES + "\n", "", "row 1"),
    "unknown column": ("instrument", "instrumnt", 'unknown column "instrumnt" (did you mean "instrument"'),
    "two columns of one name": ("remark", "sd", 'two columns are called "sd"'),
    "no sd column": (",sd,", ",remark,", "row 1"),
    "semicolons": (NAMES, NAMES.replace(",", ";"), "parted by commas"),
    "comma number": ("1.42", '"1,42"', "row 2, value"),
    "number with unit": ("1.42", "1.42 mm", "row 2, value"),
    "no value": ("1.42", "", "row 2, value: it is empty"),
    "NaN": ("1.42", "nan", "row 2, value"),
    "formula": ("1.42", "=1+1", "row 2, value"),
    "no sd": ("0.05", "", "row 2, sd: it is empty"),
    "zero sd": ("0.05", "0", "row 2, sd"),
    "negative sd": ("0.05", "-0.05", "row 2, sd"),
    "no unit": ("0.1,mm", "0.1,", "row 3, unit"),
    "wrong unit": ("0.1,mm", "0.1,kN", "row 3, value"),
    "two units": ("0.1,mm", "0.1,mm mm", "row 3, value"),
    "unknown quantity": ("rotation", "rotaton", 'row 4, quantity: "rotaton" is not known here (did you mean'),
    "no girder": ("north,T1,rotation", ",T1,rotation", "row 4, girder"),
    "no state": ("north,T1,rotation", "north,,rotation", "row 4, state"),
    "endless girder": ("north,T1,rotation", f"{'n' * 101},T1,rotation", "row 4, girder"),
    "place with unit": (",6,", ",6 m,", "row 3, at (in m)"),
    "compression without support": ("pier 1,,1.42", ",,1.42", "row 2, support"),
    "place and support": ("deflection,,6", "deflection,pier 1,6", "row 3, at"),
    "neither": ("deflection,,6", "deflection,,", "row 3, at"),
    "too many cells": ("gap gauge,", "gap gauge,,,extra", "row 2 has 12 cells"),
    "a quote never closed": ('"dial gauge 3, rusty"', '"dial gauge 3', "not CSV"),
    "a NUL": ("gap gauge", "gap\x00gauge", "line 2 holds the control character"),
}


def test_cells_become_readings_as_entered() -> None:
    first, second, third = parse_readings(TABLE, file="visit-2024.csv")
    assert (first.support, first.at, first.value, first.sd) == ("pier 1", None, 1.42e-3, 5e-5)
    assert (first.value_entered, first.sd_entered, first.unit) == ("1.42 mm", "0.05 mm", "mm")
    assert (first.instrument, first.source) == ("gap gauge", "visit-2024.csv, row 2")
    assert (second.at, second.support, second.remark) == (6.0, None, "dial gauge 3, rusty")
    assert third.remark == "NA"


@pytest.mark.parametrize("case", BAD)
def test_a_wrong_cell_is_refused_by_row_and_column(case: str) -> None:
    old, new, says = BAD[case]
    line = line_of(lambda: parse_readings(changed(TABLE, old, new), file="v.csv"))
    assert line.startswith("v.csv")
    assert says in line


@pytest.mark.parametrize("text", ["", "\n", NAMES, NAMES + "\n", NAMES + "\n,,,,,,,,,\n"])
def test_a_table_without_a_reading_is_refused(text: str) -> None:
    assert line_of(lambda: parse_readings(text, file="v.csv")).startswith("v.csv")


def test_semicolons_are_named() -> None:
    text = TABLE.replace(",", ";").replace('"dial gauge 3; rusty"', "")
    assert "parted by commas" in line_of(lambda: parse_readings(text, file="v.csv"))


def test_blank_rows_count_as_rows_and_say_nothing() -> None:
    rows = TABLE.splitlines()
    text = "\r\n".join([rows[0], "", rows[1], ",,,,,,,,,", rows[2]])
    assert [r.source for r in parse_readings(text, file="v.csv")] == ["v.csv, row 3", "v.csv, row 5"]


def test_every_wrong_row_is_counted() -> None:
    line = line_of(lambda: parse_readings(TABLE.replace(",mm,", ",kN,"), file="v.csv"))
    assert "row 2" in line
    assert "(and 1 more)" in line


def test_a_strain_has_its_height_in_metres() -> None:
    text = "girder,state,quantity,at,height,value,sd,unit\nnorth,T1,strain,6,-0.62,120,2,microstrain\n"
    assert parse_readings(text, file="v.csv")[0].height == -0.62
    assert "row 2, height" in line_of(lambda: parse_readings(text.replace("-0.62", ""), file="v.csv"))
    assert "row 2, height" in line_of(lambda: parse_readings(text.replace("-0.62", "-620"), file="v.csv"))


def test_a_stray_carriage_return_among_the_names_is_refused_by_row() -> None:
    text = TABLE.replace("instrument,", "instr\rument,", 1)
    assert "unknown column" in line_of(lambda: parse_readings(text, file="v.csv"))
