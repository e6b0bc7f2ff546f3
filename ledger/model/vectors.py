"""Plain tuples for points and matrices, so that records need no array library."""

from __future__ import annotations

Vector = tuple[float, float, float]
Matrix = tuple[Vector, Vector, Vector]

ZERO: Vector = (0.0, 0.0, 0.0)
NO_SPREAD: Matrix = (ZERO, ZERO, ZERO)
