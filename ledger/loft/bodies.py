"""Solids that can be cut from one another: thin words over the solid library, in metres."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from typing import Any

import numpy as np
from numpy.typing import NDArray

from ledger.loft.lofted import Floats, Indices, Mesh
from ledger.model.vectors import Vector

# A solid of the library, which has no types of its own.
Body = Any

Booleans = NDArray[np.bool_]

# Far enough beyond any wing that a prism of this height is as good as endless.
BEYOND_M = 1e3
_TOLERANCE_M = 1e-12


def body_of(mesh: Mesh) -> Body:
    """A closed mesh as a solid. Raises ValueError for one that encloses nothing, or not once."""
    from manifold3d import Error, Manifold, Mesh64

    body = Manifold(
        Mesh64(
            vert_properties=np.ascontiguousarray(mesh.vertices_m),
            tri_verts=np.ascontiguousarray(mesh.faces, dtype=np.uint64),
            tolerance=_TOLERANCE_M,
        )
    )
    if body.status() != Error.NoError:
        raise ValueError(f"the mesh is no solid: {body.status()}")
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
    faces = strips(rings).reshape(-1, 3)
    ends = (_filled(rings[0], label[:around]), _filled(rings[-1], label[-around:])[:, ::-1])
    return tidied(rings.reshape(-1, 3), label[np.concatenate((faces, *ends))])


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


def _filled(ring: Floats, label: Indices) -> Indices:
    """Triangles over the end of a tube, by the labels of its corners, anticlockwise as the ring runs."""
    from manifold3d import triangulate

    offset = int(label.min()) - int(label.min()) % len(ring)
    local = label - offset
    kept = [int(one) for place, one in enumerate(local) if one != local[place - 1]]
    triangles = np.asarray(triangulate([_flattened(ring[kept])]), dtype=np.intp)
    return np.asarray(np.array(kept, dtype=np.intp)[triangles] + offset)


def _flattened(ring: Floats) -> Floats:
    """A ring in its own plane, (n, 2), anticlockwise."""
    following = np.roll(ring, -1, axis=0)
    normal = np.cross(ring - ring[0], following - ring[0]).sum(axis=0)
    normal = normal / np.linalg.norm(normal)
    across = np.eye(3)[int(np.argmin(np.abs(normal)))]
    x = np.cross(across, normal)
    x = x / np.linalg.norm(x)
    return np.stack((ring @ x, ring @ np.cross(normal, x)), axis=1)


def tidied(vertices: Floats, faces: Indices) -> Mesh:
    """A mesh without triangles that name a corner twice, and without corners that nothing names."""
    a, b, c = faces.T
    kept = faces[(a != b) & (b != c) & (c != a)]
    used, number = np.unique(kept, return_inverse=True)
    return Mesh(vertices_m=vertices[used], faces=number.reshape(-1, 3).astype(np.intp))
