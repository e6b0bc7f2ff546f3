"""A part as its row in parts.csv says, before its geometry is opened."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from ledger.exchange.csv_table import TableRow
from ledger.model.plan import Face, Form, PartClass, Side
from ledger.model.vectors import Vector
from ledger.units import Dimension, UnitError, read_quantity


@dataclass(frozen=True, slots=True, kw_only=True)
class PartRow:
    """A part as its row says. `origin` is in `origin_unit`, or in the geometry's unit where that is None."""

    row: TableRow
    name: str
    title: str
    part_class: PartClass
    side: Side
    assembly: str
    form: Form
    made_of: str | None
    geometry: str | None
    geometry_unit: str | None
    origin: Vector | None
    origin_unit: str | None
    across: Vector | None
    up_axis: Vector | None
    face: Face
    quantity: int
    planned_mass_kg: float | None
    mirror_of: str | None

    @property
    def takes_mirrored_geometry(self) -> bool:
        """Whether its geometry is that of the part on the other side."""
        place = self.origin if self.form is Form.ITEM else self.geometry
        return self.mirror_of is not None and place is None


def origin_m(part: PartRow, geometry_unit: str | None) -> Vector | None:
    """The origin in metres; None with a finding where nothing says its unit."""
    if part.origin is None:
        return None
    unit = part.origin_unit or part.geometry_unit or geometry_unit
    if unit is None and any(part.origin):
        text = part.row.text("origin")
        part.row.stop(
            "unit-missing",
            "origin",
            f"{text!r} has no unit",
            "write the unit in the head, origin [m], or in geometry_unit",
        )
        return None
    if unit is None:
        return part.origin
    try:
        x, y, z = (read_quantity(repr(value), Dimension.LENGTH, unit=unit) for value in part.origin)
    except UnitError as error:
        part.row.stop("cell-unreadable", "origin", error.what, error.do)
        return None
    return (x, y, z)


def made_of_part(part: PartRow, by_name: Mapping[str, PartRow]) -> str | None:
    """What a part is made of: a part that takes mirrored geometry may leave that to the other one too."""
    if part.made_of is None and part.takes_mirrored_geometry and part.mirror_of is not None:
        other = by_name.get(part.mirror_of.casefold())
        return None if other is None else other.made_of
    return part.made_of
