"""The tables of the store.

Times are UTC. Columns that hold JSON carry what ``app.study.records.to_json`` writes. Every table
that people edit has a ``version``, raised at each write, and ``changed_at`` beside it.
"""

from __future__ import annotations

from datetime import UTC, datetime
from typing import Any

from sqlalchemy import (
    Boolean,
    CheckConstraint,
    Column,
    DateTime,
    ForeignKey,
    Index,
    Integer,
    MetaData,
    String,
    Table,
    Text,
    TypeDecorator,
    UniqueConstraint,
    text,
)

metadata = MetaData()


class UtcTime(TypeDecorator[datetime]):
    """A moment: with time zone in Python, UTC in the table."""

    impl = DateTime
    cache_ok = True

    def process_bind_param(self, value: datetime | None, dialect: Any) -> datetime | None:  # noqa: ANN401, ARG002
        """Return the moment as the table holds it; one without time zone is a bug."""
        if value is None:
            return None
        if value.tzinfo is None:
            raise TypeError("a kept moment needs a time zone")
        return value.astimezone(UTC).replace(tzinfo=None)

    def process_result_value(self, value: datetime | None, dialect: Any) -> datetime | None:  # noqa: ANN401, ARG002
        """Return the moment with its time zone."""
        return None if value is None else value.replace(tzinfo=UTC)


def _study_id(**options: Any) -> Column[str]:  # noqa: ANN401
    return Column(
        "study_id",
        String,
        ForeignKey("studies.id", ondelete="CASCADE"),
        nullable=False,
        **options,
    )


def _edited() -> tuple[Column[int], Column[datetime]]:
    return (
        Column("version", Integer, nullable=False),
        Column("changed_at", UtcTime, nullable=False),
    )


studies = Table(
    "studies",
    metadata,
    Column("id", String, primary_key=True),
    Column("name", Text, nullable=False),
    Column("decimal_mark", String, nullable=False),
    Column("house_limit", Text, nullable=False),  # JSON of HouseLimit
    Column("created_at", UtcTime, nullable=False),
    Column("touched_at", UtcTime, nullable=False),  # last change of anything in the study
    *_edited(),
    CheckConstraint("decimal_mark IN ('.', ',')", name="studies_decimal_mark"),
)

files = Table(
    "files",
    metadata,
    Column("id", String, primary_key=True),
    _study_id(),
    Column("file_name", Text, nullable=False),
    Column("fingerprint", String, nullable=False, index=True),
    Column("size", Integer, nullable=False),
    Column("reading", Text, nullable=False),  # JSON, made and understood by app.intake
    Column("rows", Integer, nullable=False),
    Column("columns", Integer, nullable=False),
    Column("received_at", UtcTime, nullable=False),
    Column("current", Boolean, nullable=False),
    *_edited(),
    UniqueConstraint("study_id", "fingerprint", name="files_once_in_a_study"),
)
Index(
    "files_one_current_in_a_study", files.c.study_id, unique=True, sqlite_where=text("current = 1")
)

questions = Table(
    "questions",
    metadata,
    _study_id(primary_key=True),
    Column("key", Text, primary_key=True),
    Column("position", Integer, nullable=False),
    Column("question", Text, nullable=False),  # JSON of Question
    *_edited(),
)

sampling_plans = Table(
    "sampling_plans",
    metadata,
    _study_id(primary_key=True),
    Column("plan", Text, nullable=False),  # JSON of SamplingPlan
    *_edited(),
)

kept_figures = Table(
    "kept_figures",
    metadata,
    Column("id", String, primary_key=True),
    _study_id(index=True),
    Column("request", Text, nullable=False),  # JSON of FigureRequest
    Column("position", Integer, nullable=False),
    Column("headline", Text, nullable=False),
    Column("comment", Text, nullable=False),
    *_edited(),
)

readouts = Table(
    "readouts",
    metadata,
    Column("id", String, primary_key=True),
    _study_id(),
    Column("number", Integer, nullable=False),
    Column("title", Text, nullable=False),
    Column("frozen", Text, nullable=False),  # JSON of FrozenReadout
    Column("html", Text, nullable=False),
    Column("methods_version", Integer, nullable=False),
    Column("published_at", UtcTime, nullable=False),
    *_edited(),
    UniqueConstraint("study_id", "number", name="readouts_numbered_in_a_study"),
)

# The newest link of a readout is its present one. A link outlives its readout, so that a
# withdrawn one is known to be withdrawn.
links = Table(
    "links",
    metadata,
    Column("id", Integer, primary_key=True),
    Column("token_hash", String, nullable=False, unique=True),
    Column("readout_id", String, ForeignKey("readouts.id", ondelete="SET NULL"), index=True),
    Column("made_at", UtcTime, nullable=False),
    Column("expires_at", UtcTime),
    Column("revoked_at", UtcTime),
)
