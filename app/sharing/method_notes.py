"""The method note: what a reader must know to judge the figures, written from the study itself."""

from __future__ import annotations

from app.study.figure_steps import method_name
from app.study.figures import Figure
from app.study.number_format import NO_BREAK, write_count, write_number
from app.study.plan_checks import known_universe
from app.study.sampling_plan import SamplingMethod, SamplingPlan
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
            "mistakes in answering add errors that no formula shows. The code of practice that "
            "applies to this study goes before this note.",
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
    text = _METHODS[plan.method]
    if plan.strata_column:
        text += f" This was done separately by {plan.strata_column}."
    if plan.method is SamplingMethod.CHANCE:
        text += _replacement(plan)
    return text


def _replacement(plan: SamplingPlan) -> str:
    if plan.replacement:
        return " Each could be drawn more than once."
    return " Each could be drawn once at most."


_METHODS = {
    SamplingMethod.CHANCE: "Drawn by chance from a list.",
    SamplingMethod.EVERYBODY: "Everybody was invited and some answered. The intervals assume that "
    "those who did not answer resemble those who did.",
    SamplingMethod.GROUPS: "Whole groups were drawn first; people in the same group resemble each "
    "other, and the intervals allow for that.",
    SamplingMethod.QUOTA: "Quotas or an online panel: not drawn by chance. The intervals are a "
    "model: they assume that within this sample people answered as a chance sample would have.",
    SamplingMethod.NOT_SURE: "Not known.",
}


def _answered(data: StudyData) -> str:
    mark = _mark(data)
    text = f"{write_count(len(data.answers), mark)} {data.plan.unit_many} answered"
    if data.set_aside:
        rows = write_count(data.set_aside, mark)
        text += f"; {rows} rows in which nothing was answered are set aside"
    return text + ". Don\u2019t know and refused are left out of a figure unless it says otherwise."


def _weights(data: StudyData) -> str:
    if data.plan.weights_column:
        return f"Weights as delivered with the file, column {data.plan.weights_column}."
    if data.plan.strata_column and known_universe(data.plan) is not None:
        return f"Each answer counts for the units of its {data.plan.strata_column} it stands for."
    return "None: every answer counts the same."


def _precision(data: StudyData, figures: list[Figure]) -> str:
    levels = sorted({f.request.confidence for f in figures})
    level = " and ".join(f"{write_number(x * 100, 1.0, _mark(data))}{NO_BREAK}%" for x in levels)
    names = " and ".join(dict.fromkeys(method_name(f) for f in figures))
    if known_universe(data.plan) is not None and not data.plan.replacement:
        counted = "The size of the universe is counted: the more of it was asked, the narrower."
    else:
        counted = "The universe is treated as endless."
    return f"Intervals at the {level} level, by {names}. {counted}"
