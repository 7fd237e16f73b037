"""Words for errors: a person's text shown tamely, and the nearest known spelling."""

from __future__ import annotations

import difflib
from collections.abc import Iterable

_SHOWN = 60


def shown(text: object) -> str:
    """Return text for an error line: printable, no quotes of its own, at most 60 characters."""
    tame = "".join(c if c.isprintable() else "?" for c in str(text)[: _SHOWN + 1]).replace('"', "'")
    return tame if len(tame) <= _SHOWN else tame[: _SHOWN - 1] + "…"


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
