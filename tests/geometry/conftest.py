"""Bodies with known answers, and independent ways to cut a mesh."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

import numpy as np
import pytest
from numpy.typing import ArrayLike, NDArray

Floats = NDArray[np.float64]
Mesh = tuple[Floats, NDArray[np.intp]]


class Shapes:
    """Closed meshes, faces anticlockwise from outside."""

    @staticmethod
    def prism(base: ArrayLike, top: ArrayLike, height: float) -> Mesh:
        """Between an anticlockwise convex polygon at z = 0 and one with as many corners above it."""
        low, high = np.asarray(base, dtype=float), np.asarray(top, dtype=float)
        n = len(low)
        vertices = np.concatenate(
            (np.column_stack((low, np.zeros(n))), np.column_stack((high, np.full(n, height))))
        )
        i = np.arange(n)
        j = (i + 1) % n
        fan = np.arange(1, n - 1)
        faces = np.concatenate(
            (
                np.column_stack((i, j, j + n)),
                np.column_stack((i, j + n, i + n)),
                np.column_stack((np.zeros_like(fan), fan + 1, fan)),
                np.column_stack((np.full_like(fan, n), fan + n, fan + n + 1)),
            )
        )
        return vertices, faces

    @staticmethod
    def box(x: float, y: float, z: float) -> Mesh:
        """From the origin to (x, y, z)."""
        base = [(0.0, 0.0), (x, 0.0), (x, y), (0.0, y)]
        return Shapes.prism(base, base, z)

    @staticmethod
    def ring(n: int, radius: float) -> Floats:
        """Corners of a regular polygon, anticlockwise."""
        at = np.linspace(0.0, 2.0 * np.pi, n, endpoint=False)
        return radius * np.column_stack((np.cos(at), np.sin(at)))

    @staticmethod
    def ball(subdivisions: int) -> Mesh:
        """Unit ball about the origin."""
        import trimesh

        mesh = trimesh.creation.icosphere(subdivisions=subdivisions)
        return np.array(mesh.vertices), np.array(mesh.faces)

    @staticmethod
    def star(seed: int, subdivisions: int = 1, least: float = 0.3) -> Mesh:
        """A body of random bumps and hollows about the origin, seen whole from there."""
        vertices, faces = Shapes.ball(subdivisions)
        reach = np.random.default_rng(seed).uniform(least, 1.0, len(vertices))
        return vertices * reach[:, None], faces

    @staticmethod
    def joined(*meshes: Mesh) -> Mesh:
        """Several meshes as one, nothing merged."""
        offsets = np.cumsum([0, *(len(vertices) for vertices, _ in meshes)])
        return (
            np.concatenate([vertices for vertices, _ in meshes]),
            np.concatenate([faces + offset for (_, faces), offset in zip(meshes, offsets, strict=False)]),
        )

    @staticmethod
    def soup(mesh: Mesh) -> Mesh:
        """The same triangles, each with corners of its own."""
        vertices, faces = mesh
        return vertices[faces].reshape(-1, 3), np.arange(3 * len(faces)).reshape(-1, 3)

    @staticmethod
    def rotation(seed: int) -> Floats:
        """A random rotation matrix."""
        q, r = np.linalg.qr(np.random.default_rng(seed).normal(size=(3, 3)))
        q = q * np.sign(np.diag(r))
        return np.asarray(q * np.linalg.det(q))


@pytest.fixture(scope="session")
def shapes() -> type[Shapes]:
    return Shapes


@pytest.fixture(scope="session")
def capped_cut() -> Callable[[Any, ArrayLike, float], tuple[float, Floats]]:
    """Volume and centroid below a level, by cutting the mesh and capping it with trimesh."""

    def cut(mesh: Any, up: ArrayLike, level: float) -> tuple[float, Floats]:
        unit = np.asarray(up, dtype=float) / np.linalg.norm(up)
        part = mesh.slice_plane(level * unit, -unit, cap=True)
        return float(part.volume), np.asarray(part.center_mass)

    return cut
