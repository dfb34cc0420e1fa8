"""What `import estimators` offers."""

from __future__ import annotations

import inspect

import estimators


def test_every_public_name_exists_and_is_listed_in_order():
    assert estimators.__all__ == sorted(
        estimators.__all__, key=lambda name: (name.upper() != name, name)
    )
    for name in estimators.__all__:
        assert hasattr(estimators, name)


def test_nothing_public_is_left_out():
    found = {
        name
        for name, thing in vars(estimators).items()
        if not name.startswith("_") and not inspect.ismodule(thing) and name != "annotations"
    }
    assert found == set(estimators.__all__)


def test_every_public_function_says_what_it_takes_and_where_it_comes_from():
    for name in estimators.__all__:
        thing = getattr(estimators, name)
        if inspect.isfunction(thing):
            text = inspect.getdoc(thing)
            for section in ("Parameters", "Returns", "Raises"):
                assert f"{section}\n---" in text, (name, section)
