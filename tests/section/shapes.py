"""Sections for the tests: sizes in mm and MPa, handed over in m and kN/m2."""

from __future__ import annotations

from collections.abc import Sequence

from hypothesis import settings
from hypothesis import strategies as st

from assess.section import BuiltSection, Deck, Hole, Plate

PLAIN = settings(max_examples=80, deadline=None, derandomize=True)
MM = 1e-3


def plate(
    name: str, width: float, height: float, bottom: float, fy: float | None = 250.0, loss: float = 0.0
) -> Plate:
    return Plate(
        name=name,
        width=MM * width,
        height=MM * height,
        bottom=MM * bottom,
        yield_strength=None if fy is None else 1e3 * fy,
        loss=MM * loss,
    )


def i_section(
    top: tuple[float, float] = (200.0, 20.0),
    web: tuple[float, float] = (10.0, 400.0),
    bottom: tuple[float, float] = (300.0, 20.0),
    *,
    fy: Sequence[float | None] = (250.0, 250.0, 250.0),
    loss: Sequence[float] = (0.0, 0.0, 0.0),
    holes: tuple[Hole, ...] = (),
    deck: Deck | None = None,
) -> BuiltSection:
    """Top flange, web and bottom flange, each (width, height)."""
    t, w, b = top, web, bottom
    return BuiltSection(
        plates=(
            plate("top", *t, b[1] + w[1], fy[0], loss[0]),
            plate("web", *w, b[1], fy[1], loss[1]),
            plate("bottom", *b, 0.0, fy[2], loss[2]),
        ),
        holes=holes,
        deck=deck,
    )


def mirrored(section: BuiltSection) -> BuiltSection:
    """The section upside down."""
    return BuiltSection(
        plates=tuple(
            Plate(
                name=p.name,
                width=p.width,
                height=p.height,
                bottom=-p.top,
                yield_strength=p.yield_strength,
                loss=p.loss,
            )
            for p in section.plates
        )
    )


@st.composite
def i_sections(draw: st.DrawFn) -> BuiltSection:
    """Welded girders of believable proportions, flanges of different size and strength."""
    depth = draw(st.integers(300, 2500))
    web = (draw(st.integers(8, 25)), depth)
    flanges = [(draw(st.integers(depth // 5, depth // 2)), draw(st.integers(10, 60))) for _ in range(2)]
    fy = draw(st.sampled_from([(235.0, 235.0, 235.0), (355.0, 355.0, 355.0), (355.0, 275.0, 355.0)]))
    return i_section(flanges[0], web, flanges[1], fy=fy)


@st.composite
def any_sections(draw: st.DrawFn) -> BuiltSection:
    """Any plates at any levels, with any strengths; whole millimetres."""
    count = draw(st.integers(1, 6))
    return BuiltSection(
        plates=tuple(
            plate(
                f"plate {i}",
                draw(st.integers(5, 600)),
                draw(st.integers(5, 600)),
                draw(st.integers(0, 1500)),
                float(draw(st.integers(100, 690))),
            )
            for i in range(count)
        )
    )
