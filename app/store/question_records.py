"""Questions of a study, each with its own version, so that two people can settle different ones."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from datetime import datetime
from typing import Any

from sqlalchemy import Connection, Row, delete, func, insert, select, update

from app.store.errors import UnknownQuestionError
from app.store.records import Records, check_study, check_version, touch_study
from app.store.schema import questions
from app.study.questions import Question
from app.study.records import from_json, to_json


@dataclass(frozen=True, slots=True)
class StoredQuestion:
    """A question and the version a change of it has to be based on."""

    question: Question
    version: int


class QuestionRecords(Records):
    """Questions in the database."""

    def questions(self, study_id: str) -> tuple[Question, ...]:
        """Return the study's questions in the order of the questionnaire.

        Raises
        ------
        UnknownStudyError
            When the study is not there.
        """
        return tuple(stored.question for stored in self.stored_questions(study_id))

    def question_stamp(self, study_id: str) -> str:
        """Return a text that is another one after every change of the study's questions.

        A saved question raises the sum of the versions; replaced questions all get a version
        higher than any before. So no stamp comes back, not even after a moment without questions.

        Raises
        ------
        UnknownStudyError
            When the study is not there.
        """
        versions = questions.c.version
        latest = func.max(questions.c.changed_at)
        query = select(func.max(versions), func.sum(versions), func.count(), latest).where(
            questions.c.study_id == study_id
        )
        with self._connections.reading() as connection:
            check_study(connection, study_id)
            return " ".join(str(number) for number in connection.execute(query).one())

    def stored_questions(self, study_id: str) -> tuple[StoredQuestion, ...]:
        """Return the study's questions in order, each with its version.

        Raises
        ------
        UnknownStudyError
            When the study is not there.
        """
        query = (
            select(questions).where(questions.c.study_id == study_id).order_by(questions.c.position)
        )
        with self._connections.reading() as connection:
            check_study(connection, study_id)
            rows = connection.execute(query).all()
        return tuple(_question_from(row) for row in rows)

    def stored_question(self, study_id: str, key: str) -> StoredQuestion:
        """Return one question with its version.

        Raises
        ------
        UnknownQuestionError, UnknownStudyError
            When the question or the study is not there.
        """
        with self._connections.reading() as connection:
            check_study(connection, study_id)
            return _question_from(_find(connection, study_id, key))

    def replace_questions(self, study_id: str, new: Iterable[Question]) -> None:
        """Keep these questions, in this order, in place of all the study had.

        Changes based on the earlier ones are refused afterwards.

        Parameters
        ----------
        study_id : str
            The study.
        new : iterable of Question
            With different keys.

        Raises
        ------
        UnknownStudyError
            When the study is not there.
        """
        now = self._connections.now()
        kept = tuple(new)
        with self._connections.writing() as connection:
            touch_study(connection, study_id, now)
            put_questions(connection, study_id, kept, now)

    def save_question(self, study_id: str, question: Question, *, version: int) -> StoredQuestion:
        """Keep one changed question.

        Parameters
        ----------
        study_id : str
            The study.
        question : Question
            As it should be; its key says which one it is.
        version : int
            The version the change is based on.

        Returns
        -------
        StoredQuestion
            With its new version.

        Raises
        ------
        UnknownStudyError, UnknownQuestionError, StaleVersionError
            The study or the question is gone; changed in another window.
        """
        return self.save_questions(study_id, (StoredQuestion(question, version),))[0]

    def save_questions(
        self, study_id: str, changed: Iterable[StoredQuestion]
    ) -> tuple[StoredQuestion, ...]:
        """Keep several changed questions, all or none.

        Parameters
        ----------
        study_id : str
            The study.
        changed : iterable of StoredQuestion
            As they should be, with the versions the changes are based on.

        Raises
        ------
        UnknownStudyError, UnknownQuestionError, StaleVersionError
            The study or a question is gone; one was changed in another window.
        """
        now = self._connections.now()
        with self._connections.writing() as connection:
            touch_study(connection, study_id, now)
            return tuple(_save(connection, study_id, one, now) for one in changed)


def put_questions(
    connection: Connection, study_id: str, new: Iterable[Question], now: datetime
) -> None:
    """Put questions in place of all the study had, within a transaction somebody opened."""
    of_study = questions.c.study_id == study_id
    last = connection.scalar(select(func.max(questions.c.version)).where(of_study)) or 0
    connection.execute(delete(questions).where(of_study))
    rows = [
        {
            "study_id": study_id,
            "key": question.key,
            "position": position,
            "question": to_json(question),
            "version": last + 1,
            "changed_at": now,
        }
        for position, question in enumerate(new)
    ]
    if rows:
        connection.execute(insert(questions), rows)


def _save(
    connection: Connection, study_id: str, changed: StoredQuestion, now: datetime
) -> StoredQuestion:
    question = changed.question
    check_version(_find(connection, study_id, question.key), changed.version, now)
    this = (questions.c.study_id == study_id) & (questions.c.key == question.key)
    saved = StoredQuestion(question, changed.version + 1)
    connection.execute(
        update(questions)
        .where(this)
        .values(question=to_json(question), version=saved.version, changed_at=now)
    )
    return saved


def _find(connection: Connection, study_id: str, key: str) -> Row[Any]:
    this = (questions.c.study_id == study_id) & (questions.c.key == key)
    row = connection.execute(select(questions).where(this)).one_or_none()
    if row is None:
        raise UnknownQuestionError(key)
    return row


def _question_from(row: Row[Any]) -> StoredQuestion:
    return StoredQuestion(from_json(Question, row.question), row.version)
