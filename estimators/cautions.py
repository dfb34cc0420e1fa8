"""Every caution an estimator can attach to a figure: stable code and plain sentence, in one place.

Sentences are for a market research manager; codes are for programs and never change.
"""

from __future__ import annotations

from estimators.results import Caution

_SHOWN_NAMES = 3

ATTEMPTED_CENSUS = Caution(
    "attempted_census",
    "Everybody was invited: the interval treats those who answered as a random draw from "
    "everybody, which no calculation can check.",
)
QUOTA_SAMPLE = Caution(
    "quota_sample",
    "The respondents were not drawn at random: the interval shows what a random sample of this "
    "size would give, and leaves out any error from the way they were chosen.",
)
SYSTEMATIC_SAMPLE = Caution(
    "systematic_sample",
    "Every so-many-th unit of a list was taken: the interval compares neighbours in the list, "
    "which is wrong where the list goes up and down in step with the sampling.",
)
ENDLESS_FIRST_STAGE = Caution(
    "endless_first_stage",
    "It is not known how many clusters (the groups that were drawn, such as shops or sailings) "
    "the universe has: the interval is, if anything, too wide.",
)
NOBODY_IN_BASE = Caution(
    "nobody_in_base",
    "Nobody in this group gave an answer, so there is no figure.",
)
NO_DEGREES_OF_FREEDOM = Caution(
    "no_degrees_of_freedom",
    "Too little was drawn independently to say how far this figure may be off: use a larger group.",
)
NO_VARIATION = Caution(
    "no_variation",
    "The answers do not differ, so they cannot show how far this figure may be off; as not "
    "everybody was asked, some error remains.",
)
NO_VARIATION_ON_ONE_SIDE = Caution(
    "no_variation_on_one_side",
    "On at least one side of this difference all answers are the same, so they cannot show how "
    "far it may be off; as not everybody was asked, some error remains.",
)
SECOND_STAGE_NOT_MEASURED = Caution(
    "second_stage_not_measured",
    "In some strata every drawn cluster has only one respondent: the interval is computed as if "
    "there were endlessly many clusters and is, if anything, too wide.",
)
GROUP_WITHOUT_ANSWERS = Caution(
    "stratum_without_answers",
    "In one part of the sample nobody gave an answer; the figure assumes this part is like the "
    "rest.",
)
HEAVY_TIES = Caution(
    "heavy_ties",
    "So many gave exactly this answer that the interval can only jump from one answer to the "
    "next: judge it by the shares of the answers instead.",
)
BEYOND_THE_ANSWERS = Caution(
    "beyond_the_answers",
    "The group is too small to set a limit on both sides of this figure: use a larger group.",
)
SKEWED_ANSWERS = Caution(
    "skewed_answers",
    "A few answers lie far from all others and pull this figure, and there are too few answers "
    "to even that out: the truth lies outside the interval more often than stated, mostly on the "
    "side of those few.",
)
DENOMINATOR_ZERO = Caution(
    "denominator_zero",
    "What this figure is divided by adds up to zero in this group, so there is no ratio.",
)


def answers_missing(asked: int, answered: int) -> Caution:
    """Say that some of those the figure is about gave no answer."""
    return Caution(
        "answers_missing",
        f"{asked - answered:,} of {asked:,} gave no answer; the figure assumes they are like "
        "those who did.",
    )


def single_cluster_strata(names: list[str]) -> Caution:
    """Say that strata with one drawn unit were compared with all others."""
    shown = ", ".join(names[:_SHOWN_NAMES]) + (" ..." if len(names) > _SHOWN_NAMES else "")
    which = f"stratum {shown}" if len(names) == 1 else f"{len(names)} strata ({shown})"
    return Caution(
        "single_cluster_stratum",
        f"Only one unit was drawn in {which}, so its variation is judged by that of the whole "
        "sample: better join such a stratum with a similar one.",
    )
