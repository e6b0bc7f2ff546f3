"""A closed bay proved to be one: the only thing the questions about fuel accept."""

from __future__ import annotations

import hashlib
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from ledger.geometry.crossings import refuse_overlap
from ledger.geometry.proof import checked_arrays, closed_form, refuse_flat
from ledger.geometry.solids import volume_integrals
from ledger.geometry.standing import Floats, Indices
from ledger.geometry.vectors import Vector, vector


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class ClosedCell:
    """A triangle mesh that encloses a solid once everywhere, outward.

    vertices_m : (n, 3) float, read only
        Corners in metres, build axes (x aft, y right, z up).
    faces : (m, 3) int, read only
        Corner numbers, anticlockwise seen from outside.
    volume_m3, centroid_m
        Of the whole cell.
    digest : str
        SHA-256 of both arrays, the key under which figures about the cell may be kept.
    Make one by `from_mesh`, or by `from_proved` for arrays that came out of `from_mesh` before.
    """

    vertices_m: Floats
    faces: Indices
    volume_m3: float
    centroid_m: Vector
    digest: str

    @staticmethod
    def from_mesh(vertices_m: ArrayLike, faces: ArrayLike) -> ClosedCell:
        """Prove a mesh and keep it.

        vertices_m : (n, 3) float
            Corners in metres; the same corner may be given several times, as in a file of loose
            triangles. Corners within 1e-9 of the mesh's size are made one only where that closes it.
        faces : (m, 3) int
        Raises MeshRefused
            mesh-empty, mesh-not-finite, mesh-index; mesh-open (an edge has an odd number of
            triangles; the first three are named); mesh-flipped (neighbours, a whole shell or the
            whole mesh face the wrong way); mesh-flat (no volume); mesh-overlaps (a shell runs
            through itself or another, or lies in another and counts its space twice).
        A cavity, an inward shell inside a body, is legitimate.
        """
        vertices, triangles = closed_form(*checked_arrays(vertices_m, faces))
        refuse_flat(vertices, triangles, volume_integrals(vertices, triangles)[0])
        refuse_overlap(vertices, triangles)
        return ClosedCell.from_proved(vertices, triangles)

    @staticmethod
    def from_proved(vertices_m: ArrayLike, faces: ArrayLike) -> ClosedCell:
        """A cell of arrays that `from_mesh` gave earlier and a store kept under their digest.

        vertices_m : (n, 3) float, metres; faces : (m, 3) int, anticlockwise seen from outside.
        Nothing is proved again. Raises ValueError for arrays that cannot be a proved cell.
        """
        vertices = np.array(vertices_m, dtype=np.float64, order="C")
        triangles = np.array(faces, dtype=np.intp, order="C")
        if (
            vertices.ndim != 2
            or vertices.shape[1:] != (3,)
            or triangles.ndim != 2
            or triangles.shape[1:] != (3,)
        ):
            raise ValueError("vertices_m and faces must be rows of three")
        if len(triangles) == 0 or triangles.min() < 0 or triangles.max() >= len(vertices):
            raise ValueError("these faces cannot have been proved")
        volume, first, _ = volume_integrals(vertices, triangles)
        if not volume > 0.0:
            raise ValueError("a mesh without volume cannot have been proved")
        vertices.setflags(write=False)
        triangles.setflags(write=False)
        return ClosedCell(
            vertices_m=vertices,
            faces=triangles,
            volume_m3=volume,
            centroid_m=vector(first / volume),
            digest=digest_of(vertices, triangles),
        )


def digest_of(vertices_m: Floats, faces: Indices) -> str:
    """SHA-256, in hex, of the shapes and the bytes of both arrays (little-endian, 64 bits)."""
    whole = hashlib.sha256(f"{len(vertices_m)},{len(faces)};".encode())
    whole.update(np.ascontiguousarray(vertices_m, dtype="<f8").tobytes())
    whole.update(np.ascontiguousarray(faces, dtype="<i8").tobytes())
    return whole.hexdigest()
