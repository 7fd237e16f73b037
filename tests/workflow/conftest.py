from __future__ import annotations

import importlib.util
import json
from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path
from types import ModuleType
from typing import Any

import pytest

from assess import workflow
from assess.cli.main import run
from assess.results import AssessmentResult, CalibrationResult, TrendResult
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


@pytest.fixture
def record(tmp_path: Path) -> str:
    """A record on disk with the contract's bridge in it."""
    url = str(tmp_path / "record.sqlite")
    workflow.init_record(url)
    workflow.add_bridge(url, BRIDGE)
    return url


@pytest.fixture
def bedstone(record: str, capsys: pytest.CaptureFixture[str]) -> Callable[..., Said]:
    """Call the command line on that record."""

    def call(*words: str) -> Said:
        capsys.readouterr()
        code = run(["--record", record, *words])
        out, err = capsys.readouterr()
        return Said(code, out, err)

    return call


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
