from __future__ import annotations

from db.errors import BedstoneError


def test_an_error_is_one_line_that_says_where_what_and_what_then() -> None:
    error = BedstoneError("it is\nwrong", file="b.toml", field="girder", remedy="write 18 m")
    assert str(error) == "b.toml, girder: it is wrong; write 18 m"
    assert str(BedstoneError("it is wrong")) == "it is wrong"


def test_an_error_keeps_the_place_it_has() -> None:
    bare = BedstoneError("wrong", remedy="mend it")
    assert str(bare.at(file="b.toml", field="E")) == "b.toml, E: wrong; mend it"
    assert str(bare.at(file="b.toml").at(file="c.toml")) == "b.toml: wrong; mend it"
