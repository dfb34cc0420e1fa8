"""Guesses on the sample study and on small columns; the sample is counted with the csv module."""

from __future__ import annotations

import csv

import numpy as np
import pandas as pd
import pytest

from app.study.question_guessing import as_kind, guess_questions
from app.study.question_values import read_values
from app.study.questions import MissingReason, Question, QuestionKind
from app.study.sample_studies import garden_centres


def read_wave(position: int, encoding: str) -> tuple[pd.DataFrame, dict[str, str]]:
    """Read a wave as the program does: columns of numbers as numbers, all others as text."""
    with garden_centres().files[position].open(encoding=encoding, newline="") as file:
        codes, texts, *rows = [row for row in csv.reader(file, delimiter=";") if row]
    columns = {}
    for i, code in enumerate(codes[:-1]):
        cells = [row[i] or None for row in rows]
        numbers = pd.to_numeric(
            pd.Series([c and c.replace(",", ".") for c in cells]), errors="coerce"
        )
        as_text = code == "ID" or int(numbers.notna().sum()) < sum(c is not None for c in cells)
        columns[code] = pd.Series(cells) if as_text else numbers
    return pd.DataFrame(columns), dict(zip(codes[:-1], texts[:-1], strict=True))


@pytest.fixture(scope="module")
def wave() -> tuple[pd.DataFrame, dict[str, str]]:
    return read_wave(0, "utf-8-sig")


@pytest.fixture(scope="module")
def questions(wave) -> dict[str, Question]:
    return {question.key: question for question in guess_questions(*wave)}


def guess(values, text="", name="Q1"):
    (question,) = guess_questions(pd.DataFrame({name: values}), {name: text})
    return question


def test_kinds_of_the_sample(questions):
    kinds = {key: question.kind.value for key, question in questions.items()}
    assert kinds == {
        "ID": "identifier",
        "REGION": "one answer",
        "DATE": "open text",
        "MINUTES": "number",
        "MODE": "one answer",
        "STATUS": "one answer",
        "SIZE": "one answer",
        "Q1": "scale",
        "Q2_1": "scale",
        "Q2_2": "scale",
        "Q2_3": "scale",
        "Q2_4": "scale",
        "Q3": "one answer",
        "Q4": "one answer",
        "Q5": "number",
        "Q6": "number",
        "Q7": "several answers",
        "Q8": "one answer",
        "Q9": "one answer",
        "Q10": "scale",
        "Q11": "number",
        "Q12": "number",
        "Q13": "scale",
        "Q14": "open text",
    }
    assert [key for key, question in questions.items() if question.set_aside] == ["STATUS"]


def test_only_doubtful_questions_of_the_sample_need_a_person(questions):
    doubtful = {key: [p.code for p in q.proposals] for key, q in questions.items() if q.needs_you}
    assert doubtful == {
        "Q1": ["98", "99"],
        "Q2_1": ["99"],
        "Q2_2": ["99"],
        "Q2_3": ["99"],
        "Q2_4": ["99"],
        "Q3": ["Don't know"],
        "Q4": ["Don't know"],
        "Q5": ["99999"],
        "Q10": ["9"],
        "Q13": ["-1", "9"],
    }


def test_the_brands_are_one_question(questions):
    brands = questions["Q7"]
    assert brands.columns == tuple(f"Q7_{i}" for i in range(1, 9))
    assert brands.text == "Which brands do you stock?"
    assert [a.label for a in brands.answers][:2] == ["Lindenroot", "Marlow Peat"]
    assert brands.evidence == (
        "several answers, because 8 neighbouring columns start Q7_ and hold only 0 and 1"
    )


def test_every_question_says_why(questions):
    assert all(question.evidence for question in questions.values())
    assert all(p.evidence and p.consequence for q in questions.values() for p in q.proposals)


def test_settled_averages_and_counts_are_those_of_the_csv_module(questions, wave):
    with garden_centres().files[0].open(encoding="utf-8-sig", newline="") as file:
        rows = list(csv.DictReader(file, delimiter=";"))[1:]
    told = [float(row["Q5"].replace(",", ".")) for row in rows if row["Q5"] != "99999"]
    values = read_values(questions["Q5"].settled(accept=True), wave[0])
    assert values.numbers[values.answered].sum() == pytest.approx(sum(told), rel=1e-12)
    assert int(values.reasons[MissingReason.REFUSED].sum()) == len(rows) - len(told)
    brands = read_values(questions["Q7"], wave[0])
    for i in range(8):
        assert brands.chosen[:, i].sum() == sum(row[f"Q7_{i + 1}"] == "1" for row in rows)
    useful = read_values(questions["Q13"].settled(accept=True), wave[0])
    assert useful.asked.sum() == sum(row["Q13"] != "-1" for row in rows)


def test_a_grid_shares_its_scale():
    frame = pd.DataFrame(
        {
            "Q2_1": [*range(11)] * 3,
            "Q2_2": [1, 2, 3, 4, 5, 6, 7, 2, 3, 4, 9] * 3,
            "Q2_3": [4, 5, 6, 7, 8, 4, 5, 6, 7, 8, 99] * 3,
        }
    )
    for question in guess_questions(frame, {}):
        assert question.kind is QuestionKind.SCALE
        codes = [a.code for a in question.settled(accept=True).answers]
        assert codes == [str(i) for i in range(11)]
    second = guess_questions(frame, {})[1]
    assert second.proposals == ()
    assert second.evidence.endswith("read as 0 to 10 like its neighbours")


def test_few_codes_are_one_answer_with_labels_from_the_text():
    question = guess([1, 2, 2, 3, 1, 2], "Region (1 = North, 2 = South, 3 = West)")
    assert question.kind is QuestionKind.CHOICE
    assert [(a.code, a.label) for a in question.answers] == [
        ("1", "North"),
        ("2", "South"),
        ("3", "West"),
    ]


def test_codes_with_leading_zeros_stay_codes():
    question = guess(["01", "02", "10", "02"] * 10)
    assert question.kind is QuestionKind.CHOICE
    assert [a.code for a in question.answers] == ["01", "02", "10"]


def test_words_among_numbers_make_a_number_with_proposals():
    values = [str(1000 + 37 * i) for i in range(60)] + ["refused"] * 3
    question = guess(values)
    assert question.kind is QuestionKind.NUMBER
    assert [p.reason for p in question.proposals] == [MissingReason.REFUSED]
    settled = read_values(question.settled(accept=True), pd.DataFrame({"Q1": values}))
    assert settled.answered.sum() == 60


def test_a_scale_with_words_at_its_ends():
    values = ["0 - bad", "1", "2", "3", "4", "5 - good", "Don't know"] * 5
    question = guess(values).settled(accept=True)
    assert question.kind is QuestionKind.SCALE
    assert question.answers[0].code == "0 - bad"
    read = read_values(question, pd.DataFrame({"Q1": values}))
    assert read.numbers[:6].tolist() == [0, 1, 2, 3, 4, 5]
    assert read.reasons[MissingReason.DONT_KNOW].sum() == 5


def test_lists_in_one_cell_are_named():
    cells = ["Elm; Oak", "Oak; Ash", "Elm", "Elm; Ash", "Ash; Oak", "Oak; Elm; Ash"] * 6
    texts = [f"{cell}{'; Fir' * (i % 7)}" for i, cell in enumerate(cells)]
    assert "several answers" in guess(texts).evidence


def test_comments_are_open_text():
    question = guess([f"comment number {i}; and more" for i in range(50)])
    assert question.kind is QuestionKind.TEXT
    assert question.evidence == "open text, because it holds 50 different texts in 50 cells"


def test_an_empty_file_has_questions_set_aside():
    questions = guess_questions(pd.DataFrame({"A": [], "B": pd.Series([], dtype="str")}), {})
    assert [q.set_aside for q in questions] == [True, True]


def test_every_column_belongs_to_exactly_one_question():
    rng = np.random.default_rng(11)
    frame = pd.DataFrame(
        {f"Q{i}_{j}": rng.integers(0, top, 30) for i, top in enumerate((2, 11, 2)) for j in "123"}
    )
    columns = [c for q in guess_questions(frame, {}) for c in q.columns]
    assert columns == list(frame)


def test_a_person_can_say_how_it_was_asked():
    frame = pd.DataFrame({"Q1": [1, 2, 3, 4, 5, 2, 99]})
    scale = guess_questions(frame, {})[0]
    choice = as_kind(scale, QuestionKind.CHOICE, frame)
    assert [a.code for a in choice.answers] == ["1", "2", "3", "4", "5", "99"]
    assert choice.needs_you
    number = as_kind(scale.settled(accept=True), QuestionKind.NUMBER, frame)
    assert number.answers == ()
    assert read_values(number, frame).answered.sum() == 6
    assert as_kind(number, QuestionKind.SCALE, frame).evidence == "scale, as set by you"


def test_columns_of_several_answers_cannot_become_one(questions, wave):
    with pytest.raises(ValueError, match="set it aside"):
        as_kind(questions["Q7"], QuestionKind.NUMBER, wave[0])
