"""Sets of neighbouring columns that together hold one question with several answers allowed."""

from __future__ import annotations

import re
from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np

from app.study.column_profiles import ColumnProfile
from app.study.missing_codes import word_codes
from app.study.missing_words import is_chosen, is_not_chosen, reason_of_word
from app.study.number_format import write_count
from app.study.questions import Answer, MissingReason, Proposal, Question, QuestionKind

_NAME_STEM = re.compile(r"(.+?[_.\-:# ]|.*\d[rRmMoO])(\d{1,4}|[A-Za-z])|(.*\d)([a-z])")
_DASH = re.compile(r"\s+[-–—|]\s+")
_MARK = re.compile(r":\s+|(?<=\?)\s+")
_BRACKET = re.compile(r"\s*[\[(](?=[^\[(]+[\])]$)")
_CELL_CODES = {
    "9": MissingReason.NO_ANSWER,
    "99": MissingReason.DONT_KNOW,
    "98": MissingReason.REFUSED,
    "-1": MissingReason.NOT_ASKED,
    "-9": MissingReason.NO_ANSWER,
    "-99": MissingReason.NO_ANSWER,
}


@dataclass(frozen=True, slots=True)
class _Coding:
    """How one column says yes and no.

    ``style`` is "numbers", "words", "label" or "blank"; ``said`` lists the values in plain words.
    """

    style: str
    said: frozenset[str]


def find_sets(
    profiles: tuple[ColumnProfile, ...], texts: dict[str, str]
) -> Iterator[tuple[ColumnProfile, ...]]:
    """Yield the sets of neighbouring columns that hold several answers.

    Parameters
    ----------
    profiles : tuple of ColumnProfile
        In the order of the file.
    texts : dict of str to str
        Question texts by column; may be empty.
    """
    run: list[ColumnProfile] = []
    stem = ""
    for profile in profiles:
        own = column_stem(profile.name, texts)
        if not own or own != stem or not _fits(profile):
            if _is_set(run):
                yield tuple(run)
            run, stem = [], own
        if own and _fits(profile):
            run.append(profile)
    if _is_set(run):
        yield tuple(run)


def column_stem(column: str, texts: dict[str, str]) -> str:
    """Return what a column shares with its neighbours: its name or text without the option."""
    named = _NAME_STEM.fullmatch(column)
    if named:
        return named.group(1) or named.group(3)
    return split_text(texts.get(column) or column)[0]


def split_text(text: str) -> tuple[str, str]:
    """Return the question and the option of a text such as "Which brands? - Lindenroot"."""
    for mark in (_DASH, _BRACKET, _MARK):
        places = list(mark.finditer(text))
        if places and places[-1].start() > 0 and text[places[-1].end() :].strip():
            option = text[places[-1].end() :].strip()
            return text[: places[-1].start()].strip(), option.rstrip(
                "])"
            ) if mark is _BRACKET else option
    return "", text


def _fits(profile: ColumnProfile) -> bool:
    return _coding(profile) is not None


def _coding(profile: ColumnProfile) -> _Coding | None:
    """Return how a column says yes and no, or None when it does something else."""
    if profile.distinct > 5:
        return None
    kept = [t for t in profile.texts if t not in _CELL_CODES and reason_of_word(t) is None]
    values = frozenset(kept)
    if not profile.filled:
        return _Coding("blank", values)
    if values <= {"0", "1"} or values <= {"1", "2"}:
        return _Coding("numbers", values)
    if all(is_chosen(t) or is_not_chosen(t) for t in values):
        return _Coding("words", values)
    single = len(values) == 1 and profile.filled < profile.rows
    return _Coding("label", values) if single else None


def _is_set(run: list[ColumnProfile]) -> bool:
    codings = [_coding(profile) for profile in run]
    styles = {c.style for c in codings if c is not None and c.style != "blank"}
    filled = [c for c in codings if c is not None and c.style != "blank"]
    if len(filled) < 2 or len(styles) != 1:
        return False
    if styles == {"numbers"}:
        said = frozenset[str]().union(*(c.said for c in filled))
        return bool(said & {"0", "1"}) and not said >= {"0", "2"}
    return True


def set_question(
    profiles: tuple[ColumnProfile, ...], texts: dict[str, str], taken: set[str]
) -> Question:
    """Return the question of a set of columns.

    Parameters
    ----------
    profiles : tuple of ColumnProfile
        From :func:`find_sets`.
    texts : dict of str to str
        Question texts by column.
    taken : set of str
        Names no key may have: the columns of the file.
    """
    columns = tuple(profile.name for profile in profiles)
    stem = column_stem(columns[0], texts)
    key = stem.rstrip("_.-:# ") or columns[0]
    labels = {p.name: _option_label(p, texts) for p in profiles}
    return Question(
        key=key if key not in taken else f"{key} ({columns[0]} to {columns[-1]})",
        columns=columns,
        kind=QuestionKind.SEVERAL,
        text=_common_text(columns, texts) or key,
        answers=tuple(Answer(column, labels[column]) for column in columns),
        proposals=(*_option_proposals(profiles, labels), *_cell_proposals(profiles)),
        evidence=_evidence(profiles, stem),
    )


def _option_label(profile: ColumnProfile, texts: dict[str, str]) -> str:
    coding = _coding(profile)
    if coding is not None and coding.style == "label":
        return next(iter(coding.said))
    text = texts.get(profile.name) or profile.name
    return split_text(text)[1] or text


def _common_text(columns: tuple[str, ...], texts: dict[str, str]) -> str:
    """Return the question all columns share, or the text of all when it is the same."""
    stems = {split_text(texts.get(column, ""))[0] for column in columns}
    if len(stems) == 1 and "" not in stems:
        return stems.pop()
    whole = {texts.get(column, "") for column in columns}
    return whole.pop() if len(whole) == 1 else ""


def _evidence(profiles: tuple[ColumnProfile, ...], stem: str) -> str:
    count = write_count(len(profiles))
    return (
        f"several answers, because {count} neighbouring columns start {stem} "
        f"and hold only {_said(profiles)}{_all_blank(profiles)}"
    )


def _said(profiles: tuple[ColumnProfile, ...]) -> str:
    codings = [c for c in map(_coding, profiles) if c is not None and c.style != "blank"]
    blank = any(profile.filled < profile.rows for profile in profiles)
    if codings[0].style == "label":
        return "one label each or nothing"
    values = sorted(frozenset[str]().union(*(c.said for c in codings)))
    return " and ".join(values) + (" or nothing" if blank and len(values) == 1 else "")


def _all_blank(profiles: tuple[ColumnProfile, ...]) -> str:
    """Say what becomes of empty rows where "not chosen" is written as a blank."""
    said = frozenset[str]().union(*(c.said for c in map(_coding, profiles) if c is not None))
    says_no = said & {"0", "2"} or any(map(is_not_chosen, said))
    return "" if says_no else "; a row with nothing in all of them counts as no answer"


def _option_proposals(
    profiles: tuple[ColumnProfile, ...], labels: dict[str, str]
) -> Iterator[Proposal]:
    """Yield a proposal for each option that is no answer, such as "Don't know"."""
    for profile in profiles:
        reason = reason_of_word(labels[profile.name])
        if reason is not None:
            count = _ticks(profile)
            yield Proposal(
                profile.name,
                reason,
                None,
                f"the option “{labels[profile.name]}” is no answer; ticked {write_count(count)} "
                f"{'time' if count == 1 else 'times'}",
                "who ticked nothing else leaves the base of every share: "
                f"at most {write_count(count)} of {write_count(_most(profiles))}",
            )


def _cell_proposals(profiles: tuple[ColumnProfile, ...]) -> Iterator[Proposal]:
    """Yield a proposal for each code or word in the cells that is no answer."""
    reasons: dict[str, MissingReason] = {}
    for profile in profiles:
        reasons |= {t: _CELL_CODES[t] for t in profile.texts if t in _CELL_CODES}
        if profile.is_text:
            reasons |= word_codes(profile)
    for code, reason in reasons.items():
        count = max(profile.count_of(code) for profile in profiles)
        yield Proposal(
            code,
            reason,
            None,
            f"{code.replace('-', '−')} is neither yes nor no; {write_count(count)} "
            f"{'row has' if count == 1 else 'rows have'} it",
            "rows with nothing else leave the base of every share: "
            f"at most {write_count(count)} of {write_count(_most(profiles))}",
        )


def _ticks(profile: ColumnProfile) -> int:
    said = zip(profile.texts, np.asarray(profile.counts).tolist(), strict=True)
    return sum(n for text, n in said if text not in ("0", "2") and not is_not_chosen(text))


def _most(profiles: tuple[ColumnProfile, ...]) -> int:
    return max(profile.filled for profile in profiles)
