"""Values of B-splines and their sectors, on arrays."""

from __future__ import annotations

from collections.abc import Sequence
from itertools import pairwise

import numpy as np

from ledger.geometry.curves import Spline
from ledger.geometry.sectors import Point, Sector
from ledger.geometry.standing import Floats

# Halvings of a span of knots when it is flattened for a drawing.
MOST_HALVINGS = 12


def evaluate(spline: Spline, parameters: Sequence[float] | Floats) -> tuple[Floats, Floats]:
    """Points and derivatives (n, 2) at parameters inside the spline's range, by de Boor's steps."""
    u = np.asarray(parameters, dtype=np.float64)
    degree, knots = spline.degree, np.asarray(spline.knots)
    count = len(spline.control_points)
    weights = np.ones(count) if spline.weights is None else np.asarray(spline.weights)
    points = np.asarray(spline.control_points, dtype=np.float64)
    raised = np.concatenate((points * weights[:, None], weights[:, None]), axis=1)
    span = np.clip(np.searchsorted(knots, u, side="right") - 1, degree, count - 1)
    # At the end of the range the last span that is not empty is meant.
    while (empty := (knots[span] == knots[span + 1]) & (span > degree)).any():
        span = np.where(empty, span - 1, span)
    near = raised[span[:, None] + np.arange(-degree, 1)]
    slope = np.zeros((len(u), 3))
    for level in range(1, degree + 1):
        index = span[:, None] + np.arange(level - degree, 1)
        low, high = knots[index], knots[index + degree + 1 - level]
        width = high - low
        safe = np.where(width > 0.0, width, 1.0)[..., None]
        share = (u[:, None] - low)[..., None] / safe
        if level == degree:
            slope = degree * (near[:, 1] - near[:, 0]) / safe[:, 0]
        near = (1.0 - share) * near[:, :-1] + share * near[:, 1:]
    w = near[:, 0, 2:]
    value = near[:, 0, :2] / w
    return value, (slope[:, :2] - value * slope[:, 2:]) / w


def span_ends(spline: Spline) -> Floats:
    """The distinct knots (k,) of the spline's range, rising."""
    return np.unique(np.asarray(spline.knots[spline.degree : len(spline.control_points) + 1]))


def sector_of(spline: Spline, about: Point, gauss_points: int, pieces: int) -> Sector:
    """Sector of a spline by Gauss's rule on each of `pieces` parts of each span of knots."""
    ends = span_ends(spline)
    cuts = np.concatenate([np.linspace(a, b, pieces + 1)[:-1] for a, b in pairwise(ends)])
    cuts = np.append(cuts, ends[-1])
    nodes, shares = np.polynomial.legendre.leggauss(gauss_points)
    half = 0.5 * np.diff(cuts)
    u = (cuts[:-1] + half)[:, None] + half[:, None] * nodes
    value, slope = evaluate(spline, u.ravel())
    r = value - np.asarray(about)
    w = (r[:, 0] * slope[:, 1] - r[:, 1] * slope[:, 0]) * (half[:, None] * shares).ravel()
    x, y = r.T
    return Sector(
        area=0.5 * float(w.sum()),
        x=float(w @ x) / 3.0,
        y=float(w @ y) / 3.0,
        xx=0.25 * float(w @ (x * x)),
        xy=0.25 * float(w @ (x * y)),
        yy=0.25 * float(w @ (y * y)),
    )


def flat_points(spline: Spline, tolerance_m: float) -> tuple[Point, ...]:
    """Points whose chords stay within a tolerance: each span is halved until its middles do."""
    if not tolerance_m > 0.0:
        raise ValueError("a tolerance must be above 0")
    ends = span_ends(spline)
    found: list[Floats] = []
    for a, b in pairwise(ends):
        pieces = 4
        for _ in range(MOST_HALVINGS):
            points, _ = evaluate(spline, np.linspace(a, b, 2 * pieces + 1))
            chords = 0.5 * (points[:-2:2] + points[2::2])
            if float(np.linalg.norm(points[1::2] - chords, axis=1).max()) <= tolerance_m:
                break
            pieces *= 2
        found.append(points[: -1 if b < ends[-1] else None])
    return tuple((float(x), float(y)) for x, y in np.concatenate(found))
