"""Text to SI: every unit against an independent library, and what is refused with what to write."""

from __future__ import annotations

import math
from datetime import UTC, date, datetime, timedelta, timezone
from fractions import Fraction

import pint
import pytest
from hypothesis import given
from hypothesis import strategies as st

from ledger.units import (
    SI_UNIT,
    Dimension,
    UnitError,
    check_unit,
    from_si,
    read_any_quantity,
    read_date,
    read_moment,
    read_number,
    read_quantity,
    read_ratio,
    to_si,
    unit_in_head,
    units_of,
)

TWO_HOURS_AHEAD = timezone(timedelta(hours=2))
NOW = datetime(2026, 4, 3, 14, 30, tzinfo=TWO_HOURS_AHEAD)

# Names of our units in the oracle, where they differ.
PINT_NAMES = {
    "t": "metric_ton",
    "um": "micrometer",
    "in": "inch",
    "L": "liter",
    "l": "liter",
    "dL": "deciliter",
    "cL": "centiliter",
    "mL": "milliliter",
    "ml": "milliliter",
    "US gal": "gallon",
    "imp gal": "imperial_gallon",
    "US qt": "quart",
    "US fl oz": "fluid_ounce",
    "gsm": "gram/meter**2",
    "C": "degC",
    "F": "degF",
    "K": "kelvin",
    "h": "hour",
    "min": "minute",
    "d": "day",
    "days": "day",
    "deg": "degree",
    "\N{DEGREE SIGN}": "degree",
    "%": "percent",
    "1": "",
    "tex": "gram/kilometer",
}
REGISTRY = pint.UnitRegistry()


def in_pint(unit: str) -> str:
    """A unit of ours as the oracle writes it."""
    whole = PINT_NAMES.get(unit)
    if whole is not None:
        return whole
    parts = []
    for part in unit.split("/"):
        power = part[-1] if part[-1:] in "23" and len(part) > 1 else ""
        base = part[: -len(power)] if power else part
        parts.append(f"({PINT_NAMES.get(base, base)})" + (f"**{power}" if power else ""))
    return "/".join(parts)


ALL_UNITS = [(dimension, unit) for dimension in Dimension for unit in units_of(dimension)]


@pytest.mark.parametrize(("dimension", "unit"), ALL_UNITS)
def test_every_unit_agrees_with_an_independent_library(dimension: Dimension, unit: str) -> None:
    ours = to_si(12.5, unit, dimension)
    si = "degree" if dimension is Dimension.ANGLE else in_pint(SI_UNIT[dimension])
    theirs = REGISTRY.Quantity(12.5, in_pint(unit)).to(si).magnitude
    assert ours == pytest.approx(theirs, rel=1e-12)
    assert from_si(ours, unit, dimension) == pytest.approx(12.5, rel=1e-14)


@pytest.mark.parametrize(
    ("text", "dimension", "si"),
    [
        # checks: exact definitions
        ("1 lb", Dimension.MASS, 0.45359237),
        ("1 in", Dimension.LENGTH, 0.0254),
        ("1 US gal", Dimension.VOLUME, 0.003785411784),
        ("1 imp gal", Dimension.VOLUME, 0.00454609),
    ],
)
def test_exact_definitions_are_exact(text: str, dimension: Dimension, si: float) -> None:
    assert read_quantity(text, dimension) == si


@pytest.mark.parametrize(
    ("text", "dimension", "shown"),
    [
        # checks: definitions, as many places as given there
        ("1 oz/yd2", Dimension.AREAL_MASS, 0.033905747),
        ("1 oz/ft2", Dimension.AREAL_MASS, 0.305151727),
        ("1 lb/ft2", Dimension.AREAL_MASS, 4.882428),
        ("1 lb/ft3", Dimension.DENSITY, 16.018463),
        ("1 lb/US gal", Dimension.DENSITY, 119.82643),
    ],
)
def test_derived_units_have_the_usual_figures(text: str, dimension: Dimension, shown: float) -> None:
    assert read_quantity(text, dimension) == pytest.approx(shown, rel=1.1e-7)


@pytest.mark.parametrize(("ounces", "grams"), [(2.3, 78), (5.0, 170), (5.8, 197), (6.0, 203), (9.0, 305)])
def test_cloth_weights_of_a_published_table(ounces: float, grams: int) -> None:
    # cci.one, weights and measures (read), which rounds to whole grams
    read = read_quantity(f"{ounces} oz/yd2", Dimension.AREAL_MASS)
    assert read * 1000 == pytest.approx(grams, abs=0.6)


@pytest.mark.parametrize(
    ("text", "kg"),
    [
        ("412.3 g", 0.4123),
        ("412,3 g", 0.4123),
        ("+  412.3 g", 0.4123),
        ("   412.3   g ", 0.4123),
        ("412.3g", 0.4123),
        ("-5 g", -0.005),
        ("\N{MINUS SIGN}5 g", -0.005),
        ("0,250 kg", 0.25),
        ("1.250 g", 0.00125),
        ("1250,5 g", 1.2505),
        (".5 kg", 0.5),
        ("4.2e-1 kg", 0.42),
        ("3 lbs", 1.36077711),
        ("16 oz", 0.45359237),
    ],
)
def test_what_a_person_or_a_scale_writes_is_read(text: str, kg: float) -> None:
    assert read_quantity(text, Dimension.MASS) == kg


@pytest.mark.parametrize(
    ("text", "dimension", "what", "do"),
    [
        ("1,250 g", Dimension.MASS, "'1,250 g' can be read as 1250 or as 1.250", "write 1250 g or 1.250 g"),
        ("12.5", Dimension.MASS, "'12.5' has no unit", "write 12.5 g or 12.5 lb"),
        ("12.5", Dimension.LENGTH, "'12.5' has no unit", "write 12.5 mm or 12.5 in"),
        ("5 gal", Dimension.VOLUME, "'gal' can be US or imperial", "write US gal or imp gal"),
        ("5 gallons", Dimension.VOLUME, "'gallons' can be US or imperial", "write US gal or imp gal"),
        ("5 gal/h", Dimension.FLOW, "'gal/h' can be US or imperial", "write US gal or imp gal"),
        (
            "nan kg",
            Dimension.MASS,
            "'nan kg' is not a number",
            "write a number and a unit, for example 4.2 g",
        ),
        (
            "inf kg",
            Dimension.MASS,
            "'inf kg' is not a number",
            "write a number and a unit, for example 4.2 g",
        ),
        ("heavy", Dimension.MASS, "'heavy' is not a number", "write a number and a unit, for example 4.2 g"),
        ("", Dimension.MASS, "'' is not a number", "write a number and a unit, for example 4.2 g"),
        ("1e999 kg", Dimension.MASS, "'1e999 kg' is not a finite number", "write the number you read"),
        ("1e308 t", Dimension.MASS, "'1e308 t' is not a finite number", "write the number you read"),
        (
            "-300 C",
            Dimension.TEMPERATURE,
            "'-300 C' is below absolute zero",
            "write the temperature you read",
        ),
        ("1.250,5 g", Dimension.MASS, "'1.250,5 g' mixes thousands marks and decimals", None),
        ("1,250,000 g", Dimension.MASS, "'1,250,000 g' mixes thousands marks and decimals", None),
        ("1 250 g", Dimension.MASS, "'1 250 g' holds two numbers", None),
        ("5 mm", Dimension.MASS, "'mm' is not a unit of mass", "write one of kg, g, mg, t, lb, oz"),
        ("5 G", Dimension.MASS, "'G' is not a unit of mass", "write one of kg, g, mg, t, lb, oz"),
    ],
)
def test_what_is_refused_says_what_to_write(
    text: str, dimension: Dimension, what: str, do: str | None
) -> None:
    with pytest.raises(UnitError) as refused:
        read_quantity(text, dimension)
    assert refused.value.what == what
    assert do is None or refused.value.do == do


def test_the_head_gives_its_unit_only_where_the_text_has_none() -> None:
    assert read_quantity("412.3", Dimension.MASS, unit="g") == 0.4123
    assert read_quantity("412.3 kg", Dimension.MASS, unit="g") == 412.3
    assert unit_in_head("planned_mass [g]") == ("planned_mass", "g")
    assert unit_in_head(" lot_spread[ % ] ") == ("lot_spread", "%")
    assert unit_in_head("title") == ("title", None)


def test_a_text_of_several_dimensions_is_of_the_one_its_unit_fits() -> None:
    dimensions = (Dimension.MASS, Dimension.AREA)
    assert read_any_quantity("5 kg", dimensions) == (5.0, Dimension.MASS)
    assert read_any_quantity("25 m2", dimensions) == (25.0, Dimension.AREA)
    with pytest.raises(UnitError, match="'5' has no unit; write 5 g or 5 m2"):
        read_any_quantity("5", dimensions)
    with pytest.raises(UnitError, match="'s' is not a unit that fits here"):
        read_any_quantity("5 s", dimensions)


@pytest.mark.parametrize(("written", "known"), [("m²", "m2"), ("m^2", "m2"), ("ft2", "ft2")])
def test_a_unit_is_known_however_its_power_is_written(written: str, known: str) -> None:
    assert check_unit(written, Dimension.AREA) == known


def test_a_mix_ratio_is_hardener_per_resin() -> None:
    assert read_ratio("100:27") == 0.27
    assert read_ratio("4:1") == 0.25
    for text in ("100", "100:0", "-100:27", "100:27:3", "a:b"):
        with pytest.raises(UnitError):
            read_ratio(text)


def test_dates_are_iso_only_and_the_two_readings_are_shown() -> None:
    assert read_date(" 2026-04-03 ") == date(2026, 4, 3)
    with pytest.raises(UnitError) as refused:
        read_date("03/04/26")
    assert refused.value.what == "'03/04/26' can be read as 2026-04-03 or as 2026-03-04"
    assert refused.value.do == "write 2026-04-03 or 2026-03-04"
    for text in ("3 April 2026", "2026-13-01", "2026-02-30", "", "tomorrow"):
        with pytest.raises(UnitError, match="write year-month-day"):
            read_date(text)


def test_a_moment_takes_the_offset_of_now_where_it_has_none() -> None:
    assert read_moment("now", NOW) == NOW
    assert read_moment("09:05", NOW) == datetime(2026, 4, 3, 9, 5, tzinfo=TWO_HOURS_AHEAD)
    assert read_moment("2026-04-02T09:05", NOW) == datetime(2026, 4, 2, 9, 5, tzinfo=TWO_HOURS_AHEAD)
    assert read_moment("2026-04-02T09:05:07+00:00", NOW) == datetime(2026, 4, 2, 9, 5, 7, tzinfo=UTC)
    with pytest.raises(UnitError, match="can be read as 2026-04-03 or as 2026-03-04"):
        read_moment("03/04/26", NOW)


@pytest.mark.parametrize(("text", "number"), [("12.5", 12.5), ("-3", -3.0), ("4,5", 4.5), ("2e3", 2000.0)])
def test_a_plain_number_has_no_unit(text: str, number: float) -> None:
    assert read_number(text) == number
    with pytest.raises(UnitError, match="is not a plain number"):
        read_number(f"{text} kg")


MEASURED = st.decimals(min_value=0, max_value=10**6, places=4, allow_nan=False)


@given(MEASURED, st.sampled_from(ALL_UNITS))
def test_what_is_written_with_a_point_or_a_comma_is_the_same(
    number: object, kind: tuple[Dimension, str]
) -> None:
    dimension, unit = kind
    text = f"{number} {unit}"
    assert read_quantity(text, dimension) == read_quantity(text.replace(".", ","), dimension)


@given(st.floats(min_value=1e-9, max_value=1e9), st.sampled_from([u for u in ALL_UNITS if u[1] not in "CFK"]))
def test_there_and_back_is_the_same_number(number: float, kind: tuple[Dimension, str]) -> None:
    dimension, unit = kind
    assert from_si(to_si(number, unit, dimension), unit, dimension) == pytest.approx(number, rel=4e-16)


@given(st.decimals(min_value=0, max_value=10**5, places=3, allow_nan=False))
def test_pounds_are_rounded_once_only(number: object) -> None:
    exact = Fraction(str(number)) * Fraction("0.45359237")
    assert read_quantity(f"{number} lb", Dimension.MASS) == float(exact)


@given(st.text(max_size=12))
def test_no_text_whatever_is_read_as_what_is_not_finite(text: str) -> None:
    try:
        value, said = read_quantity(text, Dimension.MASS), True
    except UnitError as error:
        value, said = 0.0, bool(error.what and error.do)
    assert math.isfinite(value)
    assert said
