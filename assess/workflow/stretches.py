"""A span of a bridge file as the stretches of one section that it is made of."""

from __future__ import annotations

import numpy as np

from db.documents import BridgeDoc, SectionDoc, SpanDoc


def stretches(bridge: BridgeDoc, span: SpanDoc) -> list[tuple[float, SectionDoc]]:
    """Lengths and sections of a span from left to right, the overriding pieces put in, parted at hinges."""
    parts: list[tuple[float, SectionDoc]] = []
    at = 0.0
    slack = 1e-9 * max(1.0, span.length)
    for piece in sorted(span.pieces, key=lambda p: p.start):
        start = piece.start if piece.start - at > slack else at
        if start > at:
            parts.append((start - at, bridge.section(span.section)))
        parts.append((piece.end - start, bridge.section(piece.section)))
        at = piece.end
    if span.length - at > slack:
        parts.append((span.length - at, bridge.section(span.section)))
    for hinge in span.hinges:
        parts = _parted(parts, hinge, slack)
    return parts


def _parted(parts: list[tuple[float, SectionDoc]], at: float, slack: float) -> list[tuple[float, SectionDoc]]:
    """Part the piece that a place (m from the span's left end) lies in; one that ends there already is left."""
    ends = np.cumsum([length for length, _ in parts])
    i = int(np.searchsorted(ends, at - slack))
    if abs(ends[i] - at) <= slack:
        return parts
    length, section = parts[i]
    rest = float(ends[i] - at)
    return [*parts[:i], (length - rest, section), (rest, section), *parts[i + 1 :]]
