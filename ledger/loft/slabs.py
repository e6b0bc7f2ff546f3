"""A wall as a flat slab, and the chord line it stands on."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ledger.errors import Where
from ledger.loft.bodies import Body
from ledger.loft.layout import Layout
from ledger.loft.lofted import Floats
from ledger.loft.shell import Shell
from ledger.model.vectors import Vector


@dataclass(frozen=True, kw_only=True, eq=False)
class Slab:
    """A flat slab. `axes` are rows: along the wall, up, and its normal; the origin is in its mid-plane."""

    place: Where
    thickness_m: float
    origin_m: Vector
    axes: Floats
    body: Body

    def local(self, points_m: Floats) -> Floats:
        """Points (n, 3) in the slab's own axes."""
        return np.asarray((np.asarray(points_m) - np.asarray(self.origin_m)) @ self.axes.T)

    def placed(self, flat_m: Floats) -> Floats:
        """Points (n, 2) of the slab's mid-plane in build axes, (n, 3)."""
        return np.asarray(np.asarray(self.origin_m) + np.asarray(flat_m) @ self.axes[:2])


def reach_of(shell: Shell) -> float:
    """A length that is beyond the wing from anywhere in it."""
    return 2.0 * float(np.ptp(shell.outer_m.reshape(-1, 3), axis=0).max())


def chord_point(layout: Layout, butt_line_m: float, share: float) -> Vector:
    """The point of the chord line at a butt line, straight between sections."""
    at = [section.butt_line_m for section in layout.sections]
    twist = np.radians([section.twist_deg for section in layout.sections])
    chord = np.array([section.chord_m for section in layout.sections])
    x = [section.leading_edge_m for section in layout.sections] + share * chord * np.cos(twist)
    z = [section.water_line_m for section in layout.sections] - share * chord * np.sin(twist)
    return float(np.interp(butt_line_m, at, x)), butt_line_m, float(np.interp(butt_line_m, at, z))
