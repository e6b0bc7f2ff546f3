"""Is a cup mixed right, as far as the scale can show, and what to pour to make it so.

A ratio is hardener per resin by mass. Its tolerance counts on resin per hardener, the way the trade
writes it (4:1 to 3 % is 3.88 to 4.12).
"""

from __future__ import annotations

from dataclasses import dataclass
from enum import StrEnum

from ledger.mass.magnitudes import PUMP_SHARE, UNNAMED_SCALE_BOUND_KG
from ledger.model.acts import Instrument, Mix


class Verdict(StrEnum):
    """What the readings prove about a mix."""

    IN = "in"
    OUT = "out"
    CANNOT_TELL = "cannot tell"


class Component(StrEnum):
    """The two halves of a mix."""

    RESIN = "resin"
    HARDENER = "hardener"


@dataclass(frozen=True, slots=True, kw_only=True)
class Interval:
    """Least and most that a figure can be."""

    low: float
    high: float


@dataclass(frozen=True, slots=True, kw_only=True)
class Wanted:
    """The ratio wanted and its tolerance as a share of 1."""

    ratio: float
    tolerance: float

    @property
    def band(self) -> Interval:
        """The ratios that are in."""
        return Interval(low=self.ratio / (1.0 + self.tolerance), high=self.ratio / (1.0 - self.tolerance))


@dataclass(frozen=True, slots=True, kw_only=True)
class Measured:
    """The grams of both halves, each with the bound of what its reading may be off by."""

    resin_kg: float
    hardener_kg: float
    resin_bound_kg: float
    hardener_bound_kg: float

    @property
    def mixed_kg(self) -> float:
        """Both halves together."""
        return self.resin_kg + self.hardener_kg


@dataclass(frozen=True, slots=True, kw_only=True)
class Pour:
    """What to pour of the second component. `low_kg` to `high_kg` is the window that ends in the band.

    With `provable`, a reading inside the window proves the mix; without, the cup is too small for
    this scale and the window is the band's own.
    """

    component: Component
    target_kg: float
    low_kg: float
    high_kg: float
    provable: bool


@dataclass(frozen=True, slots=True, kw_only=True)
class BringBack:
    """How much more of which component makes the mix right after an overshoot."""

    component: Component
    mass_kg: float


def scale_bound(scale: Instrument | None) -> float:
    """How far off one reading may be: half a step of the display and the accuracy declared."""
    if scale is None or scale.resolution.unit != "kg":
        return UNNAMED_SCALE_BOUND_KG
    accuracy = scale.accuracy.value if scale.accuracy is not None and scale.accuracy.unit == "kg" else 0.0
    return scale.resolution.value / 2.0 + accuracy


def measured(mix: Mix, scale: Instrument | None) -> Measured:
    """The grams of a mix by its method.

    With tared pours every pour is a reading. A running total is one untared display: its last resin
    reading is the resin, and the hardener is what the display rose by after it.
    """
    bound = scale_bound(scale)
    if mix.method == "running total":
        resin = max(mix.resin_kg)
        return Measured(
            resin_kg=resin,
            hardener_kg=max(mix.hardener_kg) - resin,
            resin_bound_kg=bound,
            hardener_bound_kg=2.0 * bound,
        )
    resin, hardener = sum(mix.resin_kg), sum(mix.hardener_kg)
    if mix.method == "pump":
        return Measured(
            resin_kg=resin,
            hardener_kg=hardener,
            resin_bound_kg=max(PUMP_SHARE * resin, bound),
            hardener_bound_kg=max(PUMP_SHARE * hardener, bound),
        )
    return Measured(
        resin_kg=resin,
        hardener_kg=hardener,
        resin_bound_kg=bound * len(mix.resin_kg),
        hardener_bound_kg=bound * len(mix.hardener_kg),
    )


def ratio_interval(cup: Measured) -> Interval | None:
    """Least and most hardener per resin; None where the resin may be nothing at all."""
    least_resin = cup.resin_kg - cup.resin_bound_kg
    if least_resin <= 0.0:
        return None
    low = max(cup.hardener_kg - cup.hardener_bound_kg, 0.0) / (cup.resin_kg + cup.resin_bound_kg)
    return Interval(low=low, high=(cup.hardener_kg + cup.hardener_bound_kg) / least_resin)


def verdict(interval: Interval | None, wanted: Wanted | None) -> Verdict:
    """In only if every ratio the readings allow is in; out only if none is."""
    if interval is None or wanted is None:
        return Verdict.CANNOT_TELL
    band = wanted.band
    if interval.low >= band.low and interval.high <= band.high:
        return Verdict.IN
    if interval.high < band.low or interval.low > band.high:
        return Verdict.OUT
    return Verdict.CANNOT_TELL


def smallest_provable_kg(wanted: Wanted, bound_kg: float) -> float:
    """The least batch that a reading bound e can prove: `e (1/hardener + 1/resin) <= tolerance`."""
    return bound_kg * (1.0 + wanted.ratio) ** 2 / (wanted.ratio * wanted.tolerance)


def second_pour(first: Component, first_kg: float, wanted: Wanted, bound_kg: float) -> Pour:
    """Target and window for the component that is poured second."""
    band = wanted.band
    if first is Component.RESIN:
        second, target = Component.HARDENER, first_kg * wanted.ratio
        widest = Interval(low=first_kg * band.low, high=first_kg * band.high)
        low = (first_kg + bound_kg) * band.low + bound_kg
        high = (first_kg - bound_kg) * band.high - bound_kg
    else:
        second, target = Component.RESIN, first_kg / wanted.ratio
        widest = Interval(low=first_kg / band.high, high=first_kg / band.low)
        low = (first_kg + bound_kg) / band.high + bound_kg
        high = (first_kg - bound_kg) / band.low - bound_kg
    provable = low <= high
    return Pour(
        component=second,
        target_kg=target,
        low_kg=low if provable else widest.low,
        high_kg=high if provable else widest.high,
        provable=provable,
    )


def bring_back(resin_kg: float, hardener_kg: float, wanted: Wanted) -> BringBack:
    """What to add to a cup that has too much of one half."""
    if hardener_kg > wanted.ratio * resin_kg:
        return BringBack(component=Component.RESIN, mass_kg=hardener_kg / wanted.ratio - resin_kg)
    return BringBack(component=Component.HARDENER, mass_kg=wanted.ratio * resin_kg - hardener_kg)
