"""Builders of small tanks, given to the tests as one fixture."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

import numpy as np
import pytest

from ledger.fuel.reckon import reckon
from ledger.fuel.report import AttitudeFuel, DrainedCell, FuelReport, TankFuel
from ledger.geometry.closed_cell import ClosedCell
from ledger.model.attitude import Attitude
from ledger.model.plan import FuelGrade
from ledger.model.tanks import Cell, Circle, Feed, Opening, Outside, Pipe, Polygon, Tank, Tanks
from ledger.model.vectors import Vector

BOX_FACES = np.array(
    [
        [0, 1, 3],
        [0, 3, 2],
        [4, 6, 7],
        [4, 7, 5],
        [0, 4, 5],
        [0, 5, 1],
        [2, 3, 7],
        [2, 7, 6],
        [0, 2, 6],
        [0, 6, 4],
        [1, 5, 7],
        [1, 7, 3],
    ]
)
LEVEL = Attitude(name="level")
GROUND = Attitude(name="ground", fill=True, flight=False)


def box_arrays(low: Vector, high: Vector) -> tuple[np.ndarray[Any, Any], np.ndarray[Any, Any]]:
    """Corners and outward faces of a box."""
    corners = [[x, y, z] for x in (low[0], high[0]) for y in (low[1], high[1]) for z in (low[2], high[2])]
    return np.array(corners, dtype=float), BOX_FACES


@dataclass
class Builder:
    """Short words for the parts of a tank. Heights of slots are along z unless a normal says otherwise."""

    @staticmethod
    def box(low: Vector, high: Vector) -> ClosedCell:
        return ClosedCell.from_proved(*box_arrays(low, high))

    @staticmethod
    def slot(
        name: str, between: str, low: float, high: float, *, at: tuple[float, float] = (0.0, 0.0), **more: Any
    ) -> Opening:
        """An upright slot at x, y `at` from height low to high. between: 'A B' or 'A outlet'."""
        one, two = between.split()
        outside = Outside(two) if two in {kind.value for kind in Outside} else None
        x, y = at
        points = ((x, y, low), (x, y + 0.01, low), (x, y + 0.01, high), (x, y, high))
        return Opening(
            name=name,
            cells=(one,) if outside else (one, two),
            outside=outside,
            rim=Polygon(points_m=points),
            **more,
        )

    @staticmethod
    def hole(
        name: str,
        between: str,
        centre: Vector,
        diameter: float,
        normal: Vector = (0.0, 0.0, 1.0),
        **more: Any,
    ) -> Opening:
        one, two = between.split()
        outside = Outside(two) if two in {kind.value for kind in Outside} else None
        return Opening(
            name=name,
            cells=(one,) if outside else (one, two),
            outside=outside,
            rim=Circle(centre_m=centre, diameter_m=diameter, normal=normal),
            **more,
        )

    @staticmethod
    def pipe(name: str, between: str, points: tuple[Vector, ...], bore: float, **more: Any) -> Opening:
        one, two = between.split()
        outside = Outside(two) if two in {kind.value for kind in Outside} else None
        return Opening(
            name=name,
            cells=(one,) if outside else (one, two),
            outside=outside,
            rim=Pipe(points_m=points, bore_m=bore),
            **more,
        )

    @staticmethod
    def pitched(degrees: float, **more: Any) -> Attitude:
        """A flight attitude named after its pitch."""
        return Attitude(name=f"pitch {degrees:g}", pitch_deg=degrees, **more)

    @staticmethod
    def one_box(**outlet: Any) -> tuple[Opening, ...]:
        """Outlet at the floor's edge, filler at 0.19 and vent at the lid of a box 1 x 0.5 x 0.2."""
        return (
            Builder.slot("outlet", "A outlet", 0.0, 0.0, at=(1.0, 0.0), **outlet),
            Builder.slot("filler", "A filler", 0.19, 0.19, at=(0.5, 0.2)),
            Builder.slot("vent", "A vent", 0.2, 0.2, at=(0.5, 0.2)),
        )

    @staticmethod
    def prism(section: list[tuple[float, float]]) -> ClosedCell:
        """An anticlockwise polygon of x and z drawn out from y 0 to 1, hollow only at its second point."""
        n = len(section)
        corners = [(x, y, z) for y in (0.0, 1.0) for x, z in section]
        faces = []
        for k in range(n):
            j = (k + 1) % n
            faces += [(k, j, n + j), (k, n + j, n + k)]
        for k in range(2, n):
            a, b = k, (k + 1) % n
            faces += [(1, b, a), (n + 1, n + a, n + b)]
        return ClosedCell.from_mesh(np.array(corners), np.array(faces)[:, ::-1])

    @staticmethod
    def row_of_boxes(count: int, *, width: float = 1.0, height: float = 1.0) -> dict[str, ClosedCell]:
        """Boxes A, B, C … side by side along y, each 1 m deep in x."""
        names = "ABCDEFGHIJ"[:count]
        return {
            name: Builder.box((0.0, k * width, 0.0), (1.0, (k + 1) * width, height))
            for k, name in enumerate(names)
        }

    @staticmethod
    def tanks(
        cells: Mapping[str, ClosedCell],
        openings: tuple[Opening, ...],
        *,
        expansion: float | None = None,
        feeds: tuple[Feed, ...] = (),
        split: tuple[tuple[str, ...], ...] | None = None,
        **of_cells: Any,
    ) -> Tanks:
        """One tank `t` of all cells, or tanks t0, t1 … of the cells in `split`."""
        members = (tuple(cells),) if split is None else split
        names = ("t",) if split is None else tuple(f"t{k}" for k in range(len(members)))
        return Tanks(
            tanks=tuple(
                Tank(name=name, cells=own, expansion=expansion)
                for name, own in zip(names, members, strict=True)
            ),
            cells=tuple(Cell(name=name, mesh=f"{name}.obj", **of_cells) for name in cells),
            openings=openings,
            feeds=feeds,
        )

    @staticmethod
    def report(
        cells: Mapping[str, ClosedCell],
        openings: tuple[Opening, ...],
        attitudes: tuple[Attitude, ...] = (GROUND, LEVEL),
        *,
        levels: int = 10,
        displaced: Mapping[str, ClosedCell] | None = None,
        density: float | None = 715.0,
        **more: Any,
    ) -> FuelReport:
        tanks = Builder.tanks(cells, openings, **more)
        fuel = None if density is None else FuelGrade(grade="avgas", density_15c_kg_m3=density)
        return reckon(tanks, cells, displaced or {}, attitudes, fuel, levels=levels)

    @staticmethod
    def at(tank: TankFuel, attitude: str = "level") -> AttitudeFuel:
        return next(one for one in tank.attitudes if one.attitude == attitude)

    @staticmethod
    def kept(tank: TankFuel, cell: str, attitude: str = "level") -> DrainedCell:
        return next(one for one in Builder.at(tank, attitude).cells if one.cell == cell)


@pytest.fixture(scope="session")
def build() -> type[Builder]:
    return Builder


@pytest.fixture(scope="session")
def ground() -> Attitude:
    return GROUND


@pytest.fixture(scope="session")
def level() -> Attitude:
    return LEVEL
