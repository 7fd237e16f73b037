from __future__ import annotations

from db.wording import listed, printable, shown, suggestion, written


def test_a_persons_text_is_shown_tamely() -> None:
    assert shown('a"b\x1b[31m\n') == "a'b?[31m?"
    assert shown("x" * 100) == "x" * 59 + "…"
    assert shown(16**5000) == "a number too long to show"
    assert printable("gr\u00fcn\x00\udc80") == "gr\u00fcn??"
    assert (written("7"), written(7)) == ('"7"', "7")


def test_the_nearest_spelling_is_suggested_or_none() -> None:
    assert suggestion("stifness", ["stiffness", "kind"]) == ' (did you mean "stiffness"?)'
    assert suggestion("PIER 1", ["pier 1"]) == ' (did you mean "pier 1"?)'
    assert suggestion("zebra", ["pier 1"]) == ""


def test_a_long_list_says_how_much_is_left_out() -> None:
    assert listed([]) == "none"
    assert listed(["a", "b"]) == '"a", "b"'
    assert listed("abcde", most=2) == '"a", "b" and 3 more'
