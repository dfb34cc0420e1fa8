"""The method note: what a reader must know to judge the figures, written from the study itself."""

from __future__ import annotations

from app.study.figure_steps import (
    counts_universe,
    method_name,
    uses_strata,
    weighted_by_stratum,
)
from app.study.figures import Figure
from app.study.number_format import NO_BREAK, write_count, write_plain
from app.study.plan_checks import draws_repeat, known_universe
from app.study.sampling_plan import SamplingMethod
from app.study.study_data import StudyData
from app.study.width_check import limit_words

Item = tuple[str, str]


def method_note(data: StudyData, figures: list[Figure]) -> tuple[Item, ...]:
    """Return head and text of every item of the method note.

    Parameters
    ----------
    data : StudyData
        The study.
    figures : list of Figure
        Those of the readout.
    """
    return (
        ("Whom the figures speak for", _universe(data)),
        ("How people got in", _sampling(data)),
        ("Who answered", _answered(data)),
        ("Weights", _weights(data)),
        ("How sure", _precision(data, figures)),
        ("What is held back", f"Checked by the {limit_words(data.study.limit, _mark(data))}."),
        (
            "Numbers",
            "All are computed unrounded and rounded once, value and interval alike, to what the "
            "interval allows; shares need not add to 100.",
        ),
        (
            "What the intervals leave out",
            "They speak of sampling alone. Wording of questions, people who cannot be reached and "
            "mistakes in answering add errors that no formula shows.",
        ),
        (
            "What this note does not say",
            "Who commissioned and who conducted the survey, when, how and in which language people "
            "were asked, and the order of the questions are not in the file: ask whoever sent this "
            "readout. The code of practice that applies to the study goes before this note.",
        ),
    )


def _mark(data: StudyData) -> str:
    return data.study.decimal_mark


def _universe(data: StudyData) -> str:
    plan, size = data.plan, known_universe(data.plan)
    name = plan.universe or f"all {plan.unit_many}"
    if size is None:
        return f"{_capital(name)}; their number is not known, so it is treated as endless."
    details = [
        f"as of {plan.as_of}" if plan.as_of else "",
        f"source: {plan.source}" if plan.source else "",
    ]
    tail = "; ".join(d for d in details if d)
    count = f"{write_count(size, _mark(data))}{NO_BREAK}{plan.unit_many}"
    return f"{_capital(name)}: {count}" + (f" ({tail})." if tail else ".")


def _capital(text: str) -> str:
    return text[:1].upper() + text[1:]


def _sampling(data: StudyData) -> str:
    plan = data.plan
    parts = [_METHODS[plan.method]]
    if uses_strata(data):
        by = strata_name(data)
        if plan.method is SamplingMethod.EVERYBODY:
            parts = [_INVITED, f"The intervals assume that, within each {by}, {_ALIKE}"]
        else:
            parts.append(f"This was done separately by {by}.")
    if plan.method is SamplingMethod.CHANCE:
        parts.append(
            "Each could be drawn more than once."
            if draws_repeat(plan)
            else "Each could be drawn once at most."
        )
    if plan.method is SamplingMethod.GROUPS:
        parts.append(_groups(data))
    return " ".join(parts)


def strata_name(data: StudyData) -> str:
    """Return what the draw was separated by, as people read it."""
    question = data.question(data.plan.strata_column)
    name = question.text if question is not None else data.plan.strata_column
    return f"\u201c{name.rstrip(' .?:')}\u201d"


def _groups(data: StudyData) -> str:
    plan, mark = data.plan, _mark(data)
    drawn = len(data.built.design.stages.rows_drawn)
    if plan.universe_clusters is None or plan.strata_column:
        return f"{write_count(drawn, mark)} groups were drawn."
    return (
        f"{write_count(drawn, mark)} of {write_count(plan.universe_clusters, mark)} groups "
        "were drawn."
    )


_INVITED = "Everybody was invited and some answered."
_ALIKE = "those who did not answer resemble those who did."
_METHODS = {
    SamplingMethod.CHANCE: "Drawn by chance from a list.",
    SamplingMethod.EVERYBODY: f"{_INVITED} The intervals assume that {_ALIKE}",
    SamplingMethod.GROUPS: "Whole groups were drawn first; people in the same group resemble each "
    "other, and the intervals allow for that.",
    SamplingMethod.QUOTA: "Quotas or an online panel: not drawn by chance. The intervals are a "
    "model: they assume that within this sample people answered as a chance sample would have.",
    SamplingMethod.NOT_SURE: "Not known. The intervals are those of a simple draw from an endless "
    "universe.",
}


def _answered(data: StudyData) -> str:
    mark, size = _mark(data), known_universe(data.plan)
    whole = f" of {write_count(size, mark)}" if size is not None else ""
    text = f"{write_count(len(data.answers), mark)}{whole} {data.plan.unit_many} answered"
    if data.set_aside:
        rows = write_count(data.set_aside, mark)
        text += f"; {rows} rows in which nothing was answered are set aside"
    alike = f" with the same {strata_name(data)}" if uses_strata(data) else ""
    return (
        f"{text}. Don\u2019t know and refused are left out of a figure unless it says otherwise. "
        f"Who gave no answer to a question is taken to be like those{alike} who did."
    )


def _weights(data: StudyData) -> str:
    if data.plan.weights_column and not data.built.fallback:
        return f"Weights as delivered with the file, column {data.plan.weights_column}."
    if weighted_by_stratum(data):
        return (
            f"Each answer stands for its part of all {data.plan.unit_many} with the same "
            f"{strata_name(data)}."
        )
    return "None: every answer counts the same."


def _precision(data: StudyData, figures: list[Figure]) -> str:
    if not figures:
        return "There are no figures."
    levels = sorted({f.request.confidence for f in figures})
    level = " and ".join(
        f"{write_plain(round(x * 100, 6), _mark(data))}{NO_BREAK}%" for x in levels
    )
    names = _listed(list(dict.fromkeys(method_name(f) for f in figures)))
    return f"Intervals at the {level} level, by {names}. {_universe_counted(data)}"


def _listed(words: list[str]) -> str:
    return " and ".join(([", ".join(words[:-1])] if words[1:] else []) + words[-1:])


def _universe_counted(data: StudyData) -> str:
    if not counts_universe(data):
        return "The universe is treated as endless."
    if data.plan.method is SamplingMethod.GROUPS:
        return "The number of groups is counted: the more of them were drawn, the narrower."
    return "The size of the universe is counted: the more of it was asked, the narrower."
