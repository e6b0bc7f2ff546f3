"""How a build shows its figures: metric or US, rounded towards safety where that matters."""

from __future__ import annotations

import math
from dataclasses import dataclass
from enum import StrEnum

from ledger.factors import Dimension, from_si


class Display(StrEnum):
    """How a build shows its figures."""

    METRIC = "metric"
    US = "us"


@dataclass(frozen=True, slots=True, kw_only=True)
class ShownIn:
    """Unit, decimals and factor that a build shows one dimension in."""

    unit: str
    places: int


_SHOWN: dict[Display, dict[Dimension, ShownIn]] = {
    Display.METRIC: {
        Dimension.MASS: ShownIn(unit="kg", places=2),
        Dimension.LENGTH: ShownIn(unit="mm", places=1),
        Dimension.AREA: ShownIn(unit="m2", places=3),
        Dimension.VOLUME: ShownIn(unit="L", places=1),
        Dimension.DENSITY: ShownIn(unit="kg/m3", places=1),
        Dimension.AREAL_MASS: ShownIn(unit="g/m2", places=0),
        Dimension.LINEAR_MASS: ShownIn(unit="g/m", places=1),
        Dimension.DURATION: ShownIn(unit="min", places=0),
        Dimension.TEMPERATURE: ShownIn(unit="C", places=1),
        Dimension.FLOW: ShownIn(unit="L/h", places=1),
        Dimension.ANGLE: ShownIn(unit="deg", places=1),
        Dimension.FRACTION: ShownIn(unit="%", places=1),
    },
    Display.US: {
        Dimension.MASS: ShownIn(unit="lb", places=2),
        Dimension.LENGTH: ShownIn(unit="in", places=2),
        Dimension.AREA: ShownIn(unit="ft2", places=2),
        Dimension.VOLUME: ShownIn(unit="US gal", places=2),
        Dimension.DENSITY: ShownIn(unit="lb/ft3", places=2),
        Dimension.AREAL_MASS: ShownIn(unit="oz/yd2", places=2),
        Dimension.LINEAR_MASS: ShownIn(unit="oz/ft", places=2),
        Dimension.DURATION: ShownIn(unit="min", places=0),
        Dimension.TEMPERATURE: ShownIn(unit="F", places=1),
        Dimension.FLOW: ShownIn(unit="US gal/h", places=2),
        Dimension.ANGLE: ShownIn(unit="deg", places=1),
        Dimension.FRACTION: ShownIn(unit="%", places=1),
    },
}
_SMALL_MASS = {Display.METRIC: ShownIn(unit="g", places=1), Display.US: ShownIn(unit="oz", places=2)}


class Rounding(StrEnum):
    """Which way a shown figure may err: usable goes down, trapped goes up, all else to the nearest."""

    NEAREST = "nearest"
    DOWN = "down"
    UP = "up"


def shown_number(
    value: float,
    dimension: Dimension,
    display: Display,
    *,
    rounding: Rounding = Rounding.NEAREST,
    places: int | None = None,
) -> str:
    """The figure alone, in the build's unit, rounded towards safety where asked."""
    shown_in = _SHOWN[display][dimension]
    return _rounded(
        from_si(value, shown_in.unit, dimension), shown_in.places if places is None else places, rounding
    )


def shown_unit(dimension: Dimension, display: Display) -> str:
    """The unit that stands in a column head."""
    return _SHOWN[display][dimension].unit


def show(
    value: float | None,
    dimension: Dimension,
    display: Display,
    *,
    rounding: Rounding = Rounding.NEAREST,
    places: int | None = None,
) -> str:
    """The figure with its unit; a figure that does not exist is `-`."""
    if value is None:
        return "-"
    number = shown_number(value, dimension, display, rounding=rounding, places=places)
    return f"{number} {shown_unit(dimension, display)}"


def show_small_mass(mass_kg: float | None, display: Display) -> str:
    """A mass as a bench scale shows it: grams or ounces."""
    if mass_kg is None:
        return "-"
    shown_in = _SMALL_MASS[display]
    number = from_si(mass_kg, shown_in.unit, Dimension.MASS)
    return f"{_rounded(number, shown_in.places, Rounding.NEAREST)} {shown_in.unit}"


def _rounded(number: float, places: int, rounding: Rounding) -> str:
    scale = 10**places
    # A figure a hair off a round one by binary arithmetic is that round one, not the next step down.
    slack = 1e-9 * max(1.0, abs(number * scale))
    if rounding is Rounding.DOWN:
        number = math.floor(number * scale + slack) / scale
    elif rounding is Rounding.UP:
        number = math.ceil(number * scale - slack) / scale
    text = f"{number:.{places}f}"
    return text.removeprefix("-") if float(text) == 0 else text
