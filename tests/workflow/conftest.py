from __future__ import annotations

import contextlib
import functools
import importlib.util
import io
import json
from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path
from types import ModuleType
from typing import Any

import pytest

from assess import workflow
from assess.capacity import rows
from assess.cli.main import run
from assess.results import AssessmentResult, CalibrationResult, TrendResult
from assess.workflow import trending
from tests.workflow.invented import BRIDGE

ROOT = Path(__file__).resolve().parent.parent.parent


@dataclass(frozen=True)
class Said:
    """What a command line left behind."""

    code: int
    out: str
    err: str

    @property
    def document(self) -> Any:
        """The one JSON document on stdout."""
        assert (self.code, self.err) == (0, ""), self.err
        return json.loads(self.out)


def call(record: str, *words: str) -> Said:
    """Run the command line on a record."""
    out, err = io.StringIO(), io.StringIO()
    with contextlib.redirect_stdout(out), contextlib.redirect_stderr(err):
        code = run(["--record", record, *words])
    return Said(code, out.getvalue(), err.getvalue())


def new_record(folder: Path, name: str = "record.sqlite") -> str:
    """Make a record on disk with the contract's bridge in it."""
    url = str(folder / name)
    workflow.init_record(url)
    workflow.add_bridge(url, BRIDGE)
    return url


@pytest.fixture
def record(tmp_path: Path) -> str:
    return new_record(tmp_path)


@pytest.fixture
def bedstone(record: str) -> Callable[..., Said]:
    """Call the command line on the test's record."""
    return functools.partial(call, record)


@pytest.fixture(scope="session")
def story() -> ModuleType:
    """The script that made the sample data, with the truth in it."""
    spec = importlib.util.spec_from_file_location(
        "make_sample_data", ROOT / "scripts" / "make_sample_data.py"
    )
    assert spec is not None
    assert spec.loader is not None
    module = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(module)
    return module


@dataclass(frozen=True)
class Demo:
    """The sample bridge calibrated, assessed and followed."""

    url: str
    visits: list[CalibrationResult]
    assessment: AssessmentResult
    trend: TrendResult


@pytest.fixture(scope="session")
def demo(tmp_path_factory: pytest.TempPathFactory) -> Demo:
    """The sample bridge, forecast with fewer draws than usual: its story hangs on none of them."""
    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(trending, "FORECAST_DRAWS", 300)
        patch.setattr(rows, "_SAMPLE", 6)
        made = _run_demo(tmp_path_factory)
    return made


def _run_demo(tmp_path_factory: pytest.TempPathFactory) -> Demo:
    url = str(tmp_path_factory.mktemp("demo") / "demo.sqlite")
    sample = ROOT / "sample_data"
    workflow.init_record(url)
    workflow.add_bridge(url, sample / "hollin-water.toml")
    for path in sorted(sample.glob("visit-*.toml")):
        workflow.log_visit(url, path)
    return Demo(
        url=url,
        visits=workflow.calibrate(url, "hollin-water", every=True),
        assessment=workflow.assess(url, "hollin-water"),
        trend=workflow.trend(url, "hollin-water"),
    )
