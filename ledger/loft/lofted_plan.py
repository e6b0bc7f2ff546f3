"""What was made of a layout: the plan folder in figures, for the person who asked for it."""

from __future__ import annotations

from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING

from ledger.errors import Finding
from ledger.model.plan import PartClass
from ledger.units import Display

if TYPE_CHECKING:
    from ledger.loft.lofted import Account


@dataclass(frozen=True, slots=True, kw_only=True)
class ClassOfParts:
    """The parts of one class, of both sides: how many pieces, their area and their estimated mass.

    `area_m2` is None for what has none, `estimated_kg` where a figure lacks.
    """

    part_class: PartClass
    pieces: int
    area_m2: float | None
    estimated_kg: float | None


@dataclass(frozen=True, slots=True, kw_only=True)
class LoftedPlan:
    """A plan folder that was lofted. `account` is of one wing's box; all else is of both sides."""

    name: str
    title: str
    display: Display
    folder: Path
    parts: int
    cells: int
    openings: int
    classes: tuple[ClassOfParts, ...]
    gross_m3: float
    account: Account
    findings: tuple[Finding, ...]

    @property
    def estimated_kg(self) -> float | None:
        """Of all parts; None where one of them is not known."""
        masses = [each.estimated_kg for each in self.classes]
        known = [mass for mass in masses if mass is not None]
        return sum(known) if len(known) == len(masses) else None

    @property
    def deviation(self) -> float:
        """How far the account is from even, as a share of the box: left out or claimed twice."""
        worst = max(abs(self.account.apart_m3), abs(self.account.shared_m3))
        return worst / self.account.box_m3
