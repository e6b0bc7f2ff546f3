"""Whether a closed mesh runs through itself, and whether its shells lie properly in one another."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from ledger.errors import MeshRefused
from ledger.geometry.named_place import named_place
from ledger.geometry.proof import shells_of
from ledger.geometry.solids import volume_integrals
from ledger.geometry.standing import Floats, Indices

# A crossing less deep than this share of the mesh's size is contact.
CONTACT_SHARE = 1e-9
# An edge that meets another triangle this near to its rim (share of its size) may only touch it.
RIM_SHARE = 1e-9
PAIRS_AT_A_TIME = 1 << 17
SAMPLES = 12
# Places where shells may touch that are looked at, and the points asked round each.
MOST_TOUCHES = 8
DIRECTIONS = 64


def refuse_overlap(vertices: Floats, faces: Indices) -> None:
    """Refuse a mesh that counts some space twice.

    A shell that runs through itself or another is found by its triangles; shells that do not cross
    are then nested or apart, and the number of times the others wind round a point of each tells
    whether it is a body, a cavity or counted twice. A cavity is an inward shell inside a body.
    Raises MeshRefused (mesh-overlaps, mesh-flipped).
    """
    place = _first_crossing(vertices, faces)
    if place is not None:
        raise MeshRefused(
            "mesh-overlaps",
            f"the mesh runs through itself near {named_place(place)}",
            "unite the overlapping bodies into one solid and export again",
        )
    shells = shells_of(faces)
    if shells.max() == 0:
        return
    for number in range(int(shells.max()) + 1):
        _refuse_misplaced_shell(vertices, faces, shells, number)


def _refuse_misplaced_shell(vertices: Floats, faces: Indices, shells: Indices, number: int) -> None:
    own = faces[shells == number]
    outward = volume_integrals(vertices, own)[0] >= 0.0
    others = faces[shells != number]
    wound = _winding_outside(vertices, own, others)
    where = named_place(vertices[own[0, 0]])
    if not outward and wound == 0:
        raise MeshRefused(
            "mesh-flipped",
            f"the shell at {where} looks inward and lies in no other",
            "turn its faces to look outward and export again",
        )
    if wound != (0 if outward else 1):
        raise MeshRefused(
            "mesh-overlaps",
            f"the shell at {where} lies inside another and its space is counted twice",
            "unite the bodies, or turn the inner one inward if it is a cavity, and export again",
        )


def _winding_outside(vertices: Floats, own: Indices, others: Indices) -> int | None:
    """How often the other shells wind round a point of this one; None where every point lies on them."""
    chosen = own[np.unique(np.linspace(0, len(own) - 1, SAMPLES).astype(int))]
    for point in vertices[chosen].mean(axis=1):
        turns = _winding(vertices, others, point)
        if turns is not None:
            return turns
    return None


def _winding(vertices: Floats, faces: Indices, point: Floats) -> int | None:
    """How often a mesh winds round a point, by the solid angles of its triangles; None for a point on it."""
    a, b, c = (vertices[faces[:, corner]] - point for corner in range(3))
    la, lb, lc = (np.linalg.norm(side, axis=1) for side in (a, b, c))
    top = np.einsum("ij,ij->i", a, np.cross(b, c))
    dot_ab, dot_bc, dot_ca = (np.einsum("ij,ij->i", p, q) for p, q in ((a, b), (b, c), (c, a)))
    half_angles = np.arctan2(top, la * lb * lc + dot_ab * lc + dot_bc * la + dot_ca * lb)
    # On a triangle its half angle is plus or minus a half turn as rounding has it.
    if np.abs(half_angles).max() > np.pi - 1e-6:
        return None
    turns = float(half_angles.sum()) / (2.0 * np.pi)
    return round(turns) if abs(turns - round(turns)) < 1e-3 else None


def _first_crossing(vertices: Floats, faces: Indices) -> Floats | None:
    """A point near which two triangles that are not neighbours cross, or None."""
    low = vertices[faces].min(axis=1)
    high = vertices[faces].max(axis=1)
    one, two = _pairs_of_boxes(low, high)
    tolerance = CONTACT_SHARE * float(np.ptp(vertices, axis=0).max())
    touches: list[Floats] = []
    for start in range(0, len(one), PAIRS_AT_A_TIME):
        part = slice(start, start + PAIRS_AT_A_TIME)
        a, b = _astride(vertices, faces, (one[part], two[part]), tolerance)
        for first, second in ((a, b), (b, a)):
            for corner in range(3):
                hits, certain = _edge_through(vertices, first, corner, second, tolerance)
                if certain.any():
                    return np.asarray(hits[certain][0])
                touches.extend(hits)
    asked = touches[:: max(1, len(touches) // MOST_TOUCHES)]
    return next((touch for touch in asked if _counted_twice_near(vertices, faces, touch)), None)


def _astride(
    vertices: Floats, faces: Indices, pairs: tuple[Indices, Indices], tolerance: float
) -> tuple[Indices, Indices]:
    """Triangles (k, 3) of the pairs of which each has corners on both sides of the other's plane."""
    one, two = pairs
    for _ in range(2):
        corners = vertices[faces[two]]
        normal = np.cross(corners[:, 1] - corners[:, 0], corners[:, 2] - corners[:, 0])
        deep = tolerance * np.linalg.norm(normal, axis=1)
        rise = np.stack(
            [np.einsum("ij,ij->i", vertices[faces[one, i]] - corners[:, 0], normal) for i in range(3)]
        )
        kept = (rise.min(axis=0) < -deep) & (rise.max(axis=0) > deep)
        one, two = two[kept], one[kept]
    return faces[one], faces[two]


def _counted_twice_near(vertices: Floats, faces: Indices, point: Floats) -> bool:
    """Whether the mesh winds round some point near a touch more often than once, or backward.

    An edge through the rim of a triangle may cross it or lie along it: faces that share part of a
    plane do so at each corner.
    """
    corners = vertices[faces]
    # The directions are spread evenly by the golden angle, so that none lies in a plane of the mesh.
    at = np.arange(DIRECTIONS) + 0.5
    height, turn = 1.0 - 2.0 * at / DIRECTIONS, at * np.pi * (3.0 - np.sqrt(5.0))
    level = np.sqrt(1.0 - height**2)
    around = np.stack((level * np.cos(turn), level * np.sin(turn), height), axis=1)
    apart = np.linalg.norm(corners - point, axis=2).ravel()
    reach = 0.1 * float(apart[apart > CONTACT_SHARE * apart.max()].min())
    return any(_winding(vertices, faces, spot) not in {0, 1, None} for spot in point + reach * around)


def _pairs_of_boxes(low: Floats, high: Floats) -> tuple[Indices, Indices]:
    """Pairs of triangles whose boxes meet, each pair once.

    The tree is laid in the plane in which the boxes cover least, or slivers as tall as the mesh
    would all meet one another.
    """
    from shapely import STRtree, box

    size = high - low
    planes = ((0, 1, 2), (1, 2, 0), (0, 2, 1))
    u, v, w = min(planes, key=lambda plane: float((size[:, plane[0]] * size[:, plane[1]]).sum()))
    boxes = box(low[:, u], low[:, v], high[:, u], high[:, v])
    one, two = STRtree(boxes).query(boxes)
    kept = (one < two) & (low[one, w] <= high[two, w]) & (low[two, w] <= high[one, w])
    return one[kept], two[kept]


def _edge_through(
    vertices: Floats, first: Indices, corner: int, second: Indices, tolerance: float
) -> tuple[Floats, NDArray[np.bool_]]:
    """Where an edge of triangles of `first` passes through those of `second`, and whether well inside."""
    start, end = first[:, corner], first[:, (corner + 1) % 3]
    apart = ((start[:, None] != second) & (end[:, None] != second)).all(axis=1)
    chosen = np.flatnonzero(apart)
    p, q = vertices[start[chosen]], vertices[end[chosen]]
    a, b, c = (vertices[second[chosen, i]] for i in range(3))
    normal = np.cross(b - a, c - a)
    length = np.linalg.norm(normal, axis=1)
    rise_p = np.einsum("ij,ij->i", normal, p - a)
    rise_q = np.einsum("ij,ij->i", normal, q - a)
    deep = tolerance * length
    through = (np.minimum(rise_p, rise_q) < -deep) & (np.maximum(rise_p, rise_q) > deep)
    kept = np.flatnonzero(through & (length > 0.0))
    p, q, a, b, c = p[kept], q[kept], a[kept], b[kept], c[kept]
    share = (rise_p[kept] / (rise_p[kept] - rise_q[kept]))[:, None]
    hit = p + share * (q - p)
    sides = [
        np.einsum("ij,ij->i", normal[kept], np.cross(right - left, hit - left)) / length[kept] ** 2
        for left, right in ((a, b), (b, c), (c, a))
    ]
    least = np.minimum.reduce(sides)
    met = least >= -RIM_SHARE
    return hit[met], least[met] > RIM_SHARE
