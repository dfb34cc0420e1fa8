"""A readout as it is frozen: plain values only, aggregates only, nothing left to compute.

The page, the file for e-mail and every later handout are written from these values alone.
"""

from __future__ import annotations

from dataclasses import dataclass

from app.study.pictures import Fan, Rail


@dataclass(frozen=True, slots=True)
class FrozenRow:
    """One line of a table: everyone, or one group.

    Parameters
    ----------
    who : str
        "all", or the group.
    value, between, answers : str
        As printed; value and between are "" when held back.
    note : str
        "" or the words that replace or follow the value ("held back: too few answers").
    verdict : str
        "publish", "publish with a note", "hold back" or "hidden".
    rail : Rail
        The picture in the last cell.
    """

    who: str
    value: str
    between: str
    answers: str
    note: str
    verdict: str
    rail: Rail


@dataclass(frozen=True, slots=True)
class FrozenFigure:
    """One section of the readout.

    Parameters
    ----------
    headline : str
        In serif, the manager's or the proposed one.
    sentence : str
        The sentence a client can repeat.
    comment : str
        Plain text of the manager; "" for none.
    question : str
        The question as asked.
    column_head : str
        Unit in the head of the value column: "%", "average", "total".
    axis_low_text, axis_high_text : str
        Ends of the rails.
    rows : tuple of FrozenRow
        The figure itself first, then groups.
    fan : Fan or None
        "How sure are we"; None when the figure is held back.
    base_line : str
        "395 answered of 1,184; 12 said don't know".
    cautions : tuple of str
        Sentences a reader has to know.
    """

    headline: str
    sentence: str
    comment: str
    question: str
    column_head: str
    axis_low_text: str
    axis_high_text: str
    rows: tuple[FrozenRow, ...]
    fan: Fan | None
    base_line: str
    cautions: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class FrozenReadout:
    """Everything the readout page shows.

    Parameters
    ----------
    study, title : str
        Names.
    number : int
        1, 2, 3 ... within the study.
    frozen_at : str
        As printed, "12 March 2026, 9:52 UTC".
    base_line : str
        "395 of 1,184 garden centres answered".
    in_short : tuple of str
        Up to three sentences.
    figures : tuple of FrozenFigure
        In order.
    held_back : tuple of str
        What is held back and why, one sentence each.
    method_note : tuple of (str, str)
        Head and text of each item.
    methods_version : int
        Version of the arithmetic.
    """

    study: str
    title: str
    number: int
    frozen_at: str
    base_line: str
    in_short: tuple[str, ...]
    figures: tuple[FrozenFigure, ...]
    held_back: tuple[str, ...]
    method_note: tuple[tuple[str, str], ...]
    methods_version: int
