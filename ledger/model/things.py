"""The kinds of thing that have a name or a number, and how an entry refers to them."""

from __future__ import annotations

from dataclasses import dataclass
from enum import StrEnum


class ThingKind(StrEnum):
    """What a name or number can stand for."""

    MATERIAL = "material"
    LAMINATE = "laminate"
    PART = "part"
    PIECE = "piece"
    ASSEMBLY = "assembly"
    LOT = "lot"
    SHEET = "sheet"
    OFFCUT = "offcut"
    BATCH = "batch"
    INSTRUMENT = "instrument"
    CELL = "cell"
    OPENING = "opening"
    ITERATION = "iteration"
    PERSON = "person"


# Letters that no glove mistakes for a digit; the check character follows the running number.
TYPE_LETTER: dict[ThingKind, str] = {
    ThingKind.LOT: "L",
    ThingKind.SHEET: "S",
    ThingKind.OFFCUT: "F",
    ThingKind.BATCH: "B",
    ThingKind.PIECE: "P",
}


@dataclass(frozen=True, slots=True, kw_only=True)
class Minted:
    """A number given out by an entry. A piece has its name beside the number: `RIB.03-L/1`."""

    kind: ThingKind
    number: str
    name: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Share:
    """One of several sources of a ply or coat; `mass_kg` is None where the split is unknown."""

    what: str
    mass_kg: float | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Measure:
    """An amount counted in whichever SI unit suits the thing: kg, m2, m, m3 or K."""

    value: float
    unit: str


@dataclass(frozen=True, slots=True, kw_only=True)
class KeptOffcut:
    """What is left of a sheet: the size kept, or in words what became of it."""

    length_m: float | None = None
    width_m: float | None = None
    fate: str | None = None
