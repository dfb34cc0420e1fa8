"""The first schema."""

from __future__ import annotations

from datetime import datetime
from typing import Any

import sqlalchemy as sa
from alembic import op

revision = "0001"
down_revision = None
branch_labels = None
depends_on = None


def upgrade() -> None:
    _studies_and_files()
    _questions_plans_and_figures()
    _readouts_and_links()


def _study_id(**options: Any) -> sa.Column[str]:
    cascade = sa.ForeignKey("studies.id", ondelete="CASCADE")
    return sa.Column("study_id", sa.String, cascade, nullable=False, **options)


def _edited() -> tuple[sa.Column[int], sa.Column[datetime]]:
    return (
        sa.Column("version", sa.Integer, nullable=False),
        sa.Column("changed_at", sa.DateTime, nullable=False),
    )


def _studies_and_files() -> None:
    op.create_table(
        "studies",
        sa.Column("id", sa.String, primary_key=True),
        sa.Column("name", sa.Text, nullable=False),
        sa.Column("decimal_mark", sa.String, nullable=False),
        sa.Column("house_limit", sa.Text, nullable=False),
        sa.Column("created_at", sa.DateTime, nullable=False),
        sa.Column("touched_at", sa.DateTime, nullable=False),
        *_edited(),
        sa.CheckConstraint("decimal_mark IN ('.', ',')", name="studies_decimal_mark"),
    )
    op.create_table(
        "files",
        sa.Column("id", sa.String, primary_key=True),
        _study_id(),
        sa.Column("file_name", sa.Text, nullable=False),
        sa.Column("fingerprint", sa.String, nullable=False, index=True),
        sa.Column("size", sa.Integer, nullable=False),
        sa.Column("reading", sa.Text, nullable=False),
        sa.Column("rows", sa.Integer, nullable=False),
        sa.Column("columns", sa.Integer, nullable=False),
        sa.Column("received_at", sa.DateTime, nullable=False),
        sa.Column("current", sa.Boolean, nullable=False),
        *_edited(),
        sa.UniqueConstraint("study_id", "fingerprint", name="files_once_in_a_study"),
    )
    op.create_index(
        "files_one_current_in_a_study",
        "files",
        ["study_id"],
        unique=True,
        sqlite_where=sa.text("current = 1"),
    )


def _questions_plans_and_figures() -> None:
    op.create_table(
        "questions",
        _study_id(primary_key=True),
        sa.Column("key", sa.Text, primary_key=True),
        sa.Column("position", sa.Integer, nullable=False),
        sa.Column("question", sa.Text, nullable=False),
        *_edited(),
    )
    op.create_table(
        "sampling_plans",
        _study_id(primary_key=True),
        sa.Column("plan", sa.Text, nullable=False),
        *_edited(),
    )
    op.create_table(
        "kept_figures",
        sa.Column("id", sa.String, primary_key=True),
        _study_id(index=True),
        sa.Column("request", sa.Text, nullable=False),
        sa.Column("position", sa.Integer, nullable=False),
        sa.Column("headline", sa.Text, nullable=False),
        sa.Column("comment", sa.Text, nullable=False),
        *_edited(),
    )


def _readouts_and_links() -> None:
    op.create_table(
        "readouts",
        sa.Column("id", sa.String, primary_key=True),
        _study_id(),
        sa.Column("number", sa.Integer, nullable=False),
        sa.Column("title", sa.Text, nullable=False),
        sa.Column("frozen", sa.Text, nullable=False),
        sa.Column("html", sa.Text, nullable=False),
        sa.Column("methods_version", sa.Integer, nullable=False),
        sa.Column("published_at", sa.DateTime, nullable=False),
        *_edited(),
        sa.UniqueConstraint("study_id", "number", name="readouts_numbered_in_a_study"),
    )
    readout = sa.ForeignKey("readouts.id", ondelete="SET NULL")
    op.create_table(
        "links",
        sa.Column("id", sa.Integer, primary_key=True),
        sa.Column("token_hash", sa.String, nullable=False, unique=True),
        sa.Column("readout_id", sa.String, readout, index=True),
        sa.Column("made_at", sa.DateTime, nullable=False),
        sa.Column("expires_at", sa.DateTime),
        sa.Column("revoked_at", sa.DateTime),
    )
