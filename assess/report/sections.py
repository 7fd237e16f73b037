"""The sections built from plates on the page: a drawing each, their numbers, what governs."""

from __future__ import annotations

from dataclasses import dataclass

from markupsafe import Markup

from assess.report import words
from assess.report.figures import section
from assess.shown import CapacityShown, SectionView

HEADS = ("Capacity", "Unit", "Value", "As given", "From plates", "Governs")
_GOVERNS = {"given": "as given", "plates": "from plates", "": "neither"}
_NB = "\N{NO-BREAK SPACE}"


@dataclass(frozen=True, kw_only=True)
class SectionPage:
    """One section: its drawing with caption, its numbers in a sentence, the rows of its capacities."""

    name: str
    svg: Markup
    caption: str
    numbers: str
    rows: list[list[str]]


def pages(views: list[SectionView]) -> list[SectionPage]:
    """Return the sections that are built from plates."""
    drawn = [view for view in views if view.plates]
    return [_page(view, f"section{i + 1}") for i, view in enumerate(drawn)]


def _page(view: SectionView, key: str) -> SectionPage:
    losses = view.losses.replace(" x ", " × ")
    told = f"losses measured: {losses}" if losses else "no loss measured"
    return SectionPage(
        name=view.section,
        svg=Markup(section.draw(view, key=key)),
        caption=f"Section {view.section}: {told}.",
        numbers=_numbers(view),
        rows=[_row(one) for one in view.capacities],
    )


def _numbers(view: SectionView) -> str:
    shown = view.shown
    values = (
        ("area", shown.area_m2, 1e4, "cm²"),
        ("second moment", shown.second_moment_m4, 1e8, "cm⁴"),
        ("elastic moduli top", shown.elastic_modulus_top_m3, 1e6, "cm³"),
        ("bottom", shown.elastic_modulus_bottom_m3, 1e6, "cm³"),
        (
            "plastic modulus" + ("" if view.deck is None else " (steel alone)"),
            shown.plastic_modulus_m3,
            1e6,
            "cm³",
        ),
        ("shear area", view.shear_area_m2, 1e4, "cm²"),
    )
    told = ", ".join(
        f"{name} {words.number(scale * value, 4)}{_NB}{unit}" for name, value, scale, unit in values if value
    )
    how = "plastic moments, as the bridge file says" if view.method == "plastic" else "elastic moments"
    when = "With the losses" if view.losses else "As built"
    holes = "; moduli net of holes" if view.holes else ""
    return f"{when}: {told}{holes}. Capacities from plates: {how}, before the factor on resistance."


def _row(one: CapacityShown) -> list[str]:
    return [
        one.effect,
        "kN" if one.effect == "shear" else f"kN{_NB}m",
        _value(one.value, "neither given nor from plates"),
        _value(one.given, "", "not given"),
        _value(one.built, "no strength or no web"),
        _GOVERNS[one.source],
    ]


def _value(value: float | None, reason: str, missing: str = "") -> str:
    if value is None:
        return missing or words.not_determined(reason)
    return words.number(value, 4)
