"""Mass, CG and inertia of many things at once, by the parallel-axis theorem."""

from __future__ import annotations

from dataclasses import dataclass

from ledger.model.plan import Shape
from ledger.model.vectors import Matrix, Vector


@dataclass(slots=True)
class Gathered:
    """Mass with its first and second moments about the datum; grows as pieces are added.

    `unplaced_kg` is mass of which no place is known. It counts in the mass, and the CG is that of the rest.
    """

    placed_kg: float = 0.0
    unplaced_kg: float = 0.0
    first: tuple[float, float, float] = (0.0, 0.0, 0.0)
    second: tuple[float, ...] = (0.0,) * 6

    @property
    def mass_kg(self) -> float:
        """All of it."""
        return self.placed_kg + self.unplaced_kg

    @property
    def cg_m(self) -> Vector | None:
        """Where what has a place balances; None where nothing has."""
        if self.placed_kg <= 0.0:
            return None
        x, y, z = self.first
        return (x / self.placed_kg, y / self.placed_kg, z / self.placed_kg)

    def add(self, mass_kg: float, shape: Shape | None) -> None:
        """Add a thing of uniform density over its shape."""
        if shape is None:
            self.unplaced_kg += mass_kg
            return
        x, y, z = shape.centroid_m
        spread = shape.second_m2
        self.placed_kg += mass_kg
        first = self.first
        self.first = (first[0] + mass_kg * x, first[1] + mass_kg * y, first[2] + mass_kg * z)
        xx, yy, zz, xy, xz, yz = self.second
        self.second = (
            xx + mass_kg * (spread[0][0] + x * x),
            yy + mass_kg * (spread[1][1] + y * y),
            zz + mass_kg * (spread[2][2] + z * z),
            xy + mass_kg * (spread[0][1] + x * y),
            xz + mass_kg * (spread[0][2] + x * z),
            yz + mass_kg * (spread[1][2] + y * z),
        )

    def join(self, other: Gathered) -> None:
        """Add everything of another."""
        self.placed_kg += other.placed_kg
        self.unplaced_kg += other.unplaced_kg
        a, b = self.first, other.first
        self.first = (a[0] + b[0], a[1] + b[1], a[2] + b[2])
        self.second = tuple(one + another for one, another in zip(self.second, other.second, strict=True))

    def inertia_kg_m2(self) -> Matrix | None:
        """The inertia tensor about the CG, in build axes.

        Off-diagonals are minus the integral of xy dm. Mass without a place is taken at the CG.
        """
        cg = self.cg_m
        if cg is None:
            return None
        x, y, z = cg
        mass = self.placed_kg
        xx, yy, zz, xy, xz, yz = self.second
        xx, yy, zz = xx - mass * x * x, yy - mass * y * y, zz - mass * z * z
        xy, xz, yz = xy - mass * x * y, xz - mass * x * z, yz - mass * y * z
        return ((yy + zz, -xy, -xz), (-xy, xx + zz, -yz), (-xz, -yz, xx + yy))
