"""Every caution an estimator can attach to a figure: stable code and plain sentence, in one place.

Sentences are for a market research manager; codes are for programs and never change.
"""

from __future__ import annotations

from estimators.results import Caution

_SHOWN_NAMES = 3


ATTEMPTED_CENSUS = Caution(
    "attempted_census",
    "Everybody was invited and some did not answer: the interval holds if those who answered are "
    "like a random draw from everybody, which no calculation can check.",
)
QUOTA_SAMPLE = Caution(
    "quota_sample",
    "The respondents were not drawn at random: the interval shows what a random sample of this "
    "size would give and leaves out the error of who was chosen.",
)
ENDLESS_FIRST_STAGE = Caution(
    "endless_first_stage",
    "It is not known how many clusters there are in the universe: the interval is computed as if "
    "there were endlessly many, which makes it too wide rather than too narrow.",
)
NOBODY_IN_BASE = Caution(
    "nobody_in_base",
    "Nobody in this group gave an answer, so there is no figure.",
)
NO_DEGREES_OF_FREEDOM = Caution(
    "no_degrees_of_freedom",
    "The answers come from too few independent draws to say how far the figure may be off: "
    "use a larger group.",
)
NO_VARIATION = Caution(
    "no_variation",
    "The answers do not differ where the sample could have shown a difference, so the usual "
    "calculation would claim certainty: read the figure as the most the sample can say.",
)
SECOND_STAGE_NOT_MEASURED = Caution(
    "second_stage_not_measured",
    "In some strata every drawn cluster has one respondent only: their interval is computed as if "
    "there were endlessly many clusters, which makes it too wide rather than too narrow.",
)
GROUP_WITHOUT_ANSWERS = Caution(
    "stratum_without_answers",
    "In a part of the sample nobody gave an answer: the figure takes that part to be like the "
    "others.",
)
HEAVY_TIES = Caution(
    "heavy_ties",
    "Many people gave exactly this answer, so the interval of a median or other quantile jumps "
    "from answer to answer: judge it by the shares of the answers instead.",
)
BEYOND_THE_ANSWERS = Caution(
    "beyond_the_answers",
    "The group is too small to give this quantile a bound on both sides: use a larger group or "
    "a quantile nearer to the middle.",
)
DENOMINATOR_ZERO = Caution(
    "denominator_zero",
    "The denominator adds up to zero in this group, so there is no ratio.",
)


def answers_missing(asked: int, answered: int) -> Caution:
    """Say that some of the people asked gave no answer."""
    return Caution(
        "answers_missing",
        f"{asked - answered:,} of the {asked:,} people this figure is about gave no answer: it "
        "takes them to be like those who did.",
    )


def single_cluster_strata(names: list[str]) -> Caution:
    """Say that strata with one drawn unit were compared with all others."""
    shown = ", ".join(names[:_SHOWN_NAMES]) + (" ..." if len(names) > _SHOWN_NAMES else "")
    return Caution(
        "single_cluster_stratum",
        f"Only one unit was drawn in {len(names)} of the strata ({shown}): its variation is "
        "measured against all strata; better join it with a similar stratum.",
    )
