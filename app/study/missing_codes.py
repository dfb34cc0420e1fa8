"""Codes and words that probably stand for no answer: proposed with evidence, never imposed."""

from __future__ import annotations

import numpy as np
import numpy.typing as npt

from app.study.column_profiles import ColumnProfile, numbers_of
from app.study.missing_words import normal_text, reason_of_word
from app.study.number_format import write_about, write_count, write_number, write_plain, write_share
from app.study.question_hints import told_ends, told_meanings
from app.study.questions import MissingReason, Proposal

NO_BREAK = "\u00a0"
FAR = 1.5  # a code this many times the largest other value is far outside
SPIKE = 5  # a code inside the range has to be this much more frequent than any other value
_MOST_WORDS = 500  # more different words are open text, where "no answer" may be an answer
_HUGE = 1e15  # nobody reads longer numbers digit by digit
_MANY = 30  # distinct values from which a number counts as measured

_NINES = frozenset(10**k - 1 for k in range(1, 8))
_POSITIVE = _NINES | frozenset(10**k - d for k in range(2, 8) for d in (2, 3)) | {8, 7, 77, 88}
_NEGATIVE = frozenset(-d for d in (1, 2, 3, 4, 5, 6, 7, 8, 9, 77, 88)) | frozenset(
    -(10**k - d) for k in range(2, 8) for d in (1, 2, 3)
)


def word_codes(profile: ColumnProfile) -> dict[str, MissingReason]:
    """Return the values of a column that are words for no answer, with their reasons."""
    words = np.flatnonzero(np.isnan(profile.numbers))
    if words.size > _MOST_WORDS:
        return {}
    texts = [profile.texts[int(i)] for i in words]
    found = {text: reason_of_word(text) for text in texts}
    return {text: reason for text, reason in found.items() if reason is not None}


def number_codes(profile: ColumnProfile, question_text: str = "") -> dict[str, MissingReason]:
    """Return the numbers of a column that are probably no answers, with their reasons.

    Parameters
    ----------
    profile : ColumnProfile
        Of a column whose values are all numbers.
    question_text : str
        May say what a code means: "99 = don't know".
    """
    codes = _guessed_codes(profile, question_text) | _codes_in_text(profile, question_text)
    return codes if len(codes) < profile.distinct else {}


def _guessed_codes(profile: ColumnProfile, question_text: str) -> dict[str, MissingReason]:
    numbers = profile.numbers
    if profile.distinct < 2 or _is_symmetric_scale(numbers):
        return {}
    low, high = told_ends(question_text) or (0, -1)
    found = sorted(
        i
        for i in {*_below(numbers), *_above(profile), *_spikes(profile)}
        if not low <= numbers[i] <= high
    )
    measured = profile.distinct > _MANY
    return {
        profile.texts[i]: _usual_reason(int(numbers[i]), numbers[found], measured) for i in found
    }


def _codes_in_text(profile: ColumnProfile, text: str) -> dict[str, MissingReason]:
    found = {code: reason_of_word(words) for code, words in told_meanings(text).items()}
    return {c: r for c, r in found.items() if r is not None and profile.holds(c)}


def _is_symmetric_scale(numbers: npt.NDArray[np.float64]) -> bool:
    """Whether the values are those of a scale from -k to k: -2, -1, 0, 1, 2."""
    low, high = numbers[0], numbers[-1]
    in_a_row = numbers.size == high - low + 1
    return bool(low == -high and high <= 5 and in_a_row and (numbers == np.round(numbers)).all())


def _below(numbers: npt.NDArray[np.float64]) -> list[int]:
    """Return positions of negative codes under values that are never negative otherwise."""
    negative = numbers[numbers < 0]
    if negative.size in (0, numbers.size) or negative.size > len(_NEGATIVE):
        return []
    measured = numbers[-1] > 10 and {-1, -2, -3} <= set(negative.tolist())
    only_codes = all(x in _NEGATIVE for x in negative)
    return list(range(negative.size)) if only_codes and not measured else []


def _above(profile: ColumnProfile) -> list[int]:
    """Return positions of codes at the top with a gap under them."""
    numbers = profile.numbers
    found: list[int] = []
    for i in range(numbers.size - 1, 0, -1):
        if numbers[i] not in _POSITIVE:
            break
        found.append(i)
    while found and not _is_outside(profile, found):
        found.pop()
    return found


def _is_outside(profile: ColumnProfile, codes: list[int]) -> bool:
    """Whether the lowest of the codes lies outside the range of the values under all of them."""
    lowest = codes[-1]
    rest = profile.numbers[:lowest]
    rest = rest[rest >= 0] if (rest >= 0).any() else rest
    code, top = profile.numbers[lowest], rest[-1]
    if profile.numbers[codes[0]] < 0 or code <= top:
        return False
    if (rest == np.round(rest)).all() and top <= 10:
        return bool(code - top > 1 and (code >= 9 or code >= top + 3 or len(codes) > 1))
    if code / FAR >= top:
        return bool(code >= 97 or top <= 5)
    usual = profile.counts[max(0, lowest - 10) : lowest].max()
    return bool(code in _NINES and code - top > 0.1 * top and profile.counts[lowest] >= 3 * usual)


def _spikes(profile: ColumnProfile) -> list[int]:
    """Return positions of 99, 999 ... that are inside the range but far too frequent."""
    if profile.distinct <= _MANY:
        return []
    common = int(np.argmax(profile.counts))
    second = int(np.partition(profile.counts, -2)[-2])
    is_code = profile.numbers[common] in _NINES and profile.numbers[common] >= 99
    return [common] if is_code and profile.counts[common] >= SPIKE * max(second, 2) else []


def _usual_reason(code: int, codes: npt.NDArray[np.float64], measured: bool) -> MissingReason:
    """Return what a code usually stands for (common practice, no single source)."""
    if code == -1:
        return MissingReason.NOT_ASKED
    last = abs(code) % 10
    alone = not ((codes % 10 == 8) & (codes > 0)).any()
    if code < 0:
        by_digit = {8: MissingReason.DONT_KNOW, 7: MissingReason.REFUSED}
        return by_digit.get(last, MissingReason.NO_ANSWER)
    if last == 9:
        if measured and alone:
            return MissingReason.REFUSED
        return MissingReason.NO_ANSWER if code == 9 else MissingReason.DONT_KNOW
    if last == 8:
        return MissingReason.DONT_KNOW if code == 8 else MissingReason.REFUSED
    return MissingReason.NOT_ASKED


def number_proposals(
    profile: ColumnProfile, codes: dict[str, MissingReason], decimal_mark: str = "."
) -> tuple[Proposal, ...]:
    """Return a proposal for each code of a column of numbers: averages with and without.

    Parameters
    ----------
    profile : ColumnProfile
        Of the whole column.
    codes : dict of str to MissingReason
        From :func:`number_codes` and :func:`word_codes`.
    """
    rest = profile.without(set(codes))
    without = _average(rest)
    return tuple(
        Proposal(
            code,
            reason,
            None,
            _number_evidence(code, profile, rest, decimal_mark),
            _number_consequence(code, profile, codes, without, decimal_mark),
        )
        for code, reason in codes.items()
    )


def _number_evidence(code: str, profile: ColumnProfile, rest: ColumnProfile, mark: str) -> str:
    count = _answers(profile.count_of(code), mark)
    number = numbers_of((code,))[0]
    if np.isnan(number):
        return f"“{code}” is a word among numbers; {count}"
    low, high = (write_value(float(x), mark) for x in rest.numbers[[0, -1]])
    written = write_plain(number, mark)
    if rest.numbers[0] <= number <= rest.numbers[-1]:
        second = write_count(int(rest.counts.max()), mark)
        return f"{written} is far more frequent than any other number ({second} at most); {count}"
    far = "far " if number / FAR > rest.numbers[-1] or number < -9 else ""
    return f"{written} is {far}outside {low} to {high}; {count}"


def _number_consequence(
    code: str,
    profile: ColumnProfile,
    codes: dict[str, MissingReason],
    without: float,
    mark: str,
) -> str:
    counted = profile.without({c for c in codes if c != code})
    if np.isnan(counted.numbers).any():
        left = write_count(profile.without(set(codes)).filled, mark)
        return f"average {write_about(without, mark)}, made from the other {left} answers"
    with_code = _average(counted)
    return f"average {write_about(without, mark)} without · {write_about(with_code, mark)} with"


def write_value(value: float, decimal_mark: str = ".") -> str:
    """Write a number found in the file: whole, or with two decimals from 1 on."""
    if abs(value) >= _HUGE:
        return f"{value:.2e}"
    if value != int(value) and abs(value) < 1:
        return write_plain(value, decimal_mark)
    return write_number(value, 1.0 if value == int(value) else 0.01, decimal_mark)


def _average(profile: ColumnProfile) -> float:
    if not profile.filled:
        return float("nan")
    with np.errstate(over="ignore"):
        return float(profile.numbers @ profile.counts / profile.counts.sum())


def word_proposals(
    profile: ColumnProfile, codes: dict[str, MissingReason], decimal_mark: str = "."
) -> tuple[Proposal, ...]:
    """Return a proposal for each word of a choice: the share of its top answer with and without."""
    return tuple(
        Proposal(
            code,
            reason,
            None,
            _word_evidence(code, reason, profile.count_of(code), decimal_mark),
            _share_consequence(code, profile, codes, decimal_mark),
        )
        for code, reason in codes.items()
    )


def _word_evidence(code: str, reason: MissingReason, count: int, mark: str) -> str:
    said = "" if normal_text(code) == normal_text(reason.value) else f" and means {reason.value}"
    return f"“{code}” is no answer to the question{said}; {_answers(count, mark)}"


def _share_consequence(
    code: str, profile: ColumnProfile, codes: dict[str, MissingReason], mark: str
) -> str:
    rest = profile.without(set(codes))
    if not rest.filled:
        return "no answers are left without it"
    top = int(np.argmax(rest.counts))
    count = int(rest.counts[top])
    with_code = rest.filled + profile.count_of(code)
    shares = [count / rest.filled, count / with_code]
    step = 1 if write_share(shares[0]) != write_share(shares[1]) else 0.1
    low, high = (write_number(100 * share, step, mark) + f"{NO_BREAK}%" for share in shares)
    return f"{rest.texts[top]} {low} without · {high} with"


def _answers(count: int, mark: str) -> str:
    return "1 answer" if count == 1 else f"{write_count(count, mark)} answers"
