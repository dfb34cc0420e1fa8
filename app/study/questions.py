"""Questions: what a column or a set of columns of the fieldwork file asks."""

from __future__ import annotations

from dataclasses import dataclass, replace
from enum import StrEnum


class QuestionKind(StrEnum):
    """How a question was asked."""

    SCALE = "scale"
    CHOICE = "one answer"
    SEVERAL = "several answers"
    NUMBER = "number"
    TEXT = "open text"
    IDENTIFIER = "identifier"
    WEIGHT = "weight"


FIGURE_KINDS = (
    QuestionKind.SCALE,
    QuestionKind.CHOICE,
    QuestionKind.SEVERAL,
    QuestionKind.NUMBER,
)


class MissingReason(StrEnum):
    """Why there is no answer."""

    DONT_KNOW = "don't know"
    REFUSED = "refused"
    NOT_ASKED = "not asked"
    NO_ANSWER = "no answer"


@dataclass(frozen=True, slots=True)
class Answer:
    """One answer a question offers.

    Parameters
    ----------
    code : str
        As in the file; whole numbers without decimals ("5"). For several answers: the column.
    label : str
        As people read it.
    """

    code: str
    label: str


@dataclass(frozen=True, slots=True)
class MissingCode:
    """A code in the file that stands for no answer."""

    code: str
    reason: MissingReason


@dataclass(frozen=True, slots=True)
class Proposal:
    """Something the file suggests and a person has to settle.

    Parameters
    ----------
    code : str
        The code concerned, or "" when the kind of the question is in doubt.
    reason : MissingReason or None
        What the code probably means; None when the kind is in doubt.
    kind : QuestionKind or None
        The kind proposed; None when a code is in doubt.
    evidence : str
        Why, in one sentence.
    consequence : str
        What changes, with numbers: "average 2,140 without, 9,870 with".
    """

    code: str
    reason: MissingReason | None
    kind: QuestionKind | None
    evidence: str
    consequence: str


@dataclass(frozen=True, slots=True)
class Question:
    """One question of a study.

    Parameters
    ----------
    key : str
        Stable name: the column, or the common stem of a set of columns.
    columns : tuple of str
        Columns of the fieldwork file, one unless several answers were allowed.
    kind : QuestionKind
        How it was asked.
    text : str
        The question as people read it.
    answers : tuple of Answer
        In the order of the questionnaire; empty for numbers and text.
    missing : tuple of MissingCode
        Codes that are no answers, with their reasons.
    proposals : tuple of Proposal
        What a person still has to settle; an open one blocks publishing this question.
    evidence : str
        Why the question was read this way.
    set_aside : bool
        True when it is not to be used for figures.
    """

    key: str
    columns: tuple[str, ...]
    kind: QuestionKind
    text: str
    answers: tuple[Answer, ...] = ()
    missing: tuple[MissingCode, ...] = ()
    proposals: tuple[Proposal, ...] = ()
    evidence: str = ""
    set_aside: bool = False

    @property
    def needs_you(self) -> bool:
        """Whether a person has to settle something."""
        return bool(self.proposals) and not self.set_aside

    @property
    def usable(self) -> bool:
        """Whether figures can be made from it."""
        return self.kind in FIGURE_KINDS and not self.set_aside

    def label_of(self, code: str) -> str:
        """Return the label of an answer, or the code itself where it has none."""
        return next((answer.label for answer in self.answers if answer.code == code), code)

    def settled(self, *, accept: bool) -> Question:
        """Return the question with every open proposal taken or turned down.

        Parameters
        ----------
        accept : bool
            True takes the proposals, False keeps what was read.
        """
        if not accept:
            return replace(self, proposals=())
        missing = self.missing + tuple(
            MissingCode(p.code, p.reason) for p in self.proposals if p.reason is not None
        )
        kinds = [p.kind for p in self.proposals if p.kind is not None]
        gone = {code.code for code in missing}
        return replace(
            self,
            kind=kinds[-1] if kinds else self.kind,
            missing=missing,
            answers=tuple(a for a in self.answers if a.code not in gone),
            proposals=(),
        )
