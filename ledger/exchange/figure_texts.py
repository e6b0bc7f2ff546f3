"""Figures as text: as short as a person would write them, and read back as what they were."""

from __future__ import annotations

import math
from decimal import Decimal

from ledger.units import Dimension, from_si, read_quantity

# More digits than anybody measures; a figure that was typed reads back to its last bit.
_DIGITS = 12
_M_PER_MM = 0.001


def plain(number: float, digits: int = _DIGITS) -> str:
    """A number without exponent and without noughts at its end: `0.08`, `2860`, `-137.991`."""
    text = format(Decimal(f"{number:.{digits}g}"), "f")
    if "." in text:
        text = text.rstrip("0").rstrip(".")
    return "0" if text in ("-0", "") else text


def figure(value: float, unit: str, dimension: Dimension) -> str:
    """An SI value in a unit, the unit left out: the shortest text that reads back as the same value.

    One that takes more than 12 digits is given with 12.
    """
    number = from_si(value, unit, dimension)
    for digits in range(3, _DIGITS):
        text = plain(number, digits)
        if read_quantity(text, dimension, unit=unit) == value:
            return text
    return plain(number)


def with_unit(value: float, unit: str, dimension: Dimension) -> str:
    """An SI value with its unit, such as `0.4 mm`."""
    return f"{figure(value, unit, dimension)} {unit}"


def millimetres(value_m: float) -> str:
    """A coordinate of a drawing or mesh: the text in mm that a reader turns into the same metres.

    Equal coordinates have equal texts, so what was flat and square stays so.
    """
    number = value_m / _M_PER_MM
    for near in (
        float(f"{number:.9g}"),
        number,
        math.nextafter(number, -math.inf),
        math.nextafter(number, math.inf),
    ):
        if near * _M_PER_MM == value_m:
            return exact(near)
    return exact(number)


def exact(number: float) -> str:
    """The shortest text that stands for this number and no other, without exponent."""
    text = repr(number).removesuffix(".0")
    if "e" in text:
        text = format(Decimal(text), "f")
    return "0" if text == "-0" else text
