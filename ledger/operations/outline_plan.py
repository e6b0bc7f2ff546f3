"""A plan seen from above as lines: panels where they stand, cells in outline."""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import dataclass

from ledger.exchange.geometry_files import GeometryFiles, GeometryRefused
from ledger.exchange.plan_files import FileRefused, StoredFiles
from ledger.model.plan import Form, Part
from ledger.model.progress import Progress, unwatched
from ledger.model.vectors import Vector
from ledger.operations.open_build import Build

# A drawing in characters shows no finer than some millimetres.
_FINE_M = 1e-3
# Beyond this share of its normal upwards a panel is drawn as an area, not as a line.
_LYING = 0.2

Point = tuple[float, float]


@dataclass(frozen=True, slots=True, kw_only=True)
class FromAbove:
    """Lines of (FS, BL) in metres: webs, ribs and other panels, and the outline of each cell."""

    panels: tuple[tuple[Point, ...], ...]
    cells: tuple[tuple[Point, ...], ...]


def outline_plan(build: Build, progress: Progress = unwatched) -> FromAbove:
    """The current plan of a build from above. Takes about a second: compute it once and keep it.

    A panel whose drawing can no longer be read is left out; `check` names it.

    Raises
        Stopped: `progress` was told to end the work.
    """
    return FromAbove(panels=tuple(_panels(build, progress)), cells=tuple(_cells(build, progress)))


def _panels(build: Build, progress: Progress) -> Iterator[tuple[Point, ...]]:
    plan = build.snapshot.plan
    geometry = GeometryFiles(StoredFiles(build.files), build.cache)
    panels = [part for part in plan.parts if part.form is Form.PANEL and part.placement is not None]
    for done, part in enumerate(panels):
        progress(f"{plan.name}: drawing {part.name}", done, len(panels))
        drawn = part if part.geometry is not None else plan.part(part.mirror_of or "")
        if drawn is None or drawn.geometry is None:
            continue
        try:
            loops = geometry.loops(drawn.geometry, drawn.geometry_unit)
        except (GeometryRefused, FileRefused):
            continue
        flat = [[point for curve in loop.curves for point in curve.points(_FINE_M)] for loop in loops]
        if flat:
            yield from_above(part, max(flat, key=_spread))


def from_above(part: Part, outline_m: list[Point]) -> tuple[Point, ...]:
    """A panel's outline (its own X, Y, metres) from above: two ends where it stands, else all corners."""
    if part.placement is None:
        return ()
    origin, across, up = part.placement.origin_m, part.placement.across, part.placement.up_axis
    corners = [
        (origin[0] + x * across[0] + y * up[0], origin[1] + x * across[1] + y * up[1]) for x, y in outline_m
    ]
    normal = _cross(across, up)
    if abs(normal[2]) > _LYING:
        return (*corners, corners[0])
    along = (-normal[1], normal[0])
    ordered = sorted(corners, key=lambda corner: corner[0] * along[0] + corner[1] * along[1])
    return (ordered[0], ordered[-1])


def _cells(build: Build, progress: Progress) -> Iterator[tuple[Point, ...]]:
    plan = build.snapshot.plan
    if not plan.tanks.cells:
        return
    from ledger.geometry.sections_cut import plan_outline

    solids = build.cells()
    for done, cell in enumerate(plan.tanks.cells):
        progress(f"{plan.name}: drawing cell {cell.name}", done, len(plan.tanks.cells))
        solid = solids[cell.name]
        yield plan_outline(solid.vertices_m, solid.faces)


def _spread(outline: list[Point]) -> float:
    xs, ys = [x for x, _ in outline], [y for _, y in outline]
    return math.hypot(max(xs) - min(xs), max(ys) - min(ys))


def _cross(a: Vector, b: Vector) -> Vector:
    return (a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0])
