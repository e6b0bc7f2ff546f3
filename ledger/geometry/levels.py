"""What a closed mesh holds below each of many levels, in one pass and without re-meshing.

With h the level and z the height along up, the field (z - h) along up has divergence one and
vanishes on the free surface, so the volume below h is a sum over the wet parts of the triangles
and no lid is needed. Its first moments follow from the fields x (z - h) and (z - h)^2 / 2.

For one triangle the wet part is a corner (below its middle height) or the whole less a corner
(above it). A corner cut off at distance d from its apex contributes d^3 and d^4 terms. So a whole
triangle enters a running sum over the levels at its middle height, and only the levels between its
lowest and highest corner are visited one by one.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any, NamedTuple

import numpy as np
from numpy.typing import ArrayLike, NDArray

from ledger.geometry.standing import Floats, Indices, Standing, stand

# The first level above a corner, counted in the smallest numbers that hold it.
Steps = NDArray[np.signedinteger[Any]]

# A span that crosses more levels than this is summed as a matrix block, fewer one level at a time.
FEW_LEVELS = 12
# Numbers in one block of a matrix: a quarter megabyte, so that it stays in the processor's cache.
BLOCK_NUMBERS = 1 << 15
# Triangles taken at a time: their numbers stay in the cache, and memory does not grow with the mesh.
BLOCK_TRIANGLES = 1 << 13
BLOCK_SPANS = 1 << 12

# Rows of the sums below: volume, x, y and z first moments about the level, free surface.
V, MX, MY, MZ, S = range(5)
# Rows of a whole triangle's integrals over its projected area.
A, AX, AY, AZ, AXZ, AYZ, AZZ = range(7)


@dataclass(frozen=True, slots=True, kw_only=True)
class LevelTable:
    """Figures below each level, in the order the levels were given.

    levels_m : (n,) float
        Heights along up from the datum's origin.
    volume_m3 : (n,) float
        From 0 to the gross volume; never falls with the level.
    centroid_m : (n, 3) float
        Build axes; NaN where the volume is 0.
    surface_m2 : (n,) float
        Free surface; at a flat face the value just below it.
    """

    levels_m: Floats
    volume_m3: Floats
    centroid_m: Floats
    surface_m2: Floats


class Spans(NamedTuple):
    """Stretches of levels that cut a corner off a triangle, as coefficients about the corner.

    first, last : first level index of the stretch, and one past its last.
    apex : height of the corner. c, cx, cy multiply |d|^3; gx, gy multiply |d|^3 d, d = level - apex.
    """

    first: Indices
    last: Indices
    apex: Floats
    c: Floats
    cx: Floats
    cy: Floats
    gx: Floats
    gy: Floats


def level_table(vertices_m: ArrayLike, faces: ArrayLike, up: ArrayLike, levels_m: ArrayLike) -> LevelTable:
    """Volume, centroid and free surface below each level.

    vertices_m : (n, 3) float
        Corners in metres, build axes (x aft, y right, z up).
    faces : (m, 3) int
        Corner numbers, anticlockwise seen from outside. The mesh is taken to be closed and free of
        overlap, as `ClosedCell` proves; for any other the figures mean nothing.
    up : (3,) float
        Away from the pull felt; normalised here.
    levels_m : (n,) float
        Heights up . x from the datum's origin, in any order.
    Raises
        ValueError: wrong shapes, an index out of range, a level or up that is not finite, up zero.
    References
        Divergence theorem with a field that vanishes on the free surface; see the manual,
        'Submerged volume'.
    """
    levels = np.asarray(levels_m, dtype=np.float64)
    if levels.ndim != 1 or not np.isfinite(levels).all():
        raise ValueError("levels_m must be a row of finite heights")
    return table_of(stand(vertices_m, faces, up), levels)


def table_of(standing: Standing, levels_m: Floats) -> LevelTable:
    """The same for a mesh already turned to its up direction; levels (n,) in metres, in any order."""
    order = np.argsort(levels_m, kind="stable")
    levels = levels_m[order] - standing.lowest_m
    sums, gross = _sums_below(standing, levels)
    volume, centroid, surface = _figures(standing, levels, sums, gross)
    back = np.empty_like(order)
    back[order] = np.arange(len(order))
    return LevelTable(
        levels_m=levels_m.copy(),
        volume_m3=volume[back],
        centroid_m=centroid[back],
        surface_m2=surface[back],
    )


def _sums_below(standing: Standing, levels: Floats) -> tuple[Floats, Floats]:
    """Integrals (5, n) over the wet triangles at each sorted level, and the whole mesh's (7,)."""
    z, steps = _heights_on_levels(standing, levels)
    k = np.ascontiguousarray(steps.take(standing.faces).T)
    low, high = np.minimum(k[0], k[1]), np.maximum(k[0], k[1])
    middle = np.maximum(low, np.minimum(high, k[2]))
    np.minimum(low, k[2], out=low)
    np.maximum(high, k[2], out=high)
    below = np.cumsum(_whole_sums(standing, z, middle, len(levels)), axis=1)
    sums = wet_integrals(below[:, :-1], levels)
    for chosen, lone, first, last in (
        (np.flatnonzero(low < middle), _lone_corner(k, low), low, middle),
        (np.flatnonzero(middle < high), _lone_corner(k, high), middle, high),
    ):
        for start in range(0, len(chosen), BLOCK_SPANS):
            part = chosen[start : start + BLOCK_SPANS]
            corners = _corners_from(standing.faces, part, lone.take(part))
            spans = _spans(first.take(part), last.take(part), corners, (standing.x, standing.y, z))
            _add_spans(sums, spans, levels)
    return sums, below[:, -1]


def _whole_sums(standing: Standing, z: Floats, middle: Steps, count: int) -> Floats:
    """Integrals (7, count + 1) of whole triangles by the level at which they enter."""
    # In order of that level, so that the triangles of one are summed as one product.
    order = np.argsort(middle, kind="stable")
    heads = np.searchsorted(middle, np.arange(count + 2), sorter=order)
    whole = np.zeros((count + 1, 10, 4))
    # Memory that is given back and asked for anew at each block costs as much as the sums.
    room = np.ones(14 * min(len(order), BLOCK_TRIANGLES))
    for start in range(0, len(order), BLOCK_TRIANGLES):
        chosen = order[start : start + BLOCK_TRIANGLES]
        corners = np.ascontiguousarray(standing.faces.take(chosen, axis=0).T)
        shape, weights = np.split(room[: 14 * len(chosen)].reshape(14, len(chosen)), [10])
        shape[9] = 1.0
        for row, values in enumerate((standing.x, standing.y, z)):
            # Any mode but the checking one writes straight into `out`; the indices were checked before.
            np.take(values, corners, out=shape[3 * row : 3 * row + 3], mode="clip")
        _add_whole(whole, shape, weights, heads - start)
    return _integrals_of(whole)


def _heights_on_levels(standing: Standing, levels: Floats) -> tuple[Floats, Steps]:
    """Corner heights, those within rounding of a level put on it, and the first level above each.

    Without this a flat face at a level is above it at one corner and below it at the next, and the
    free surface there is a matter of luck.
    """
    kind: type[np.signedinteger[Any]] = np.int16 if len(levels) < 1 << 15 else np.int64
    z, tolerance = standing.z, standing.tolerance_m
    padded = np.concatenate(([-np.inf], levels, [np.inf]))
    steps = _even_guess(z, levels)
    below, above = padded.take(steps), padded[1:].take(steps)
    # Also true where the guess was wrong, so one test finds both.
    near = np.flatnonzero((z - below <= tolerance) | (above - z <= tolerance))
    if len(near) == 0:
        return z, steps.astype(kind)
    z = z.copy()
    at = np.searchsorted(levels, z[near], side="right")
    below, above = padded[at], padded[at + 1]
    to_above, to_below = above - z[near] <= tolerance, z[near] - below <= tolerance
    z[near] = np.where(to_above, above, np.where(to_below, below, z[near]))
    steps[near] = np.searchsorted(levels, z[near], side="right")
    return z, steps.astype(kind)


def _even_guess(z: Floats, levels: Floats) -> Indices:
    """How many levels lie at or below each height, if the levels are evenly spaced."""
    if len(levels) < 2 or levels[-1] <= levels[0]:
        return np.searchsorted(levels, z, side="right")
    scaled = (z - levels[0]) * ((len(levels) - 1) / (levels[-1] - levels[0]))
    scaled += 1.0
    np.clip(scaled, 0.0, len(levels), out=scaled)
    steps: Indices = scaled.astype(np.intp)
    return steps


def _add_whole(whole: Floats, shape: Floats, weights: Floats, heads: Indices) -> None:
    """Add to each entry level's sums (10, 4) the products of coordinates and weights of its triangles.

    shape : (10, m): x, y and z of the three corners, and ones. The weights (4, m), filled in here,
    are twice the projected area, alone and times each corner's z; all seven integrals are sums of
    these forty products.
    """
    size = shape.shape[1]
    x0, x1, x2, y0, y1, y2 = shape[:6]
    weights[0] = (x1 - x0) * (y2 - y0) - (x2 - x0) * (y1 - y0)
    np.multiply(shape[6:9], weights[0], out=weights[1:])
    first = int(np.searchsorted(heads, 0, side="right")) - 1
    last = int(np.searchsorted(heads, size, side="left"))
    ends = np.clip(heads[first : last + 1], 0, size).tolist()
    for level, begin, end in zip(range(first, last), ends, ends[1:], strict=False):
        if begin < end:
            whole[level] += shape[:, begin:end] @ weights[:, begin:end].T


def _integrals_of(whole: Floats) -> Floats:
    """The seven integrals (7, k) of summed products (k, 10, 4), in the order A to AZZ."""
    x, y, z, one = whole[:, 0:3], whole[:, 3:6], whole[:, 6:9], whole[:, 9]

    def with_z(products: Floats) -> Floats:
        return np.asarray(
            (products[:, :, 1:].sum(axis=(1, 2)) + np.einsum("kii->k", products[:, :, 1:])) / 24.0
        )

    return np.stack(
        (
            one[:, 0] / 2.0,
            x[:, :, 0].sum(axis=1) / 6.0,
            y[:, :, 0].sum(axis=1) / 6.0,
            z[:, :, 0].sum(axis=1) / 6.0,
            with_z(x),
            with_z(y),
            with_z(z),
        )
    )


def triangle_integrals(x: Floats, y: Floats, z: Floats) -> tuple[Floats, ...]:
    """Integrals of 1, x, y, z, xz, yz, zz over each triangle's signed projected area.

    x, y, z : (3, m) float
        Corners of the triangles in the frame of up, metres.
    Returns
        seven rows (m,), m2 to m4; above 0 where a triangle faces up.
    """
    x0, x1, x2 = x
    y0, y1, y2 = y
    z0, z1, z2 = z
    area = (x1 - x0) * (y2 - y0)
    area -= (x2 - x0) * (y1 - y0)
    area *= 0.5
    third, twelfth = area / 3.0, area / 12.0
    sum_x, sum_y, sum_z = x0 + x1 + x2, y0 + y1 + y2, z0 + z1 + z2
    xz = sum_x * sum_z + x0 * z0 + x1 * z1 + x2 * z2
    yz = sum_y * sum_z + y0 * z0 + y1 * z1 + y2 * z2
    zz = sum_z * sum_z + z0 * z0 + z1 * z1 + z2 * z2
    return area, third * sum_x, third * sum_y, third * sum_z, twelfth * xz, twelfth * yz, twelfth * zz


def wet_integrals(whole: Floats, levels: Floats) -> Floats:
    """Sums (5, n) of whole triangles at each level (n,), of their integrals (7, n); rows V to S."""
    volume = whole[AZ] - levels * whole[A]
    return np.stack(
        (
            volume,
            whole[AXZ] - levels * whole[AX],
            whole[AYZ] - levels * whole[AY],
            0.5 * (whole[AZZ] - levels * (whole[AZ] + volume)),
            -whole[A],
        )
    )


def _lone_corner(k: Steps, extreme: Steps) -> NDArray[np.int8]:
    """For each triangle which corner, 0 to 2, has the extreme step; the one, where it is cut there."""
    return np.where(k[2] == extreme, np.int8(2), (k[1] == extreme).view(np.int8))


def _corners_from(
    faces: Indices, chosen: Indices, lone: NDArray[np.int8]
) -> tuple[Indices, Indices, Indices]:
    """Corner numbers of the chosen triangles, from the lone one on round."""
    flat = faces.reshape(-1)
    head = 3 * chosen
    turn = np.array([0, 1, 2, 0, 1])
    one, two, three = (flat.take(head + turn[step:].take(lone)) for step in range(3))
    return one, two, three


def _spans(
    first: Steps, last: Steps, corners: tuple[Indices, Indices, Indices], frame: tuple[Floats, Floats, Floats]
) -> Spans:
    """Stretches of levels from `first` to before `last`, about the first of the corners."""
    apex, near, far = corners
    x, y, z = frame
    height, xa, ya = z.take(apex), x.take(apex), y.take(apex)
    rise_b, rise_c = z.take(near) - height, z.take(far) - height
    xb, xc, yb, yc = x.take(near) - xa, x.take(far) - xa, y.take(near) - ya, y.take(far) - ya
    c = (xb * yc - xc * yb) / (-6.0 * rise_b * rise_c)
    over_b, over_c = 0.25 * c / rise_b, 0.25 * c / rise_c
    return Spans(
        first=first.astype(np.intp),
        last=last.astype(np.intp),
        apex=height,
        c=c,
        cx=c * xa,
        cy=c * ya,
        gx=xb * over_b + xc * over_c,
        gy=yb * over_b + yc * over_c,
    )


def _take(spans: Spans, chosen: Indices) -> Spans:
    return Spans._make(values.take(chosen) for values in spans)


def _add_spans(cut: Floats, spans: Spans, levels: Floats) -> None:
    """Add every (stretch, level) pair to the sums."""
    reach = spans.last - spans.first
    longest = int(reach.max(initial=0))
    if longest > FEW_LEVELS:
        many = reach > FEW_LEVELS
        _add_blocks(cut, _take(spans, np.flatnonzero(many)), levels)
        spans = _take(spans, np.flatnonzero(~many))
        reach = spans.last - spans.first
    for step in range(min(longest, FEW_LEVELS)):
        if step:
            left = np.flatnonzero(reach > step)
            spans, reach = _take(spans, left), reach.take(left)
        _add_single(cut, spans, spans.first + step, levels)


def _add_single(cut: Floats, spans: Spans, at: Indices, levels: Floats) -> None:
    count = cut.shape[1]
    d = levels.take(at) - spans.apex
    square = d * np.abs(d)
    cube = square * d
    fourth = cube * d
    volume = spans.c * cube
    cut[V] += np.bincount(at, weights=volume, minlength=count)
    cut[MX] += np.bincount(at, weights=spans.cx * cube + spans.gx * fourth, minlength=count)
    cut[MY] += np.bincount(at, weights=spans.cy * cube + spans.gy * fourth, minlength=count)
    cut[MZ] -= 0.25 * np.bincount(at, weights=volume * d, minlength=count)
    cut[S] += 3.0 * np.bincount(at, weights=spans.c * square, minlength=count)


def _add_blocks(cut: Floats, spans: Spans, levels: Floats) -> None:
    """Stretches over many levels: a masked matrix of distances, summed by matrix products."""
    spans = _take(spans, np.lexsort((spans.first, np.frexp((spans.last - spans.first).astype(float))[1])))
    count = max(1, BLOCK_NUMBERS // len(levels))
    for start in range(0, len(spans.first), count):
        part = slice(start, start + count)
        first, last = spans.first[part], spans.last[part]
        low, high = int(first.min()), int(last.max())
        at = np.arange(low, high)
        d = levels[low:high] - spans.apex[part, None]
        d *= (at >= first[:, None]) & (at < last[:, None])
        square = np.abs(d)
        square *= d
        c = spans.c[part]
        cut[S, low:high] += (3.0 * c) @ square
        square *= d
        cut[V : MY + 1, low:high] += np.stack((c, spans.cx[part], spans.cy[part])) @ square
        square *= d
        cut[MX : MZ + 1, low:high] += np.stack((spans.gx[part], spans.gy[part], -0.25 * c)) @ square


def _figures(
    standing: Standing, levels: Floats, sums: Floats, whole: Floats
) -> tuple[Floats, Floats, Floats]:
    """Volume, centroid in build axes and free surface of the raw sums.

    Rounding is put right where the truth is known: nothing below the lowest corner, everything
    above the highest, and no fall of volume with the level.
    """
    top = float(standing.z.max())
    gross = max(float(whole[AZ]), 0.0)
    empty = levels <= standing.tolerance_m
    full = levels >= top - standing.tolerance_m
    volume = np.where(empty, 0.0, np.where(full, gross, np.clip(sums[V], 0.0, gross)))
    np.maximum.accumulate(volume, out=volume)
    surface = np.where(empty | (levels > top + standing.tolerance_m), 0.0, np.maximum(sums[S], 0.0))
    local = np.full((len(levels), 3), np.nan)
    wet = volume > 0.0
    local[wet] = (sums[MX : MZ + 1, wet] / volume[wet]).T
    local[:, 2] += levels
    for axis, values in enumerate((standing.x, standing.y, standing.z)):
        np.clip(local[:, axis], values.min(), values.max(), out=local[:, axis])
    return volume, standing.in_build_axes(local), surface
