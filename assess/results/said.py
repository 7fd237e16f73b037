"""Cautions that are said alike of several girders, said once."""

from __future__ import annotations

from collections.abc import Sequence


def grouped(cautions: Sequence[str], girders: Sequence[str]) -> list[str]:
    """Say once what is said alike of several girders: "north: x" and "south: x" become "north and south: x"."""
    said: dict[str, list[str]] = {}  # what is said -> the girders of which it is said, none for the bridge
    for caution in cautions:
        own = next((g for g in girders if caution.startswith(f"{g}: ")), None)
        of = said.setdefault(caution if own is None else caution.removeprefix(f"{own}: "), [])
        if own is not None and own not in of:
            of.append(own)
    return [f"{_and(of)}: {told}" if of else told for told, of in said.items()]


def _and(names: Sequence[str]) -> str:
    return names[0] if len(names) == 1 else f"{', '.join(names[:-1])} and {names[-1]}"
