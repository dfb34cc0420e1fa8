"""Studies: the list, changing, copying, deleting."""

from __future__ import annotations

from dataclasses import replace
from datetime import UTC, timedelta

import pytest

from app.store import DeletedStudy, StaleVersionError, StoreError, UnknownStudyError
from app.study.figure_requests import FigureRequest, Statistic
from app.study.questions import Question, QuestionKind
from app.study.sampling_plan import SamplingPlan
from app.study.study import HouseLimit, LinkStatus

AVERAGE = FigureRequest("q4", Statistic.AVERAGE)
QUESTION = Question("q4", ("q4",), QuestionKind.SCALE, "How satisfied are you?")


def add_file(database, study, data: bytes = b"q4\n7\n", name: str = "a.csv", rows: int = 1):
    return database.add_file(study.id, data, file_name=name, reading="{}", rows=rows, columns=1)


def publish(database, study, token_hash: str, expires_at=None):
    return database.publish(
        study.id,
        lambda number: (f"{number}", f"<p>{number}</p>"),
        title="Spring",
        methods_version=1,
        token_hash=token_hash,
        expires_at=expires_at,
    )


def fill(database, study) -> None:
    add_file(database, study)
    database.replace_questions(study.id, [QUESTION])
    database.save_plan(study.id, SamplingPlan(universe_size=1184), 0)
    database.keep_figure(study.id, AVERAGE)


def test_a_new_study_is_found_as_it_was_made(database, clock) -> None:
    study = database.create_study("  Garden   centres ")
    assert database.study(study.id) == study
    assert study.name == "Garden centres"
    assert study.version == 1
    assert study.created_at == study.changed_at == clock.present
    assert study.created_at.tzinfo is UTC
    assert study.limit == HouseLimit()


def test_ids_are_random(database) -> None:
    ids = {database.create_study("Same name").id for _ in range(20)}
    assert len(ids) == 20


@pytest.mark.parametrize("name", ["", "  ", "\n\t"])
def test_a_study_without_a_name_is_refused(database, study, name) -> None:
    with pytest.raises(StoreError, match="no name"):
        database.create_study(name)
    with pytest.raises(StoreError, match="no name"):
        database.save_study(replace(study, name=name))
    with pytest.raises(StoreError, match="no name"):
        database.duplicate_study(study.id, name)
    assert len(database.studies()) == 1


def test_every_way_to_an_unknown_study_is_refused(database) -> None:
    ways = [
        database.study,
        database.delete_study,
        database.files,
        database.current_file,
        database.questions,
        database.plan,
        database.kept_figures,
        database.readouts,
        lambda study_id: database.duplicate_study(study_id, "copy"),
        lambda study_id: database.replace_questions(study_id, []),
        lambda study_id: database.save_plan(study_id, SamplingPlan(), 0),
        lambda study_id: database.keep_figure(study_id, AVERAGE),
        lambda study_id: database.save_question(study_id, QUESTION, version=1),
    ]
    for way in ways:
        with pytest.raises(UnknownStudyError, match="no study"):
            way("nowhere")


def test_saving_changes_name_mark_and_limit(database, study, clock) -> None:
    wanted = replace(
        study, name="Ferries", decimal_mark=",", limit=HouseLimit(share_points=5, smallest_base=50)
    )
    saved = database.save_study(wanted)
    assert saved == replace(wanted, version=2, changed_at=clock.present)
    assert database.study(study.id) == saved


def test_an_older_version_is_refused_and_told_when(database, study, clock) -> None:
    newer = database.save_study(replace(study, name="Newer"))
    clock.go_on(seconds=125)
    database.keep_figure(study.id, AVERAGE)  # no change of the study itself
    with pytest.raises(StaleVersionError, match="two minutes ago") as caught:
        database.save_study(replace(study, name="Older"))
    assert caught.value.changed_at == newer.changed_at
    assert database.study(study.id).name == "Newer"


def test_another_decimal_mark_than_point_and_comma_cannot_be_kept(database, study) -> None:
    with pytest.raises(Exception, match="studies_decimal_mark"):
        database.save_study(replace(study, decimal_mark=";"))


def test_the_list_shows_what_a_study_holds(database, study, clock) -> None:
    assert [(s.files, s.rows, s.kept, s.live_links, s.file_name) for s in database.studies()] == [
        (0, 0, 0, 0, "")
    ]
    add_file(database, study, b"1", "first.csv", rows=10)
    add_file(database, study, b"2", "second.csv", rows=20)
    database.keep_figure(study.id, AVERAGE)
    for token_hash, days in (("a", 1), ("b", 9), ("c", None)):
        publish(database, study, token_hash, days and clock.present + timedelta(days=days))
    database.revoke_readout(database.readouts(study.id)[0].id)
    clock.go_on(days=2)
    (summary,) = database.studies()
    assert summary.study == database.study(study.id)
    assert (summary.files, summary.rows, summary.kept) == (2, 20, 1)
    assert summary.file_name == "second.csv"
    assert summary.live_links == 1  # "a" expired, "c" was withdrawn


def test_the_study_changed_last_comes_first_whatever_changed(database) -> None:
    studies = [database.create_study(name) for name in "abcdef"]
    fill(database, studies[3])
    kept = database.kept_figures(studies[3].id)[0]
    changes = [
        lambda s: database.save_study(replace(database.study(s.id), decimal_mark=",")),
        lambda s: add_file(database, s),
        lambda s: database.replace_questions(s.id, [QUESTION]),
        lambda s: database.save_plan(s.id, SamplingPlan(), database.plan(s.id).version),
        lambda s: database.keep_figure(s.id, AVERAGE),
        lambda s: publish(database, s, f"of {s.id}"),
    ]
    for study, change in zip(studies, changes, strict=True):
        if study is not studies[3]:
            change(study)
            assert database.studies()[0].study.id == study.id
    database.save_kept(replace(kept, headline="New"))
    assert database.studies()[0].study.id == studies[3].id


def test_a_copy_has_files_questions_plan_and_figures_but_no_readouts(database, study) -> None:
    database.save_study(replace(study, decimal_mark=","))
    fill(database, study)
    publish(database, study, "a")
    copy = database.duplicate_study(study.id, "Autumn")
    assert database.study(copy.id) == copy
    assert (copy.name, copy.decimal_mark, copy.version) == ("Autumn", ",", 1)
    assert database.questions(copy.id) == (QUESTION,)
    assert database.plan(copy.id).plan == database.plan(study.id).plan
    assert [kept.request for kept in database.kept_figures(copy.id)] == [AVERAGE]
    assert database.kept_figures(copy.id)[0].id != database.kept_figures(study.id)[0].id
    file, source = database.current_file(copy.id), database.current_file(study.id)
    assert file == replace(source, id=file.id, study_id=copy.id)
    assert file.id != source.id
    assert database.readouts(copy.id) == ()


def test_a_copy_goes_its_own_way(database, study) -> None:
    fill(database, study)
    copy = database.duplicate_study(study.id, "Autumn")
    database.replace_questions(copy.id, [])
    database.remove_kept(database.kept_figures(copy.id)[0].id)
    assert database.questions(study.id) == (QUESTION,)
    assert len(database.kept_figures(study.id)) == 1


def test_bytes_go_with_the_last_study_that_uses_them(database, study) -> None:
    shared = add_file(database, study, b"shared")
    alone = add_file(database, study, b"alone")
    copy = database.duplicate_study(study.id, "Copy")
    other = database.create_study("Other")
    add_file(database, other, b"shared")
    database.delete_study(study.id)
    assert database.file_bytes(shared.fingerprint) == b"shared"
    assert database.file_bytes(alone.fingerprint) == b"alone"
    database.delete_study(copy.id)
    assert not database.file_path(alone.fingerprint).exists()
    assert database.file_bytes(shared.fingerprint) == b"shared"
    database.delete_study(other.id)
    assert not database.file_path(shared.fingerprint).exists()


def test_deleting_withdraws_links_for_ever_and_counts_those_that_were_live(
    database, study, clock
) -> None:
    fill(database, study)
    publish(database, study, "live")
    publish(database, study, "expired", clock.present + timedelta(seconds=1))
    withdrawn = publish(database, study, "withdrawn")
    database.revoke_readout(withdrawn.id)
    other = database.create_study("Other")
    publish(database, other, "of another study")
    clock.go_on(seconds=2)
    assert database.delete_study(study.id) == DeletedStudy(links_withdrawn=1)
    for token_hash in ("live", "expired", "withdrawn"):
        assert database.find_by_token_hash(token_hash, clock()) == (LinkStatus.REVOKED, "")
    assert database.find_by_token_hash("of another study", clock())[0] is LinkStatus.LIVE
    assert database.find_by_token_hash("never made", clock()) == (LinkStatus.UNKNOWN, "")
    with pytest.raises(UnknownStudyError):
        database.delete_study(study.id)


def test_deleting_leaves_no_row_but_the_links(database, study) -> None:
    fill(database, study)
    publish(database, study, "a")
    database.delete_study(study.id)
    with database._connections.reading() as connection:
        rows = {
            table: connection.exec_driver_sql(f"SELECT count(*) FROM {table}").scalar()
            for table in (
                *("studies", "files", "questions", "sampling_plans"),
                *("kept_figures", "readouts", "links"),
            )
        }
    assert rows.pop("links") == 1
    assert set(rows.values()) == {0}
