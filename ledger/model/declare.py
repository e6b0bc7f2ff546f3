"""How a kind of entry is declared: one frozen record whose fields carry what the person must know.

The slip on the screen, the arguments of the command, the columns of a file, the JSON body in the
book and its schema are all read from the same declaration, so they cannot drift apart.
"""

from __future__ import annotations

import dataclasses
from collections.abc import Callable
from dataclasses import dataclass
from enum import StrEnum
from typing import Any, TypeVar

from ledger.model.things import ThingKind
from ledger.units import Dimension


class Takes(StrEnum):
    """What kind of text a field takes."""

    TEXT = "text"
    NAME = "name"
    SHARE = "share"
    CHOICE = "choice"
    QUANTITY = "quantity"
    MEASURE = "measure"
    RATIO = "ratio"
    WHOLE = "whole number"
    DATE = "date"
    YES_NO = "yes or no"
    OFFCUT = "offcut"


@dataclass(frozen=True, slots=True, kw_only=True)
class Field:
    """One field of a kind. `word` is its name for people and files, `key` its name in the body."""

    word: str
    key: str
    takes: Takes
    tip: str
    required: bool
    many: bool = False
    things: tuple[ThingKind, ...] = ()
    dimensions: tuple[Dimension, ...] = ()
    choices: tuple[str, ...] = ()
    mints: ThingKind | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Kind:
    """A declared kind of entry: its word, what it says, its record and its fields in slip order."""

    word: str
    tip: str
    record: type
    fields: tuple[Field, ...]
    one_of: tuple[tuple[str, ...], ...] = ()

    def field(self, word: str) -> Field | None:
        """The field of that word."""
        return next((field for field in self.fields if field.word == word), None)


KINDS: dict[str, Kind] = {}

_R = TypeVar("_R")


def kind(word: str, tip: str, *, one_of: tuple[tuple[str, ...], ...] = ()) -> Callable[[type[_R]], type[_R]]:
    """Declare a frozen record as a kind of entry. `one_of` lists groups of which exactly one is given."""

    def declare(record: type[_R]) -> type[_R]:
        fields = tuple(
            dataclasses.replace(field.metadata["field"], key=field.name)
            for field in dataclasses.fields(record)  # type: ignore[arg-type]
            if "field" in field.metadata
        )
        KINDS[word] = Kind(word=word, tip=tip, record=record, fields=fields, one_of=one_of)
        return record

    return declare


def _declare(word: str, takes: Takes, tip: str, required: bool, **more: Any) -> Any:
    declared = Field(word=word, key=word, takes=takes, tip=tip, required=required, **more)
    many = bool(more.get("many"))
    if required:
        return dataclasses.field(metadata={"field": declared})
    return dataclasses.field(default=() if many else None, metadata={"field": declared})


def text_of(word: str, tip: str, *, required: bool = False) -> Any:
    """Free text."""
    return _declare(word, Takes.TEXT, tip, required)


def name_of(
    word: str,
    *things: ThingKind,
    tip: str,
    required: bool = False,
    many: bool = False,
    mints: ThingKind | None = None,
) -> Any:
    """The name or number of a known thing; with `mints`, a number is given out if none is written."""
    return _declare(word, Takes.NAME, tip, required, things=things, many=many, mints=mints)


def shares_of(word: str, *things: ThingKind, tip: str, required: bool = False) -> Any:
    """Several sources, each with its grams or with the split unknown."""
    return _declare(word, Takes.SHARE, tip, required, things=things, many=True)


def quantity_of(
    word: str, dimension: Dimension, *, tip: str, required: bool = False, many: bool = False
) -> Any:
    """A number with a unit; the attribute's name carries the SI unit."""
    return _declare(word, Takes.QUANTITY, tip, required, dimensions=(dimension,), many=many)


def measure_of(word: str, *dimensions: Dimension, tip: str, required: bool = False) -> Any:
    """A number with a unit of any of several dimensions."""
    return _declare(word, Takes.MEASURE, tip, required, dimensions=dimensions)


def choice_of(word: str, *choices: str, tip: str, required: bool = False) -> Any:
    """One of a few words."""
    return _declare(word, Takes.CHOICE, tip, required, choices=choices)


def special(word: str, takes: Takes, *, tip: str, required: bool = False) -> Any:
    """A ratio, whole number, date, yes or no, or offcut."""
    return _declare(word, takes, tip, required)
