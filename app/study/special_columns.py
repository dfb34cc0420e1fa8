"""Columns that are no questions: empty, constant, identifiers, dates, weights."""

from __future__ import annotations

import re

import numpy as np

from app.study.column_profiles import ColumnProfile
from app.study.number_format import write_about, write_count, write_number
from app.study.questions import Answer, Proposal, Question, QuestionKind

SET_ASIDE = "set aside, because"  # how the evidence starts where the file decided it
_ID_NAME = re.compile(
    r"(^|[_\W])(id|uuid|guid|token|resp(ondent)?(_?(id|nr|no|number))?|serial|case(_?(id|nr|no))?|"
    r"record|key|lfdn|lfdnr|laufnummer|interview_?(id|nr|no|number))([_\W]|\d*$)|(?-i:\w(ID|Id))$",
    re.IGNORECASE,
)
_WEIGHT_NAME = re.compile(
    r"(^|[_\W\d])(w|wt|wgt|wght|weight|weights|weighting|gew|gewicht|poids|peso|vikt)\d*([_\W]|$)|"
    r"^weight|weight$|gewicht$",
    re.IGNORECASE,
)
_DATE = re.compile(
    r"\d{4}-\d{1,2}-\d{1,2}([ T]\d{1,2}:\d{2}.*)?|\d{4}/\d{1,2}/\d{1,2}.*|"
    r"\d{1,2}[./-]\d{1,2}[./-](\d{4}|\d{2})([ ,T]+\d{1,2}:\d{2}.*)?|\d{1,2}:\d{2}(:\d{2})?|"
    r"\d{1,2}\.? [A-Za-zä]{3,9}\.? \d{4}"
)
_LARGEST_WEIGHT = 1e9
_TRIED = 200  # values looked at for a pattern


def guess_special(profile: ColumnProfile, text: str) -> Question | None:
    """Return the question of a column that is none, or None for all other columns.

    Parameters
    ----------
    profile : ColumnProfile
        What the column holds.
    text : str
        The question text; "" for none.
    """
    guesses = (_empty, _constant, _dates, _identifier, _weight)
    return next((found for guess in guesses if (found := guess(profile, text))), None)


def _empty(profile: ColumnProfile, text: str) -> Question | None:
    if profile.filled:
        return None
    return _made(profile, text, QuestionKind.TEXT, f"{SET_ASIDE} every cell is empty", True)


def _constant(profile: ColumnProfile, text: str) -> Question | None:
    if profile.distinct != 1 or profile.rows < 2:
        return None
    value = profile.texts[0]
    where = (
        "all cells say"
        if profile.filled == profile.rows
        else f"the {write_count(profile.filled)} cells that are filled all say"
    )
    kind = QuestionKind.CHOICE if len(value) <= 60 else QuestionKind.TEXT
    answers = (Answer(value, value),) if kind is QuestionKind.CHOICE else ()
    evidence = f"{SET_ASIDE} {where} “{value}”"
    return _made(profile, text, kind, evidence, True, answers=answers)


def _dates(profile: ColumnProfile, text: str) -> Question | None:
    if not profile.is_text:
        return None
    tried = profile.texts[:_TRIED]
    if sum(bool(_DATE.fullmatch(t)) for t in tried) < 0.9 * len(tried):
        return None
    evidence = (
        f"open text, because it holds dates or times such as {tried[0]}: "
        "figures are not made from dates"
    )
    return _made(profile, text, QuestionKind.TEXT, evidence)


def _identifier(profile: ColumnProfile, text: str) -> Question | None:
    why = _identifier_evidence(profile)
    return (
        _made(profile, text, QuestionKind.IDENTIFIER, f"identifier, because {why}") if why else None
    )


def _identifier_evidence(profile: ColumnProfile) -> str:
    named = bool(_ID_NAME.search(profile.name))
    if profile.filled < 0.95 * profile.rows or profile.distinct < 0.9 * profile.filled:
        return ""
    unique = profile.distinct == profile.filled
    enough = profile.rows >= 10
    if profile.leading_zeros:
        return f"its numbers have leading zeros{_repeats(profile)}"
    if profile.is_text and named:
        return f"its name says so{_repeats(profile)}"
    if profile.is_text and not profile.all_numbers:
        one_word = all(" " not in t and len(t) <= 40 for t in profile.texts[:_TRIED])
        return "every row has its own value" if unique and enough and one_word else ""
    return _number_identifier(profile, named=named, unique=unique and enough)


def _number_identifier(profile: ColumnProfile, *, named: bool, unique: bool) -> str:
    numbers = profile.numbers
    if not bool((numbers == np.round(numbers)).all()):
        return ""
    if named:
        return f"its name says so and its numbers are whole{_repeats(profile)}"
    in_a_row = numbers[-1] - numbers[0] + 1 == numbers.size
    long = numbers[0] >= 10**7 and len(profile.texts[0]) == len(profile.texts[-1])
    if unique and (in_a_row or long):
        return "every row has its own number"
    return ""


def _repeats(profile: ColumnProfile) -> str:
    repeated = int((profile.counts > 1).sum())
    if not repeated:
        return " and no value occurs twice"
    return f", although {write_count(repeated)} of them occur more than once"


def _weight(profile: ColumnProfile, text: str) -> Question | None:
    """Return a number that is proposed as weights: positive, with decimals, mean 1 or a name."""
    numbers, counts = profile.numbers, profile.counts
    if not profile.all_numbers or profile.distinct < 2 or profile.filled < profile.rows:
        return None
    if (
        numbers[0] <= 0
        or numbers[-1] > _LARGEST_WEIGHT
        or bool((numbers == np.round(numbers)).all())
    ):
        return None
    total = float(numbers @ counts)
    mean = total / profile.filled
    named = bool(_WEIGHT_NAME.search(profile.name))
    if not named and abs(mean - 1) > 5e-4:
        return None
    reasons = ["its name says so"] * named + ["its mean is 1"] * (abs(mean - 1) < 0.05)
    proposal = Proposal(
        code="",
        reason=None,
        kind=QuestionKind.WEIGHT,
        evidence=f"{' and '.join(reasons)}; all values are above 0 and many have decimals",
        consequence=_weight_consequence(profile, total, mean),
    )
    evidence = f"number, because it holds {write_count(profile.distinct)} different numbers"
    return _made(profile, text, QuestionKind.NUMBER, evidence, proposals=(proposal,))


def _weight_consequence(profile: ColumnProfile, total: float, mean: float) -> str:
    squares = float(np.square(profile.numbers) @ profile.counts)
    like = total**2 / squares
    spread = (
        f"{write_number(profile.numbers[0], 0.01)} to {write_number(profile.numbers[-1], 0.01)}"
    )
    return (
        f"as weights from {spread} they let {write_count(profile.filled)} rows count like "
        f"{write_count(like)} · as a number it has the average {write_about(mean)}"
    )


def _made(
    profile: ColumnProfile,
    text: str,
    kind: QuestionKind,
    evidence: str,
    set_aside: bool = False,
    *,
    answers: tuple[Answer, ...] = (),
    proposals: tuple[Proposal, ...] = (),
) -> Question:
    return Question(
        key=profile.name,
        columns=(profile.name,),
        kind=kind,
        text=text or profile.name,
        answers=answers,
        proposals=proposals,
        evidence=evidence,
        set_aside=set_aside,
    )
