"""What fits into a field of a slip, and how it then stands there; the caller looks names up."""

from __future__ import annotations

import re
from collections.abc import Callable
from dataclasses import dataclass
from datetime import UTC, datetime

from ledger.errors import LedgerError
from ledger.model.declare import Field, Takes
from ledger.model.things import ThingKind
from ledger.operations.find_thing import FoundThing
from ledger.tui.crew import read_badge
from ledger.units import (
    Dimension,
    Display,
    read_any_quantity,
    read_date,
    read_moment,
    read_quantity,
    read_ratio,
)

Find = Callable[[str], FoundThing | None]

# Text fields that hold a code off a package or a file: whatever a reader sends belongs there.
_CODES = frozenset({"maker_code", "certificate", "revision", "file"})

_LABELS: dict[Display, dict[Dimension, str]] = {
    Display.METRIC: {
        Dimension.MASS: "g",
        Dimension.LENGTH: "mm",
        Dimension.AREA: "m2",
        Dimension.AREAL_MASS: "g/m2",
        Dimension.DENSITY: "kg/m3",
        Dimension.DURATION: "min",
        Dimension.TEMPERATURE: "C",
        Dimension.FRACTION: "%",
        Dimension.ANGLE: "deg",
        Dimension.VOLUME: "L",
    },
    Display.US: {
        Dimension.MASS: "oz",
        Dimension.LENGTH: "in",
        Dimension.AREA: "ft2",
        Dimension.AREAL_MASS: "oz/yd2",
        Dimension.DENSITY: "lb/ft3",
        Dimension.DURATION: "min",
        Dimension.TEMPERATURE: "F",
        Dimension.FRACTION: "%",
        Dimension.ANGLE: "deg",
        Dimension.VOLUME: "US gal",
    },
}
# Only whether a time can be read is asked here; which day it falls on is seen when it is logged.
_SOME_DAY = datetime(2000, 1, 1, tzinfo=UTC)
_POUNDS = frozenset({"weigh", "sheet", "weigh_points"})
_PLAIN_NUMBER = re.compile(r"[+-]?\s*(?:[0-9][0-9.,]*|[.,][0-9]+)(?:[eE][+-]?[0-9]{1,3})?")


@dataclass(frozen=True, slots=True, kw_only=True)
class Misfit:
    """Why a text cannot stand in a field, and what can."""

    what: str
    do: str


def unit_of_label(kind: str, field: Field, display: Display) -> str | None:
    """The unit in a field's label; None where the text must carry its own."""
    if field.takes is Takes.SHARE:
        return _LABELS[display][Dimension.MASS]
    if field.takes is not Takes.QUANTITY or len(field.dimensions) != 1:
        return None
    dimension = field.dimensions[0]
    if display is Display.US and dimension is Dimension.MASS and kind in _POUNDS:
        return "lb"
    return _LABELS[display].get(dimension)


def fit(field: Field, text: str, unit: str | None, find: Find, *, scanned: bool = False) -> str | Misfit:
    """The text as it will stand in the field, or why it cannot."""
    stripped = " ".join(text.split())
    if field.word == "at":
        return _read(stripped, lambda written: read_moment(written, _SOME_DAY))
    reader = {
        Takes.TEXT: lambda: _free(field, stripped, find, scanned=scanned),
        Takes.NAME: lambda: _names(field, stripped, find),
        Takes.SHARE: lambda: _shares(field, stripped, unit, find),
        Takes.CHOICE: lambda: _choice(field, stripped),
        Takes.YES_NO: lambda: _yes_no(stripped),
        Takes.WHOLE: lambda: _whole(stripped),
        Takes.QUANTITY: lambda: _quantities(field, stripped, unit),
        Takes.MEASURE: lambda: _measure(field, stripped),
        Takes.RATIO: lambda: _read(stripped, read_ratio),
        Takes.DATE: lambda: _read(stripped, read_date),
    }.get(field.takes)
    return stripped if reader is None else reader()


def takes_thing(field: Field, thing: FoundThing) -> bool:
    """Whether a thing of this kind is what the field is for."""
    if field.mints is not None:
        return False
    return thing.kind in field.things or (thing.kind is ThingKind.PART and ThingKind.PIECE in field.things)


def takes_person(field: Field) -> bool:
    """Whether the field is filled by a badge."""
    return field.things == (ThingKind.PERSON,)


def text_of(thing: FoundThing) -> str:
    """How a thing stands in a field: a piece by its name, all else by its number."""
    return thing.name if thing.kind in (ThingKind.PIECE, ThingKind.PART) else thing.number or thing.name


def split_names(text: str) -> tuple[str, ...]:
    """Several names, divided by semicolons, commas or spaces."""
    return tuple(part for part in re.split(r"[;,\s]+", text) if part)


def split_quantities(text: str) -> tuple[str, ...]:
    """Several quantities, divided by semicolons or by a plus between them."""
    return tuple(part.strip() for part in re.split(r";|(?<=\S)\s*\+", text.lstrip("+ ")) if part.strip())


def is_number(text: str) -> bool:
    """Whether the text is a number alone."""
    return _PLAIN_NUMBER.fullmatch(text.strip()) is not None


def with_unit(text: str, unit: str | None) -> str:
    """The text with the label's unit where it has none."""
    tight = " ".join(text.split()).removeprefix("+").strip()
    return f"{tight} {unit}" if unit is not None and is_number(tight) else tight


def things_named(field: Field) -> str:
    """`a lot or a sheet`: what the field wants, in words."""
    words = {ThingKind.BATCH: "cup"}
    names = [words.get(kind, kind.value) for kind in field.things]
    return " or ".join(names) if names else "words"


def _free(field: Field, text: str, find: Find, *, scanned: bool) -> str | Misfit:
    if scanned and field.word not in _CODES:
        if read_badge(text) is not None:
            return Misfit(what="that is a badge", do=f"{_label(field)} wants words: {field.tip}")
        thing = find(text)
        if thing is not None:
            return Misfit(what=thing.says, do=f"{_label(field)} wants words: {field.tip}")
    return text


def _names(field: Field, text: str, find: Find) -> str | Misfit:
    if field.mints is not None:
        return text
    if takes_person(field):
        badge = read_badge(text)
        if badge is None and not re.fullmatch(r"[A-Za-z]{1,5}[0-9]?", text):
            return Misfit(what=f"{text!r} is no badge", do="scan a badge, or type initials")
        return badge or text.upper()
    if not field.many:
        return _name(field, text, find)
    names: list[str] = []
    for part in split_names(text):
        found = _name(field, part, find)
        if isinstance(found, Misfit):
            return found
        names.append(found)
    return "; ".join(names)


def _name(field: Field, text: str, find: Find) -> str | Misfit:
    thing = find(text)
    if thing is not None:
        if takes_thing(field, thing):
            return text_of(thing)
        return Misfit(what=thing.says, do=f"{_label(field)} wants a {things_named(field)}")
    part, slash, running = text.rpartition("/")
    if slash and running.isdigit() and ThingKind.PIECE in field.things and find(part) is not None:
        return text
    return Misfit(what=f"{text!r} names nothing known", do=f"{_label(field)} wants a {things_named(field)}")


def _shares(field: Field, text: str, unit: str | None, find: Find) -> str | Misfit:
    shares: list[str] = []
    for part in (one.strip() for one in text.split(";")):
        if not part:
            continue
        # `present` holds plain words such as peel ply, so only the end can be its grams.
        name, _, rest = part.partition(" ") if field.things else (part, "", "")
        if field.things:
            found = _name(field, name, find)
            if isinstance(found, Misfit):
                return found
            name = found
        mass = with_unit(rest, unit) if rest else ""
        trouble = None if not mass else _read(mass, lambda written: read_quantity(written, Dimension.MASS))
        if isinstance(trouble, Misfit):
            return trouble
        shares.append(f"{name} {mass}".strip())
    return "; ".join(shares)


def _choice(field: Field, text: str) -> str | Misfit:
    fitting = [choice for choice in field.choices if choice.startswith(text.casefold())]
    if text.casefold() in field.choices:
        return text.casefold()
    if text and len(fitting) == 1:
        return fitting[0]
    return Misfit(what=f"{text!r} is none of them", do=f"write one of: {', '.join(field.choices)}")


def _yes_no(text: str) -> str | Misfit:
    answer = {"y": "yes", "yes": "yes", "n": "no", "no": "no"}.get(text.casefold())
    return answer or Misfit(what=f"{text!r} is neither", do="write yes or no")


def _whole(text: str) -> str | Misfit:
    if text.isascii() and text.isdigit():
        return str(int(text))
    return Misfit(what=f"{text!r} is no whole number", do="write digits only, for example 3")


def _quantities(field: Field, text: str, unit: str | None) -> str | Misfit:
    parts = split_quantities(text) if field.many else (text,)
    written = [with_unit(part, unit) for part in parts]
    if not written:
        return Misfit(what="that is no number", do=f"{_label(field)} wants {field.tip}")
    for one in written:
        trouble = _read(one, lambda found: read_quantity(found, field.dimensions[0]))
        if isinstance(trouble, Misfit):
            return trouble
    return "; ".join(written)


def _measure(field: Field, text: str) -> str | Misfit:
    return _read(text.removeprefix("+").strip(), lambda found: read_any_quantity(found, field.dimensions))


def _read(text: str, reader: Callable[[str], object]) -> str | Misfit:
    try:
        reader(text)
    except LedgerError as error:
        return Misfit(what=getattr(error, "what", str(error)), do=getattr(error, "do", ""))
    return text


def _label(field: Field) -> str:
    return field.word.replace("_", " ")
