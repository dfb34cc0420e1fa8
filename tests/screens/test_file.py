from __future__ import annotations

from pathlib import Path

import pytest

from app.store import StoreError
from app.study.sample_studies import SAMPLE_FOLDER
from app.widgets.deliveries import deliver
from tests.support.screen_windows import Window
from tests.support.small_studies import CHANCE, orchard, orchard_csv, sample

BROKEN = Path(__file__).resolve().parents[1] / "broken_files"
SEMICOLONS = "Q1;Q2\n1,5;a\n2,5;b\n3,5;a\n4,5;b\n"


def test_a_new_study_begins_with_a_drop(store):
    window = Window("file")
    assert window.title == "New study"
    window.drop(orchard_csv(), "growers 2026.csv")
    (summary,) = store.studies()
    assert (summary.study.name, summary.rows) == ("Growers 2026", 120)
    assert window.address == {"study": summary.study.id}
    window.go("file", **window.address)
    assert window.title == "Fieldwork file"
    assert "120 answers in 8 columns, from growers 2026.csv" in window.text
    assert "First figure: " in window.text
    assert "Provisional: counted as a simple draw from an endless universe" in window.text
    assert window.problems == []


@pytest.mark.parametrize("name", sorted(p.name for p in BROKEN.iterdir()))
def test_a_file_that_cannot_be_read_is_refused_in_one_sentence(store, name):
    window = Window("file").drop((BROKEN / name).read_bytes(), name)
    (problem,) = window.problems
    assert problem.startswith("Please look: ") and problem.endswith(".")
    assert "Traceback" not in window.text
    assert store.studies() == ()


def test_a_refused_delivery_leaves_the_study_as_it_was(store):
    study = orchard(store, CHANCE)
    before = (store.current_file(study), store.questions(study), store.plan(study))
    window = Window("file", study=study).drop(b"", "empty.csv")
    assert len(window.problems) == 1
    assert (store.current_file(study), store.questions(study), store.plan(study)) == before
    assert "120 answers in 8 columns" in window.text


def test_a_full_disk_leaves_no_empty_study_behind(store, monkeypatch):
    def refuse(*_, **__):
        raise StoreError("The disk is full: free some space, then try again.")

    monkeypatch.setattr(type(store), "add_file", refuse)
    window = Window("file").drop(orchard_csv(), "growers.csv")
    assert window.problems == ["Please look: The disk is full: free some space, then try again."]
    assert store.studies() == ()


def test_a_study_without_a_file_takes_one(store):
    study = store.create_study("Empty").id
    window = Window("file", study=study).drop(orchard_csv(), "growers.csv")
    assert [s.study.id for s in store.studies()] == [study]
    assert "120 answers in 8 columns" in window.go("file", study=study).text


def test_a_second_delivery_keeps_what_was_settled(store):
    study = sample(store)
    settled = {q.key: q.missing for q in store.questions(study)}
    plan = store.plan(study)
    autumn = (SAMPLE_FOLDER / "garden_centres_autumn.csv").read_bytes()
    window = Window("file", study=study).drop(autumn, "garden_centres_autumn.csv")
    assert "Q6 is missing from the new file" in window.messages[0]
    assert "STAFF asks the same as Q6" in window.messages[0]
    assert store.plan(study) == plan
    now = {q.key: q.missing for q in store.questions(study)}
    assert all(now[key] == settled[key] for key in ("Q1", "Q3", "Q5"))
    window.go("file", study=study)
    assert "from garden_centres_autumn.csv" in window.text
    assert "All deliveries (2)" in window.text


def test_an_earlier_delivery_is_used_again(store):
    study = sample(store)
    spring = store.current_file(study)
    autumn = (SAMPLE_FOLDER / "garden_centres_autumn.csv").read_bytes()
    deliver(store, study, autumn, "garden_centres_autumn.csv")
    assert "Q6" not in {q.key for q in store.questions(study)}
    window = Window("file", study=study).press(f"use_{spring.id}")
    assert store.current_file(study).id == spring.id
    assert window.messages[0].startswith("Figures are made from garden_centres_spring.csv again.")
    assert "Q6" in {q.key for q in store.questions(study)}
    assert "395 answers in" in window.text
    first = next(q for q in store.questions(study) if q.key == "Q1")
    assert [m.code for m in first.missing] == ["98", "99"] and not first.proposals


def test_an_earlier_delivery_whose_bytes_are_gone_stays_unused(store):
    study = orchard(store)
    first = store.current_file(study)
    deliver(store, study, orchard_csv(90), "second.csv")
    store.file_path(first.fingerprint).unlink()
    window = Window("file", study=study).press(f"use_{first.id}")
    assert len(window.messages) == 1
    assert store.current_file(study).file_name == "second.csv"
    assert "90 answers" in window.text


@pytest.mark.parametrize("screen", ["questions", "figure", "readouts", "plan"])
def test_lost_bytes_are_said_everywhere(store, screen):
    study = orchard(store, CHANCE)
    store.file_path(store.current_file(study).fingerprint).unlink()
    window = Window(screen, study=study)
    assert len(window.problems) == 1
    assert "upload" in window.problems[0]


def test_lost_bytes_are_mended_by_the_same_file_again(store):
    study = orchard(store, CHANCE)
    store.file_path(store.current_file(study).fingerprint).unlink()
    window = Window("file", study=study)
    assert len(window.problems) == 1
    window.drop(orchard_csv(), "growers.csv").go("file", study=study)
    assert window.problems == []
    assert "120 answers" in window.text


def other_reading(window, store, study, **changes):
    file = store.current_file(study)
    for part, value in changes.items():
        key = f"{part}_{file.id}_{file.version}"
        if part == "heads":
            window.test.number_input(key=key).set_value(value)
        else:
            next(w for w in window.test.selectbox if w.key == key).set_value(value)
    return window.submit("Read it this way")


def test_a_file_is_read_another_way_and_back(store):
    study = deliver(store, "", SEMICOLONS.encode(), "prices.csv").study_id
    assert [q.kind.value for q in store.questions(study)] == ["number", "one answer"]
    window = Window("file", study=study)
    other_reading(window, store, study, delimiter=",")
    assert window.messages == [
        "The file was read again; questions and kept figures stay by column name."
    ]
    assert store.current_file(study).columns == 2
    assert "Q1" not in {q.key for q in store.questions(study)}
    other_reading(window, store, study, delimiter=";", mark=",", heads=1)
    assert [q.kind.value for q in store.questions(study)] == ["number", "one answer"]
    assert "4 answers in 2 columns" in window.text
    other_reading(window, store, study, heads=0)
    assert "5 answers in 2 columns" in window.text
    other_reading(window, store, study, heads=1)
    assert "4 answers in 2 columns" in window.text


def test_a_way_of_reading_that_fails_changes_nothing(store):
    study = deliver(store, "", "Q1,Q2\n\u00e9,1\n\u00e8,2\n".encode("cp1252"), "a.csv").study_id
    before = store.current_file(study)
    window = Window("file", study=study)
    other_reading(window, store, study, encoding="utf-8")
    assert len(window.problems) == 1
    assert store.current_file(study) == before
    key = f"encoding_{before.id}_{before.version}"
    assert window.chosen(key) == "utf-8"
    other_reading(window, store, study, encoding="cp1252")
    assert window.problems == []


def test_a_file_read_in_two_windows(store):
    study = deliver(store, "", SEMICOLONS.encode(), "prices.csv").study_id
    first, second = Window("file", study=study), Window("file", study=study)
    file = store.current_file(study)
    other_reading(first, store, study, heads=0)
    key = f"delimiter_{file.id}_{file.version}"
    next(w for w in second.test.selectbox if w.key == key).set_value(",")
    second.submit("Read it this way")
    assert "changed in another window" in second.problems[0]
    assert store.current_file(study).rows == 5
    now = store.current_file(study)
    assert second.chosen(f"delimiter_{now.id}_{now.version}") == ","


def test_the_form_follows_a_new_delivery(store):
    study = deliver(store, "", SEMICOLONS.encode(), "prices.csv").study_id
    window = Window("file", study=study)
    window.drop(orchard_csv(), "growers.csv").go("file", study=study)
    file = store.current_file(study)
    assert window.chosen(f"delimiter_{file.id}_{file.version}") == ","


def test_remarks_and_names_are_shown_as_typed(store):
    data = b"<b>Q1</b>,[Q2](http://x.example)\n1,2\n3,4\n"
    study = deliver(store, "", data, "<img src=x>.csv").study_id
    window = Window("file", study=study)
    assert "<img" not in window.html
    assert "from <img src=x>.csv" in window.text or "&lt;img" in window.html


def test_one_column(store):
    study = deliver(store, "", b"Q1\n1\n2\n3\n2\n1\n", "one.csv").study_id
    for screen in ("file", "questions", "plan", "figure", "readouts"):
        assert Window(screen, study=study).problems == []
