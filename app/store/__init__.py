"""What is kept: studies, files, questions, sampling plans, kept figures, readouts, links."""

from __future__ import annotations

from app.store.database import Database, open_database
from app.store.errors import (
    AlreadyKeptError,
    DamagedFileError,
    NewerDatabaseError,
    StaleVersionError,
    StoreError,
    UnknownFigureError,
    UnknownFileError,
    UnknownQuestionError,
    UnknownReadoutError,
    UnknownRecordError,
    UnknownStudyError,
)
from app.store.question_records import StoredQuestion
from app.store.sampling_plan_records import StoredPlan
from app.store.study_records import DeletedStudy, StudySummary

__all__ = [
    "AlreadyKeptError",
    "DamagedFileError",
    "Database",
    "DeletedStudy",
    "NewerDatabaseError",
    "StaleVersionError",
    "StoreError",
    "StoredPlan",
    "StoredQuestion",
    "StudySummary",
    "UnknownFigureError",
    "UnknownFileError",
    "UnknownQuestionError",
    "UnknownReadoutError",
    "UnknownRecordError",
    "UnknownStudyError",
    "open_database",
]
