"""Fits as the record keeps them, and back."""

from __future__ import annotations

import base64
import datetime as dt
import zlib
from collections.abc import Sequence
from dataclasses import asdict, dataclass, field
from typing import Any

import numpy as np
from numpy.typing import NDArray

from assess.results import CalibrationResult, from_plain
from assess.workflow.building import GirderModel
from assess.workflow.fitting import Options
from assess.workflow.study import VERSION, Study
from db.records import KeptResult

Floats = NDArray[np.float64]

_PAD_ARRAYS = ("log_stiffness", "covariance", "information", "information_vector", "data_share")


@dataclass(frozen=True, kw_only=True)
class RivalFit:
    """A rival explanation as it enters the assessment.

    Attributes
    ----------
    name : as shown
    log_stiffness : (q,) short-term ln k
    settlements : m by support
    log_factor, log_sustained : of the girder's stiffness and of the sustained ratio
    told_apart_by : the reading that would decide, if one would
    """

    name: str
    log_stiffness: Floats
    settlements: dict[str, float]
    log_factor: float
    log_sustained: float
    told_apart_by: str | None


@dataclass(frozen=True, kw_only=True)
class GirderFit:
    """One girder's fit in one visit, as kept.

    Attributes
    ----------
    supports : the q pads
    log_stiffness, covariance, information, information_vector, data_share : of their ln k, as in `calibrate.Fit`
    unknowns : (block, support or index) of every unknown, the pads first
    theta, joint : (size,), (size, size) all unknowns and their covariance
    draws : (d, size) of the posterior; None where the normal approximation stands for it
    rivals : close rivals that the assessment carries along
    """

    girder: str
    supports: list[str]
    log_stiffness: Floats
    covariance: Floats
    information: Floats
    information_vector: Floats
    data_share: Floats
    unknowns: list[tuple[str, str]]
    theta: Floats
    joint: Floats
    draws: Floats | None = None
    rivals: list[RivalFit] = field(default_factory=list)

    @property
    def sd(self) -> Floats:
        """Standard deviations of ln k, (q,)."""
        return np.sqrt(np.diag(self.covariance))

    def places(self, block: str) -> list[int]:
        """Where a block stands among the unknowns."""
        return [j for j, (name, _) in enumerate(self.unknowns) if name == block]

    @property
    def seats(self) -> list[str]:
        """Supports whose seat drop was an unknown, in the order of their places."""
        return [self.unknowns[j][1] for j in self.places("settlements")]

    def one(self, block: str) -> float:
        """The estimate of a block of one unknown; 0 where it was none."""
        places = self.places(block)
        return float(self.theta[places[0]]) if places else 0.0


@dataclass(frozen=True, kw_only=True)
class VisitFit:
    """One visit's calibration: what is shown, and the fits by girder."""

    visit: dt.date
    result: CalibrationResult
    fits: dict[str, GirderFit]

    def of(self, model: GirderModel) -> GirderFit | None:
        """The fit of a girder, if this visit calibrated it with the pads it has today."""
        found = self.fits.get(model.doc.id)
        return found if found is not None and found.supports == model.pad_ids else None


def as_kept(study: Study, done: VisitFit, options: Options) -> KeptResult:
    """A calibration as the record keeps it: what was shown, and the parameters with their covariance."""
    shown = asdict(done.result)
    shown["visit"] = done.visit.isoformat()
    said: dict[str, Any] = {"prior": options.prior}
    if options.unknowns is not None:
        said["unknowns"] = list(options.unknowns)
    if options.without:
        said["without"] = [{"reading": key, "reason": reason} for key, reason in options.without]
    return KeptResult(
        kind="calibration",
        bridge=study.bridge.id,
        visit=done.visit,
        revision=study.kept.revision,
        input_digest=done.result.input_digest,
        options=said,
        version=VERSION,
        result={"shown": shown, "fits": {name: _plain(one) for name, one in done.fits.items()}},
    )


def _plain(one: GirderFit) -> dict[str, Any]:
    kept: dict[str, Any] = {key: getattr(one, key).tolist() for key in _PAD_ARRAYS}
    kept |= {"supports": one.supports, "unknowns": [list(pair) for pair in one.unknowns]}
    kept |= {"theta": one.theta.tolist(), "joint": one.joint.tolist()}
    if one.draws is not None:
        kept["draws"] = _packed(one.draws - one.theta)
    kept["rivals"] = [{**vars(rival), "log_stiffness": rival.log_stiffness.tolist()} for rival in one.rivals]
    return kept


def _packed(values: Floats) -> dict[str, Any]:
    """Draws around their estimate: six digits of the distance are plenty."""
    raw = zlib.compress(np.ascontiguousarray(values, dtype="<f4").tobytes(), 6)
    return {"shape": list(values.shape), "zlib_float32": base64.b64encode(raw).decode("ascii")}


def _unpacked(kept: dict[str, Any]) -> Floats:
    raw = zlib.decompress(base64.b64decode(kept["zlib_float32"]))
    return np.frombuffer(raw, dtype="<f4").reshape(kept["shape"]).astype(np.float64)


def options_of(kept: KeptResult) -> Options:
    """How a kept calibration was asked for."""
    said = kept.options
    unknowns = said.get("unknowns")
    return Options(
        prior=bool(said.get("prior", True)),
        unknowns=None if unknowns is None else tuple(unknowns),
        without=tuple((one["reading"], one["reason"]) for one in said.get("without", [])),
    )


def from_kept(kept: KeptResult) -> VisitFit:
    """A calibration back from the record, also one that knew of pads alone."""
    if kept.visit is None:
        raise ValueError("a kept calibration belongs to a visit")
    shown: dict[str, Any] = {**kept.result["shown"], "visit": kept.visit}
    fits = {name: _girder_fit(name, one) for name, one in kept.result["fits"].items()}
    return VisitFit(visit=kept.visit, result=from_plain(CalibrationResult, shown), fits=fits)


def _girder_fit(name: str, one: dict[str, Any]) -> GirderFit:
    pads = {key: np.array(one[key], dtype=np.float64) for key in _PAD_ARRAYS}
    supports = list(one["supports"])
    alone = [("pads", support) for support in supports]
    theta = np.array(one.get("theta", one["log_stiffness"]), dtype=np.float64)
    return GirderFit(
        girder=name,
        supports=supports,
        unknowns=[(block, key) for block, key in one.get("unknowns", alone)],
        theta=theta,
        joint=np.array(one.get("joint", one["covariance"]), dtype=np.float64),
        draws=theta + _unpacked(one["draws"]) if "draws" in one else None,
        rivals=_rivals(one.get("rivals", [])),
        **pads,
    )


def _rivals(kept: Sequence[dict[str, Any]]) -> list[RivalFit]:
    return [RivalFit(**{**one, "log_stiffness": np.array(one["log_stiffness"])}) for one in kept]
