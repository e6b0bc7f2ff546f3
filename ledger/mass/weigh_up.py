"""The whole build weighed up: every piece, part and assembly, and the wing."""

from __future__ import annotations

from collections.abc import Mapping

from ledger.mass.report import WeightReport
from ledger.mass.running import RunningWeights
from ledger.model.snapshot import Snapshot
from ledger.model.vectors import Vector


def weigh_up(snapshot: Snapshot, cell_places: Mapping[str, Vector] | None = None) -> WeightReport:
    """Weigh the build up from its plan, its entries and its weighings. Nothing here guesses a measurement.

    `cell_places` are the centroids of cells in metres, build axes: where the coats inside them are.
    Without one, coats count in the mass and are taken at the CG of the rest.
    """
    return RunningWeights(snapshot, cell_places).report
