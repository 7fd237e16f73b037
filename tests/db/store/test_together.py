"""Many programs at one record at once, and programs that are killed."""

from __future__ import annotations

import datetime as dt
import os
import random
import signal
import sqlite3
import subprocess
import sys
import time
from pathlib import Path

import pytest

from db.documents import BridgeDoc
from db.store import open_record
from tests.db.conftest import DATA

ROOT = Path(__file__).parents[3]
READINGS = 60

WORKER = f"""
import datetime as dt, sys
from db.exchange import parse_bridge, parse_visit
from db.store import open_record
location, first, count = sys.argv[1], int(sys.argv[2]), int(sys.argv[3])
bridge = parse_bridge(open({str(DATA / "bridge-example.toml")!r}).read(), file="b.toml")
text = open({str(DATA / "visit-example.toml")!r}).read().replace("[visit]", '[visit]\\nreadings = "v.csv"', 1)
rows = "north,T1,deflection,6,1.5,0.1,mm\\n" * ({READINGS} - 2)
table = "girder,state,quantity,at,value,sd,unit\\n" + rows
print("ready", flush=True)
sys.stdin.readline()
for i in range(first, first + count):
    day = (dt.date(1990, 1, 1) + dt.timedelta(days=i)).isoformat()
    visit = parse_visit(text.replace("2024-05-14", day), file="v.toml", table_text=table)
    with open_record(location, create=True) as record:
        record.add_bridge(bridge)
        print(day, record.log_visit(visit).added, flush=True)
"""


def start(location: str, first: int, count: int) -> subprocess.Popen[str]:
    worker = subprocess.Popen(
        [sys.executable, "-c", WORKER, location, str(first), str(count)],
        stdin=subprocess.PIPE,
        stdout=subprocess.PIPE,
        stderr=subprocess.PIPE,
        text=True,
        cwd=ROOT,
    )
    assert worker.stdout is not None
    assert worker.stdout.readline() == "ready\n"
    return worker


def go(workers: list[subprocess.Popen[str]]) -> None:
    for worker in workers:
        assert worker.stdin is not None
        worker.stdin.write("\n")
        worker.stdin.flush()


def work_together(location: str, *, programs: int, visits: int) -> None:
    """All start from no record at all; the last visit of each is the first of the next one."""
    workers = [start(location, i * (visits - 1), visits) for i in range(programs)]
    go(workers)
    added = 0
    for worker in workers:
        out, errors = worker.communicate(timeout=500)
        assert (worker.returncode, errors) == (0, "")
        added += out.count("True")
    with open_record(location) as record:
        kept = record.visits("quillmere")
        assert record.bridges()[0].revision == 1
    assert len(kept) == added == programs * (visits - 1) + 1
    assert {visit.readings for visit in kept} == {READINGS}


def kill_one(location: str, *, first: int, after: int, delay_s: float) -> list[str]:
    """Kill a program some time after it kept so many visits; return the days it said were kept."""
    worker = start(location, first, 400)
    go([worker])
    assert worker.stdout is not None
    before = "".join(worker.stdout.readline() for _ in range(after))
    time.sleep(delay_s)
    os.kill(worker.pid, signal.SIGKILL)
    out = before + worker.communicate()[0]
    return [line.split()[0] for line in out.splitlines() if line.endswith("True")]


def kill_and_look(location: str, *, times: int, rng: random.Random) -> None:
    said: list[str] = []
    for i in range(times):
        said += kill_one(location, first=400 * i, after=i % 4, delay_s=rng.uniform(0.0, 0.1))
        with open_record(location, create=True) as record:
            kept = record.visits("quillmere") if record.bridges() else []
        assert {visit.readings for visit in kept} <= {READINGS}
        assert {dt.date.fromisoformat(day) for day in said} <= {visit.visit for visit in kept}
    with sqlite3.connect(location) as connection:
        assert connection.execute("PRAGMA integrity_check").fetchall() == [("ok",)]
        assert connection.execute("PRAGMA foreign_key_check").fetchall() == []
    connection.close()
    assert said


def test_four_programs_log_at_once(tmp_path: Path) -> None:
    work_together(str(tmp_path / "r.sqlite"), programs=4, visits=10)


@pytest.mark.campaign
def test_eight_programs_log_fifty_visits_each(tmp_path: Path) -> None:
    work_together(str(tmp_path / "r.sqlite"), programs=8, visits=50)


def test_a_killed_program_leaves_whole_visits_only(tmp_path: Path) -> None:
    kill_and_look(str(tmp_path / "r.sqlite"), times=4, rng=random.Random(20240514))


@pytest.mark.campaign
def test_a_hundred_killed_programs_leave_whole_visits_only(tmp_path: Path) -> None:
    kill_and_look(str(tmp_path / "r.sqlite"), times=100, rng=random.Random(19890601))


def test_a_reader_sees_one_state_of_the_record(path: str, bridge: BridgeDoc) -> None:
    other = BridgeDoc(**(vars(bridge) | {"id": "ashlow"}))
    with open_record(path) as reader, open_record(path) as writer, reader.reading() as session:
        before = session.connection().exec_driver_sql("SELECT count(*) FROM bridges").scalar_one()
        writer.add_bridge(other)
        after = session.connection().exec_driver_sql("SELECT count(*) FROM bridges").scalar_one()
        assert before == after == 1
        assert len(reader.bridges()) == 2
