"""The steps that prove a triangle mesh to be the boundary of a solid, each with its refusal."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike, NDArray

from ledger.errors import MeshRefused
from ledger.geometry.named_place import named_place
from ledger.geometry.standing import Floats, Indices

# Corners nearer than this share of the mesh's size are one corner: the rounding of a file, not a gap.
MERGE_SHARE = 1e-9
# Thinner than this share of area x size holds nothing that rounding could not make up.
FLAT_SHARE = 1e-12
NAMED = 3


def checked_arrays(vertices_m: ArrayLike, faces: ArrayLike) -> tuple[Floats, Indices]:
    """Both arrays in the shapes and types the proof works on: (n, 3) float and (m, 3) int.

    Raises MeshRefused (mesh-empty, mesh-not-finite, mesh-index) for what a file may hold, ValueError
    for what only a program can pass.
    """
    vertices = np.array(vertices_m, dtype=np.float64)
    triangles = np.array(faces)
    if vertices.size == 0 or triangles.size == 0:
        raise MeshRefused("mesh-empty", "the mesh has no triangles", "export the solid again")
    if vertices.ndim != 2 or vertices.shape[1] != 3 or triangles.ndim != 2 or triangles.shape[1] != 3:
        raise ValueError("vertices_m and faces must be rows of three")
    if triangles.dtype.kind not in "iu":
        raise ValueError("faces must be whole numbers")
    if not np.isfinite(vertices).all():
        row = int(np.flatnonzero(~np.isfinite(vertices).all(axis=1))[0])
        raise MeshRefused(
            "mesh-not-finite", f"corner {row + 1} of the mesh is not a number", "export the mesh again"
        )
    wrong = np.flatnonzero(((triangles < 0) | (triangles >= len(vertices))).any(axis=1))
    if len(wrong):
        raise MeshRefused(
            "mesh-index",
            f"triangle {int(wrong[0]) + 1} names a corner that does not exist (there are {len(vertices)})",
            "export the mesh again",
        )
    return vertices, triangles.astype(np.intp)


def closed_form(vertices: Floats, faces: Indices) -> tuple[Floats, Indices]:
    """The mesh with coincident corners made one as far as it takes to close it.

    As given, if it is closed so: two chambers that only touch keep their own corners. Else with
    exactly equal corners merged, as a file of loose triangles needs; else with corners merged that
    lie within MERGE_SHARE of the mesh's size. Raises MeshRefused (mesh-open, mesh-flipped) naming
    the first edges that are left over.
    """
    mended = _without_points(vertices, faces)
    if _edge_faults(mended[1]) is not None:
        mended = _merged(vertices, faces, _equal_corners(vertices))
        if _edge_faults(mended[1]) is not None:
            mended = _merged(*mended, _near_corners(mended[0]))
    fault = _edge_faults(mended[1])
    if fault is None:
        return mended
    raise _edge_refusal(mended[0], *fault)


def _without_points(vertices: Floats, faces: Indices) -> tuple[Floats, Indices]:
    """Leave out triangles that name a corner twice, then corners that nothing names."""
    a, b, c = faces.T
    kept = faces[(a != b) & (b != c) & (c != a)]
    if len(kept) == 0:
        raise MeshRefused(
            "mesh-empty", "every triangle of the mesh is a point or a line", "export the solid again"
        )
    used = np.zeros(len(vertices), dtype=bool)
    used[kept] = True
    number = np.cumsum(used) - 1
    return vertices[used], number[kept]


def _merged(vertices: Floats, faces: Indices, label: Indices) -> tuple[Floats, Indices]:
    return _without_points(vertices, label[faces])


def _equal_corners(vertices: Floats) -> Indices:
    """For each corner the first corner equal to it."""
    order = np.lexsort(vertices.T)
    ranked = vertices[order]
    fresh = np.concatenate(([True], (ranked[1:] != ranked[:-1]).any(axis=1)))
    group = np.cumsum(fresh) - 1
    label = np.empty(len(vertices), dtype=np.intp)
    label[order] = np.minimum.reduceat(order, np.flatnonzero(fresh))[group]
    return label


def _near_corners(vertices: Floats) -> Indices:
    """For each corner the first of the corners within rounding of it.

    One grid of boxes would part two near corners on either side of a wall, so eight grids are laid,
    shifted by half a box; any two corners within half a box of one another share a box in one of them.
    """
    box = 2.0 * MERGE_SHARE * float(np.ptp(vertices, axis=0).max())
    label = np.arange(len(vertices))
    if box == 0.0:
        return label
    scaled = (vertices - vertices.min(axis=0)) / box
    keys = [_equal_corners(np.floor(scaled + 0.5 * np.array(shift))) for shift in np.ndindex(2, 2, 2)]
    while True:
        before = label
        for key in keys:
            least = np.full(len(label), len(label))
            np.minimum.at(least, key, label)
            label = least[key]
        if np.array_equal(label, before):
            return label


def _edge_faults(faces: Indices) -> tuple[str, Indices] | None:
    """The code of what is wrong with the edges and those edges (k, 2), or None where all pair up.

    Four triangles at one edge are let through where their directions pair: two chambers that touch
    along it.
    """
    order, heads, edges = _edge_runs(faces)
    sense = np.where(faces.ravel() < faces[:, [1, 2, 0]].ravel(), 1, -1)[order]
    balance = np.add.reduceat(sense, heads)
    count = np.diff(np.append(heads, len(order)))
    odd = count % 2 == 1
    if odd.any():
        return "mesh-open", edges[odd]
    if (balance != 0).any():
        return "mesh-flipped", edges[balance != 0]
    return None


def _edge_runs(faces: Indices) -> tuple[Indices, Indices, Indices]:
    """Sides of the triangles sorted by edge, where each edge's run starts, and the edges (k, 2).

    Side 3 i + j runs from corner j of triangle i to the next.
    """
    start, end = faces.ravel(), faces[:, [1, 2, 0]].ravel()
    low, high = np.minimum(start, end), np.maximum(start, end)
    key = low * (int(faces.max()) + 1) + high
    order = np.argsort(key, kind="stable")
    ranked = key[order]
    heads = np.flatnonzero(np.concatenate(([True], ranked[1:] != ranked[:-1])))
    return order, heads, np.stack((low[order][heads], high[order][heads]), axis=1)


def _edge_refusal(vertices: Floats, code: str, edges: Indices) -> MeshRefused:
    named = "; ".join(f"{named_place(vertices[a])} to {named_place(vertices[b])}" for a, b in edges[:NAMED])
    rest = f" and {len(edges) - NAMED} more" if len(edges) > NAMED else ""
    edge = "edge" if len(edges) == 1 else "edges"
    if code == "mesh-open":
        return MeshRefused(
            code,
            f"the mesh is not closed at {len(edges)} {edge}: {named}{rest}",
            "close the hole there, or remove the triangle that hangs on it, and export again",
        )
    return MeshRefused(
        code,
        f"triangles face opposite ways across {len(edges)} {edge}: {named}{rest}",
        "make all faces look outward and export again",
    )


def refuse_flat(vertices: Floats, faces: Indices, volume_m3: float) -> None:
    """Refuse a mesh that encloses nothing, or is inside out as a whole.

    volume_m3 : signed, of the mesh. Raises MeshRefused (mesh-flat, mesh-flipped).
    """
    p, q, r = (vertices[faces[:, corner]] for corner in range(3))
    area = 0.5 * float(np.linalg.norm(np.cross(q - p, r - p), axis=1).sum())
    size = float(np.linalg.norm(np.ptp(vertices, axis=0)))
    if abs(volume_m3) <= FLAT_SHARE * area * size:
        raise MeshRefused(
            "mesh-flat", "the mesh encloses no volume", "give the solid a thickness and export again"
        )
    if volume_m3 < 0.0:
        raise MeshRefused(
            "mesh-flipped",
            "every face of the mesh looks inward (its volume is negative)",
            "turn all faces to look outward and export again",
        )


def shells_of(faces: Indices) -> NDArray[np.intp]:
    """The number of the shell each triangle belongs to, (m,), counted from 0.

    Triangles are joined across edges that two of them share: shells that only touch at a corner or
    along an edge stay apart, each to be judged by itself.
    """
    order, heads, _ = _edge_runs(faces)
    pairs = heads[np.diff(np.append(heads, len(order))) == 2]
    one, two = order[pairs] // 3, order[pairs + 1] // 3
    label = np.arange(len(faces))
    while True:
        least = np.minimum(label[one], label[two])
        before = label.copy()
        # The heads of both groups are hung on the lesser, then every chain is shortened to its head.
        np.minimum.at(label, before[one], least)
        np.minimum.at(label, before[two], least)
        while not np.array_equal(shorter := label[label], label):
            label = shorter
        if np.array_equal(label, before):
            return np.unique(label, return_inverse=True)[1].astype(np.intp)
