"""An invented readout of garden centres: a mean, a share, a total and a figure held back."""

from __future__ import annotations

import math

from app.study.frozen import FrozenFigure, FrozenReadout, FrozenRow
from app.study.pictures import Bar, CurvePoint, Fan, Rail

NB = "\u00a0"


def shown_rail(
    value: float, low: float, high: float, *, axis=(0.0, 1.0), solid=True, text="", state="shown"
) -> Rail:
    """A rail; the text says it in words."""
    words = text or f"estimate {value:g}, between {low:g} and {high:g}"
    return Rail(axis[0], axis[1], value, low, high, solid, state, words)


def empty_rail(text: str, *, state: str = "held back") -> Rail:
    """A rail without a figure: nothing of the figure stays in it."""
    return Rail(0.0, 1.0, 0.0, 0.0, 0.0, False, state, text)


def normal_curve(center: float, error: float, *, points: int = 121) -> tuple[CurvePoint, ...]:
    """A normal curve over four standard errors on each side."""
    steps = [8 * i / (points - 1) - 4 for i in range(points)]
    return tuple(CurvePoint(center + t * error, math.exp(-t * t / 2)) for t in steps)


def binomial_curve(n: int, p: float) -> tuple[CurvePoint, ...]:
    """The binomial distribution of a share."""
    return tuple(
        CurvePoint(k / n, math.comb(n, k) * p**k * (1 - p) ** (n - k)) for k in range(n + 1)
    )


def mean_fan() -> Fan:
    parts = (2, 1, 2, 3, 4, 9, 12, 20, 24, 14, 9)
    return Fan(
        share=False,
        left_title="What 395 said",
        left_note="answers, %",
        right_title="If the survey were repeated",
        right_note="",
        axis_low=-0.5,
        axis_high=10.5,
        ticks=(),
        bars=tuple(
            Bar(v - 0.4, v + 0.4, part / 100, str(v), str(part)) for v, part in enumerate(parts)
        ),
        factor=1.0,
        value=6.95,
        low=6.77,
        high=7.13,
        value_text="6.95",
        low_text="6.77",
        high_text="7.13",
        curve=normal_curve(6.95, 0.092),
        steps=False,
        hatched=True,
        endless_low=6.73,
        endless_high=7.17,
        endless_text="endless universe: 6.73 to 7.17",
        notes=("The curve is the exact distribution for a universe that looks like the sample.",),
        alternative=(
            "Answers from 0 to 10 on the left, most between 6 and 9; on the right the average of "
            "repeated surveys, nearly always between 6.77 and 7.13."
        ),
    )


def share_fan(
    value: float = 0.42, low: float = 0.38, high: float = 0.46, *, hatched: bool = True
) -> Fan:
    return Fan(
        share=True,
        left_title="166 of 395",
        left_note="stock peat-free compost",
        right_title="If the survey were repeated",
        right_note="",
        axis_low=0.0,
        axis_high=1.0,
        ticks=tuple((p / 100, f"{p}{NB}%") for p in (0, 25, 50, 75, 100)),
        bars=(),
        factor=1.0,
        value=value,
        low=low,
        high=high,
        value_text=f"{100 * value:.0f}{NB}%",
        low_text=f"{100 * low:.0f}{NB}%",
        high_text=f"{100 * high:.0f}{NB}%",
        curve=normal_curve(value, (high - low) / 3.92),
        steps=False,
        hatched=hatched,
        endless_low=low - 0.01,
        endless_high=high + 0.01,
        endless_text=f"endless universe: {100 * low - 1:.0f} to {100 * high + 1:.0f}{NB}%",
        notes=(),
        alternative="166 of 395 stock it; repeated surveys would mostly end between 38 and 46 %.",
    )


def small_share_fan() -> Fan:
    """3 of 40: the arms differ, so the curve is not hatched."""
    base = share_fan(0.075, 0.026, 0.199, hatched=False)
    return Fan(
        **{
            **{name: getattr(base, name) for name in Fan.__slots__},
            "left_title": "3 of 40",
            "left_note": "have closed a branch in the last twelve months",
            "value_text": f"8{NB}%",
            "low_text": f"3{NB}%",
            "high_text": f"20{NB}%",
            "curve": binomial_curve(40, 0.075),
            "steps": True,
            "notes": (
                "The curve assumes the universe looks exactly like the sample; the interval does "
                "not, so it reaches further up.",
            ),
            "alternative": "3 of 40 have closed a branch; the share lies between 3 and 20 %.",
        }
    )


def total_fan() -> Fan:
    parts = (0.22, 0.19, 0.15, 0.12, 0.09, 0.07, 0.05, 0.04, 0.03, 0.04)
    return Fan(
        share=False,
        left_title="What 371 said",
        left_note="spend per garden centre, answers in %",
        right_title="Where the total may lie",
        right_note="times 1,184 garden centres",
        axis_low=0.0,
        axis_high=20_000.0,
        ticks=((0.0, "0"), (6_000.0, "6,000"), (12_000.0, "12,000"), (18_000.0, "18,000 and more")),
        bars=tuple(
            Bar(2_000.0 * i, 2_000.0 * (i + 1), part, "", f"{100 * part:.0f}")
            for i, part in enumerate(parts)
        ),
        factor=1184.0,
        value=5_640_000.0,
        low=5_140_000.0,
        high=6_140_000.0,
        value_text=f"5.6{NB}million",
        low_text=f"5.1{NB}million",
        high_text=f"6.1{NB}million",
        curve=normal_curve(5_640_000.0, 255_000.0),
        steps=False,
        hatched=True,
        endless_low=None,
        endless_high=None,
        endless_text="",
        notes=("The curve is the t distribution of the estimate with its standard error.",),
        alternative="Spend per garden centre; the total lies between 5.1 and 6.1 million.",
    )


def example_readout() -> FrozenReadout:
    """Four sections, one of them held back, one group held back, one hidden."""
    return FrozenReadout(
        study="Garden centres in the four regions",
        title="Garden centres, spring wave",
        number=3,
        frozen_at="12 March 2026, 9:52 UTC",
        base_line=f"395 of 1,184{NB}garden centres answered",
        in_short=(
            "Garden centres are fairly content with their wholesalers: 6.95 of 10 on average.",
            "Four in ten stock peat-free compost; in the North it is three in four.",
            "Together they spend between 5.1 and 6.1 million on compost in a year.",
        ),
        figures=(_satisfaction(), _peat_free(), _spend(), _closed()),
        held_back=(
            "Peat-free compost, West: held back, because 12 answers are under the base of 30.",
            "Closed a branch: held back, because ±8.7 points is over the limit of ±5.",
        ),
        method_note=(
            ("Who the figures speak for", "All 1,184 independent garden centres of the register."),
            ("How they were asked", "395 drawn by chance within four regions, asked by telephone."),
            ("Intervals", "At the 95 % level: Wilson for shares, t for averages and totals."),
        ),
        methods_version=1,
    )


def _satisfaction() -> FrozenFigure:
    axis = (0.0, 10.0)
    rows = (("all", 6.95, 6.77, 7.13, "395"), ("North", 7.31, 6.98, 7.64, "104"))
    rows += (("South", 6.42, 6.07, 6.77, "108"), ("East", 7.08, 6.74, 7.42, "99"))
    return FrozenFigure(
        headline="Wholesalers earn a solid seven from garden centres",
        sentence=(
            f"Had all 1,184{NB}garden centres answered, the average would very likely lie between "
            "6.77 and 7.13."
        ),
        comment="Delivery times were named most often when the score was below five.",
        question="All in all, how satisfied are you with your main wholesaler, from 0 to 10?",
        column_head="average",
        axis_low_text="0",
        axis_high_text="10",
        rows=tuple(
            FrozenRow(
                who,
                f"{value:.2f}",
                f"{low:.2f} to {high:.2f}",
                answers,
                "",
                "publish",
                shown_rail(value, low, high, axis=axis, solid=False, text=f"{who}: {value:.2f}"),
            )
            for who, value, low, high, answers in rows
        ),
        fan=mean_fan(),
        base_line="395 answered of 1,184; 12 said don't know",
        cautions=(),
    )


def _share_row(who: str, value: int, low: int, high: int, answers: str, note: str) -> FrozenRow:
    rail = shown_rail(value / 100, low / 100, high / 100, text=f"{who}: {value} of a hundred")
    verdict = "publish with a note" if note else "publish"
    return FrozenRow(who, str(value), f"{low} to {high}", answers, note, verdict, rail)


def _peat_free() -> FrozenFigure:
    return FrozenFigure(
        headline="A little over four in ten stock peat-free compost",
        sentence=(
            f"Had all 1,184{NB}garden centres answered, the share would very likely lie between 38 "
            f"and 46{NB}%."
        ),
        comment="",
        question="Do you stock compost that is free of peat?",
        column_head="%",
        axis_low_text="0",
        axis_high_text=f"100{NB}%",
        rows=(
            _share_row("all", 42, 38, 46, "394", ""),
            _share_row("North", 77, 70, 84, "103", ""),
            _share_row("South", 35, 27, 44, "107", ""),
            _share_row("East, hill country", 31, 20, 43, "61", "read with care: wide"),
            FrozenRow(
                "West",
                "",
                "",
                "12",
                "held back: too few answers",
                "hold back",
                empty_rail("West: held back"),
            ),
            FrozenRow(
                "Islands",
                "",
                "",
                "",
                "hidden to protect respondents",
                "hidden",
                empty_rail("Islands: hidden", state="hidden"),
            ),
        ),
        fan=share_fan(),
        base_line="394 answered of 1,184; 1 refused",
        cautions=("Stock was asked for the day of the call, not for the season.",),
    )


def _spend() -> FrozenFigure:
    axis = (0.0, 8_000_000.0)
    rail = shown_rail(5_640_000, 5_140_000, 6_140_000, axis=axis, text="all: 5.6 million")
    north = shown_rail(1_800_000, 1_500_000, 2_100_000, axis=axis, text="North: 1.8 million")
    return FrozenFigure(
        headline="Compost is a market of five to six million a year",
        sentence=(
            f"Had all 1,184{NB}garden centres answered, the total would very likely lie between "
            f"5.1 and 6.1{NB}million."
        ),
        comment="",
        question="How much did you spend on compost in the last twelve months?",
        column_head="total",
        axis_low_text="0",
        axis_high_text=f"8{NB}million",
        rows=(
            FrozenRow(
                "all", f"5.6{NB}million", f"5.1 to 6.1{NB}million", "371", "", "publish", rail
            ),
            FrozenRow(
                "North", f"1.8{NB}million", f"1.5 to 2.1{NB}million", "98", "", "publish", north
            ),
        ),
        fan=total_fan(),
        base_line="371 answered of 1,184; 24 refused",
        cautions=(),
    )


def _closed() -> FrozenFigure:
    return FrozenFigure(
        headline="How many closed a branch is not certain enough to show",
        sentence="This figure is held back: it may be too far from what a count would have given.",
        comment="",
        question="Have you closed a branch in the last twelve months?",
        column_head="share",
        axis_low_text="0",
        axis_high_text=f"100{NB}%",
        rows=(
            FrozenRow(
                "all",
                "",
                "",
                "40",
                "held back: too wide",
                "hold back",
                empty_rail("all: held back"),
            ),
        ),
        fan=None,
        base_line="40 answered of 1,184; asked in the East only",
        cautions=(),
    )
