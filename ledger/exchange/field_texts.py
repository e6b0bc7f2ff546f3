"""The texts that one field of an entry takes, read into the values its record keeps.

A text that cannot be read raises `UnitError`, whose two halves become the finding at that field.
"""

from __future__ import annotations

import re
from datetime import date
from typing import Any

from ledger.model.declare import Field, Takes
from ledger.model.things import KeptOffcut, Measure, Share
from ledger.units import (
    Dimension,
    UnitError,
    read_any_quantity,
    read_date,
    read_quantity,
    read_ratio,
    to_si,
)

_SI_UNIT = {
    Dimension.MASS: "kg",
    Dimension.LENGTH: "m",
    Dimension.AREA: "m2",
    Dimension.VOLUME: "m3",
    Dimension.TEMPERATURE: "K",
}
_SIGNED = {Dimension.ANGLE, Dimension.TEMPERATURE}
# Nothing of these cannot be: a sheet without length, a cup without resin, a scale without a step.
_NEVER_ZERO = {
    "quantity",
    "resolution",
    "capacity",
    "length",
    "width",
    "resin",
    "hardener",
    "areal_mass",
    "density",
    "pot_life",
    "area",
}
_DIFFERENCES = {"resolution", "accuracy"}
_YES_NO = {"yes": True, "y": True, "true": True, "no": False, "n": False, "false": False}
_AMOUNT = r"[+-]?\s*[0-9][0-9.,]*(?:[eE][+-]?[0-9]+)?(?:\s*[A-Za-z%][A-Za-z0-9/% ]*)?"
_SHARE = re.compile(rf"(?P<what>.+?)\s+(?P<amount>{_AMOUNT})")
_ONE_WORD_SHARE = re.compile(r"\S+(?:\s+[+-]?\s*[0-9][0-9.,]*(?:\s*[A-Za-z]+)?(?=\s|$))?(?=\s|$)")
_UNKNOWN_SPLIT = re.compile(r"\s*\(?split unknown\)?\s*$", re.IGNORECASE)
_SIZE = re.compile(r"(?P<length>[+-]?\s*[0-9][^xX×]*?)\s*[xX×]\s*(?P<width>[0-9].*)")
_HAS_UNIT = re.compile(r"[A-Za-z%°\"]")


def read_field(field: Field, given: object, unit: str | None) -> tuple[Any, str | None]:
    """The value of a field and the text to keep beside it, None where the value says it all.

    `given` is a text, a list of texts, or a truth value; `unit` is that of the column head.

    Raises
        UnitError: what was given is no value of this field.
    """
    texts = _texts_of(field, given)
    match field.takes:
        case Takes.QUANTITY if field.many:
            items = [item for text in texts for item in split_quantities(text)]
            return tuple(_quantity(field, item, unit) for item in items), _kept_text(items, unit)
        case Takes.SHARE:
            items = [item for text in texts for item in _split_shares(text, one_word=bool(field.things))]
            shares = tuple(_share(item, unit) for item in items)
            amounts = any(share.mass_kg is not None for share in shares)
            return shares, "; ".join(items) if amounts else None
        case Takes.NAME if field.many:
            return tuple(name for text in texts for name in split_names(text)), None
    text = _only(field, texts)
    match field.takes:
        case Takes.QUANTITY:
            return _quantity(field, text, unit), _kept_text([text], unit)
        case Takes.MEASURE:
            return _measure(field, text, unit), _kept_text([text], unit)
        case Takes.RATIO:
            return read_ratio(text), text
        case Takes.OFFCUT:
            return _offcut(text, unit), text if _SIZE.fullmatch(text) else None
        case _:
            return _plain(field, text), None


def split_names(text: str) -> tuple[str, ...]:
    """Names apart by `;`, else by commas, else by spaces."""
    for mark in (";", ","):
        if mark in text:
            return tuple(name for part in text.split(mark) if (name := part.strip()))
    return tuple(text.split())


def split_quantities(text: str) -> tuple[str, ...]:
    """Quantities apart by `;`, by `+` between two of them, or by a comma that is no decimal mark."""
    found = []
    for part in re.split(r";|,(?=\s)|(?<=[A-Za-z])\s*,", text):
        # A scale prints its sign before the number, so a leading + belongs to the reading.
        found.extend(re.split(r"(?<=\S)\s*\+(?=\s*[0-9])", part.strip()))
    return tuple(item for part in found if (item := part.strip()))


def _texts_of(field: Field, given: object) -> list[str]:
    if isinstance(given, bool):
        if field.takes is Takes.YES_NO:
            return ["yes" if given else "no"]
        raise UnitError(f"{str(given).lower()} is not what {field.word} takes", f"write {_example(field)}")
    if isinstance(given, date):
        return [given.isoformat()]
    if isinstance(given, (list, tuple)):
        if field.many:
            return [text for item in given for text in _texts_of(field, item)]
        raise UnitError(f"{field.word} takes one value, not a list", f"write {_example(field)}")
    if isinstance(given, (int, float)):
        if field.takes in (Takes.QUANTITY, Takes.MEASURE, Takes.SHARE, Takes.RATIO, Takes.OFFCUT):
            raise UnitError(
                f"{given} has no unit", f'write it as text with its unit, for example "{_example(field)}"'
            )
        return [str(given)]
    if isinstance(given, str):
        return [given.strip()] if given.strip() else []
    raise UnitError(f"{given!r} is not what {field.word} takes", f"write {_example(field)}")


def _only(field: Field, texts: list[str]) -> str:
    if len(texts) != 1:
        raise UnitError(f"{field.word} takes one value", f"write {_example(field)}")
    return texts[0]


def _quantity(field: Field, text: str, unit: str | None) -> float:
    dimension = field.dimensions[0]
    value = read_quantity(text, dimension, unit=unit)
    _check_size(field.word, text, value, dimension)
    return value


def _measure(field: Field, text: str, unit: str | None) -> Measure:
    value, dimension = read_any_quantity(text, field.dimensions, unit=unit)
    if dimension is Dimension.TEMPERATURE and field.word in _DIFFERENCES:
        # A step of 0.1 C is 0.1 K wide; as a temperature it would be 273.25 K.
        value -= to_si(0.0, _written_unit(text) or unit or "C", dimension)
        value = round(value, 12)
    _check_size(
        field.word, text, value, Dimension.LENGTH if dimension is Dimension.TEMPERATURE else dimension
    )
    return Measure(value=value, unit=_SI_UNIT[dimension])


def _written_unit(text: str) -> str | None:
    match = re.search(r"[A-Za-z°]+\s*$", text)
    return None if match is None else match.group().strip().replace("°", "").removeprefix("deg") or None


def _check_size(word: str, text: str, value: float, dimension: Dimension) -> None:
    if dimension in _SIGNED:
        return
    if value < 0:
        raise UnitError(f"{text!r} is below zero", f"write the {word} as a number above zero")
    if value == 0 and word in _NEVER_ZERO:
        raise UnitError(f"{text!r} is zero", f"write the {word} as a number above zero")
    if dimension is Dimension.FRACTION and value > 1:
        raise UnitError(f"{text!r} is more than the whole", "write at most 100 %")


def _split_shares(text: str, *, one_word: bool) -> tuple[str, ...]:
    marked = re.split(r";|,(?=\s)|(?<=[^0-9\s])\s*,", text)
    parts = [part.strip() for part in marked if part.strip()]
    if len(parts) > 1 or not one_word:
        return tuple(parts)
    # Numbers have no spaces, so a row of them needs no other mark between.
    return tuple(_ONE_WORD_SHARE.findall(_UNKNOWN_SPLIT.sub("", text)))


def _share(text: str, unit: str | None) -> Share:
    bare = _UNKNOWN_SPLIT.sub("", text)
    match = _SHARE.fullmatch(bare)
    if match is None:
        return Share(what=bare)
    amount = match.group("amount")
    mass = read_quantity(amount, Dimension.MASS, unit=unit)
    _check_size("mass", amount, mass, Dimension.MASS)
    return Share(what=match.group("what").strip(), mass_kg=mass)


def _offcut(text: str, unit: str | None) -> KeptOffcut:
    match = _SIZE.fullmatch(text)
    if match is None:
        return KeptOffcut(fate=text)
    width = match.group("width")
    # In 600 x 400 mm the unit at the end stands for both.
    shared = None if _HAS_UNIT.search(match.group("length")) else re.sub(r"^[0-9.,\s]+", "", width)
    length_m = read_quantity(match.group("length"), Dimension.LENGTH, unit=shared or unit)
    width_m = read_quantity(width, Dimension.LENGTH, unit=unit)
    for value in (length_m, width_m):
        _check_size("length", text, value, Dimension.LENGTH)
    return KeptOffcut(length_m=length_m, width_m=width_m)


def _plain(field: Field, text: str) -> object:
    match field.takes:
        case Takes.WHOLE:
            if not re.fullmatch(r"[0-9]{1,9}", text) or int(text) == 0:
                raise UnitError(f"{text!r} is not a whole number", "write for example 2")
            return int(text)
        case Takes.DATE:
            return read_date(text)
        case Takes.YES_NO:
            answer = _YES_NO.get(text.lower())
            if answer is None:
                raise UnitError(f"{text!r} is neither yes nor no", "write yes or no")
            return answer
        case Takes.CHOICE:
            choice = {word.lower(): word for word in field.choices}.get(" ".join(text.lower().split()))
            if choice is None:
                raise UnitError(f"{text!r} is none of the choices", f"write {' or '.join(field.choices)}")
            return choice
        case _:
            return text


def _kept_text(items: list[str], unit: str | None) -> str:
    return "; ".join(item if unit is None or _HAS_UNIT.search(item) else f"{item} {unit}" for item in items)


def _example(field: Field) -> str:
    match field.takes:
        case Takes.QUANTITY | Takes.MEASURE:
            return _EXAMPLES.get(field.dimensions[0], "12.5")
        case Takes.SHARE:
            return "B001K 120 g"
        case Takes.RATIO:
            return "100:27"
        case Takes.OFFCUT:
            return "600 mm x 400 mm"
        case Takes.DATE:
            return "2026-04-03"
        case Takes.YES_NO:
            return "yes or no"
        case Takes.CHOICE:
            return " or ".join(field.choices)
        case Takes.WHOLE:
            return "2"
        case _:
            return "text"


_EXAMPLES = {
    Dimension.MASS: "412.3 g",
    Dimension.LENGTH: "600 mm",
    Dimension.AREA: "0.5 m2",
    Dimension.VOLUME: "2 L",
    Dimension.DENSITY: "1150 kg/m3",
    Dimension.AREAL_MASS: "200 g/m2",
    Dimension.LINEAR_MASS: "34 g/m",
    Dimension.DURATION: "25 min",
    Dimension.TEMPERATURE: "21 C",
    Dimension.FLOW: "40 L/h",
    Dimension.ANGLE: "45 deg",
    Dimension.FRACTION: "45 %",
}
