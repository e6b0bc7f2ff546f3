"""The geometry of a plan: files opened once, their unit settled, and their figures kept.

What is computed of a file lies in the cache under the hash of all it came from, with the notes that
belong to it, so that a second reading opens no drawing and no mesh.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from typing import TYPE_CHECKING, TypeVar

from ledger.errors import MeshRefused, Severity, Unplaced
from ledger.exchange.figures import (
    Figures,
    Remark,
    cell_bytes,
    cell_from,
    cell_head,
    cell_place,
    curves_digest,
    figures_bytes,
    figures_from,
    mesh_digest,
)
from ledger.exchange.geometry_cache import GeometryCache, content_hash, key_for
from ledger.exchange.plan_files import PlanFiles, split_object
from ledger.model.vectors import Vector
from ledger.units import Dimension, check_unit, to_si

if TYPE_CHECKING:
    from ledger.exchange.dxf_drawing import Drawing, Drawn
    from ledger.exchange.mesh_files import MeshFile, MeshObject
    from ledger.geometry.closed_cell import ClosedCell
    from ledger.geometry.curves import Curve
    from ledger.geometry.loops import Loop

# Ends of curves this near to one another were drawn to meet.
JOIN_WITHIN_M = 1e-5
_FARTHEST_M = 1e6
_WRITING = frozenset(
    {"TEXT", "MTEXT", "DIMENSION", "POINT", "LEADER", "MULTILEADER", "ATTDEF", "ARC_DIMENSION"}
)


_T = TypeVar("_T")


class GeometryRefused(Unplaced):
    """A piece of geometry that cannot be used."""


class GeometryFiles:
    """The geometry files of one plan while it is read."""

    def __init__(self, files: PlanFiles, cache: GeometryCache) -> None:
        self._files = files
        self._cache = cache
        self._meshes: dict[str, MeshFile] = {}
        self._drawings: dict[str, Drawing] = {}
        self._hashes: dict[str, str] = {}

    def figures(self, kind: str, geometry: str, unit: str | None, offset_m: float = 0.0) -> Figures:
        """Figures of a part's geometry: `kind` is panel, skin, solid or run.

        Raises
            GeometryRefused, FileRefused: with the reason.
        """
        path, picked = split_object(geometry)
        key = key_for(kind, self._hash(path), _ending(path), picked, unit, offset_m)
        known = _as_kept(self._cache.get(key), figures_from)
        if known is not None:
            return known
        figures = _told_plainly(lambda: self._compute(kind, path, picked, unit, offset_m))
        self._cache.put(key, figures_bytes(figures))
        return figures

    def cell(self, geometry: str, unit: str | None) -> ClosedCell:
        """The proved solid of a cell. Raises GeometryRefused, FileRefused."""
        path, picked = split_object(geometry)
        key = self._cell_key(path, picked, unit)
        known = _as_kept(self._cache.get(key), cell_from)
        if known is not None:
            return known
        cell = _told_plainly(lambda: self._proved(path, picked, unit))
        self._cache.put(key, cell_bytes(cell))
        return cell

    def cell_digest(self, geometry: str, unit: str | None) -> str:
        """The digest of a proved cell, without its arrays where the cache has it."""
        path, picked = split_object(geometry)
        known = _as_kept(self._cache.get(self._cell_key(path, picked, unit)), cell_head)
        if known is not None:
            return known[0]
        return self.cell(geometry, unit).digest

    def cell_volume_m3(self, geometry: str, unit: str | None) -> float:
        """The volume of a cell that `cell_digest` was asked of before."""
        path, picked = split_object(geometry)
        known = _as_kept(self._cache.get(self._cell_key(path, picked, unit)), cell_head)
        if known is not None:
            return known[1]
        return self.cell(geometry, unit).volume_m3

    def cell_centroid_m(self, geometry: str, unit: str | None) -> Vector:
        """Where the middle of a cell is. Raises GeometryRefused, FileRefused."""
        path, picked = split_object(geometry)
        known = _as_kept(self._cache.get(self._cell_key(path, picked, unit)), cell_place)
        if known is not None:
            return known
        return self.cell(geometry, unit).centroid_m

    def loops(self, geometry: str, unit: str | None) -> tuple[Loop, ...]:
        """The closed loops of a panel's outline in metres. Raises GeometryRefused, FileRefused."""
        path, picked = split_object(geometry)
        return _told_plainly(lambda: self._outline(path, picked, unit)[0])

    def _cell_key(self, path: str, picked: str | None, unit: str | None) -> str:
        return key_for("cell", self._hash(path), _ending(path), picked, unit)

    def _hash(self, path: str) -> str:
        if path not in self._hashes:
            self._hashes[path] = content_hash(self._files.read(path))
        return self._hashes[path]

    def _compute(
        self, kind: str, path: str, picked: str | None, unit: str | None, offset_m: float
    ) -> Figures:
        if kind == "panel":
            return self._panel(path, picked, unit)
        if kind == "run":
            return self._run(path, picked, unit)
        if kind == "solid":
            from ledger.geometry.solids import mass_moments_of_solid

            cell = self._proved(path, picked, unit)
            moments = mass_moments_of_solid(cell)
            digest = cell.digest
        else:
            from ledger.geometry.surfaces import moments_of_surface

            mesh = self._mesh_object(path, picked, unit)
            scale = _scale_of(self._mesh_unit(path, unit))
            moments = moments_of_surface(mesh.vertices * scale, mesh.faces, offset_m)
            digest = mesh_digest(mesh, scale)
        return Figures(
            measure=moments.measure,
            centroid=moments.centroid,
            second=moments.second,
            unit=self._mesh_unit(path, unit),
            digest=digest,
        )

    def _panel(self, path: str, picked: str | None, unit: str | None) -> Figures:
        from ledger.geometry.outlines import Outline, outline_moments

        loops, unit_used, remarks = self._outline(path, picked, unit)
        plane = outline_moments(Outline(loops=loops))
        return Figures(
            measure=plane.area,
            centroid=plane.centroid,
            second=plane.second,
            unit=unit_used,
            digest=curves_digest(curve for loop in loops for curve in loop.curves),
            remarks=remarks,
        )

    def _outline(
        self, path: str, picked: str | None, unit: str | None
    ) -> tuple[tuple[Loop, ...], str, tuple[Remark, ...]]:
        from ledger.geometry.loops import Loop, OutlineRefused, chain

        drawing, unit_used, remarks = self._drawing(path, unit)
        drawn, more = self._drawn(drawing, unit_used, picked)
        loops = [Loop(curves=each.curves) for each in drawn if each.closed]
        loose = [curve for each in drawn if not each.closed for curve in each.curves]
        try:
            loops.extend(chain(loose, JOIN_WITHIN_M))
        except OutlineRefused as refused:
            layers = drawing.layers
            if refused.code != "outline-open" or picked is not None or len(layers) < 2:
                raise
            raise GeometryRefused(
                refused.code,
                refused.what,
                f"{refused.do}, or pick the outline's layer with #, one of {', '.join(layers)}",
            ) from None
        return tuple(loops), unit_used, remarks + more

    def _run(self, path: str, picked: str | None, unit: str | None) -> Figures:
        from ledger.geometry.moments import add
        from ledger.geometry.polylines import moments_of_polyline

        if _ending(path) == ".dxf":
            drawing, unit_used, remarks = self._drawing(path, unit)
            drawn, more = self._drawn(drawing, unit_used, picked)
            curves = [curve for each in drawn for curve in each.curves]
            if not curves:
                raise GeometryRefused(
                    "run-empty", "the drawing has no line", "draw the run or pick its layer"
                )
            parts = [moments_of_polyline(_flat(curve)) for curve in curves]
            digest, remarks = curves_digest(curves), remarks + more
        else:
            mesh = self._mesh_object(path, picked, unit, lines=True)
            unit_used, remarks = self._mesh_unit(path, unit), ()
            scale = _scale_of(unit_used)
            parts = [moments_of_polyline(mesh.vertices[line] * scale) for line in mesh.lines]
            digest = mesh_digest(mesh, scale)
        whole = add(*parts)
        return Figures(
            measure=whole.measure,
            centroid=whole.centroid,
            second=whole.second,
            unit=unit_used,
            digest=digest,
            remarks=remarks,
        )

    def _proved(self, path: str, picked: str | None, unit: str | None) -> ClosedCell:
        from ledger.geometry.closed_cell import ClosedCell

        mesh = self._mesh_object(path, picked, unit)
        return ClosedCell.from_mesh(mesh.vertices * _scale_of(self._mesh_unit(path, unit)), mesh.faces)

    def _mesh_object(
        self, path: str, picked: str | None, unit: str | None, *, lines: bool = False
    ) -> MeshObject:
        from ledger.exchange.mesh_files import pick_object

        scale = _scale_of(self._mesh_unit(path, unit))
        mesh = pick_object(self._mesh(path), picked, lines=lines)
        farthest_m = scale * abs(mesh.vertices).max(initial=0.0)
        if math.isnan(farthest_m):
            raise GeometryRefused(
                "mesh-not-finite", "a corner of the mesh is not a number", "export the mesh again"
            )
        if farthest_m > _FARTHEST_M:
            raise GeometryRefused(
                "mesh-too-far",
                f"a corner of the mesh lies {farthest_m:.3g} m from the datum",
                "check the unit and that corner, and export the mesh again",
            )
        return mesh

    def _mesh(self, path: str) -> MeshFile:
        from ledger.exchange.mesh_files import read_mesh_file

        if path not in self._meshes:
            self._meshes[path] = read_mesh_file(path, self._files.read(path))
        return self._meshes[path]

    def _mesh_unit(self, path: str, unit: str | None) -> str:
        return _settled(unit, self._mesh(path).unit, path)

    def _drawing(self, path: str, unit: str | None) -> tuple[Drawing, str, tuple[Remark, ...]]:
        from ledger.exchange.dxf_drawing import UNIT_CODES, read_drawing

        if _ending(path) != ".dxf":
            raise GeometryRefused(
                "geometry-kind", f"{path!r} is not a DXF drawing", "export the outline as DXF"
            )
        if path not in self._drawings:
            self._drawings[path] = read_drawing(self._files.read(path))
        drawing = self._drawings[path]
        code = drawing.unit_code
        said = UNIT_CODES.get(code, f"unit code {code}") if code else None
        remarks: tuple[Remark, ...] = ()
        if drawing.recovered is not None:
            remarks = (
                Remark(
                    code="drawing-recovered",
                    severity=Severity.LOOK,
                    what=f"the drawing is damaged and was opened by recovery: {drawing.recovered}",
                    do="check its area, or export the drawing again",
                ),
            )
        return drawing, _settled(unit, said, path), remarks

    def _drawn(
        self, drawing: Drawing, unit: str, picked: str | None
    ) -> tuple[tuple[Drawn, ...], tuple[Remark, ...]]:
        drawn, left_out = drawing.drawn(_scale_of(unit), picked)
        if not left_out:
            return drawn, ()
        counted = ", ".join(f"{count} {kind}" for kind, count in sorted(left_out.items()))
        on = "the drawing" if picked is None else f"layer {picked}"
        writing = set(left_out) <= _WRITING
        remark = Remark(
            code="drawing-left-out",
            severity=Severity.NOTE if writing else Severity.LOOK,
            what=f"{counted} on {on} are no outline and were left out",
            do="nothing to do" if writing else "draw them as lines, arcs or splines if they belong to it",
        )
        return drawn, (remark,)


def _as_kept(kept: bytes | None, read: Callable[[bytes], _T]) -> _T | None:
    """What was kept, or None where nothing was or it is damaged: it is then computed again."""
    if kept is None:
        return None
    try:
        return read(kept)
    except (ValueError, KeyError, TypeError, IndexError):
        return None


def _told_plainly(compute: Callable[[], _T]) -> _T:
    import numpy as np

    from ledger.exchange.dxf_drawing import DrawingRefused
    from ledger.exchange.mesh_files import MeshFileRefused
    from ledger.geometry.loops import OutlineRefused

    try:
        # What overflows is refused by its figures; a warning would only stand between the findings.
        with np.errstate(all="ignore"):
            return compute()
    except MeshFileRefused as refused:
        line = "" if refused.row is None else f"line {refused.row} of the file: "
        raise GeometryRefused(refused.code, f"{line}{refused.what}", refused.do) from None
    except (MeshRefused, OutlineRefused, DrawingRefused) as refused:
        raise GeometryRefused(refused.code, refused.what, refused.do) from None
    except ValueError as error:
        raise GeometryRefused("geometry-broken", str(error), "draw it again") from None


def _settled(unit: str | None, said: str | None, path: str) -> str:
    """The unit that counts: as the plan says, else as the file does; they may not differ."""
    if unit is None and said is None:
        raise GeometryRefused(
            "unit-missing",
            f"neither the plan nor {path} says the unit of its coordinates",
            "write the unit, for example mm",
        )
    if said is None:
        return str(unit)
    if said not in ("in", "ft", "yd", "mm", "cm", "m", "um", "dm"):
        raise GeometryRefused(
            "unit-contradicts",
            f"{path} says {said}, which is no unit of a part",
            "set its unit and export it again",
        )
    if unit is not None and unit != said:
        raise GeometryRefused(
            "unit-contradicts",
            f"{path} says its unit is {said} and the plan says {unit}",
            f"write {said}, or export the file in {unit}",
        )
    return said


def _scale_of(unit: str) -> float:
    return 0.1 if unit == "dm" else to_si(1.0, check_unit(unit, Dimension.LENGTH), Dimension.LENGTH)


def _ending(path: str) -> str:
    return path[path.rfind(".") :].lower() if "." in path else ""


def _flat(curve: Curve) -> list[tuple[float, float, float]]:
    from ledger.geometry.curves import Line

    if isinstance(curve, Line):
        points: tuple[tuple[float, float], ...] = (curve.start, curve.end)
    else:
        rough = curve.points(1e-3)
        size = max(abs(a - b) for i in (0, 1) for a in (p[i] for p in rough) for b in (p[i] for p in rough))
        points = curve.points(1e-7 * size)
    return [(x, y, 0.0) for x, y in points]
