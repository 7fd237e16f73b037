"""Commands that write files: the draft, the report, the demo."""

from __future__ import annotations

import datetime as dt
from pathlib import Path

import pytest
from cli_results import CAUTION, assessment, calibration, trend

from assess.cli import demo
from db.documents import BridgeDoc, FactorsDoc, VisitDoc
from db.records import Taken


@pytest.fixture
def drafted(monkeypatch):
    from db import exchange

    monkeypatch.setattr(exchange, "draft_bridge", lambda spans: f"# spans: {spans}\n", raising=False)


def test_a_draft_is_printed_when_no_file_is_named(bedstone, drafted):
    assert bedstone("bridge", "draft", "--spans", "12 m, 15 m").out == "# spans: 12 m, 15 m\n"
    assert bedstone("bridge", "draft", "--spans", "12 m", "-o", "-").out == "# spans: 12 m\n"


def test_a_draft_is_written_and_the_next_command_named(bedstone, drafted):
    said = bedstone("bridge", "draft", "--spans", "12 m", "-o", "my.toml")
    assert said.code == 0
    assert Path("my.toml").read_text() == "# spans: 12 m\n"
    assert "bedstone bridge add my.toml" in said.out


def test_a_draft_overwrites_nothing(bedstone, drafted):
    Path("my.toml").write_text("mine")
    said = bedstone("bridge", "draft", "--spans", "12 m", "-o", "my.toml")
    assert said.code == 2
    assert (
        said.err
        == "bedstone: my.toml: this file exists already and is not overwritten; give -o another name\n"
    )
    assert Path("my.toml").read_text() == "mine"


def test_a_draft_in_no_folder_is_one_line(bedstone, drafted):
    said = bedstone("bridge", "draft", "--spans", "12 m", "-o", "nowhere/my.toml")
    assert said.code == 2
    assert "nowhere/my.toml: cannot be written: No such file or directory" in said.err


@pytest.fixture
def page_writer(monkeypatch):
    from assess import report

    def put(write) -> None:
        monkeypatch.setattr(report, "write_report", write, raising=False)

    put(lambda view, path: path.write_text(str(view)))
    return put


def test_a_report_is_written_and_said(bedstone, workflow, page_writer):
    workflow(report_view=lambda url, bridge, **k: f"view of {bridge} in {url}")
    said = bedstone("report", "quillmere", "-o", "page.html")
    assert said.out == "Wrote the report page.html.\n"
    assert Path("page.html").read_text() == "view of quillmere in bedstone.sqlite"


def test_a_report_that_cannot_be_written_is_one_line(bedstone, workflow, page_writer):
    workflow(report_view=lambda *a, **k: "view")
    Path("page.html").mkdir()
    said = bedstone("report", "quillmere", "-o", "page.html")
    assert said.code == 2
    assert said.err == "bedstone: page.html: cannot be written: Is a directory; name another place\n"


def test_a_report_into_no_folder_is_refused_before_the_work(bedstone, workflow, page_writer):
    def never(*args, **options):
        raise AssertionError("the work was begun")

    workflow(report_view=never)
    said = bedstone("report", "quillmere", "-o", "nowhere/page.html")
    assert said.code == 2
    assert said.err.startswith("bedstone: nowhere: this folder does not exist")


def bridge_doc() -> BridgeDoc:
    factors = FactorsDoc(name="own", permanent=1.2, live=1.5, resistance=1.0)
    return BridgeDoc(
        id=demo.BRIDGE, name="Hollin Water", sections=(), girders=(), factors=factors, text="", digest="0"
    )


@pytest.fixture
def sample(monkeypatch, workflow, page_writer):
    """Stand-ins for the example files and for the work done on them; gives the calls made."""
    files = {
        "hollin-water.toml": b"b",
        "visit-2016-05-10.toml": b"1",
        "visit-2018-05-08.toml": b"2",
        "x.csv": b"c",
    }
    monkeypatch.setattr(demo, "_sample_files", lambda: files)
    calls: list[tuple[str, str]] = []

    def log(url, path, *, keep=True):
        assert keep
        calls.append(("log", path.name))
        visit = VisitDoc(
            bridge=demo.BRIDGE, date=dt.date(2016, 5, 10), states=(), readings=(), text="", digest="0"
        )
        return visit, Taken(added=True)

    def add(url, path):
        calls.append(("add", path.name))
        return bridge_doc(), Taken(added=True, revision=1)

    workflow(
        init_record=lambda url: calls.append(("init", Path(url).name)) or True,
        add_bridge=add,
        log_visit=log,
        calibrate=lambda *a, **k: [calibration()],
        assess=lambda *a, **k: assessment(),
        trend=lambda *a, **k: trend(),
        report_view=lambda *a, **k: "view",
    )
    return calls


def test_the_demo_runs_the_whole_job_in_order(bedstone, sample):
    said = bedstone("demo", "look")
    assert (said.code, said.err) == (0, "")
    assert sample == [
        ("init", "demo.sqlite"),
        ("add", "hollin-water.toml"),
        ("log", "visit-2016-05-10.toml"),
        ("log", "visit-2018-05-08.toml"),
    ]
    typed = [line for line in said.out.splitlines() if line.startswith("$ ")]
    assert typed == [
        "$ bedstone --record look/demo.sqlite init",
        "$ bedstone --record look/demo.sqlite bridge add look/hollin-water.toml",
        "$ bedstone --record look/demo.sqlite visit log look/visit-2016-05-10.toml",
        "$ bedstone --record look/demo.sqlite visit log look/visit-2018-05-08.toml",
        "$ bedstone --record look/demo.sqlite calibrate hollin-water --all",
        "$ bedstone --record look/demo.sqlite assess hollin-water",
        "$ bedstone --record look/demo.sqlite trend hollin-water",
        "$ bedstone --record look/demo.sqlite report hollin-water -o look/hollin-water.html",
    ]
    assert said.out.count(CAUTION) == 3
    assert Path("look/x.csv").read_bytes() == b"c"
    assert Path("look/hollin-water.html").exists()
    last_two = said.out.splitlines()[-2:]
    assert "look/hollin-water.html" in last_two[0]
    assert "invented" in last_two[1]


@pytest.mark.parametrize("name", ["demo.sqlite", "bedstone.sqlite", "hollin-water.toml", "hollin-water.html"])
def test_the_demo_refuses_a_folder_in_use(bedstone, sample, name):
    Path("look").mkdir()
    Path("look", name).write_text("mine")
    said = bedstone("demo", "look")
    assert said.code == 2
    assert said.err.startswith(f"bedstone: look: the folder already has {name}")
    assert "bedstone demo another-folder" in said.err
    assert [path.name for path in Path("look").iterdir()] == [name]
    assert Path("look", name).read_text() == "mine"
    assert sample == []


def test_the_demo_stops_at_the_first_failure(bedstone, sample, workflow):
    from db.errors import BedstoneError

    def refuse(url, path, *, keep=True):
        raise BedstoneError("is wrong", file=path.name, remedy="mend it")

    workflow(log_visit=refuse)
    said = bedstone("demo", "look")
    assert said.code == 2
    assert said.err == "bedstone: visit-2016-05-10.toml: is wrong; mend it\n"
    assert "calibrate" not in said.out


def test_the_demo_into_a_file_is_one_line(bedstone, sample):
    Path("look").write_text("a file")
    said = bedstone("demo", "look")
    assert said.code == 2
    assert said.err.startswith("bedstone: look: cannot be written: File exists")
