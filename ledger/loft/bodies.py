"""Solids that can be cut from one another: thin words over the solid library, in metres."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Sequence
from itertools import pairwise
from typing import Any

import numpy as np
from numpy.typing import NDArray

from ledger.loft.lofted import Floats, Indices, Mesh
from ledger.model.vectors import Vector

# A solid of the library, which has no types of its own.
Body = Any

Booleans = NDArray[np.bool_]


class NoSolidError(ValueError):
    """A mesh that encloses nothing, or not once."""


# Far enough beyond any wing that a prism of this height is as good as endless.
BEYOND_M = 1e3
_TOLERANCE_M = 1e-12
_NO_AREA_M2 = 1e-13


def body_of(mesh: Mesh) -> Body:
    """A closed mesh as a solid. Raises NoSolidError for one that encloses nothing, or not once."""
    from manifold3d import Error, Manifold, Mesh64

    body = Manifold(
        Mesh64(
            vert_properties=np.ascontiguousarray(mesh.vertices_m),
            tri_verts=np.ascontiguousarray(mesh.faces, dtype=np.uint64),
            tolerance=_TOLERANCE_M,
        )
    )
    if body.status() != Error.NoError:
        raise NoSolidError(f"the mesh is no solid: {body.status()}")
    return body


def mesh_of(body: Body) -> Mesh:
    """The triangles of a solid, corners merged."""
    found = body.to_mesh64()
    return Mesh(
        vertices_m=np.array(found.vert_properties[:, :3], dtype=np.float64),
        faces=np.array(found.tri_verts, dtype=np.intp),
    )


def united(bodies: Iterable[Body]) -> Body:
    """One solid of several, which may touch or overlap."""
    from manifold3d import Manifold, OpType

    listed = list(bodies)
    return Manifold.batch_boolean(listed, OpType.Add) if listed else Manifold()


def beyond_plane(body: Body, point_m: Sequence[float], normal: Sequence[float]) -> Body:
    """What of a solid lies on the side of a plane to which its normal (unit) points."""
    offset = sum(float(a) * float(b) for a, b in zip(point_m, normal, strict=True))
    return body.trim_by_plane(tuple(float(one) for one in normal), offset)


def prism(corners: Floats, low_m: float = -BEYOND_M, high_m: float = BEYOND_M) -> Body:
    """A straight prism over a polygon seen from above: corners (n, 2) in x and y, anticlockwise."""
    floor = np.column_stack((corners, np.full(len(corners), low_m)))
    lid = np.column_stack((corners, np.full(len(corners), high_m)))
    return body_of(tube(np.stack((lid, floor))))


def plate(outline: Floats, thickness_m: float, origin_m: Vector, axes: Floats) -> Body:
    """A flat plate of a thickness about its mid-plane.

    outline : (n, 2) float, anticlockwise, in the plate's own X and Y; axes : (3, 3) float, rows X, Y, normal.
    """
    rings = []
    for height in (0.5 * thickness_m, -0.5 * thickness_m):
        local = np.column_stack((outline, np.full(len(outline), height)))
        rings.append(np.asarray(origin_m) + local @ axes)
    return body_of(tube(np.stack(rings)))


def tube(rings: Floats) -> Mesh:
    """A closed mesh over rings of corresponding corners, its ends filled flat.

    rings : (m, k, 3) float, metres. Seen from the first ring towards the last, each ring runs
        anticlockwise. Corners of one ring that lie on one another are merged, and what has no area is
        left out, so a strip may narrow to nothing along its way.
    """
    around = rings.shape[1]
    label = np.concatenate([number * around + _first_equal(ring) for number, ring in enumerate(rings)])
    corners = rings.reshape(-1, 3)
    faces = _with_three_corners(label[strips(rings).reshape(-1, 3)])
    for names, turn in ((label[:around], 1), (label[-around:], -1)):
        chain = names[names != np.roll(names, 1)]
        flat = _flattened(corners[chain])
        if flat is None:
            faces = _cut_at(faces, chain[::turn])
        else:
            faces = np.concatenate((faces, chain[_filled(flat)][:, ::turn]))
    return tidied(corners, faces)


def strips(rings: Floats) -> Indices:
    """Two triangles for each corner of each ring and the next, (m - 1, k, 2, 3), outward as in `tube`.

    The last quad of each ring closes it. A quad that is not flat is split from the corner with the
    lesser coordinates: by the place alone, so that two solids that share it split it alike.
    """
    count, around = rings.shape[:2]
    a = np.arange((count - 1) * around).reshape(count - 1, around)
    b = np.roll(a, -1, axis=1)
    d, c = a + around, b + around
    other = _before(np.roll(rings[:-1], -1, axis=1), rings[:-1])
    one = np.stack((a, d, np.where(other, b, c)), axis=2)
    two = np.stack((b, np.where(other, d, a), c), axis=2)
    return np.stack((one, two), axis=2)


def _before(one: Floats, other: Floats) -> Booleans:
    """Whether places come before others, by x, then z, then y."""
    x, y, z = (one[..., axis] - other[..., axis] for axis in range(3))
    return np.asarray((x < 0) | ((x == 0) & ((z < 0) | ((z == 0) & (y < 0)))))


def _first_equal(ring: Floats) -> Indices:
    """For each corner of a ring the first one that lies on it."""
    _, first, inverse = np.unique(ring, axis=0, return_index=True, return_inverse=True)
    return np.asarray(first[inverse.ravel()], dtype=np.intp)


def _filled(flat: Floats) -> Indices:
    """Triangles over a polygon (n, 2), anticlockwise as it runs."""
    from manifold3d import triangulate

    return np.asarray(triangulate([flat]), dtype=np.intp)


def _cut_at(faces: Indices, chain: Indices) -> Indices:
    """For an end drawn out to a line: the face on its whole length cut at each corner of the chain on it.

    Filled with triangles of no area the mesh would be closed too, but the solid library gets rid of
    those by turning their neighbours' edges, which moves faces that are shared with other solids.
    """
    for turn in range(3):
        a, b, apex = (faces[:, (turn + one) % 3] for one in range(3))
        hit = np.flatnonzero((a == chain[0]) & (b == chain[-1]))
        if len(chain) > 2 and len(hit):
            fan = np.array([(one, other, apex[hit[0]]) for one, other in pairwise(chain)], dtype=np.intp)
            return np.concatenate((np.delete(faces, hit[0], axis=0), fan))
    return faces


def _flattened(ring: Floats) -> Floats | None:
    """A ring in its own plane, (n, 2), anticlockwise; None where it encloses nothing."""
    following = np.roll(ring, -1, axis=0)
    normal = np.cross(ring - ring[0], following - ring[0]).sum(axis=0)
    twice = float(np.linalg.norm(normal))
    if twice < _NO_AREA_M2:
        return None
    normal = normal / twice
    across = np.eye(3)[int(np.argmin(np.abs(normal)))]
    x = np.cross(across, normal)
    x = x / np.linalg.norm(x)
    return np.stack((ring @ x, ring @ np.cross(normal, x)), axis=1)


def tidied(vertices: Floats, faces: Indices) -> Mesh:
    """A mesh without triangles that name a corner twice, and without corners that nothing names."""
    kept = _with_three_corners(faces)
    used, number = np.unique(kept, return_inverse=True)
    return Mesh(vertices_m=vertices[used], faces=number.reshape(-1, 3).astype(np.intp))


def _with_three_corners(faces: Indices) -> Indices:
    a, b, c = faces.T
    return np.asarray(faces[(a != b) & (b != c) & (c != a)])


def runs(there: Sequence[bool]) -> Iterator[tuple[int, int]]:
    """For pieces between corners: first and last corner of each unbroken run of pieces that are there."""
    edges = np.flatnonzero(np.diff([False, *there, False]))
    for first, last in edges.reshape(-1, 2):
        yield int(first), int(last)
