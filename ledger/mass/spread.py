"""How sure a mass is: a list of (source, sensitivity times u), added per source before they are squared.

Readings on one scale share its calibration, plies of one lot share the lot's mean. Added in squares
piece by piece, such shares would shrink with the square root of their number, which they do not.
"""

from __future__ import annotations

from collections.abc import Iterable
from math import sqrt

from ledger.mass.magnitudes import BOUND_TO_U, LOT_SPREAD, MEASURED_LOT_SPREAD, OTHER_LOT_SPREAD
from ledger.model.plan import Material

SourceKey = tuple[object, ...]
Source = tuple[SourceKey, float]
Spread = dict[SourceKey, float]

# The cups of plies whose cup was not said, or that are still to come.
NO_CUP_SAID: SourceKey = ("batch", None)


def add_sources(spread: Spread, sources: Iterable[Source], factor: float = 1.0) -> None:
    """Add sources to a spread in place."""
    for key, value in sources:
        spread[key] = spread.get(key, 0.0) + factor * value


def add_spread(spread: Spread, other: Spread, factor: float = 1.0) -> None:
    """Add another spread in place."""
    add_sources(spread, other.items(), factor)


def u_of(spread: Spread) -> float:
    """The standard uncertainty: root of the sum over sources of each source's own sum, squared."""
    return sqrt(sum(value * value for value in spread.values()))


def shared_part(spread: Spread, other: Spread) -> float:
    """The covariance of two figures."""
    if len(other) < len(spread):
        spread, other = other, spread
    return sum(value * other[key] for key, value in spread.items() if key in other)


def lot_spread(material: Material | None, measured: bool) -> float:
    """The standard uncertainty of a lot's mean, as a share: what is declared is a plus-or-minus bound."""
    if measured:
        return MEASURED_LOT_SPREAD * BOUND_TO_U
    if material is not None and material.lot_spread is not None:
        return material.lot_spread * BOUND_TO_U
    kind = None if material is None else material.kind
    return (OTHER_LOT_SPREAD if kind is None else LOT_SPREAD.get(kind, OTHER_LOT_SPREAD)) * BOUND_TO_U
