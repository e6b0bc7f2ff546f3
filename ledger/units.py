"""Text to SI and back, at the edge and nowhere else.

Input must carry its unit: in the text itself (`412 g`), in a column head (`planned_mass [g]`) or in
the label of a field. The units themselves are in `ledger.factors`, how figures are shown in
`ledger.display`; both are had from here as well.
"""

from __future__ import annotations

import math
import re
from datetime import UTC, date, datetime

from ledger.display import (
    Display,
    Rounding,
    ShownIn,
    show,
    show_small_mass,
    shown_number,
    shown_unit,
)
from ledger.factors import (
    KG_PER_LB,
    M3_PER_US_GAL,
    M_PER_IN,
    SI_UNIT,
    STANDARD_GRAVITY_M_S2,
    Dimension,
    UnitError,
    from_si,
    to_si,
    units_of,
)

__all__ = [
    "KG_PER_LB",
    "M3_PER_US_GAL",
    "M_PER_IN",
    "SI_UNIT",
    "STANDARD_GRAVITY_M_S2",
    "Dimension",
    "Display",
    "Rounding",
    "ShownIn",
    "UnitError",
    "check_unit",
    "from_si",
    "read_any_quantity",
    "read_date",
    "read_moment",
    "read_number",
    "read_quantity",
    "read_ratio",
    "show",
    "show_small_mass",
    "shown_number",
    "shown_unit",
    "to_si",
    "unit_in_head",
    "units_of",
]

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
_GALLONS = re.compile(r"gal(lons?)?(/h)?")
_LEAST_SI, _MOST_SI = 1e-18, 1e15
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
    "US gallon": "US gal",
    "US gallons": "US gal",
    "impgal": "imp gal",
    "imp gallon": "imp gal",
    "imp gallons": "imp gal",
    "l/h": "L/h",
    "l/min": "L/min",
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
    return _in_si(number, _unit_of(rest, unit, text, dimension), dimension, text)


def read_any_quantity(
    text: str, dimensions: tuple[Dimension, ...], *, unit: str | None = None
) -> tuple[float, Dimension]:
    """Read `text` as the first of several dimensions whose unit fits, for a lot counted in kg, m2 or m."""
    number, rest = _split_number(text, unit_example=_EXAMPLE[dimensions[0]][0])
    written = rest or unit or ""
    for dimension in dimensions:
        if _known_unit(written, dimension) is not None:
            return _in_si(number, _unit_of(rest, unit, text, dimension), dimension, text), dimension
    if Dimension.VOLUME in dimensions and _GALLONS.fullmatch(written):
        raise UnitError(f"{written!r} can be US or imperial", "write US gal or imp gal")
    choices = " or ".join(
        f"{text.strip().split(' ')[0]} {_EXAMPLE[dimension][0]}" for dimension in dimensions
    )
    problem = f"{text.strip()!r} has no unit" if not written else f"{written!r} is not a unit that fits here"
    raise UnitError(problem, f"write {choices}")


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


def _in_si(number: float, unit: str, dimension: Dimension, text: str) -> float:
    try:
        value = to_si(number, unit, dimension)
    except OverflowError:
        value = math.inf
    if not math.isfinite(value):
        raise UnitError(f"{text.strip()!r} is not a finite number", "write the number you read")
    if value != 0 and not _LEAST_SI <= abs(value) <= _MOST_SI:
        # Products of a few such numbers would leave what a float holds, far from where they were typed.
        size = "small" if abs(value) < 1 else "large"
        raise UnitError(f"{text.strip()!r} is too {size} to be measured", "write the number you read")
    if dimension is Dimension.TEMPERATURE and value < 0:
        raise UnitError(f"{text.strip()!r} is below absolute zero", "write the temperature you read")
    return value


def _split_number(text: str, *, unit_example: str) -> tuple[float, str]:
    match = _NUMBER.match(text.replace("\N{MINUS SIGN}", "-"))
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
    rest = " ".join(text[match.end() :].split())
    if rest[:1].isdigit():
        raise UnitError(
            f"{text.strip()!r} holds two numbers",
            f"write one, without a space in it, for example 1250.5 {unit_example}".rstrip(),
        )
    return number, rest


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
    folded = (
        written.strip()
        .replace("\N{SUPERSCRIPT TWO}", "2")
        .replace("\N{SUPERSCRIPT THREE}", "3")
        .replace("^", "")
    )
    folded = _SPOKEN.get(folded, folded)
    return folded if folded in units_of(dimension) else None


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
    if _GALLONS.fullmatch(written):
        raise UnitError(f"{written!r} can be US or imperial", "write US gal or imp gal")
    known = _known_unit(written, dimension)
    if known is None:
        units = ", ".join(units_of(dimension))
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
