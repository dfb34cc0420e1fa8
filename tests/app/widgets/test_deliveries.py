"""A file arrives: what is stored, what is carried over, what is refused."""

from __future__ import annotations

import pytest

from app.intake import FieldworkFileError
from app.store import open_database
from app.study.questions import QuestionKind
from app.study.sample_studies import garden_centres
from app.widgets.deliveries import deliver, open_sample

FIRST = b"id,Q1,Q4\n" + b"".join(b"a%03d,%d,Yes\n" % (i, i % 11) for i in range(60))
SECOND = b"id,Q1,Q5\n" + b"".join(b"b%03d,%d,%d\n" % (i, i % 11, 100 + 7 * i) for i in range(60))


@pytest.fixture
def database(tmp_path):
    store = open_database(tmp_path / "data")
    yield store
    store.close()


@pytest.mark.parametrize(
    ("file_name", "name"),
    [
        ("dealer-survey_2026.csv", "Dealer survey 2026"),
        ("C:\\Users\\me\\Dealers.csv", "Dealers"),
        ("../../etc/dealers.csv", "Dealers"),
    ],
)
def test_a_first_file_makes_a_study_named_after_it(database, file_name, name):
    delivery = deliver(database, "", FIRST, file_name)
    study = database.study(delivery.study_id)
    assert study.name == name
    assert delivery.changes == ()
    assert [q.key for q in database.questions(study.id)] == ["id", "Q1", "Q4"]


def test_a_second_file_says_what_changed_and_keeps_what_was_settled(database):
    study = deliver(database, "", FIRST, "first.csv").study_id
    delivery = deliver(database, study, SECOND, "second.csv")
    assert delivery.study_id == study
    assert any("Q5" in sentence for sentence in delivery.changes)
    assert {q.key for q in database.questions(study)} >= {"id", "Q1", "Q5"}


def test_nothing_is_stored_of_a_file_that_cannot_be_read(database):
    with pytest.raises(FieldworkFileError):
        deliver(database, "", b"", "empty.csv")
    assert database.studies() == ()


def test_the_sample_opens_with_its_plan(database):
    sample = garden_centres()
    study = open_sample(database, sample)
    assert database.plan(study).plan == sample.plan
    kinds = {q.key: q.kind for q in database.questions(study)}
    assert kinds["Q1"] is QuestionKind.SCALE
    assert kinds["Q7"] is QuestionKind.SEVERAL
