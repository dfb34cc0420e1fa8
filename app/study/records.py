"""Frozen dataclasses to plain JSON values and back, for whoever stores or sends them."""

from __future__ import annotations

import dataclasses
import json
import types
import typing
from enum import Enum
from typing import Any, TypeVar, Union, cast

T = TypeVar("T")


def to_record(value: object) -> Any:  # noqa: ANN401 - JSON values have no narrower type
    """Return the value as JSON values: dataclasses as objects, tuples as lists, enums by value."""
    if dataclasses.is_dataclass(value) and not isinstance(value, type):
        return {f.name: to_record(getattr(value, f.name)) for f in dataclasses.fields(value)}
    if isinstance(value, Enum):
        return value.value
    if isinstance(value, (tuple, list)):
        return [to_record(item) for item in value]
    return value


def to_json(value: object) -> str:
    """Return the value as compact JSON text."""
    return json.dumps(to_record(value), ensure_ascii=False, separators=(",", ":"))


def from_json(kind: type[T], text: str) -> T:
    """Return the dataclass that ``to_json`` wrote; unknown fields are ignored, absent ones default."""
    return from_record(kind, json.loads(text))


def from_record(kind: type[T], record: Any) -> T:  # noqa: ANN401
    """Return a value of the given kind from what :func:`to_record` made."""
    return cast(T, _read(kind, record))


def _read(kind: Any, record: Any) -> Any:  # noqa: ANN401
    origin = typing.get_origin(kind)
    if origin in (Union, types.UnionType):
        return _read_optional(kind, record)
    if origin is tuple:
        return _read_tuple(kind, record)
    if isinstance(kind, type) and dataclasses.is_dataclass(kind):
        return _read_dataclass(kind, record)
    if isinstance(kind, type) and issubclass(kind, Enum):
        return kind(record)
    if kind is float and isinstance(record, int):
        return float(record)
    return record


def _read_optional(kind: Any, record: Any) -> Any:  # noqa: ANN401
    if record is None:
        return None
    return _read(next(k for k in typing.get_args(kind) if k is not type(None)), record)


def _read_tuple(kind: Any, record: Any) -> tuple[Any, ...]:  # noqa: ANN401
    kinds = typing.get_args(kind)
    if len(kinds) == 2 and kinds[1] is Ellipsis:
        return tuple(_read(kinds[0], item) for item in record)
    return tuple(_read(k, item) for k, item in zip(kinds, record, strict=True))


def _read_dataclass(kind: Any, record: dict[str, Any]) -> Any:  # noqa: ANN401
    hints = typing.get_type_hints(kind)
    return kind(
        **{name: _read(hints[name], item) for name, item in record.items() if name in hints}
    )
