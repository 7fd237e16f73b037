"""A span of a bridge file as the stretches of one section that it is made of."""

from __future__ import annotations

from db.documents import BridgeDoc, SectionDoc, SpanDoc


def stretches(bridge: BridgeDoc, span: SpanDoc) -> list[tuple[float, SectionDoc]]:
    """Lengths and sections of a span from left to right, the overriding pieces put in."""
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
    return parts
