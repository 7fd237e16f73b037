"""Readings of states that share one set of pad compliances: values and exact derivatives.

With phi the factor on the girder's stiffness, eta the vehicle's load share and t a temperature difference,

    (I + phi K F) R = eta P + phi t P_T - phi K s,   d = s + F R,   h = eta h0 / phi + t h_T + H d + G s,

which is the girder of phi = 1 on compliances phi F with seats that drop phi s, its levels divided by phi. What came on
span by span (support forces Q) shortened the pads by F0 Q before the spans were joined, and only what it shortened them
later acts on the continuous girder: seats drop by s + (F - F0) Q.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from assess.girder import Condensed

Floats = NDArray[np.float64]
Ints = NDArray[np.intp]


@dataclass(frozen=True, kw_only=True)
class Rows:
    """Observation equations of m readings in c load states.

    Attributes
    ----------
    state : (m,) load state of each reading
    held : (m,) h0, supports held level
    thermal : (m,) h_T per K
    by_level, by_seat : (m, n) H and G
    by_stage : (m, n) by what the pads were shortened before the spans were joined
    forces : (c, n) P
    thermal_forces : (n,) P_T per K
    stage_forces : (c, n) Q
    """

    state: Ints
    held: Floats
    thermal: Floats
    by_level: Floats
    by_seat: Floats
    by_stage: Floats
    forces: Floats
    thermal_forces: Floats
    stage_forces: Floats


@dataclass(frozen=True, kw_only=True)
class Setting:
    """What the unknowns make of the girder in these states; leading dimensions broadcast.

    Attributes
    ----------
    compliance : (..., n) F of the pads in these states
    joined : (..., n) F0 of the pads when the spans were joined
    drops : (..., c, n) seat drops; None: the seats stand still
    factor : (...) phi; None: 1
    share : (..., c) eta; None: 1
    warmer : (...) t in K; None: 0
    """

    compliance: Floats
    joined: Floats
    drops: Floats | None = None
    factor: Floats | None = None
    share: Floats | None = None
    warmer: Floats | None = None


@dataclass(frozen=True, kw_only=True)
class Slopes:
    """Values (m,) and derivatives by ln F and ln F0 (m, n), seats (m, n), ln phi, ln eta and t (m,).

    Those by ln F0, ln phi, ln eta and t are empty where nothing of the kind is there.
    """

    value: Floats
    by_compliance: Floats
    by_joined: Floats
    by_drop: Floats
    by_factor: Floats
    by_share: Floats
    by_warmth: Floats


class Group:
    """Load states that share the pads' compliances, with the readings taken in them."""

    def __init__(self, condensed: Condensed, rows: Rows) -> None:
        self._condensed = condensed
        self.rows = rows
        self._staged = bool(np.any(rows.stage_forces))
        self._still = np.zeros_like(rows.forces)

    def predict(self, setting: Setting) -> Floats:
        """Values (..., m)."""
        rows = self.rows
        compliance = setting.compliance[..., None, :]
        drops: Floats = self._still if setting.drops is None else setting.drops
        held: Floats = rows.held
        forces: Floats = rows.forces
        if setting.share is not None:
            forces = setting.share[..., None] * forces
            held = setting.share[..., rows.state] * held
        before: Floats = _NONE
        if self._staged:
            before = setting.joined[..., None, :] * rows.stage_forces
            drops = drops + compliance * rows.stage_forces - before
        phi = None if setting.factor is None else setting.factor[..., None, None]
        if setting.warmer is not None:
            bent = setting.warmer[..., None, None] * rows.thermal_forces
            forces = forces + (bent if phi is None else phi * bent)
        if phi is None:
            level = self._condensed.solve(compliance, forces, drops).displacement
        else:
            level = self._condensed.solve(phi * compliance, forces, phi * drops).displacement / phi
            held = held / phi[..., 0]
        value = held + (rows.by_level * level[..., rows.state, :]).sum(axis=-1)
        if setting.drops is not None:
            value = value + (rows.by_seat * setting.drops[..., rows.state, :]).sum(axis=-1)
        if setting.warmer is not None:
            value = value + setting.warmer[..., None] * rows.thermal
        if self._staged:
            value = value + (rows.by_stage * np.broadcast_to(before, level.shape)[..., rows.state, :]).sum(
                axis=-1
            )
        return np.asarray(value)

    def linearise(self, setting: Setting) -> Slopes:
        """Values and derivatives at one setting, by one solve."""
        rows, f, state = self.rows, setting.compliance, self.rows.state
        forces, held = rows.forces, rows.held
        drops: Floats = self._still if setting.drops is None else setting.drops
        phi = 1.0 if setting.factor is None else float(setting.factor)
        if setting.share is not None:
            forces, held = setting.share[:, None] * forces, setting.share[state] * held
        moving = forces  # what the vehicles and loads bring, without temperature
        if setting.warmer is not None:
            forces = forces + phi * float(setting.warmer) * rows.thermal_forces
        if self._staged:
            drops = drops + (f - setting.joined) * rows.stage_forces
        level, reaction, by_seat = self._condensed.sensitivity(phi * f, forces, phi * drops)
        moved = rows.by_level @ by_seat  # (m, n): readings by seats, what the girder hands on
        by_compliance = by_pads = moved * (f * reaction)[state]
        value = held / phi + (rows.by_level * (level / phi)[state]).sum(axis=1)
        if setting.drops is not None:
            value += (rows.by_seat * setting.drops[state]).sum(axis=1)
        by_joined = by_factor = by_share = by_warmth = _NONE
        if self._staged:
            later, before = f * rows.stage_forces, setting.joined * rows.stage_forces
            by_compliance = by_compliance + moved * later[state]
            by_joined = (rows.by_stage - moved) * before[state]
            value += (rows.by_stage * before[state]).sum(axis=1)
        if setting.warmer is not None:
            value += float(setting.warmer) * rows.thermal
            by_warmth = rows.thermal + phi * (moved @ (f * rows.thermal_forces))
        if setting.factor is not None or setting.share is not None:
            by_share = (moved * (f * moving)[state]).sum(axis=1) + held / phi
            by_factor = by_pads.sum(axis=1) - by_share
        return Slopes(
            value=value,
            by_compliance=by_compliance,
            by_joined=by_joined,
            by_drop=moved + rows.by_seat,
            by_factor=by_factor,
            by_share=by_share,
            by_warmth=by_warmth,
        )


_NONE: Floats = np.zeros((0, 0))
