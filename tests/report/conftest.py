"""The views that the report tests draw, rendered once."""

from __future__ import annotations

import importlib.util
import sys
from functools import cache
from pathlib import Path
from types import ModuleType

import pytest

from assess.report import render
from assess.results import ReportView


def _load() -> ModuleType:
    name = "report_example_view"
    if name not in sys.modules:
        spec = importlib.util.spec_from_file_location(name, Path(__file__).with_name("example_view.py"))
        assert spec is not None
        assert spec.loader is not None
        module = importlib.util.module_from_spec(spec)
        sys.modules[name] = module
        spec.loader.exec_module(module)
    return sys.modules[name]


@cache
def _view(name: str) -> ReportView:
    return getattr(_load(), name)()


@cache
def _page(name: str) -> str:
    return render(_view(name))


@pytest.fixture(scope="session")
def view_of():
    """Give a view by the name of its builder in `example_view.py`."""
    return _view


@pytest.fixture(scope="session")
def page_of():
    """Give the page of such a view."""
    return _page
