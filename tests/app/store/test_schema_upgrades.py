"""Upgrades lead to the tables the code speaks of, from nothing and from every released schema."""

from __future__ import annotations

import sqlite3
import warnings
from datetime import UTC, datetime
from pathlib import Path

import pytest
from alembic.autogenerate import compare_metadata
from alembic.runtime.migration import MigrationContext
from sqlalchemy import create_engine, inspect

from app.store import StoreError, open_database, schema_upgrades
from app.store.schema import metadata
from app.study.figure_requests import FigureRequest, Statistic
from app.study.questions import Answer, MissingCode, MissingReason, Question, QuestionKind
from app.study.sampling_plan import SamplingMethod, SamplingPlan, StratumCount
from app.study.study import LinkStatus

SCHEMAS = sorted(Path(__file__).parent.glob("schema_*.sql"))
DAY = datetime(2026, 3, 12, 9, 52, tzinfo=UTC)
STUDY = "0000000000000001"


def restore(dump: Path, data_folder: Path) -> None:
    data_folder.mkdir()
    plain = sqlite3.connect(data_folder / "halfwidth.sqlite")
    plain.executescript(dump.read_text(encoding="utf-8"))
    plain.close()


def in_order(things) -> list[str]:
    return sorted(repr(sorted(thing.items(), key=lambda item: item[0])) for thing in things)


def shape(engine) -> dict[str, object]:
    """Everything that makes up the tables, in an order of its own."""
    look = inspect(engine)
    return {
        table: {
            "columns": in_order(
                {**column, "type": str(column["type"])} for column in look.get_columns(table)
            ),
            "key": look.get_pk_constraint(table)["constrained_columns"],
            "foreign": in_order(look.get_foreign_keys(table)),
            "unique": in_order(look.get_unique_constraints(table)),
            "indexes": in_order(
                {
                    **index,
                    "dialect_options": {
                        name: str(option) for name, option in index["dialect_options"].items()
                    },
                }
                for index in look.get_indexes(table)
            ),
            "checks": in_order(look.get_check_constraints(table)),
        }
        for table in look.get_table_names()
        if table != "alembic_version"
    }


def shape_in_code():
    engine = create_engine("sqlite://")
    metadata.create_all(engine)
    try:
        return shape(engine)
    finally:
        engine.dispose()


def shape_of(data_folder: Path):
    engine = create_engine(f"sqlite:///{data_folder / 'halfwidth.sqlite'}")
    try:
        return shape(engine)
    finally:
        engine.dispose()


def test_upgrades_from_nothing_lead_to_the_tables_in_code(data_folder) -> None:
    open_database(data_folder).close()
    assert shape_of(data_folder) == shape_in_code()


def test_alembic_finds_nothing_left_to_upgrade(data_folder, database) -> None:
    with database._connections.reading() as connection:
        assert compare_metadata(MigrationContext.configure(connection), metadata) == []
    assert {path.name for path in data_folder.iterdir()} >= {"halfwidth.sqlite"}


def test_there_is_a_dump_of_every_released_schema() -> None:
    versions = schema_upgrades.UPGRADES / "versions"
    assert [path.stem.split("_")[1] for path in SCHEMAS] == sorted(
        path.name.split("_")[0] for path in versions.glob("*.py")
    )


@pytest.mark.parametrize("dump", SCHEMAS, ids=lambda path: path.stem)
def test_every_released_schema_is_brought_to_the_present_one(dump, data_folder) -> None:
    restore(dump, data_folder)
    open_database(data_folder).close()
    assert shape_of(data_folder) == shape_in_code()


def test_what_the_first_schema_held_is_all_there(data_folder) -> None:
    restore(SCHEMAS[0], data_folder)
    database = open_database(data_folder, clock=lambda: DAY)
    (summary,) = database.studies()
    assert (summary.study.id, summary.study.name) == (STUDY, "Garden centres, spring")
    assert summary.study.created_at == DAY
    assert (summary.rows, summary.kept, summary.live_links) == (1, 1, 1)
    assert database.current_file(STUDY).file_name == "garden centres.csv"
    assert database.questions(STUDY) == (
        Question("region", ("region",), QuestionKind.CHOICE, "Region", (Answer("north", "north"),)),
        Question(
            "q4",
            ("q4",),
            QuestionKind.SCALE,
            "How satisfied are you?",
            missing=(MissingCode("99", MissingReason.REFUSED),),
        ),
    )
    assert database.plan(STUDY).plan == SamplingPlan(
        universe="all garden centres",
        universe_size=1184,
        method=SamplingMethod.CHANCE,
        strata_column="region",
        strata=(StratumCount("north", 310),),
        provisional=False,
    )
    (kept,) = database.kept_figures(STUDY)
    assert kept.request == FigureRequest("q4", Statistic.SHARE, ("9", "10"))
    assert kept.headline == "Most are satisfied"
    assert database.find_by_token_hash("a" * 64, DAY) == (LinkStatus.REVOKED, "")
    assert database.find_by_token_hash("b" * 64, DAY) == (LinkStatus.LIVE, "<p>Readout 1</p>")
    database.close()


def test_opening_gives_no_warnings(data_folder) -> None:
    with warnings.catch_warnings():
        warnings.simplefilter("error")
        open_database(data_folder).close()


def test_an_upgrade_that_leaves_loose_ends_is_undone(data_folder, monkeypatch) -> None:
    open_database(data_folder).close()

    def careless(config, _revision) -> None:
        connection = config.attributes["connection"]
        connection.exec_driver_sql(
            "INSERT INTO sampling_plans VALUES ('of no study', '{}', 1, '2026-03-12 09:52:00')"
        )

    monkeypatch.setattr(schema_upgrades.command, "upgrade", careless)
    with pytest.raises(StoreError, match="left as it was"):
        open_database(data_folder)
    monkeypatch.undo()
    database = open_database(data_folder)
    with database._connections.reading() as connection:
        count = connection.exec_driver_sql("SELECT count(*) FROM sampling_plans").scalar()
        assert count == 0
        assert connection.exec_driver_sql("PRAGMA foreign_keys").scalar() == 1
    database.close()
