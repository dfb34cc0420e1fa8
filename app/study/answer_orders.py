"""In which order answers stand: that of a known scale, of their numbers, or by frequency."""

from __future__ import annotations

import re

import numpy as np

from app.study.column_profiles import ColumnProfile
from app.study.missing_words import normal_text, reason_of_word

# Each line is one scale from low to high; labels beside each other with | are the same point.
_SCALES = """
yes|ja|oui|sí|sì|sim, maybe|perhaps, no|nein|non|não
very small, small, medium|middle, large|big, very large|very big
very low, low, medium|moderate|average, high, very high
never, almost never|hardly ever, rarely|seldom, sometimes|occasionally, often|frequently, very often, almost always, always
very poor|very bad, poor|bad, fair|average|neither good nor poor|neither good nor bad, good, very good, excellent
strongly disagree|disagree strongly, disagree|rather disagree|tend to disagree|somewhat disagree, neither agree nor disagree|neither|neutral, agree|rather agree|tend to agree|somewhat agree, strongly agree|agree strongly
very dissatisfied, dissatisfied|rather dissatisfied|fairly dissatisfied|somewhat dissatisfied, neither satisfied nor dissatisfied|neither|neutral, satisfied|rather satisfied|fairly satisfied|somewhat satisfied, very satisfied
very unlikely, unlikely|rather unlikely|fairly unlikely, neither likely nor unlikely|neither|possible, likely|rather likely|fairly likely, very likely, certain
definitely not, probably not, might or might not|perhaps|maybe, probably|probably yes, definitely|definitely yes
not at all important, not very important|rather unimportant|less important, fairly important|somewhat important|neither, important|rather important, very important, extremely important
not at all, a little|slightly|hardly, somewhat|partly|moderately, mostly|largely, very|very much, fully|completely|extremely
much less, less|a little less|somewhat less|slightly less|rather less, the same|about the same|no change|unchanged, more|a little more|somewhat more|slightly more|rather more, much more
much worse, worse|a little worse|rather worse, the same|about the same|unchanged, better|a little better|rather better, much better
too little|too few, about right|just right, too much|too many
daily|every day, several times a week, weekly|once a week|every week, several times a month, monthly|once a month, quarterly, several times a year, yearly|once a year, less often|more rarely, never
primary|primary school, secondary|secondary school, vocational, college, university
sehr unzufrieden, unzufrieden|eher unzufrieden, teils/teils|weder noch|neutral, zufrieden|eher zufrieden, sehr zufrieden
stimme gar nicht zu|stimme überhaupt nicht zu, stimme eher nicht zu, teils/teils|weder noch|unentschieden, stimme eher zu, stimme voll zu|stimme voll und ganz zu
nie, selten, manchmal, oft|häufig, immer
sehr schlecht, schlecht, mittel|mittelmäßig, gut, sehr gut
jamais, rarement, parfois, souvent, toujours
pas du tout satisfait, peu satisfait|plutôt pas satisfait, plutôt satisfait|satisfait, très satisfait
monday, tuesday, wednesday, thursday, friday, saturday, sunday
january, february, march, april, may, june, july, august, september, october, november, december
"""  # noqa: E501 - one scale a line is the shape that can be read
_LAST = re.compile(
    r"^(other|others|another|sonstige|andere|autre|otro|none|none of these|keine|aucun)\b"
)
_NUMBER = re.compile(r"\d+(?:[.,]\d+)?")
_UNDER = re.compile(r"^(under|below|less than|up to|fewer than|<|unter|bis|moins de|hasta)\b|^<")


def _points(line: str) -> dict[str, int]:
    points = enumerate(line.split(","))
    return {normal_text(word): i for i, point in points for word in point.split("|")}


_KNOWN = tuple(_points(line) for line in _SCALES.strip().splitlines())


def order_labels(profile: ColumnProfile) -> tuple[tuple[str, ...], str]:
    """Return the labels of a column in order, and in words what that order is.

    Labels that stand for no answer come last.

    Parameters
    ----------
    profile : ColumnProfile
        Of a column of labels.
    """
    labels = [text for text in profile.texts if reason_of_word(text) is None]
    missing = [text for text in profile.texts if reason_of_word(text) is not None]
    for order in (_known_order, _number_order):
        found = order(labels)
        if found is not None:
            return (*found[0], *missing), found[1]
    counts = dict(zip(profile.texts, np.asarray(profile.counts).tolist(), strict=True))
    ranked = sorted(labels, key=lambda label: (_comes_last(label), -counts[label]))
    return (*ranked, *missing), "the most frequent answer first"


def _known_order(labels: list[str]) -> tuple[list[str], str] | None:
    words = {label: normal_text(label) for label in labels}
    for scale in _KNOWN:
        if len(labels) > 1 and all(word in scale for word in words.values()):
            return sorted(labels, key=lambda x: scale[words[x]]), "in the order of a known scale"
    return None


def _number_order(labels: list[str]) -> tuple[list[str], str] | None:
    """Return labels such as "18 to 24", "under 18", "65+" by their first number."""
    keys = {label: _number_key(label) for label in labels}
    if len(labels) < 2 or len(set(keys.values())) < len(labels) or None in keys.values():
        return None
    return sorted(labels, key=lambda x: keys[x] or (0.0, 0)), "in the order of their numbers"


def _number_key(label: str) -> tuple[float, int] | None:
    found = _NUMBER.search(label)
    if found is None:
        return None
    under = bool(_UNDER.match(label.casefold()))
    if not under and label[: found.start()].strip(" <>≥≤~"):
        return None
    return float(found.group().replace(",", ".")), 0 if under else 1


def _comes_last(label: str) -> bool:
    return bool(_LAST.match(normal_text(label)))
