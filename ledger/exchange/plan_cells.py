"""The proved cells of a plan, and the solids that take up room in them."""

from __future__ import annotations

import contextlib
from collections.abc import Collection, Mapping
from typing import TYPE_CHECKING

from ledger.errors import Refused, Where
from ledger.exchange.geometry_cache import GeometryCache, MemoryCache
from ledger.exchange.geometry_files import GeometryFiles, GeometryRefused
from ledger.exchange.plan_files import FileRefused, StoredFiles
from ledger.model.plan import Plan
from ledger.model.vectors import Vector

if TYPE_CHECKING:
    from ledger.geometry.closed_cell import ClosedCell


def read_cells(
    plan: Plan, files: Mapping[str, bytes], cache: GeometryCache | None = None
) -> Mapping[str, ClosedCell]:
    """The proved cells of a plan by name, from the cache where it has them.

    Raises
        Refused: a mesh is missing or no longer proves; the plan would not have been read so.
    """
    return _read({cell.name: (cell.mesh, cell.mesh_unit) for cell in plan.tanks.cells}, files, cache)


def read_displaced(
    plan: Plan, files: Mapping[str, bytes], cache: GeometryCache | None = None
) -> Mapping[str, ClosedCell]:
    """The proved solids that take up room in a cell, by the cell's name."""
    wanted = {
        cell.name: (cell.displaced_mesh, cell.mesh_unit)
        for cell in plan.tanks.cells
        if cell.displaced_mesh is not None
    }
    return _read(wanted, files, cache)


def read_cell_places(
    plan: Plan, files: Mapping[str, bytes], cache: GeometryCache, wanted: Collection[str]
) -> Mapping[str, Vector]:
    """The centroids of some cells in metres, build axes; from the cache without loading any array."""
    geometry = GeometryFiles(StoredFiles(files), cache)
    found = {}
    for cell in plan.tanks.cells:
        if cell.name in wanted:
            # A mesh that can no longer be read is for `check` to name; its coats then have no place.
            with contextlib.suppress(GeometryRefused, FileRefused):
                found[cell.name] = geometry.cell_centroid_m(cell.mesh, cell.mesh_unit)
    return found


def _read(
    wanted: Mapping[str, tuple[str, str | None]], files: Mapping[str, bytes], cache: GeometryCache | None
) -> Mapping[str, ClosedCell]:
    geometry = GeometryFiles(StoredFiles(files), cache if cache is not None else MemoryCache())
    found = {}
    problems = []
    for name, (mesh, unit) in wanted.items():
        try:
            found[name] = geometry.cell(mesh, unit)
        except (GeometryRefused, FileRefused) as refused:
            problems.append(refused.at(Where(file="tanks.toml", thing=name)))
    if problems:
        raise Refused(*problems)
    return found
