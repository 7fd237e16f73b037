"""Every sentence of caution on sections from plates."""

from __future__ import annotations

import datetime as dt
from collections.abc import Sequence

from assess.trend.losses import READING_SD
from assess.workflow.losses_ahead import PlateLoss
from assess.workflow.sections import EFFECTS, Capacity, SectionState, measured_days, section_on, used_sections
from db.documents import BridgeDoc

TOLERANCE = 0.02  # a given second moment this far from that of the plates is named (fillets, connections)

NOT_CHECKED = (
    "Capacities from plates are strength times section, without partial factor: local, lateral-torsional and shear "
    "buckling, fatigue and the connections of the plates are not checked."
)


def of_bridge(bridge: BridgeDoc, day: dt.date | None) -> list[str]:
    """Cautions on the sections that the girders of a bridge use, with the losses up to a day."""
    states = [section_on(section, day) for section in bridge.sections if section.id in used_sections(bridge)]
    said = [one for state in states for one in of_section(state)]
    if any(c.source == "plates" for state in states for c in state.capacities.values()):
        said.append(NOT_CHECKED)
    return said


def of_section(state: SectionState) -> list[str]:
    """Cautions on one section."""
    if state.built is None:
        return []
    return [*_losses(state), *_stiffness(state), *_capacities(state), *_deck(state), *_method(state)]


def of_trend(bridge: BridgeDoc, losses: Sequence[PlateLoss]) -> list[str]:
    """Cautions: how losses are carried forward, or why they are not."""
    if not losses:
        return []
    held = [one for one in losses if one.law is None]
    said = []
    if held:
        said.append(
            f"Losses of the plates (section {_sections(held)}) are held at their last measured values; without the day the bridge was "
            "built (`built`) they have no rate."
        )
    growing = [one for one in losses if one.law is not None]
    if growing:
        said.append(
            f"Losses of the plates (section {_sections(growing)}) are carried forward at their mean rate since the bridge was built, "
            f"each thickness with an assumed standard deviation of {1e3 * READING_SD:g} mm (common practice, no source): new corrosion, "
            "or an end of it, is not foreseen."
        )
    return said


def _sections(losses: Sequence[PlateLoss]) -> str:
    return ", ".join(f'"{name}"' for name in dict.fromkeys(one.section for one in losses))


def _name(state: SectionState) -> str:
    return f'Section "{state.doc.id}"'


def _losses(state: SectionState) -> list[str]:
    days = measured_days(state)
    if not days:
        return []
    return [
        (
            f"{_name(state)}: stiffness and capacity hold the losses measured up to {days[-1]} "
            f"({losses_in_words(state)}); wear since then is not in them."
        )
    ]


def losses_in_words(state: SectionState) -> str:
    """The losses that count, plate by plate: ``bottom flange 2 x 1.5 mm (2024-05-14)``."""
    told = []
    for plate, entries in state.losses.items():
        each = " + ".join(f"{one.faces} x {1e3 * one.depth:.3g} mm" for one in entries)
        told.append(f"{plate} {each} ({entries[0].visit})")
    return "; ".join(told)


def _stiffness(state: SectionState) -> list[str]:
    given, built = state.doc.second_moment, state.built
    if given is None or built is None:
        return []
    own = built.as_built.stiffness.second_moment
    if abs(given - own) <= TOLERANCE * own:
        return []
    return [
        (
            f"{_name(state)}: the file gives I = {given:.4g} m4, its plates as built give {own:.4g} m4 "
            f"({own / given - 1.0:+.1%}); the given one is used, less the measured losses: check which is right."
        )
    ]


def _capacities(state: SectionState) -> list[str]:
    said = []
    for effect in EFFECTS:
        capacity = state.capacities[effect]
        if capacity.given is None or capacity.built is None:
            continue
        said.append(
            f"{_name(state)}: {effect} capacity {_governs(capacity, 'kN' if effect == 'shear' else 'kN m')}"
        )
    kept = [effect for effect in EFFECTS if state.capacities[effect].source == "given"]
    if kept and state.losses:
        said.append(
            f"{_name(state)}: the given capacity ({', '.join(kept)}) is taken as it stands: the measured losses "
            "reduce it only where the plates give less."
        )
    return said


def _governs(capacity: Capacity, unit: str) -> str:
    low, high = ("given", "plates") if capacity.source == "given" else ("plates", "given")
    number = {"given": capacity.given, "plates": capacity.built}
    words = {"given": "as given in the file", "plates": "from its plates"}
    return (
        f"{number[low]:.4g} {unit} {words[low]} governs, because it is the lower one ({number[high]:.4g} {unit} "
        f"{words[high]})."
    )


def _deck(state: SectionState) -> list[str]:
    built = state.built
    if built is None or built.deck is None:
        return []
    said = [
        (
            f"{_name(state)}: its deck acts with the steel under all loads in sagging and in the stiffness, and not "
            "in hogging capacity; stresses locked into the steel before the deck hardened, and slip, are not in it."
        )
    ]
    if built.axis_in_deck:
        said.append(
            f"{_name(state)}: the elastic axis lies in the deck; the concrete below it is counted as if it "
            "carried tension, so sagging capacity and stiffness are too high."
        )
    if built.deck.strength is None and state.doc.moment_resistance == "elastic":
        said.append(f"{_name(state)}: no strength of the deck is given: its concrete is not checked.")
    return said


def _method(state: SectionState) -> list[str]:
    moments = [state.capacities[effect].source for effect in ("sagging", "hogging")]
    if state.doc.moment_resistance != "plastic" or "plates" not in moments:
        return []
    return [
        (
            f"{_name(state)}: moment capacity is the plastic one because the file says that the section is compact; "
            "this is not checked, and wear makes a plate more slender."
        )
    ]
