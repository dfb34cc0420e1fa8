"""A fieldwork file arrives: read, understood, stored, and what it means for the study."""

from __future__ import annotations

from contextlib import suppress
from dataclasses import dataclass
from pathlib import PurePath

from app.intake import FieldworkFile, Reading, read_fieldwork_file
from app.store import Database, StoreError
from app.study.question_guessing import guess_questions
from app.study.questions import Question
from app.study.sample_studies import SampleStudy
from app.study.study import StudyFile
from app.study.study_changes import carry_over


@dataclass(frozen=True, slots=True, eq=False)
class Delivery:
    """What came of a file.

    Parameters
    ----------
    study_id : str
        The study it belongs to now.
    changes : tuple of str
        What a second file changed, one sentence each; empty for a first one.
    file : StudyFile
        As kept.
    read : FieldworkFile
        As read.
    """

    study_id: str
    changes: tuple[str, ...]
    file: StudyFile
    read: FieldworkFile


def deliver(database: Database, study_id: str, data: bytes, file_name: str) -> Delivery:
    """Read a file and store it with its questions; nothing is stored if it cannot be read.

    Parameters
    ----------
    database : Database
        The store.
    study_id : str
        The study it belongs to; "" makes a new one named after the file.
    data : bytes
        As uploaded.
    file_name : str
        As uploaded.

    Raises
    ------
    FieldworkFileError
        When the file cannot be read.
    """
    name = PurePath(file_name.replace("\\", "/")).name or "file"
    read = read_fieldwork_file(data, file_name=name, reading=_as_before(database, study_id))
    study = study_id or database.create_study(_name_from(name)).id
    try:
        questions, changes = _taken_over(database, study, read)
        file = database.add_file(
            study,
            data,
            file_name=name,
            reading=read.reading.to_json(),
            rows=len(read.answers),
            columns=read.answers.shape[1],
            questions=questions,
        )
    except StoreError:
        if not study_id:  # a study made for this file goes with it
            with suppress(StoreError):
                database.delete_study(study)
        raise
    return Delivery(study, changes, file, read)


def _as_before(database: Database, study_id: str) -> Reading | None:
    """Return what was decided about columns of the file before, for the next delivery."""
    file = database.current_file(study_id) if study_id else None
    return Reading.from_json(file.reading).for_another_file() if file is not None else None


def use_again(database: Database, file: StudyFile) -> Delivery:
    """Make figures from a file delivered before, read as it was then.

    Raises
    ------
    StoreError
        When its bytes are damaged, or the study is gone; the present file stays.
    """
    data = database.file_bytes(file.fingerprint)
    reading = Reading.from_json(file.reading)
    read = read_fieldwork_file(data, file_name=file.file_name, reading=reading)
    questions, changes = _taken_over(database, file.study_id, read)
    current = database.make_current(file.id, questions=questions)
    return Delivery(file.study_id, changes, current, read)


def _taken_over(
    database: Database, study_id: str, read: FieldworkFile
) -> tuple[tuple[Question, ...], tuple[str, ...]]:
    """Return what a file asks, with all that was settled before, and what changed."""
    guessed = guess_questions(read.answers, read.question_texts)
    before = database.questions(study_id)
    if not before:
        return guessed, ()
    carried = carry_over(before, guessed)
    return carried.questions, tuple(carried.sentences)


def read_again(database: Database, file: StudyFile, reading: Reading) -> FieldworkFile:
    """Read a stored file another way and keep what it now says.

    Raises
    ------
    FieldworkFileError
        When it cannot be read that way; the old reading stays.
    """
    data = database.file_bytes(file.fingerprint)
    read = read_fieldwork_file(data, file_name=file.file_name, reading=reading)
    questions, _changes = _taken_over(database, file.study_id, read)
    database.save_reading(
        file,
        reading=read.reading.to_json(),
        rows=len(read.answers),
        columns=read.answers.shape[1],
        questions=questions,
    )
    return read


def open_sample(database: Database, sample: SampleStudy) -> str:
    """Make a study from a sample, plan included, and return its id."""
    path = sample.files[0]
    study = database.create_study(sample.name)
    deliver(database, study.id, path.read_bytes(), path.name)
    database.save_plan(study.id, sample.plan, database.plan(study.id).version)
    return study.id


def _name_from(file_name: str) -> str:
    stem = PurePath(file_name).stem.replace("_", " ").replace("-", " ").strip()
    return (stem[:1].upper() + stem[1:]) or "New study"
