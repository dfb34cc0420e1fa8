from __future__ import annotations

from datetime import UTC, datetime, timedelta

import pytest

from app.store import StoreError
from app.store.study_records import StudyRecords
from tests.support.screen_windows import Window
from tests.support.small_studies import CHANCE, orchard, sample


def studies(store):
    return {s.study.name: s for s in store.studies()}


def publish(store, study, **options):
    return store.publish(
        study,
        lambda _: ("{}", "<p>page</p>"),
        title="Spring",
        methods_version=1,
        token_hash="a" * 64,
        expires_at=datetime.now(UTC) + timedelta(days=7),
        **options,
    )


@pytest.mark.usefixtures("store")
def test_an_empty_list_says_what_to_do():
    window = Window()
    assert window.title == "Studies"
    assert "There is no study yet." in window.text
    assert {"new_study", "open_sample"} <= window.buttons()


def test_the_sample_opens_as_a_figure(store):
    window = Window().press("open_sample")
    (summary,) = store.studies()
    assert (summary.study.name, summary.rows) == ("Garden centres", 395)
    assert window.address == {"study": summary.study.id}
    assert 'data-figure="sentence"' in window.html
    assert "all 1,184 garden centres" in window.text
    assert window.problems == []


def test_a_study_shows_its_file_its_figures_and_its_links(store):
    study = orchard(store, CHANCE)
    publish(store, study)
    window = Window()
    assert "120 answers in growers.csv · 0 kept, 1 open link ·" in window.text
    assert window.link_to("Growers") == f"study={study}"
    assert store.create_study("Empty")
    assert "no fieldwork file yet · 0 kept, 0 open links" in window.run().text


def test_names_are_shown_as_typed(store):
    store.create_study("![x](https://foreign.example/p.png) <b>*bold*</b>")
    window = Window()
    (label,) = (p.proto.label for p in window.test.get("page_link"))
    assert "![" not in label and "https:" not in label.replace("\\", "")


def test_a_study_is_renamed(store):
    study = orchard(store)
    window = Window().press(f"rename_{study}").type(f"name_{study}", "  Autumn   growers ")
    assert store.study(study).name == "Autumn growers"
    window.press(f"done_{study}")
    assert f"name_{study}" not in {f.key for f in window.test.text_input}
    assert "Autumn growers" in window.text


def test_a_long_name_is_cut_where_its_field_ends(store):
    study = orchard(store)
    Window().press(f"rename_{study}").type(f"name_{study}", "n" * 10_000)
    assert store.study(study).name == "n" * 120


def test_an_empty_name_stays_in_its_field(store):
    study, typed = orchard(store), "   "
    sentence = "The study has no name: type one your colleagues will recognise."
    window = Window().press(f"rename_{study}").type(f"name_{study}", typed)
    assert window.problems == [f"Please look: {sentence}"]
    assert window.typed(f"name_{study}") == typed
    assert store.study(study).name == "Growers"
    window.press(f"done_{study}")
    assert window.problems == []
    window.press(f"rename_{study}")
    assert window.typed(f"name_{study}") == "Growers"


def test_done_pressed_at_once_does_not_hide_a_refused_name(store):
    study = orchard(store)
    window = Window().press(f"rename_{study}").enter(f"name_{study}", "")
    window.press(f"done_{study}")
    assert len(window.problems) == 1


def test_a_name_changed_in_another_window_is_not_overwritten(store):
    study = orchard(store)
    first, second = Window().press(f"rename_{study}"), Window().press(f"rename_{study}")
    first.type(f"name_{study}", "First")
    second.type(f"name_{study}", "Second")
    assert store.study(study).name == "First"
    assert "changed in another window a moment ago" in second.problems[0]
    assert second.typed(f"name_{study}") == "Second"
    second.press(f"again_name_{study}")
    assert store.study(study).name == "Second"
    assert second.problems == []


def test_a_copy_has_everything_but_the_links(store):
    study = sample(store)
    publish(store, study)
    window = Window().press(f"copy_{study}")
    assert window.messages == [
        "Garden centres (copy) is there, without the readouts and links of the original."
    ]
    copy = studies(store)["Garden centres (copy)"]
    assert (copy.rows, copy.live_links) == (395, 0)
    assert store.plan(copy.study.id).plan == store.plan(study).plan
    assert "data-figure" in Window("figure", study=copy.study.id).html


def test_deleting_asks_first_and_says_what_went(store):
    study = orchard(store, CHANCE)
    publish(store, study)
    window = Window().press(f"delete_{study}")
    assert "Delete it with its file, figures and links?" in window.text
    window.press(f"not_{study}")
    assert studies(store).keys() == {"Growers"}
    window.press(f"delete_{study}").press(f"really_{study}")
    assert window.messages == ["Growers is deleted. One link was withdrawn."]
    assert store.studies() == ()
    assert "There is no study yet." in window.text


def test_two_windows_delete_the_same_study(store):
    study = orchard(store)
    first, second = (Window().press(f"delete_{study}") for _ in range(2))
    first.press(f"really_{study}")
    second.press(f"really_{study}")
    assert len(second.messages) == 1
    assert second.messages[0].startswith("There is no study under this address")


@pytest.mark.parametrize("screen", ["file", "questions", "plan", "figure", "readouts"])
def test_a_study_deleted_in_another_window(store, screen):
    study = orchard(store, CHANCE)
    window = Window(screen, study=study)
    store.delete_study(study)
    window.run()
    assert window.problems == [
        "Please look: This study is not here any more: it was deleted, or the address is mistyped."
    ]
    assert window.links[-1] == "All studies"


@pytest.mark.parametrize("screen", ["file", "questions", "plan", "figure", "readouts"])
@pytest.mark.usefixtures("store")
@pytest.mark.parametrize("study", ["0", "x" * 5_000, "' OR 1=1 --", "../../etc"])
def test_an_address_with_a_study_that_never_was(screen, study):
    window = Window(screen, study=study)
    assert len(window.problems) == 1
    assert "not here any more" in window.problems[0]


@pytest.mark.parametrize("screen", ["questions", "plan", "figure", "readouts"])
@pytest.mark.usefixtures("store")
def test_a_screen_without_a_study(screen):
    window = Window(screen)
    assert window.problems == ["Please look: This screen needs a study: choose one."]


@pytest.mark.parametrize("screen", ["questions", "plan", "figure", "readouts"])
def test_a_study_without_a_file(store, screen):
    study = store.create_study("Empty").id
    window = Window(screen, study=study)
    assert "This study has no fieldwork file yet." in window.text
    assert window.link_to("Drop a fieldwork file") == f"study={study}"
    assert window.problems == []


@pytest.mark.parametrize("screen", ["studies", "file", "questions", "plan", "figure", "readouts"])
def test_a_store_that_cannot_be_read(store, screen, monkeypatch):
    study = orchard(store, CHANCE)

    def refuse(*_):
        raise StoreError("The folder cannot be read: check the disk, then try again.")

    for name in ("studies", "study"):
        monkeypatch.setattr(StudyRecords, name, refuse)
    window = Window(screen, study=study)
    assert window.problems == [
        "Please look: The folder cannot be read: check the disk, then try again."
    ]
    monkeypatch.undo()
