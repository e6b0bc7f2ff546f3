"""A record as plain JSON values, and back. The body of an entry is its act, so read and written.

Keys are the record's attribute names, so a number's unit stands in its key; what is empty is left out.
"""

from __future__ import annotations

import dataclasses
import types
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from datetime import date, datetime
from enum import Enum
from typing import Any, TypeVar, Union, cast, get_args, get_origin, get_type_hints

from ledger.errors import LedgerError
from ledger.model import acts  # noqa: F401  the kinds are declared when this is imported
from ledger.model.acts import Act
from ledger.model.declare import KINDS

_R = TypeVar("_R")
_WORDS = {"with_others": "with"}
_Read = Callable[[Any], Any]
_defaults: dict[Any, tuple[tuple[str, Any], ...]] = {}
_readers: dict[Any, _Read] = {}


_NO_RECORD = (KeyError, TypeError, ValueError, AttributeError)


class UnreadableBody(LedgerError):
    """A body that is not that of its kind: another program wrote it, or it was changed."""


def body_of(act: Act) -> dict[str, Any]:
    """The act as the JSON object that is stored in the book."""
    body = cast(dict[str, Any], plain_of(act))
    body = {_WORDS.get(key, key): value for key, value in body.items()}
    if act.typed:
        body["typed"] = dict(act.typed)
    return body


def act_from_body(kind: str, body: Mapping[str, Any]) -> Act:
    """The act that `body_of` made this from.

    Raises
        UnreadableBody: an unknown kind, a missing or unknown key, a value of another type.
    """
    fields = _fields.get(kind) or _look_up_fields(kind)
    try:
        typed = body.get("typed")
        values = {
            fields.attribute[key]: value if fields.exact[key] is type(value) else fields.readers[key](value)
            for key, value in body.items()
            if key != "typed"
        }
        if typed is not None:
            values["typed"] = tuple(sorted((_text(word), _text(text)) for word, text in typed.items()))
        return cast(Act, fields.record(**values))
    except UnreadableBody:
        raise
    except _NO_RECORD as error:
        raise UnreadableBody(f"not the body of a {kind}: {error}") from error


def plain_of(value: Any) -> Any:
    """A frozen record as plain JSON values. Fields at their default are left out."""
    if value is None or isinstance(value, (str, int, float)):
        return value.value if isinstance(value, Enum) else value
    if isinstance(value, tuple):
        return [plain_of(item) for item in value]
    if isinstance(value, (date, datetime)):
        return value.isoformat()
    plain = {}
    for name, default in _defaults_of(type(value)):
        item = getattr(value, name)
        if item is not default and item != default:
            plain[name] = plain_of(item)
    return plain


def record_from(record: type[_R], plain: Mapping[str, Any]) -> _R:
    """The record that `plain_of` made this from.

    Raises
        UnreadableBody: a missing or unknown key, or a value of another type.
    """
    return cast(_R, _reader_of_record(record)(plain))


def _defaults_of(record: Any) -> tuple[tuple[str, Any], ...]:
    if record not in _defaults:
        _defaults[record] = _look_up_defaults(record)
    return _defaults[record]


def _look_up_defaults(record: Any) -> tuple[tuple[str, Any], ...]:
    return tuple((field.name, field.default) for field in dataclasses.fields(record))


def _reader_of_record(record: Any) -> _Read:
    if record not in _readers:
        _readers[record] = _make_reader(record)
    return _readers[record]


@dataclass(frozen=True, slots=True)
class _Fields:
    """How each key of a record's plain form is read; `exact` is the type that needs no reading."""

    record: Any
    attribute: dict[str, str]
    readers: dict[str, _Read]
    exact: dict[str, type | None]


_fields: dict[str, _Fields] = {}


def _look_up_fields(kind: str) -> _Fields:
    declared = KINDS.get(kind)
    if declared is None:
        raise UnreadableBody(f"{kind!r} is not a kind of entry this program knows")
    _fields[kind] = _fields_of(declared.record, _WORDS)
    return _fields[kind]


def _fields_of(record: Any, words: Mapping[str, str]) -> _Fields:
    hints = get_type_hints(record)
    names = {words.get(name, name): name for name, _ in _defaults_of(record)}
    return _Fields(
        record,
        names,
        {key: _reader_of(hints[name]) for key, name in names.items()},
        # Most values need no more than a look at their type; a call for each would double the time.
        {key: _EXACT.get(hints[name]) for key, name in names.items()},
    )


def _make_reader(record: Any) -> _Read:
    fields = _fields_of(record, {})
    readers, exact = fields.readers, fields.exact

    def read(plain: Any) -> Any:
        try:
            return record(
                **{
                    key: value if exact[key] is type(value) else readers[key](value)
                    for key, value in plain.items()
                }
            )
        except UnreadableBody:
            raise
        except _NO_RECORD as error:
            raise UnreadableBody(f"not a record of {record.__name__}: {error}") from error

    return read


def _reader_of(hint: Any) -> _Read:
    simple = _SIMPLE.get(hint)
    if simple is not None:
        return simple
    origin = get_origin(hint)
    if origin in (Union, types.UnionType):
        return _reader_of_union(get_args(hint))
    if origin is tuple:
        return _reader_of_tuple(get_args(hint))
    if isinstance(hint, type) and issubclass(hint, Enum):
        return hint
    if dataclasses.is_dataclass(hint):
        return _reader_of_record(hint)
    raise TypeError(f"no way to store {hint!r} in a body")


def _reader_of_union(hints: tuple[Any, ...]) -> _Read:
    choices = [choice for choice in hints if choice is not type(None)]
    if len(choices) == 1:
        given = _reader_of(choices[0])
        return lambda plain: None if plain is None else given(plain)
    records = [_reader_of_record(choice) for choice in choices if dataclasses.is_dataclass(choice)]
    if len(records) != len(choices):
        raise TypeError(f"no way to tell {choices!r} apart in a body")

    # Alternatives are told apart by which record's fields fit: no two of ours share all required ones.
    def read(plain: Any) -> Any:
        for read_record in records:
            try:
                return read_record(plain)
            except UnreadableBody:
                continue
        raise UnreadableBody(f"{plain!r} fits none of {choices!r}")

    return read


def _reader_of_tuple(items: tuple[Any, ...]) -> _Read:
    if len(items) == 2 and items[1] is Ellipsis:
        each, exact = _reader_of(items[0]), _EXACT.get(items[0])

        def read(plain: Any) -> Any:
            if type(plain) is not list:
                raise UnreadableBody(f"{plain!r} is not a list")
            return tuple([item if type(item) is exact else each(item) for item in plain])

        return read
    readers = tuple(_reader_of(item) for item in items)

    def read_each(plain: Any) -> Any:
        if type(plain) is not list:
            raise UnreadableBody(f"{plain!r} is not a list")
        return tuple([read(item) for read, item in zip(readers, plain, strict=True)])

    return read_each


def _text(plain: Any) -> str:
    if type(plain) is not str:
        raise UnreadableBody(f"{plain!r} is not text")
    return plain


def _number(plain: Any) -> float:
    if type(plain) is not float and type(plain) is not int:
        raise UnreadableBody(f"{plain!r} is not a number")
    return float(plain)


def _whole(plain: Any) -> int:
    if type(plain) is not int:
        raise UnreadableBody(f"{plain!r} is not a whole number")
    return plain


def _yes_no(plain: Any) -> bool:
    if type(plain) is not bool:
        raise UnreadableBody(f"{plain!r} is not true or false")
    return plain


_EXACT: dict[Any, type] = {
    **{kind: kind for kind in (str, float, int, bool)},
    str | None: str,
    float | None: float,
    int | None: int,
    bool | None: bool,
}
_SIMPLE: dict[Any, _Read] = {
    str: _text,
    float: _number,
    int: _whole,
    bool: _yes_no,
    date: date.fromisoformat,
    datetime: datetime.fromisoformat,
}
