"""The outlines of a plan's panels as corners, for screens. Figures never come from these."""

from __future__ import annotations

from collections.abc import Mapping

from ledger.exchange.geometry_cache import MemoryCache
from ledger.exchange.geometry_files import GeometryFiles, GeometryRefused
from ledger.exchange.plan_files import FileRefused, StoredFiles
from ledger.model.plan import Form, Part, Plan

_FINE = 2e-4


def read_outline(
    plan: Plan, files: Mapping[str, bytes], part: Part
) -> tuple[tuple[tuple[float, float], ...], ...]:
    """The loops of a panel in its own X and Y, metres, as corners within 0.2 mm.

    A part that mirrors another is seen from its own across and up_axis, so its outline is the
    other's. Empty for a part that is no panel, or whose drawing can no longer be read.
    """
    from ledger.geometry.outlines import flatten

    drawn = part
    if part.geometry is None and part.mirror_of is not None:
        drawn = plan.part(part.mirror_of) or part
    if drawn.form is not Form.PANEL or drawn.geometry is None:
        return ()
    geometry = GeometryFiles(StoredFiles(files), MemoryCache())
    try:
        loops = geometry.loops(drawn.geometry, drawn.geometry_unit)
    except (GeometryRefused, FileRefused):
        return ()
    return tuple(flatten(loop, _FINE) for loop in loops)
