"""The only cache: the open store, files as read, studies ready to compute with.

Keys are texts that name their content completely; arrays and tables are never hashed.
"""

from __future__ import annotations

from dataclasses import replace
from datetime import UTC, datetime
from pathlib import Path

import streamlit as st

from app.charts.fan_figure import FanFigure, fan_figure
from app.charts.palette import DARK, LIGHT
from app.intake import FieldworkFile, Reading, read_fieldwork_file
from app.sharing.readout_page import render_page
from app.store import Database, StoredPlan, StoredQuestion, open_database
from app.study.figure_requests import FigureRequest
from app.study.figure_work import FigureWork, work_out
from app.study.frozen import FrozenReadout
from app.study.pictures import Fan
from app.study.questions import Question
from app.study.records import from_json, to_json
from app.study.sampling_plan import SamplingPlan
from app.study.study import Study, StudyFile
from app.study.study_data import StudyData, prepare_study

_data_folder = Path()
_EPOCH = datetime(2000, 1, 1, tzinfo=UTC)
_NOBODY = Study("", "", _EPOCH, _EPOCH, 0)  # the prepared rows do not depend on the study


def use_data_folder(folder: Path) -> None:
    """Name the folder the store is kept in; the entry script does so on every run."""
    global _data_folder
    _data_folder = folder


def database() -> Database:
    """Return the open store."""
    return _open(str(_data_folder))


@st.cache_resource(show_spinner=False)
def _open(folder: str) -> Database:
    return open_database(Path(folder))


def stored_questions(study_id: str) -> tuple[StoredQuestion, ...]:
    """Return the questions as stored now; they are decoded only after a change."""
    stamp = database().question_stamp(study_id)
    return _decoded(str(_data_folder), study_id, stamp)


@st.cache_resource(max_entries=16, show_spinner=False)
def _decoded(folder: str, study_id: str, stamp: str) -> tuple[StoredQuestion, ...]:  # noqa: ARG001
    return database().stored_questions(study_id)


def read_file(file: StudyFile) -> FieldworkFile:
    """Return a stored file as read; the table is shared and must not be changed."""
    return _read(file.fingerprint, file.file_name, file.reading)


def remember(file: StudyFile, read: FieldworkFile) -> None:
    """Keep a file just read and stored, so that it is not read again for its first screen."""
    _read(file.fingerprint, file.file_name, file.reading, read)


@st.cache_resource(max_entries=6, show_spinner="Reading the file")
def _read(
    fingerprint: str, file_name: str, reading: str, _fresh: FieldworkFile | None = None
) -> FieldworkFile:
    if _fresh is not None:
        return _fresh
    data = database().file_bytes(fingerprint)
    return read_fieldwork_file(data, file_name=file_name, reading=Reading.from_json(reading))


def study_data(
    study: Study, file: StudyFile, asked: tuple[StoredQuestion, ...], stored: StoredPlan
) -> StudyData:
    """Return a study ready to compute with, from its questions and its plan as stored now."""
    versions = " ".join(f"{len(q.question.key)}:{q.question.key}:{q.version}" for q in asked)
    name = f"{study.id} {stored.version} {versions}"
    questions = tuple(q.question for q in asked)
    mark = study.decimal_mark
    data = _prepare(
        name, file.fingerprint, file.file_name, file.reading, mark, questions, stored.plan
    )
    return replace(data, study=study)


@st.cache_resource(max_entries=8, show_spinner="Preparing the study")
def _prepare(
    name: str,
    fingerprint: str,
    file_name: str,
    reading: str,
    mark: str,
    _questions: tuple[Question, ...],
    _plan: SamplingPlan,
) -> StudyData:
    read = _read(fingerprint, file_name, reading)
    data = prepare_study(replace(_NOBODY, decimal_mark=mark), _questions, _plan, read.answers)
    return replace(data, name=f"{name} {fingerprint} {reading}")


def figure_work(data: StudyData, request: FigureRequest, split: str) -> FigureWork:
    """Return a figure and the rows beside it; the same question again costs nothing."""
    house = to_json((data.study.decimal_mark, data.study.limit))
    return _worked_out(data.name, house, to_json(request), split, data, request)


@st.cache_resource(max_entries=24, show_spinner=False)
def _worked_out(
    name: str,  # noqa: ARG001 - names the study's rows, questions and plan
    house: str,  # noqa: ARG001 - language of numbers and width limit
    asked: str,  # noqa: ARG001 - the request in words
    split: str,
    _data: StudyData,
    _request: FigureRequest,
) -> FigureWork:
    return work_out(_data, _request, split)


def fan_picture(fan: Fan, *, dark: bool, show_endless: bool) -> FanFigure:
    """Return the drawn fan; it is shared and must not be changed."""
    return _drawn(to_json(fan), dark, show_endless, fan)


@st.cache_resource(max_entries=24, show_spinner=False)
def _drawn(name: str, dark: bool, show_endless: bool, _fan: Fan) -> FanFigure:  # noqa: ARG001
    return fan_figure(_fan, DARK if dark else LIGHT, show_endless=show_endless)


@st.cache_data(max_entries=64, show_spinner=False)
def page_as_file(frozen: str) -> str:
    """Return a published readout as one file that needs nothing else, from its frozen values."""
    return render_page(from_json(FrozenReadout, frozen), style_href=None)
