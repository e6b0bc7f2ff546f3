"""What a number measures, the units there are for it, and the exact way from one to SI and back.

Factors are exact fractions, so `1 lb` is 0.45359237 kg to the last bit.
"""

from __future__ import annotations

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

FACTORS: dict[Dimension, dict[str, Fraction]] = {
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

KELVIN_AT: dict[str, tuple[Fraction, Fraction]] = {
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


def units_of(dimension: Dimension) -> tuple[str, ...]:
    """The units of a dimension, under the names they are written with."""
    return tuple(KELVIN_AT if dimension is Dimension.TEMPERATURE else FACTORS[dimension])


def to_si(number: float, unit: str, dimension: Dimension) -> float:
    """Convert exactly; the only rounding is the last one, to a float."""
    # The shortest decimal of a float is what was written, so 0.1 is a tenth here and not a hair more.
    exact = Fraction(repr(number))
    if dimension is Dimension.TEMPERATURE:
        factor, offset = KELVIN_AT[unit]
        return float(exact * factor + offset)
    return float(exact * FACTORS[dimension][unit])


def from_si(value: float, unit: str, dimension: Dimension) -> float:
    """The number that stands before `unit` for an SI value."""
    if dimension is Dimension.TEMPERATURE:
        factor, offset = KELVIN_AT[unit]
        return float((Fraction(value) - offset) / factor)
    return float(Fraction(value) / FACTORS[dimension][unit])
