from __future__ import annotations

import datetime as dt
import shutil
from dataclasses import replace
from pathlib import Path

import pytest
from alembic import op
from alembic.autogenerate import compare_metadata
from alembic.migration import MigrationContext
from sqlalchemy import Connection, create_engine, inspect
from sqlalchemy.dialects import postgresql
from sqlalchemy.schema import CreateTable

from db.exchange import read_bridge, read_visit
from db.migrations import known_versions, upgrade
from db.schema import SCHEMA_HEAD, Base
from db.store import open_record

DATA = Path(__file__).parents[1] / "data"


def differences(connection: Connection) -> list[object]:
    context = MigrationContext.configure(connection, opts={"compare_type": True})
    return list(compare_metadata(context, Base.metadata))


def constraints(connection: Connection) -> dict[str, object]:
    inspector = inspect(connection)
    return {
        table: (
            sorted((c["name"] or "", c["sqltext"]) for c in inspector.get_check_constraints(table)),
            sorted((c["name"] or "", c["column_names"]) for c in inspector.get_unique_constraints(table)),
            sorted((c["name"] or "", c["constrained_columns"]) for c in inspector.get_foreign_keys(table)),
            sorted((i["name"] or "", i["column_names"]) for i in inspector.get_indexes(table)),
        )
        for table in sorted(inspector.get_table_names())
        if table != "alembic_version"
    }


def test_the_head_is_the_one_the_schema_names() -> None:
    assert known_versions()[0] == SCHEMA_HEAD


def test_a_migrated_record_has_the_tables_of_the_schema() -> None:
    with create_engine("sqlite://").begin() as connection:
        upgrade(connection)
        assert differences(connection) == []
        migrated = constraints(connection)
    with create_engine("sqlite://").begin() as connection:
        Base.metadata.create_all(connection)
        assert constraints(connection) == migrated


def test_a_server_would_get_the_same_tables() -> None:
    """No server is at hand: the statements at least can be written for one."""
    for table in Base.metadata.sorted_tables:
        assert "CREATE TABLE" in str(CreateTable(table).compile(dialect=postgresql.dialect()))  # type: ignore[no-untyped-call]


def test_the_comparison_can_fail() -> None:
    with create_engine("sqlite://").begin() as connection:
        upgrade(connection)
        connection.exec_driver_sql("ALTER TABLE visits DROP COLUMN remark")
        assert differences(connection) != []


def test_upgrading_twice_is_harmless() -> None:
    with create_engine("sqlite://").begin() as connection:
        upgrade(connection)
        before = constraints(connection)
        upgrade(connection)
        assert constraints(connection) == before


def test_every_version_has_one_parent_and_a_file() -> None:
    files = list((Path(__file__).parents[2] / "db" / "migrations" / "versions").glob("r*.py"))
    assert len(files) == len(known_versions())


def test_a_record_of_the_first_version_is_migrated_with_its_values(tmp_path: Path) -> None:
    location = tmp_path / "old.sqlite"
    shutil.copy(DATA / "record-0001.sqlite", location)
    with create_engine(f"sqlite:///{location}").connect() as connection:
        assert connection.exec_driver_sql("SELECT version_num FROM alembic_version").scalar_one() == "0001"
    with open_record(str(location)) as record:
        assert not record.created
        old = record.visit("quillmere", dt.date(2024, 5, 14))
        bridge = record.bridge("quillmere").document
    new = read_visit(DATA / "visit-example.toml")
    assert replace(old, readings=()) == replace(new, readings=())
    assert [(r.support, r.at, r.value, r.sd, r.value_entered) for r in old.readings] == [
        ("pier 1", None, 1.42e-3, 5e-5, "1.42 mm"),
        (None, 6.0, 2.31e-3, 1e-4, "2.31 mm"),
    ]
    assert {(r.benchmark, r.raw, r.derived) for r in old.readings} == {("", None, False)}
    assert bridge == read_bridge(DATA / "bridge-example.toml")
    with create_engine(f"sqlite:///{location}").connect() as connection:
        assert (
            connection.exec_driver_sql("SELECT version_num FROM alembic_version").scalar_one() == SCHEMA_HEAD
        )
        assert connection.exec_driver_sql("SELECT setup FROM visits").scalar_one() is None
        assert differences(connection) == []


def test_a_record_of_the_second_version_is_migrated_with_its_results(tmp_path: Path) -> None:
    location = tmp_path / "old.sqlite"
    shutil.copy(DATA / "record-0002.sqlite", location)
    with create_engine(f"sqlite:///{location}").connect() as connection:
        assert connection.exec_driver_sql("SELECT version_num FROM alembic_version").scalar_one() == "0002"
    with open_record(str(location)) as record:
        assert record.visit("quillmere", dt.date(2024, 5, 14)).readings[0].value == 1.42e-3
        (kept,) = record.results("quillmere", "assessment")
        (fitted,) = record.results("quillmere", "calibration")
        assert (kept.evidence, fitted.evidence) == (None, None)
        sections = kept.result["girders"][0]["sections"]
        assert sections[0]["calibrated"]["utilisation"] == pytest.approx(0.282, abs=5e-4)
        assert fitted.visit == dt.date(2024, 5, 14)
        assert record.newest_results("assessment") == {}  # what it rests on is not known: it is made again
        assert (record.actions(), record.interventions("quillmere")) == ([], [])
        assert record.results("quillmere", "trend") == []
    with create_engine(f"sqlite:///{location}").connect() as connection:
        assert (
            connection.exec_driver_sql("SELECT version_num FROM alembic_version").scalar_one() == SCHEMA_HEAD
        )
        assert differences(connection) == []


def test_tables_made_halfway_are_not_kept(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    location = tmp_path / "r.sqlite"
    create_table = op.create_table

    def fail(name: str, *columns: object, **more: object) -> object:
        if name == "readings":
            raise RuntimeError("pulled the plug")
        return create_table(name, *columns, **more)  # type: ignore[arg-type]

    monkeypatch.setattr(op, "create_table", fail)
    with pytest.raises(RuntimeError), open_record(str(location), create=True):
        pass
    with create_engine(f"sqlite:///{location}").connect() as connection:
        assert inspect(connection).get_table_names() == []
    monkeypatch.undo()
    with open_record(str(location), create=True) as record:
        assert record.created
