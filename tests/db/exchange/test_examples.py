"""What a refusal tells the user to write would itself be taken."""

from __future__ import annotations

import re
from pathlib import Path

import pytest

import db.exchange
from db.quantities import DIMENSIONS, read_quantity

_CALL = re.compile(r'"(?P<dimension>[a-z ]+)",(?:[^()"]*,)?\s*example="(?P<example>[^"]+)"')
_TOLD = sorted(
    {
        (match["dimension"], match["example"])
        for path in Path(db.exchange.__file__).parent.glob("*.py")
        for match in _CALL.finditer(path.read_text(encoding="utf-8"))
        if match["dimension"] in DIMENSIONS
    }
    | {(name, dimension.example) for name, dimension in DIMENSIONS.items()}
)


def test_the_examples_of_the_bridge_file_are_found() -> None:
    assert ("thermal expansion", "12e-6 / K") in _TOLD
    assert len(_TOLD) > len(DIMENSIONS) + 5


@pytest.mark.parametrize(("dimension", "example"), _TOLD)
def test_an_example_is_a_quantity_of_its_dimension(dimension: str, example: str) -> None:
    assert read_quantity(example, dimension).text == example
