"""Partial factors: what multiplies each kind of effect where it loads a section, and where it relieves it."""

from __future__ import annotations

from dataclasses import dataclass

KINDS = ("structure", "surfacing")
"""Kinds of permanent load with factors of their own."""


@dataclass(frozen=True, kw_only=True)
class Factors:
    """Partial factors of one combination; on effects, and on resistance.

    Attributes
    ----------
    permanent, permanent_relieving : on permanent loads, where they load and where they relieve
    surfacing, surfacing_relieving : on surfacing; None: as the other permanent loads
    settlement, settlement_relieving : on what seat drops add; None: as the permanent loads
    temperature : on the worst temperature case; where none is worse than no temperature, none is taken
    live : on the live load
    resistance : multiplies the resistances
    relief_counts : let a relief by settlement count; otherwise a section is taken without it
    levels : live factors of the rating levels by name, beside `live`
    """

    permanent: float
    permanent_relieving: float
    live: float
    resistance: float
    surfacing: float | None = None
    surfacing_relieving: float | None = None
    settlement: float | None = None
    settlement_relieving: float | None = None
    temperature: float = 0.0
    relief_counts: bool = False
    levels: tuple[tuple[str, float], ...] = ()

    def of_kind(self, kind: str) -> tuple[float, float]:
        """Factors of a kind of permanent load: (where it loads, where it relieves).

        Raises
        ------
        ValueError
            for a kind that is none of KINDS.
        """
        if kind not in KINDS:
            raise ValueError(f"unknown kind of permanent load {kind!r}; one of {', '.join(KINDS)}")
        if kind == "surfacing" and self.surfacing is not None:
            relieving = self.surfacing_relieving
            return self.surfacing, min(1.0, self.surfacing) if relieving is None else relieving
        return self.permanent, self.permanent_relieving

    @property
    def of_settlement(self) -> tuple[float, float]:
        """Factors on what seat drops add: (where it loads, where it relieves)."""
        if self.settlement is None:
            return self.permanent, self.permanent_relieving
        relieving = self.settlement_relieving
        return self.settlement, min(1.0, self.settlement) if relieving is None else relieving


AS_THEY_ARE = Factors(permanent=1.0, permanent_relieving=1.0, live=1.0, resistance=1.0)
"""No factors: what the loads do as they are."""
