"""Observation equations: what a girder with given unknowns shows at the places where it was read.

Compression of a pad d_i - s_i, settlement s_i, deflection and rotation of the girder, strain -M z / EI (tension
positive, z above the neutral axis); how levels and forces follow from the unknowns stands in `states.py`. A test
state is loaded minus unloaded: short-term stiffness, and the seats stand still unless a seat was read there; then its
drop is an unknown of that state, told by its own reading. The permanent state is the change since the as-built datum:
sustained stiffness, and the settlements since. Levels (deflection and settlement) of the permanent state hang on
the datum; readings off one benchmark share its error.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, field, replace

import numpy as np
from numpy.typing import NDArray

from assess.calibrate.equations import equations
from assess.calibrate.states import Group, Rows, Setting
from assess.calibrate.unknowns import Entry, Layout, Unknowns
from assess.girder import Condensed
from assess.loads import LoadCase

Floats = NDArray[np.float64]
Ints = NDArray[np.intp]

LEVELLED = ("deflection", "settlement")
TEST, PERMANENT = 0, 1  # temperature differences in the gradient block


@dataclass(frozen=True, kw_only=True)
class Observation:
    """One reading, to the mechanics.

    Parameters
    ----------
    quantity : "compression" | "settlement" | "deflection" | "rotation" | "strain"
    state : index of the load state
    support : index of the support; compression and settlement only
    x : place, m; deflection, rotation and strain only
    height, flexural : m above the neutral axis and EI in kN m2 there; strain only
    shared : index of the error that it shares with other readings, -1 for none
    value, sd : m, rad, or strain
    """

    quantity: str
    state: int
    value: float
    sd: float
    support: int = -1
    x: float = 0.0
    height: float = 0.0
    flexural: float = 1.0
    shared: int = -1


@dataclass(frozen=True, kw_only=True)
class PermanentState:
    """The permanent state: what the girder carries for good.

    Attributes
    ----------
    loads : carried by the continuous girder
    span_by_span : carried by simple spans before they were joined
    since_loaded : the datum was taken with these loads on and the pads new; readings are the change since
    """

    loads: LoadCase
    span_by_span: LoadCase = field(default_factory=LoadCase)
    since_loaded: bool = False


class ObservationModel:
    """Predictions and exact derivatives for a set of observations on one girder.

    Parameters
    ----------
    condensed : Condensed
    pads : (q,) indices of the supports that are pads; the others hold their level
    states : load states: a load case is a test state with the girder's share of the axles; at most one PermanentState
    observations : the readings
    unknowns : what is unknown beside the pads

    Attributes
    ----------
    value, sd : (m,)
    state : (m,) load state of each reading
    seats : (state, support) of the seats read in test states, whose drops are unknowns
    layout : where each unknown stands in theta; the pads' ln k first
    size : number of unknowns
    """

    def __init__(
        self,
        condensed: Condensed,
        pads: Ints,
        states: Sequence[LoadCase | PermanentState],
        observations: Sequence[Observation],
        unknowns: Unknowns | None = None,
    ) -> None:
        self.condensed = condensed
        self.pads = np.asarray(pads, dtype=np.intp)
        self.unknowns = unknowns or Unknowns()
        self.observations = tuple(observations)
        self.value: Floats = np.array([o.value for o in observations], dtype=np.float64)
        self.sd: Floats = np.array([o.sd for o in observations], dtype=np.float64)
        self._permanent = [j for j, state in enumerate(states) if isinstance(state, PermanentState)]
        if len(self._permanent) > 1:
            raise ValueError("a visit has one permanent state")
        kinds = np.array([isinstance(state, PermanentState) for state in states], dtype=bool)
        self.state: Ints = np.array([o.state for o in observations], dtype=np.intp)
        lasting = kinds[self.state] if self.state.size else np.zeros(0, dtype=bool)
        self._tested, self._lasting = np.flatnonzero(~lasting), np.flatnonzero(lasting)
        self._tests = [j for j, one in enumerate(kinds) if not one]
        loaded = [states[j] for j in self._permanent]
        self._since_loaded = bool(loaded and isinstance(loaded[0], PermanentState) and loaded[0].since_loaded)
        self.seats = sorted(
            {(o.state, o.support) for o in observations if o.quantity == "settlement" and not kinds[o.state]}
        )
        self.layout = Layout(self._entries())
        self.size = self.layout.size
        curvatures = self.unknowns.gradient
        self._test = self._group(states, self._tests, self._tested, curvatures)
        self._long = self._group(states, self._permanent, self._lasting, curvatures)
        self._fixed = self._fixed_columns()
        self._share = [self.unknowns.share[j] for j in self._tests] if self.unknowns.share else []
        where = {j: c for c, j in enumerate(self._tests)}
        self._seat_places = [(where[j], support) for j, support in self.seats]

    # unknowns -----------------------------------------------------------------------------------

    def _entries(self) -> Iterator[Entry]:
        asked, permanent = self.unknowns, bool(self._lasting.size)
        yield from (Entry(block="pads", index=int(i)) for i in self.pads)
        if asked.sustained:
            yield Entry(block="sustained", index=0)
        yield from (Entry(block="settlements", index=i) for i in asked.settlements)
        if asked.girder:
            yield Entry(block="girder", index=0)
        if asked.datum:
            yield from (Entry(block="datum", index=i) for i in (0, 1))
        yield from (Entry(block="share", index=v) for v in sorted(set(asked.share) - {-1}))
        if asked.gradient:
            given = ((TEST, bool(self._tested.size)), (PERMANENT, permanent))
            yield from (Entry(block="gradient", index=which) for which, there in given if there)
        if permanent and self._since_loaded:
            yield from (Entry(block="as built", index=int(i)) for i in self.pads)
        yield from (Entry(block="seats", index=j) for j in range(len(self.seats)))
        groups = sorted({o.shared for o in self.observations} - {-1})
        yield from (Entry(block="shared", index=g) for g in groups)

    def _fixed_columns(self) -> Floats:
        """Derivatives (m, size) that no unknown changes: datum and shared errors."""
        columns = np.zeros((self.value.size, self.size))
        length = self.condensed.positions[-1]
        lasting = set(self._lasting.tolist())
        of_group = {self.layout.entries[j].index: j for j in self.layout.places("shared")}
        datum = list(self.layout.places("datum"))
        for row, o in enumerate(self.observations):
            if o.shared in of_group:
                columns[row, of_group[o.shared]] = 1.0
            if datum and row in lasting and o.quantity in LEVELLED:
                x = self.condensed.positions[o.support] if o.quantity == "settlement" else o.x
                columns[row, datum] = 1.0, x / length - 0.5
        return columns

    # predictions --------------------------------------------------------------------------------

    def predict(self, theta: Floats) -> Floats:
        """Predicted readings (..., m) for unknowns theta (..., size)."""
        value = theta @ self._fixed.T
        if self._test is not None:
            value[..., self._tested] += self._test.predict(self._test_setting(theta))
        if self._long is not None:
            value[..., self._lasting] += self._long.predict(self._long_setting(theta))
            if self._since_loaded:
                value[..., self._lasting] -= self._long.predict(self._built_setting(theta))
        return np.asarray(value)

    def jacobian(self, theta: Floats) -> Floats:
        """Exact derivatives (m, size) of `predict`."""
        return self.linearise(theta)[1]

    def linearise(self, theta: Floats) -> tuple[Floats, Floats]:
        """Predicted readings (m,) and their exact derivatives (m, size), by one solve for each set of compliances.

        ln k up by one takes f R off a pad's shortening, as a seat rising by f R would: so all derivatives are those of
        the levels by the seats (n, n), which no load state changes.
        """
        value = self._fixed @ theta
        jacobian = self._fixed.copy()
        if self._test is not None:
            self._of_tests(theta, value, jacobian)
        if self._long is not None:
            self._of_permanent(theta, value, jacobian)
        return value, jacobian

    def _of_tests(self, theta: Floats, value: Floats, jacobian: Floats) -> None:
        assert self._test is not None
        found, rows, layout = self._test.linearise(self._test_setting(theta)), self._tested, self.layout
        value[rows] += found.value
        state = self._test.rows.state
        jacobian[rows, : self.pads.size] = -found.by_compliance[:, self.pads]
        for j, (which, support) in zip(layout.places("seats"), self._seat_places, strict=True):
            jacobian[rows, j] = np.where(state == which, found.by_drop[:, support], 0.0)
        for j in layout.places("girder"):
            jacobian[rows, j] = found.by_factor
        for j in layout.places("share"):
            of_state = np.array([v == layout.entries[j].index for v in self._share])[state]
            jacobian[rows, j] = np.where(of_state, found.by_share, 0.0)
        for j in layout.places("gradient"):
            if layout.entries[j].index == TEST:
                jacobian[rows, j] = found.by_warmth

    def _of_permanent(self, theta: Floats, value: Floats, jacobian: Floats) -> None:
        assert self._long is not None
        found, rows, layout = self._long.linearise(self._long_setting(theta)), self._lasting, self.layout
        value[rows] += found.value
        by_pads = found.by_compliance[:, self.pads]
        jacobian[rows, : self.pads.size] = -by_pads
        if found.by_joined.size:
            jacobian[rows, : self.pads.size] -= found.by_joined[:, self.pads]
        for j in layout.places("sustained"):
            jacobian[rows, j] = -by_pads.sum(axis=1)
        for j in layout.places("settlements"):
            jacobian[rows, j] = found.by_drop[:, layout.entries[j].index]
        for j in layout.places("girder"):
            jacobian[rows, j] = found.by_factor
        for j in layout.places("gradient"):
            if layout.entries[j].index == PERMANENT:
                jacobian[rows, j] = found.by_warmth
        if self._since_loaded:
            built = self._long.linearise(self._built_setting(theta))
            value[rows] -= built.value
            change = built.by_compliance + (built.by_joined if built.by_joined.size else 0.0)
            jacobian[rows, layout.of("as built")] = change[:, self.pads]
            for j in layout.places("girder"):
                jacobian[rows, j] -= built.by_factor

    # settings -----------------------------------------------------------------------------------

    def _compliance(self, log_stiffness: Floats) -> Floats:
        compliance = np.zeros((*log_stiffness.shape[:-1], self.condensed.n_supports))
        compliance[..., self.pads] = np.exp(-log_stiffness)
        return compliance

    def _factor(self, theta: Floats) -> Floats | None:
        return np.exp(theta[..., self.layout.of("girder")][..., 0]) if "girder" in self.layout else None

    def _warmer(self, theta: Floats, which: int) -> Floats | None:
        for j in self.layout.places("gradient"):
            if self.layout.entries[j].index == which:
                return np.asarray(theta[..., j])
        return None

    def _test_setting(self, theta: Floats) -> Setting:
        layout, lead, cases = self.layout, theta.shape[:-1], len(self._tests)
        compliance = self._compliance(theta[..., : self.pads.size])
        drops = None
        if self._seat_places:
            drops = np.zeros((*lead, cases, self.condensed.n_supports))
            for j, (which, support) in zip(layout.places("seats"), self._seat_places, strict=True):
                drops[..., which, support] = theta[..., j]
        share = None
        if "share" in layout:
            share = np.ones((*lead, cases))
            for j in layout.places("share"):
                of = [c for c, v in enumerate(self._share) if v == layout.entries[j].index]
                share[..., of] = np.exp(theta[..., j])[..., None]
        return Setting(
            compliance=compliance,
            joined=compliance,
            drops=drops,
            factor=self._factor(theta),
            share=share,
            warmer=self._warmer(theta, TEST),
        )

    def _long_setting(self, theta: Floats) -> Setting:
        layout = self.layout
        joined = self._compliance(theta[..., : self.pads.size])
        compliance = joined
        if "sustained" in layout:
            compliance = joined * np.exp(-theta[..., layout.of("sustained")])
        drops = np.zeros((*theta.shape[:-1], 1, self.condensed.n_supports))
        drops[..., 0, list(self.unknowns.settlements)] = theta[..., layout.of("settlements")]
        return Setting(
            compliance=compliance,
            joined=joined,
            drops=drops,
            factor=self._factor(theta),
            warmer=self._warmer(theta, PERMANENT),
        )

    def _built_setting(self, theta: Floats) -> Setting:
        """The girder at a datum that was taken with the permanent loads on."""
        compliance = self._compliance(theta[..., self.layout.of("as built")])
        return Setting(compliance=compliance, joined=compliance, factor=self._factor(theta))

    def _group(
        self,
        states: Sequence[LoadCase | PermanentState],
        chosen: list[int],
        rows: Ints,
        curvatures: Sequence[tuple[float, float, float]],
    ) -> Group | None:
        if not rows.size:
            return None
        place = {j: c for c, j in enumerate(chosen)}
        own = [replace(self.observations[j], state=place[self.observations[j].state]) for j in rows]
        cases = [states[j] for j in chosen]
        loads = [one.loads if isinstance(one, PermanentState) else one for one in cases]
        staged = [one.span_by_span if isinstance(one, PermanentState) else LoadCase() for one in cases]
        made: Rows = equations(self.condensed, loads, staged, own, curvatures)
        return Group(self.condensed, made)
