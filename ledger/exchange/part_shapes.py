"""Rows of parts.csv with their geometry: the part, and the figures of its shape in build axes."""

from __future__ import annotations

import hashlib
from collections.abc import Mapping
from dataclasses import replace
from typing import TYPE_CHECKING

from ledger.errors import Severity
from ledger.exchange.figures import Figures
from ledger.exchange.geometry_files import GeometryFiles, GeometryRefused
from ledger.exchange.part_row import PartRow, made_of_part, origin_m
from ledger.exchange.plan_files import FileRefused
from ledger.mass.laminate import laminate_thickness
from ledger.model.plan import Face, Form, Laminate, Material, MaterialKind, Part, Placement, Shape
from ledger.model.progress import Progress, unwatched
from ledger.model.vectors import NO_SPREAD, Matrix, Vector

if TYPE_CHECKING:
    from ledger.geometry.moments import Moments

_OTHER_FACE = {Face.MID: Face.MID, Face.PLUS: Face.MINUS, Face.MINUS: Face.PLUS}


def read_shapes(
    rows: tuple[PartRow, ...],
    geometry: GeometryFiles,
    materials: Mapping[str, Material],
    laminates: Mapping[str, Laminate],
    progress: Progress = unwatched,
) -> tuple[tuple[Part, ...], tuple[Shape, ...]]:
    """Parts and their shapes, in the order of the rows; what cannot be shaped is noted at its row."""
    shaping = _Shaping(rows, geometry, materials, laminates)
    shaped = []
    for done, row in enumerate(rows):
        if not row.takes_mirrored_geometry:
            progress(f"plan, part {row.name}", done, len(rows))
            shaped.append((row, shaping.shaped(row)))
    own = {row.name.casefold(): one for row, one in shaped if one is not None}
    found = []
    for row in rows:
        if not row.takes_mirrored_geometry:
            pair = own.get(row.name.casefold())
        else:
            other = own.get(str(row.mirror_of).casefold())
            pair = None if other is None else _mirrored(shaping.part(row, None), *other)
        if pair is not None:
            found.append(pair)
    return tuple(part for part, _ in found), tuple(shape for _, shape in found)


class _Shaping:
    """What is needed to shape the parts of one plan."""

    def __init__(
        self,
        rows: tuple[PartRow, ...],
        geometry: GeometryFiles,
        materials: Mapping[str, Material],
        laminates: Mapping[str, Laminate],
    ) -> None:
        self._by_name = {row.name.casefold(): row for row in rows}
        self._geometry = geometry
        self._materials = materials
        self._laminates = laminates
        self._broken: set[tuple[str, str]] = set()
        densities = {
            material.density_kg_m3
            for material in materials.values()
            if material.kind is MaterialKind.RESIN and material.density_kg_m3 is not None
        }
        # Two resins with different densities leave open which one a ply is wetted with.
        self._resin_kg_m3 = densities.pop() if len(densities) == 1 else None

    def part(self, row: PartRow, placement: Placement | None, unit: str | None = None) -> Part:
        """The record of a row."""
        spelt = None if row.mirror_of is None else self._by_name.get(row.mirror_of.casefold())
        return Part(
            name=row.name,
            title=row.title,
            part_class=row.part_class,
            side=row.side,
            assembly=row.assembly,
            form=row.form,
            made_of=made_of_part(row, self._by_name),
            geometry=row.geometry,
            geometry_unit=row.geometry_unit or unit,
            placement=placement,
            face=row.face,
            quantity=row.quantity,
            planned_mass_kg=row.planned_mass_kg,
            mirror_of=row.mirror_of if spelt is None else spelt.name,
            row=row.row.number,
        )

    def shaped(self, row: PartRow) -> tuple[Part, Shape] | None:
        """A part with geometry of its own, or None with a finding."""
        if row.form is Form.ITEM:
            place = origin_m(row, None)
            if place is None:
                return None
            placement = Placement(origin_m=place, across=(1.0, 0.0, 0.0), up_axis=(0.0, 0.0, 1.0))
            digest = _digest(row, placement, "")
            shape = Shape(measure=1.0, centroid_m=place, second_m2=NO_SPREAD, digest=digest)
            return self.part(row, placement), shape
        thickness = self._thickness(row)
        offset = 0.0
        if row.form is Form.SKIN and row.face is not Face.MID:
            offset = (-0.5 if row.face is Face.PLUS else 0.5) * thickness
        try:
            figures = self._geometry.figures(row.form.value, str(row.geometry), row.geometry_unit, offset)
        except (GeometryRefused, FileRefused) as refused:
            column = "geometry_unit" if refused.code in ("unit-missing", "unit-contradicts") else "geometry"
            self._refuse(row, column, refused)
            return None
        _tell(row, figures)
        origin = origin_m(row, figures.unit)
        if row.origin is not None and origin is None:
            return None
        return self._placed(row, figures, origin, thickness)

    def _refuse(self, row: PartRow, column: str, refused: GeometryRefused | FileRefused) -> None:
        # A broken file is broken for every part in it: said once, at the first.
        told = (str(row.geometry).partition("#")[0], refused.what)
        if refused.code not in ("drawing-broken", "mesh-broken") or told not in self._broken:
            row.row.stop(refused.code, column, refused.what, refused.do)
        self._broken.add(told)

    def _placed(
        self, row: PartRow, figures: Figures, origin: Vector | None, thickness: float
    ) -> tuple[Part, Shape]:
        from ledger.geometry.moments import Moments, matrix, placed
        from ledger.geometry.outlines import PlaneMoments
        from ledger.geometry.placement import panel_moments, placement_of
        from ledger.geometry.vectors import vector

        if origin is None or row.across is None or row.up_axis is None:
            moments = Moments(
                measure=figures.measure, centroid=vector(figures.centroid), second=matrix(figures.second)
            )
            return self.part(row, None, figures.unit), _shape(moments, _digest(row, None, figures.digest))
        square = placement_of(origin, row.across, row.up_axis)
        if row.form is Form.PANEL:
            (x, y), ((xx, xy), (_, yy)) = figures.centroid, figures.second
            plane = PlaneMoments(area=figures.measure, centroid=(x, y), second=((xx, xy), (xy, yy)))
            moments = panel_moments(plane, square, thickness, row.face.value)
        else:
            local = Moments(
                measure=figures.measure, centroid=vector(figures.centroid), second=matrix(figures.second)
            )
            moments = placed(local, origin, row.across, row.up_axis)
        placement = Placement(origin_m=square.origin_m, across=square.across, up_axis=square.up_axis)
        return self.part(row, placement, figures.unit), _shape(
            moments, _digest(row, placement, figures.digest)
        )

    def _thickness(self, row: PartRow) -> float:
        """The thickness as far as it is known; a part laid by one face says what of it is not."""
        laminate = self._laminates.get(str(made_of_part(row, self._by_name)))
        if row.form not in (Form.PANEL, Form.SKIN) or laminate is None:
            return 0.0
        whole = laminate_thickness(laminate, dict(self._materials), self._resin_kg_m3)
        if whole is not None:
            return whole
        known = 0.0
        lacking = []
        for step in laminate.steps:
            one = Laminate(name=laminate.name, steps=(step,))
            thickness = laminate_thickness(one, dict(self._materials), self._resin_kg_m3)
            known += thickness or 0.0
            if thickness is None:
                lacking.append(f"step {step.number}")
        if row.face is not Face.MID:
            what = ", ".join(lacking) if lacking else "its thickness"
            row.row.problems.look(
                "thickness-unknown",
                row.row.where("face"),
                f"the outline lies on one face of {laminate.name!r}, of which {what} is not known",
                "give thickness or fibre_density in materials.csv; until then its middle is placed too near",
            )
        return known


def _tell(row: PartRow, figures: Figures) -> None:
    where = row.row.where("geometry")
    for remark in figures.remarks:
        tell = row.row.problems.note if remark.severity is Severity.NOTE else row.row.problems.look
        tell(remark.code, where, remark.what, remark.do)


def _digest(row: PartRow, placement: Placement | None, geometry: str) -> str:
    """A name for what the part is and where: to 0.1 um, so that a plan written anew keeps it."""
    place: list[float] = []
    if placement is not None:
        place = [
            round(value, 7) + 0.0
            for vector in (placement.origin_m, placement.across, placement.up_axis)
            for value in vector
        ]
    told = f"{row.form.value}:{geometry}:{row.face.value}:{place}"
    return hashlib.sha256(told.encode()).hexdigest()


def _shape(moments: Moments, digest: str) -> Shape:
    (xx, xy, xz), (_, yy, yz), (_, _, zz) = moments.second
    m = moments.measure
    second: Matrix = (
        (xx / m, xy / m, xz / m),
        (xy / m, yy / m, yz / m),
        (xz / m, yz / m, zz / m),
    )
    return Shape(measure=m, centroid_m=moments.centroid, second_m2=second, digest=digest)


def _mirrored(part: Part, other: Part, shape: Shape) -> tuple[Part, Shape]:
    """The part with the other's shape seen in the plane y = 0.

    Its outline keeps its own X and Y, so its normal, across x up_axis, points to the other face.
    """
    placement = other.placement
    if placement is not None:
        placement = Placement(
            origin_m=_flipped(placement.origin_m),
            across=_flipped(placement.across),
            up_axis=_flipped(placement.up_axis),
        )
    (xx, xy, xz), (_, yy, yz), (_, _, zz) = shape.second_m2
    second: Matrix = ((xx, -xy, xz), (-xy, yy, -yz), (xz, -yz, zz))
    digest = hashlib.sha256(f"mirrored:{shape.digest}".encode()).hexdigest()
    return (
        replace(part, placement=placement, face=_OTHER_FACE[other.face]),
        replace(shape, centroid_m=_flipped(shape.centroid_m), second_m2=second, digest=digest),
    )


def _flipped(vector: Vector) -> Vector:
    x, y, z = vector
    return (x, 0.0 - y, z)
