"""From coded answers and groupings, as a caller passes them, to checked ones."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

import numpy as np
from numpy.typing import ArrayLike, NDArray

from estimators.array_checks import as_count
from estimators.errors import InputError

Coded = dict[str, tuple[NDArray[Any], int]]  # name: (codes of the rows, how many codes there are)


def coded_columns(
    given: Mapping[str, ArrayLike], name: str, n: int, codes: Mapping[str, int] | None
) -> Coded:
    """Return checked codes and how many there are of each.

    Parameters
    ----------
    given : {name: (n,) int}
        Codes from 0; -1 where there is none.
    name : str
        Name of the argument.
    n : int
        Rows.
    codes : {name: how many}, optional
        Else the largest code that occurs, plus 1.

    Raises
    ------
    InputError
        If codes are not whole numbers from -1, do not fit the rows, or exceed ``codes``.
    """
    if not isinstance(given, Mapping):
        raise InputError(
            name, type(given).__name__, "must be a dict of coded answers", "pass {name: codes}"
        )
    return {key: _checked(given[key], f"{name}[{key!r}]", n, key, codes) for key in given}


def refuse_unnamed_groupings(groupings: Mapping[str, ArrayLike]) -> None:
    """Refuse a grouping without a name, which is kept for everyone."""
    if "" in groupings:
        raise InputError(
            "groupings", "a grouping without a name", "must all have names", "name this one"
        )


def refuse_unknown_codes(codes: Mapping[str, int] | None, *known: Mapping[str, Any]) -> None:
    """Refuse numbers of codes for something that was not given."""
    extra = [name for name in codes or {} if not any(name in names for names in known)]
    if extra:
        raise InputError(
            "codes", repr(extra[0]), "must name only answers and groupings", "correct the name"
        )


def _checked(
    values: ArrayLike, name: str, n: int, key: str, codes: Mapping[str, int] | None
) -> tuple[NDArray[Any], int]:
    found = np.asarray(values)
    if found.dtype.kind not in "iub":
        raise InputError(
            name,
            f"values of type {found.dtype}",
            "must hold whole numbers, one code for each row",
            "number the answers from 0 and write -1 where there is none",
        )
    if found.ndim != 1 or len(found) != n:
        raise InputError(
            name,
            f"an array of shape {found.shape}",
            f"must hold one code for each of the {n:,} rows",
            "pass arrays with the same rows",
        )
    least, most = (int(found.min()), int(found.max())) if n else (-1, -1)
    if least < -1:
        raise InputError(
            name, least, "must hold codes from 0, and -1 where there is none", "correct the codes"
        )
    if codes is None or key not in codes:
        return found, most + 1
    how_many = as_count(codes[key], f"codes[{key!r}]", least=0)
    if most >= how_many:
        raise InputError(
            name,
            most,
            f"must hold codes below the {how_many} that codes[{key!r}] announces",
            "raise that number or correct the codes",
        )
    return found, how_many
