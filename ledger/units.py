"""Text to SI and back, at the edge and nowhere else.

Input must carry its unit: in the text itself (`412 g`), in a column head (`planned_mass [g]`) or in
the label of a field. Factors are exact fractions, so `1 lb` is 0.45359237 kg to the last bit.
"""

from __future__ import annotations

import math
import re
from dataclasses import dataclass
from datetime import UTC, date, datetime
from enum import StrEnum
from fractions import Fraction

from ledger.errors import LedgerError

KG_PER_LB = 0.45359237
M_PER_IN = 0.0254
M3_PER_US_GAL = 0.003785411784
STANDARD_GRAVITY_M_S2 = 9.80665


class Dimension(StrEnum):
    """What a number measures. The value names it in a message."""

    MASS = "mass"
    LENGTH = "length"
    AREA = "area"
    VOLUME = "volume"
    DENSITY = "density"
    AREAL_MASS = "areal mass"
    LINEAR_MASS = "mass per length"
    DURATION = "duration"
    TEMPERATURE = "temperature"
    FLOW = "flow"
    ANGLE = "angle"
    FRACTION = "share"


class Display(StrEnum):
    """How a build shows its figures."""

    METRIC = "metric"
    US = "us"


class UnitError(LedgerError):
    """A text that is not a quantity. `what` says what is wrong, `do` what to write instead."""

    def __init__(self, what: str, do: str) -> None:
        super().__init__(f"{what}; {do}")
        self.what = what
        self.do = do


_LB = Fraction("0.45359237")
_OZ = _LB / 16
_IN = Fraction("0.0254")
_FT = 12 * _IN
_YD = 3 * _FT
_US_GAL = Fraction("0.003785411784")
_IMP_GAL = Fraction("0.00454609")
_G = Fraction(1, 1000)
_MM = Fraction(1, 1000)
_CM = Fraction(1, 100)
_L = Fraction(1, 1000)
_ML = Fraction(1, 10**6)

_FACTORS: dict[Dimension, dict[str, Fraction]] = {
    Dimension.MASS: {"kg": Fraction(1), "g": _G, "mg": _G / 1000, "t": Fraction(1000), "lb": _LB, "oz": _OZ},
    Dimension.LENGTH: {
        "m": Fraction(1),
        "mm": _MM,
        "cm": _CM,
        "um": _MM / 1000,
        "in": _IN,
        "ft": _FT,
        "yd": _YD,
    },
    Dimension.AREA: {
        "m2": Fraction(1),
        "cm2": _CM**2,
        "mm2": _MM**2,
        "in2": _IN**2,
        "ft2": _FT**2,
        "yd2": _YD**2,
    },
    Dimension.VOLUME: {
        "m3": Fraction(1),
        "L": _L,
        "l": _L,
        "dL": _L / 10,
        "cL": _L / 100,
        "mL": _ML,
        "ml": _ML,
        "cm3": _ML,
        "mm3": _MM**3,
        "US gal": _US_GAL,
        "imp gal": _IMP_GAL,
        "US qt": _US_GAL / 4,
        "US fl oz": _US_GAL / 128,
        "in3": _IN**3,
        "ft3": _FT**3,
    },
    Dimension.DENSITY: {
        "kg/m3": Fraction(1),
        "g/cm3": Fraction(1000),
        "g/mL": Fraction(1000),
        "kg/L": Fraction(1000),
        "lb/ft3": _LB / _FT**3,
        "lb/in3": _LB / _IN**3,
        "lb/US gal": _LB / _US_GAL,
        "lb/imp gal": _LB / _IMP_GAL,
    },
    Dimension.AREAL_MASS: {
        "kg/m2": Fraction(1),
        "g/m2": _G,
        "gsm": _G,
        "oz/yd2": _OZ / _YD**2,
        "oz/ft2": _OZ / _FT**2,
        "lb/ft2": _LB / _FT**2,
    },
    Dimension.LINEAR_MASS: {
        "kg/m": Fraction(1),
        "g/m": _G,
        "tex": _G / 1000,
        "lb/ft": _LB / _FT,
        "oz/ft": _OZ / _FT,
        "oz/yd": _OZ / _YD,
        "lb/in": _LB / _IN,
    },
    Dimension.DURATION: {
        "s": Fraction(1),
        "min": Fraction(60),
        "h": Fraction(3600),
        "d": Fraction(86400),
        "day": Fraction(86400),
        "days": Fraction(86400),
    },
    Dimension.FLOW: {
        "m3/s": Fraction(1),
        "L/h": _L / 3600,
        "L/min": _L / 60,
        "US gal/h": _US_GAL / 3600,
        "imp gal/h": _IMP_GAL / 3600,
    },
    Dimension.ANGLE: {"deg": Fraction(1), "\N{DEGREE SIGN}": Fraction(1)},
    Dimension.FRACTION: {"%": Fraction(1, 100)},
}

_KELVIN_AT: dict[str, tuple[Fraction, Fraction]] = {
    "K": (Fraction(1), Fraction(0)),
    "C": (Fraction(1), Fraction("273.15")),
    "F": (Fraction(5, 9), Fraction("459.67") * Fraction(5, 9)),
}

SI_UNIT: dict[Dimension, str] = {
    Dimension.MASS: "kg",
    Dimension.LENGTH: "m",
    Dimension.AREA: "m2",
    Dimension.VOLUME: "m3",
    Dimension.DENSITY: "kg/m3",
    Dimension.AREAL_MASS: "kg/m2",
    Dimension.LINEAR_MASS: "kg/m",
    Dimension.DURATION: "s",
    Dimension.TEMPERATURE: "K",
    Dimension.FLOW: "m3/s",
    Dimension.ANGLE: "deg",
    Dimension.FRACTION: "1",
}

_EXAMPLE: dict[Dimension, tuple[str, str]] = {
    Dimension.MASS: ("g", "lb"),
    Dimension.LENGTH: ("mm", "in"),
    Dimension.AREA: ("m2", "ft2"),
    Dimension.VOLUME: ("L", "US gal"),
    Dimension.DENSITY: ("kg/m3", "lb/ft3"),
    Dimension.AREAL_MASS: ("g/m2", "oz/yd2"),
    Dimension.LINEAR_MASS: ("g/m", "oz/ft"),
    Dimension.DURATION: ("min", "h"),
    Dimension.TEMPERATURE: ("C", "F"),
    Dimension.FLOW: ("L/h", "US gal/h"),
    Dimension.ANGLE: ("deg", "deg"),
    Dimension.FRACTION: ("%", "%"),
}

_NUMBER = re.compile(
    r"^\s*(?P<sign>[+-]?)\s*(?P<digits>[0-9][0-9.,]*|[.,][0-9]+)(?P<exponent>[eE][+-]?[0-9]{1,3})?\s*"
)
_SPOKEN = {
    "grams": "g",
    "gram": "g",
    "lbs": "lb",
    "inch": "in",
    '"': "in",
    "litres": "L",
    "liters": "L",
    "litre": "L",
    "liter": "L",
    "degC": "C",
    "\N{DEGREE SIGN}C": "C",
    "degF": "F",
    "\N{DEGREE SIGN}F": "F",
    "minutes": "min",
    "hours": "h",
    "hour": "h",
    "USgal": "US gal",
    "impgal": "imp gal",
}


def read_number(text: str) -> float:
    """Read a plain number. `412,3` is read; `1,250` could be two numbers and is refused."""
    number, rest = _split_number(text, unit_example="")
    if rest:
        raise UnitError(f"{text.strip()!r} is not a plain number", "write digits only, for example 12.5")
    return number


def read_quantity(text: str, dimension: Dimension, *, unit: str | None = None) -> float:
    """Read `text` as a quantity of `dimension` and return it in SI.

    `unit` is the unit of the column head or field label, used where the text has none.

    Raises
        UnitError: no unit anywhere, an unknown or ambiguous unit, an ambiguous number, a value that
        is not finite.
    """
    example = _EXAMPLE[dimension][0]
    number, rest = _split_number(text, unit_example=example)
    return to_si(number, _unit_of(rest, unit, text, dimension), dimension)


def read_any_quantity(
    text: str, dimensions: tuple[Dimension, ...], *, unit: str | None = None
) -> tuple[float, Dimension]:
    """Read `text` as the first of several dimensions whose unit fits, for a lot counted in kg, m2 or m."""
    number, rest = _split_number(text, unit_example=_EXAMPLE[dimensions[0]][0])
    written = rest or unit or ""
    for dimension in dimensions:
        if _known_unit(written, dimension) is not None:
            return to_si(number, _unit_of(rest, unit, text, dimension), dimension), dimension
    choices = " or ".join(
        f"{text.strip().split(' ')[0]} {_EXAMPLE[dimension][0]}" for dimension in dimensions
    )
    problem = f"{text.strip()!r} has no unit" if not written else f"{written!r} is not a unit that fits here"
    raise UnitError(problem, f"write {choices}")


def to_si(number: float, unit: str, dimension: Dimension) -> float:
    """Convert exactly; the only rounding is the last one, to a float."""
    exact = Fraction(number)
    if dimension is Dimension.TEMPERATURE:
        factor, offset = _KELVIN_AT[unit]
        return float(exact * factor + offset)
    return float(Fraction(repr(number)) * _FACTORS[dimension][unit])


def from_si(value: float, unit: str, dimension: Dimension) -> float:
    """The number that stands before `unit` for an SI value."""
    if dimension is Dimension.TEMPERATURE:
        factor, offset = _KELVIN_AT[unit]
        return float((Fraction(value) - offset) / factor)
    return float(Fraction(value) / _FACTORS[dimension][unit])


def unit_in_head(head: str) -> tuple[str, str | None]:
    """Split a column head: `planned_mass [g]` is `("planned_mass", "g")`."""
    match = re.fullmatch(r"\s*(.*?)\s*\[\s*(.*?)\s*\]\s*", head)
    if match is None:
        return head.strip(), None
    return match.group(1), match.group(2)


def check_unit(unit: str, dimension: Dimension) -> str:
    """The unit under its own name, or a UnitError that says which units fit."""
    return _unit_of(unit, None, unit, dimension)


def read_ratio(text: str) -> float:
    """Read `100:27` as hardener per resin by mass, 0.27."""
    parts = text.split(":")
    if len(parts) != 2:
        raise UnitError(
            f"{text.strip()!r} is not a mix ratio", "write resin to hardener by mass, for example 100:27"
        )
    resin, hardener = (read_number(part) for part in parts)
    if resin <= 0 or hardener <= 0:
        raise UnitError(f"{text.strip()!r} has a part that is not above zero", "write for example 100:27")
    return hardener / resin


def read_date(text: str) -> date:
    """Read an ISO date. `03/04/26` is refused with both readings shown."""
    try:
        return date.fromisoformat(text.strip())
    except ValueError:
        raise UnitError(*_date_trouble(text)) from None


def read_moment(text: str, now: datetime) -> datetime:
    """Read an ISO date and time, or a bare time of the day of `now`; without an offset, that of `now`."""
    stripped = text.strip()
    if stripped.lower() == "now":
        return now
    try:
        if re.fullmatch(r"\d{1,2}:\d{2}(:\d{2})?", stripped):
            moment = datetime.combine(now.date(), datetime.strptime(stripped[:5].zfill(5), "%H:%M").time())
        else:
            moment = datetime.fromisoformat(stripped)
    except ValueError:
        raise UnitError(*_date_trouble(text)) from None
    return moment if moment.tzinfo is not None else moment.replace(tzinfo=now.tzinfo or UTC)


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


def _split_number(text: str, *, unit_example: str) -> tuple[float, str]:
    match = _NUMBER.match(text)
    if match is None:
        wanted = (
            f"write a number and a unit, for example 4.2 {unit_example}"
            if unit_example
            else "write for example 12.5"
        )
        raise UnitError(f"{text.strip()!r} is not a number", wanted)
    digits = _plain_digits(match.group("digits"), text, unit_example)
    number = float(f"{match.group('sign')}{digits}{match.group('exponent') or ''}")
    if not math.isfinite(number):
        raise UnitError(f"{text.strip()!r} is not a finite number", "write the number you read")
    return number, " ".join(text[match.end() :].split())


def _plain_digits(digits: str, text: str, unit: str) -> str:
    unit_text = f" {unit}" if unit else ""
    if ("," in digits and "." in digits) or digits.count(",") > 1 or digits.count(".") > 1:
        raise UnitError(
            f"{text.strip()!r} mixes thousands marks and decimals",
            f"write without thousands marks, for example 1250.5{unit_text}",
        )
    if re.fullmatch(r"[1-9][0-9]{0,2},[0-9]{3}", digits):
        whole, thousandths = digits.split(",")
        raise UnitError(
            f"{text.strip()!r} can be read as {whole}{thousandths} or as {whole}.{thousandths}",
            f"write {whole}{thousandths}{unit_text} or {whole}.{thousandths}{unit_text}",
        )
    return digits.replace(",", ".")


def _known_unit(written: str, dimension: Dimension) -> str | None:
    table = _KELVIN_AT if dimension is Dimension.TEMPERATURE else _FACTORS[dimension]
    folded = (
        written.strip()
        .replace("\N{SUPERSCRIPT TWO}", "2")
        .replace("\N{SUPERSCRIPT THREE}", "3")
        .replace("^", "")
    )
    folded = _SPOKEN.get(folded, folded)
    return folded if folded in table else None


def _unit_of(rest: str, unit: str | None, text: str, dimension: Dimension) -> str:
    written = rest or unit or ""
    stripped = text.strip()
    if not written:
        first, second = _EXAMPLE[dimension]
        wanted = (
            f"write {stripped} {first}"
            if first == second
            else f"write {stripped} {first} or {stripped} {second}"
        )
        raise UnitError(f"{stripped!r} has no unit", wanted)
    if re.fullmatch(r"gal(lons?)?(/h)?", written):
        raise UnitError(f"{written!r} can be US or imperial", "write US gal or imp gal")
    known = _known_unit(written, dimension)
    if known is None:
        units = ", ".join(_KELVIN_AT if dimension is Dimension.TEMPERATURE else _FACTORS[dimension])
        raise UnitError(f"{written!r} is not a unit of {dimension.value}", f"write one of {units}")
    return known


def _date_trouble(text: str) -> tuple[str, str]:
    stripped = text.strip()
    match = re.fullmatch(r"(\d{1,2})[/.](\d{1,2})[/.](\d{2}|\d{4})", stripped)
    if match is None:
        return f"{stripped!r} is not a date", "write year-month-day, for example 2026-04-03"
    first, second, year = match.groups()
    year = year if len(year) == 4 else f"20{year}"
    one, other = f"{year}-{second.zfill(2)}-{first.zfill(2)}", f"{year}-{first.zfill(2)}-{second.zfill(2)}"
    return f"{stripped!r} can be read as {one} or as {other}", f"write {one} or {other}"
