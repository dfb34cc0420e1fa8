"""What a second file does to the questions of a study: kept by column, gone, new, changed."""

from __future__ import annotations

from dataclasses import dataclass, replace

from app.study.number_format import write_count
from app.study.questions import Answer, Proposal, Question, QuestionKind
from app.study.special_columns import SET_ASIDE

_SHOWN = 5  # answers named in a sentence before "and n more"
_CODED = (QuestionKind.SCALE, QuestionKind.CHOICE)


@dataclass(frozen=True, slots=True)
class ChangedAnswers:
    """A question whose answers or columns are not the same in the new file.

    Parameters
    ----------
    key : str
        The question.
    added : tuple of Answer
        Answers never seen before, appended to the question.
    sentence : str
        What changed and what was done about it.
    """

    key: str
    added: tuple[Answer, ...]
    sentence: str


@dataclass(frozen=True, slots=True)
class CarriedQuestions:
    """The questions of a study after a second file.

    Parameters
    ----------
    questions : tuple of Question
        In the order of the new file; what a person settled is kept.
    kept, gone, new : tuple of str
        Keys of questions found again, missing from the new file, and holding answers for the
        first time.
    changed : tuple of ChangedAnswers
        Kept questions that are not quite the same.
    renamed : tuple of (str, str)
        A question that is gone and a new one with the same text: probably the same question.
    """

    questions: tuple[Question, ...]
    kept: tuple[str, ...]
    gone: tuple[str, ...]
    new: tuple[str, ...]
    changed: tuple[ChangedAnswers, ...]
    renamed: tuple[tuple[str, str], ...] = ()

    @property
    def sentences(self) -> tuple[str, ...]:
        """What a person should know, one sentence each; empty when nothing changed."""
        gone = _counted(self.gone, "is missing from the new file", "are missing from the new file")
        new = _counted(self.new, "is new", "are new")
        renamed = tuple(
            f"{now} asks the same as {before}, which is missing: probably the column was renamed. "
            f"Figures about {before} wait until a file brings {before} back."
            for before, now in self.renamed
        )
        return tuple(s for s in (gone, new, *renamed, *(c.sentence for c in self.changed)) if s)


def carry_over(old: tuple[Question, ...], new_guess: tuple[Question, ...]) -> CarriedQuestions:
    """Return the questions of a study carried over to a second file.

    A question is found again when one of its columns is there. Its kind, texts, labels, order and
    missing codes stay as a person settled them; answers never seen before are appended, and
    proposals about codes never seen before are opened.

    Parameters
    ----------
    old : tuple of Question
        As stored with the first file.
    new_guess : tuple of Question
        Guessed from the second file.
    """
    filled = {column for guess in new_guess if not guess.set_aside for column in guess.columns}
    old = tuple(question for question in old if not _is_revived(question, filled))
    by_column = {column: question for question in old for column in question.columns}
    questions: dict[str, Question] = {}
    changes: list[ChangedAnswers] = []
    new: list[str] = []
    for guess in new_guess:
        found = {by_column[c].key: by_column[c] for c in guess.columns if c in by_column}
        for key, before in found.items():
            own = set(guess.columns) - (set(by_column) - set(before.columns))
            questions[key], change = _carried(
                questions.get(key, before), _restricted(guess, own), first=key not in questions
            )
            changes += [change] if change else []
        fresh = _unknown_part(guess, list(found.values()), set(by_column))
        if fresh is not None:
            key = _free_key(fresh.key, {q.key for q in old} | set(questions))
            questions[key] = replace(fresh, key=key)
            new.append(key)
    kept, lost = _without_lost_columns(old, questions, new_guess)
    gone = tuple(question.key for question in old if question.key not in questions)
    return CarriedQuestions(
        tuple(questions.values()),
        kept,
        gone,
        tuple(new),
        (*changes, *lost),
        _renamed([q for q in old if q.key in gone], [questions[key] for key in new]),
    )


def _renamed(gone: list[Question], new: list[Question]) -> tuple[tuple[str, str], ...]:
    """Return pairs of questions with the same text, where that text is more than the column."""
    by_text = {q.text.casefold(): q.key for q in gone if q.text not in q.columns}
    pairs = ((by_text.get(q.text.casefold()), q.key) for q in new)
    return tuple((before, now) for before, now in pairs if before is not None)


def _unknown_part(guess: Question, found: list[Question], columns: set[str]) -> Question | None:
    """Return what of a guess no old question takes up, or None."""
    if any(q.kind is QuestionKind.SEVERAL for q in found):
        return None
    fresh = set(guess.columns) - columns
    return _restricted(guess, fresh) if fresh else None


def _free_key(key: str, taken: set[str]) -> str:
    number = 2
    free = key
    while free in taken:
        free = f"{key} ({number})"
        number += 1
    return free


def _carried(
    before: Question, guess: Question, *, first: bool
) -> tuple[Question, ChangedAnswers | None]:
    """Return the old question with what the new file adds to it."""
    before = _with_columns(before, guess)
    known = {answer.code for answer in before.answers} | {code.code for code in before.missing}
    seen = {proposal.code for proposal in before.proposals} | known
    proposals = tuple(
        p for p in guess.proposals if p.reason is not None and p.code not in seen and first
    )
    added = tuple(a for a in guess.answers if a.code not in known)
    if not _same_codes(before, guess):
        added = ()
    carried = replace(
        before, answers=before.answers + added, proposals=before.proposals + proposals
    )
    sentence = _sentence(before, guess, added, proposals) if first or added else ""
    return carried, ChangedAnswers(before.key, added, sentence) if sentence else None


def _same_codes(before: Question, guess: Question) -> bool:
    """Whether answers of one reading can be added to the other."""
    several = [q.kind is QuestionKind.SEVERAL for q in (before, guess)]
    return all(several) or all(q.kind in _CODED for q in (before, guess))


def _is_revived(question: Question, filled: set[str]) -> bool:
    """Whether the file had the question set aside, not a person, and now it holds answers."""
    by_file = question.set_aside and question.evidence.startswith(SET_ASIDE)
    return by_file and not filled.isdisjoint(question.columns)


def _with_columns(before: Question, guess: Question) -> Question:
    """Return a question of several answers with the columns the new file has besides."""
    if before.kind is not QuestionKind.SEVERAL or guess.kind is not QuestionKind.SEVERAL:
        return before
    fresh = tuple(c for c in guess.columns if c not in before.columns)
    return replace(before, columns=before.columns + fresh)


def _sentence(
    before: Question, guess: Question, added: tuple[Answer, ...], proposals: tuple[Proposal, ...]
) -> str:
    if _reads_otherwise(before, guess):
        return (
            f"{before.key} was read as {before.kind.value}, the new file looks like "
            f"{guess.kind.value}: it stays as it was, have a look at it."
        )
    codes = {proposal.code for proposal in proposals}
    answers = [answer for answer in added if answer.code not in codes]
    parts = []
    if answers:
        verb = "is" if len(answers) == 1 else "are"
        parts.append(f"{_named(answers)} {verb} new and added at the end")
    if proposals:
        parts.append(f"{', '.join(p.code for p in proposals)} may stand for no answer")
    return f"{before.key}: {'; '.join(parts)}." if parts else ""


def _reads_otherwise(before: Question, guess: Question) -> bool:
    if before.set_aside or guess.set_aside or before.kind is guess.kind:
        return False
    return not any(p.kind is before.kind for p in guess.proposals)


def _named(answers: list[Answer]) -> str:
    shown = ", ".join(answer.label for answer in answers[:_SHOWN])
    more = len(answers) - _SHOWN
    return f"{shown} and {write_count(more)} more" if more > 0 else shown


def _without_lost_columns(
    old: tuple[Question, ...], questions: dict[str, Question], new_guess: tuple[Question, ...]
) -> tuple[tuple[str, ...], list[ChangedAnswers]]:
    """Take columns the new file lacks out of questions in place; return kept keys and changes."""
    present = {column for guess in new_guess for column in guess.columns}
    lost: list[ChangedAnswers] = []
    for question in old:
        carried = questions.get(question.key)
        if carried is None or set(carried.columns) <= present:
            continue
        away = [a for a in carried.answers if a.code in set(carried.columns) - present]
        questions[question.key] = _restricted(carried, present)
        verb = "has" if len(away) == 1 else "have"
        sentence = (
            f"{question.key}: {_named(away)} {verb} no column in the new file and is left out."
        )
        lost.append(ChangedAnswers(question.key, (), sentence))
    return tuple(q.key for q in old if q.key in questions), lost


def _restricted(question: Question, present: set[str]) -> Question:
    away = set(question.columns) - present
    return replace(
        question,
        columns=tuple(c for c in question.columns if c in present),
        answers=tuple(a for a in question.answers if a.code not in away),
        missing=tuple(m for m in question.missing if m.code not in away),
        proposals=tuple(p for p in question.proposals if p.code not in away),
    )


def _counted(keys: tuple[str, ...], one: str, many: str) -> str:
    if not keys:
        return ""
    shown = ", ".join(keys[:_SHOWN])
    more = f" and {write_count(len(keys) - _SHOWN)} more" if len(keys) > _SHOWN else ""
    return f"{shown}{more} {one if len(keys) == 1 else many}."
