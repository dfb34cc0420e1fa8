"""Frozen dataclasses to plain JSON values and back, for whoever stores or sends them."""

from __future__ import annotations

import dataclasses
import functools
import json
import types
import typing
from collections.abc import Callable
from datetime import datetime
from enum import Enum
from typing import Any, TypeVar, Union, cast

import numpy as np

T = TypeVar("T")
Reader = Callable[[Any], Any]


def to_record(value: object) -> Any:  # noqa: ANN401 - JSON values have no narrower type
    """Return the value as JSON values.

    Dataclasses become objects, tuples lists, enums their values, moments ISO 8601 text, and
    numpy's single numbers those of Python.
    """
    if dataclasses.is_dataclass(value) and not isinstance(value, type):
        return {name: to_record(getattr(value, name)) for name in _names(type(value))}
    if isinstance(value, Enum):
        return value.value
    if isinstance(value, (tuple, list)):
        return [to_record(item) for item in value]
    if isinstance(value, datetime):
        return value.isoformat()
    if isinstance(value, np.generic):
        return value.item()
    return value


def to_json(value: object) -> str:
    """Return the value as compact JSON text; infinite numbers are written as Python writes them."""
    return json.dumps(to_record(value), ensure_ascii=False, separators=(",", ":"))


def from_json(kind: type[T], text: str) -> T:
    """Return what ``to_json`` wrote; unknown fields are ignored, absent ones take defaults."""
    return from_record(kind, json.loads(text))


def from_record(kind: type[T], record: Any) -> T:  # noqa: ANN401
    """Return a value of the given kind from what :func:`to_record` made."""
    return cast(T, _reader(cast(Any, kind))(record))


# How a class is written and read is worked out once: a study has hundreds of questions.


@functools.cache
def _names(kind: type) -> tuple[str, ...]:
    return tuple(field.name for field in dataclasses.fields(kind))


@functools.cache
def _reader(kind: Any) -> Reader:  # noqa: ANN401 - types as typing gives them
    origin = typing.get_origin(kind)
    if origin in (Union, types.UnionType):
        return _optional_reader(kind)
    if origin is tuple:
        return _tuple_reader(typing.get_args(kind))
    if kind is float:
        return _float
    if not isinstance(kind, type):
        return _as_is
    if dataclasses.is_dataclass(kind):
        return _dataclass_reader(kind)
    if issubclass(kind, Enum):
        return kind
    return datetime.fromisoformat if kind is datetime else _as_is


def _as_is(record: Any) -> Any:  # noqa: ANN401
    return record


def _float(record: Any) -> Any:  # noqa: ANN401
    return float(record) if isinstance(record, int) else record


def _optional_reader(kind: Any) -> Reader:  # noqa: ANN401
    read = _reader(next(k for k in typing.get_args(kind) if k is not type(None)))
    return lambda record: None if record is None else read(record)


def _tuple_reader(kinds: tuple[Any, ...]) -> Reader:
    if len(kinds) == 2 and kinds[1] is Ellipsis:
        read = _reader(kinds[0])
        return lambda record: tuple(map(read, record))
    readers = [_reader(k) for k in kinds]
    return lambda record: tuple(read(item) for read, item in zip(readers, record, strict=True))


def _dataclass_reader(kind: type) -> Reader:
    hints = typing.get_type_hints(kind)
    readers = {name: _reader(hints[name]) for name in _names(kind)}

    def read(record: dict[str, Any]) -> Any:  # noqa: ANN401
        known = {name: readers[name](item) for name, item in record.items() if name in readers}
        return kind(**known)

    return read
