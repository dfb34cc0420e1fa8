"""The sample studies that come with the program: invented, for trying things out."""

from __future__ import annotations

from dataclasses import dataclass
from pathlib import Path

from app.study.records import from_json
from app.study.sampling_plan import SamplingPlan

SAMPLE_FOLDER = Path(__file__).resolve().parents[2] / "sample_data"


@dataclass(frozen=True, slots=True)
class SampleStudy:
    """One sample study.

    Parameters
    ----------
    name : str
        As a study of this kind would be called.
    about : str
        One sentence for the person who may choose it.
    files : tuple of Path
        Fieldwork files, the first wave first.
    plan : SamplingPlan
        How its sample was drawn.
    """

    name: str
    about: str
    files: tuple[Path, ...]
    plan: SamplingPlan


def garden_centres() -> SampleStudy:
    """Return the trade survey of 1,184 garden centres, two waves."""
    return SampleStudy(
        name="Garden centres",
        about="An invented trade survey: 395 of 1,184 garden centres in four regions answered.",
        files=(
            SAMPLE_FOLDER / "garden_centres_spring.csv",
            SAMPLE_FOLDER / "garden_centres_autumn.csv",
        ),
        plan=_plan("garden_centres_plan.json"),
    )


def _plan(file_name: str) -> SamplingPlan:
    return from_json(SamplingPlan, (SAMPLE_FOLDER / file_name).read_text(encoding="utf-8"))
