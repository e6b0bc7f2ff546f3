"""A wing section as a curve, and the corners that stand for it.

A polygon through points of a curve is always too small. Here each corner stands off the curve by as
much as makes the area right, so that a few dozen straight pieces give the area of the true section.
"""

from __future__ import annotations

from functools import lru_cache
from itertools import pairwise

import numpy as np

from ledger.loft.layout import PlanPoint, Section
from ledger.loft.lofted import Floats
from ledger.loft.section import naca_surface

# Points between two corners, by which the area between the curve and its chord is summed.
_BETWEEN = 64
_SAMPLES = 8001


def chord_shares(corners: int, wanted: tuple[float, ...]) -> Floats:
    """Shares of the chord, (n,) from 0 at the nose to 1, crowded at both ends, each wanted one among them."""
    even = 0.5 * (1.0 - np.cos(np.linspace(0.0, np.pi, corners + 1)))
    inner = [share for share in wanted if 0.0 < share < 1.0]
    # A corner hard beside a wanted one would give a strip too thin to mean anything.
    clear = [share for share in even if all(abs(share - one) > 0.2 / corners**2 for one in inner)]
    return np.array(sorted({*clear, *inner, 0.0, 1.0}))


def surface_points(section: Section, shares: Floats, *, upper: bool) -> Floats:
    """Points of one surface of the unit section at chord shares.

    shares : (n,) float, 0 to 1, of the camber line (a family section) or of the chord (coordinates).
    Returns (n, 2) float, x aft and z up, shares of the chord.
    """
    if section.coordinates:
        return _sampled(section.coordinates, upper, shares)
    return naca_surface(section.profile, shares, upper=upper)


def section_ring(section: Section, shares: Floats) -> Floats:
    """The corners of a unit section, (2 n - 1, 2): upper trailing edge, round the nose, lower trailing edge.

    shares : (n,) float from 0 to 1. The polygon's area is that of the curve closed by a straight line
    over the trailing edge, to about 1e-9 of it.
    """
    turned = np.concatenate((shares[::-1], -shares[1:]))
    on_curve = _around(section, turned)
    bulge = np.array([_bulge(section, a, b) for a, b in pairwise(turned)])
    return _standing_off(on_curve, bulge)


def _around(section: Section, turned: Floats) -> Floats:
    """Points by a share that is positive on the upper surface and negative on the lower."""
    upper = surface_points(section, np.abs(turned), upper=True)
    lower = surface_points(section, np.abs(turned), upper=False)
    return np.where((turned > 0.0)[:, None], upper, lower)


def _bulge(section: Section, start: float, end: float) -> float:
    """Area between the curve and its chord between two corners; positive where the curve is outside."""
    # Even steps of the square root are even steps round the nose, where the curve turns most.
    root = np.linspace(
        np.sign(start) * np.sqrt(abs(start)), np.sign(end) * np.sqrt(abs(end)), 2 * _BETWEEN + 1
    )
    fine = _around(section, np.sign(root) * root**2)
    whole, half = _area_over_chord(fine), _area_over_chord(fine[::2])
    # The sum falls short by the square of its step, so two of them give what no step would.
    return whole + (whole - half) / 3.0


def _area_over_chord(points: Floats) -> float:
    x, z = (points - points[0]).T
    return 0.5 * float(np.sum(x[:-1] * z[1:] - x[1:] * z[:-1]))


def _standing_off(points: Floats, bulge: Floats) -> Floats:
    """Each corner moved outward until it adds half of what both neighbouring pieces lack."""
    share = np.zeros(len(points))
    share[:-1] += 0.5 * bulge
    share[1:] += 0.5 * bulge
    # Both ends of the ring stay on the trailing edge, so their neighbours make up for them.
    share[1] += share[0]
    share[-2] += share[-1]
    along = points[2:] - points[:-2]
    normal = np.stack((along[:, 1], -along[:, 0]), axis=1)
    way = np.zeros_like(points)
    way[1:-1] = normal * (2.0 * share[1:-1] / np.einsum("ij,ij->i", along, along))[:, None]
    # Neighbours that both move add a little more than each alone, so how far is a root of two terms.
    lacking = float(bulge.sum())
    together = 0.5 * float(np.sum(way[:-1, 0] * way[1:, 1] - way[1:, 0] * way[:-1, 1]))
    alone = _area_over_chord(points + way) - _area_over_chord(points) - together
    under = alone**2 + 4.0 * together * lacking
    if alone == 0.0 or under <= 0.0:
        return points
    return np.asarray(points + way * (2.0 * lacking / (alone + np.copysign(np.sqrt(under), alone))))


@lru_cache(maxsize=32)
def _both_surfaces(coordinates: tuple[PlanPoint, ...]) -> tuple[Floats, Floats]:
    """Upper and lower surface of a coordinate section, nose first, closely spaced on a smooth curve."""
    from ezdxf.math import Vec2, global_bspline_interpolation

    curve = global_bspline_interpolation([Vec2(point) for point in coordinates], degree=3, method="chord")
    spread = np.linspace(0.0, curve.max_t, _SAMPLES)
    dense = np.array([(point.x, point.y) for point in curve.points(spread)])
    nose = int(np.argmin(dense[:, 0]))
    return dense[: nose + 1][::-1], dense[nose:]


def _sampled(coordinates: tuple[PlanPoint, ...], upper: bool, shares: Floats) -> Floats:
    dense = _both_surfaces(coordinates)[0 if upper else 1]
    aft = np.maximum.accumulate(dense[:, 0])
    first, last = aft[0], aft[-1]
    # The angle of the half circle over the chord keeps its step where the nose stands upright.
    angle = np.arccos(np.clip(1.0 - 2.0 * (aft - first) / (last - first), -1.0, 1.0))
    wanted = np.arccos(1.0 - 2.0 * np.clip(shares, 0.0, 1.0))
    return np.stack([np.interp(wanted, angle, dense[:, axis]) for axis in (0, 1)], axis=1)
