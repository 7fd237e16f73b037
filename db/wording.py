"""Words for errors: a person's text shown tamely, and the nearest known spelling."""

from __future__ import annotations

import difflib
from collections.abc import Iterable

_SHOWN = 60


def shown(text: object) -> str:
    """Return text for an error line: printable, no quotes of its own, at most 60 characters."""
    try:
        plain = str(text)
    except ValueError:  # a number of thousands of digits
        return "a number too long to show"
    short = printable(plain[: _SHOWN + 1]).replace('"', "'")
    return short if len(short) <= _SHOWN else short[: _SHOWN - 1] + "…"


def printable(text: str) -> str:
    """Return text with a question mark for every character that is no mark on paper."""
    return "".join(c if c.isprintable() else "?" for c in text)


def written(value: object) -> str:
    """Return a value as it stands in a file: text in quotes, anything else bare."""
    return f'"{shown(value)}"' if isinstance(value, str) else shown(value)


def suggestion(word: str, known: Iterable[str]) -> str:
    """Return `, did you mean "stiffness"?` if a known word is near, otherwise an empty string."""
    names = list(known)
    lower = {name.lower(): name for name in names}
    near = difflib.get_close_matches(word, names, n=1) or difflib.get_close_matches(word.lower(), lower, n=1)
    return f' (did you mean "{shown(lower.get(near[0], near[0]))}"?)' if near else ""


def listed(names: Iterable[str], *, most: int = 12) -> str:
    """Return names in a line: `"a", "b"`, and how many more there are."""
    every = list(names)
    text = ", ".join(f'"{shown(name)}"' for name in every[:most]) or "none"
    return text if len(every) <= most else f"{text} and {len(every) - most} more"
