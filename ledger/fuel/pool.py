"""Several cells of a tank at one attitude as one body, for tables of many levels in one pass."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from ledger.fuel.bays import Bay, Sums
from ledger.fuel.sealant import coat_below, fillet_below
from ledger.geometry.levels import table_of
from ledger.geometry.standing import Floats, stand


class Pool:
    """The cells of a tank standing along one up direction, stacked into one mesh.

    A displaced mesh is stacked with its faces turned, so the one sum takes it off.
    """

    def __init__(self, bays: Sequence[Bay]) -> None:
        self.bays = tuple(bays)
        self.lowest_m = min(bay.lowest_m for bay in bays)
        self.highest_m = max(bay.highest_m for bay in bays)
        parts = [(bay.solid.vertices_m, bay.solid.faces, bay.cell.sealant_thickness_m or 0.0) for bay in bays]
        parts += [
            (bay.inside.vertices_m, bay.inside.faces[:, ::-1], 0.0) for bay in bays if bay.inside is not None
        ]
        offsets = np.cumsum([0, *(len(vertices) for vertices, _, _ in parts)])[:-1]
        vertices = np.concatenate([part[0] for part in parts])
        faces = np.concatenate([part[1] + offset for part, offset in zip(parts, offsets, strict=True)])
        self._standing = stand(vertices, faces, bays[0].up)
        thickness = np.repeat([part[2] for part in parts], [len(part[1]) for part in parts])
        self._coated = np.flatnonzero(thickness > 0.0)
        p, q, r = (vertices[faces[self._coated, corner]] for corner in range(3))
        heights = vertices @ np.array(bays[0].up)
        self._base_m = float(heights.min())
        self._heights = (heights - self._base_m)[faces[self._coated].T]
        self._weights = 0.5 * np.linalg.norm(np.cross(q - p, r - p), axis=1) * thickness[self._coated]

    def at(self, levels_m: Floats) -> Sums:
        """Figures below each level; levels in any order."""
        table = table_of(self._standing, levels_m)
        moment = np.where(np.isnan(table.centroid_m), 0.0, table.centroid_m) * table.volume_m3[:, None]
        return Sums(
            volume_m3=table.volume_m3,
            moment_m4=moment,
            surface_m2=table.surface_m2,
            sealant_m3=self._sealant(levels_m),
        )

    def _sealant(self, levels_m: Floats) -> Floats:
        total = np.zeros(len(levels_m))
        if len(self._coated):
            order = np.argsort(levels_m, kind="stable")
            total[order] += coat_below(self._heights, self._weights, levels_m[order] - self._base_m)
        for bay in self.bays:
            if bay.cell.sealant_fillet_m:
                total += fillet_below(bay.solid, bay.cell.sealant_fillet_m, bay.up, levels_m)
        return total
