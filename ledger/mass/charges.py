"""Which grams of which lot, sheet or batch are in which piece."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True, slots=True, kw_only=True)
class Charge:
    """One source going into one piece or cell by one entry. `mass_kg` is None where it cannot be known."""

    seq: int
    piece: str
    source: str
    step: int | None
    what: str
    mass_kg: float | None
