from __future__ import annotations

import pytest

from app.study.study import HouseLimit
from app.widgets.house_limit import edited_limit

AS_STORED = {
    "share_points": "10",
    "scale_part": "5",
    "number_part": "25",
    "note_part": "70",
    "smallest_base": "30",
}


def test_what_stands_in_the_fields_at_first_is_the_limit():
    assert edited_limit(HouseLimit(), AS_STORED) == HouseLimit()


@pytest.mark.parametrize(
    ("field", "typed", "stored"),
    [
        ("share_points", "7.5", 7.5),
        ("share_points", " 7,5 % ", 7.5),
        ("share_points", "50", 50.0),
        ("scale_part", "2.5", 0.025),
        ("number_part", "100%", 1.0),
        ("note_part", "100", 1.0),
        ("smallest_base", "1,000", 1000),
        ("smallest_base", "1", 1),
    ],
)
def test_a_field_is_read(field, typed, stored):
    limit = edited_limit(HouseLimit(), {**AS_STORED, field: typed})
    assert getattr(limit, field) == stored
    others = {f: getattr(limit, f) for f in AS_STORED if f != field}
    assert others == {f: getattr(HouseLimit(), f) for f in others}


@pytest.mark.parametrize("field", list(AS_STORED)[:4])
@pytest.mark.parametrize("typed", ["", "x", "-1", "0", "0.0", "1e3", "1 000", "101", "inf", "nan"])
def test_a_field_that_is_no_limit_is_named(field, typed):
    with pytest.raises(ValueError, match=r"no number|must be above 0") as caught:
        edited_limit(HouseLimit(), {**AS_STORED, field: typed})
    assert str(caught.value).endswith(".")
    assert "\u00b1" in str(caught.value) or "With a note from" in str(caught.value)


@pytest.mark.parametrize("typed", ["", "0", "1.5", "many", "-3"])
def test_the_fewest_answers_are_a_whole_number(typed):
    with pytest.raises(ValueError, match=r"^Fewest answers: "):
        edited_limit(HouseLimit(), {**AS_STORED, "smallest_base": typed})
