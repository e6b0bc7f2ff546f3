"""Builders of small tanks, given to the tests as one fixture."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace
from itertools import count
from typing import Any

import numpy as np
import pytest
from hypothesis import strategies as st

from ledger.fuel.reckon import reckon
from ledger.fuel.report import AttitudeFuel, DrainedCell, FuelReport, TankFuel
from ledger.fuel.ways import Network, Way
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


@dataclass(frozen=True)
class UprightBoxes:
    """Cells that are upright boxes of one square metre, with rims, floors and tops at whole metres."""

    floor: dict[str, int]
    top: dict[str, int]
    ways: tuple[Way, ...]
    tee: bool

    @property
    def network(self) -> Network:
        return Network(self.floor, self.ways)

    def kind(self, outside: Outside) -> list[Way]:
        return [way for way in self.ways if way.outside is outside]

    @property
    def pulls(self) -> tuple[tuple[str, ...], ...]:
        names = tuple(way.name for way in self.kind(Outside.OUTLET))
        return (names,) if self.tee else tuple((name,) for name in names)

    def volume(self, cell: str, level: float) -> float:
        return max(0.0, min(level, self.top[cell]) - self.floor[cell])

    @staticmethod
    def may(one: Way, into: str | None, *, air: bool) -> bool:
        """Whether fuel, or air, passes an opening into that cell."""
        return one.one_way in (None, into) or (air and one.air_both)

    @property
    def dry(self) -> set[str]:
        """Cells no fuel comes to, found by spreading from fillers as often as there are cells."""
        wet = {one.cells[0] for one in self.kind(Outside.FILLER)}
        tee = {one.cells[0] for one in self.kind(Outside.OUTLET)} if self.tee else set()
        for _ in self.floor:
            for one in self.ways:
                if one.outside is None:
                    for here, into in (one.cells, one.cells[::-1]):
                        if here in wet and self.may(one, into, air=False):
                            wet.add(into)
            if wet & tee:
                wet |= tee
        return set(self.floor) - wet

    @staticmethod
    def way(
        name: str, cells: tuple[str, ...], outside: Outside | None, low: int, high: int, **more: object
    ) -> Way:
        """An opening with its two heights."""
        one_way = more.get("one_way")
        return Way(
            name=name,
            cells=cells,
            outside=outside,
            low_m=low,
            high_m=high,
            one_way=one_way if isinstance(one_way, str) else None,
            air_both=bool(more.get("air_both")),
        )

    @staticmethod
    def drawn(*, one_way: bool) -> st.SearchStrategy[UprightBoxes]:
        """Any one to four cells with up to seven openings, with flaps only on request."""
        return _boxes(one_way=one_way)


def _rim(
    draw: st.DrawFn, boxes: UprightBoxes, cells: tuple[str, ...], *, lift: bool
) -> tuple[int, int] | None:
    """The two heights of an opening that all these cells reach, or None."""
    least, most = max(boxes.floor[cell] for cell in cells), min(boxes.top[cell] for cell in cells)
    if least > most:
        return None
    low = draw(st.integers(least, most))
    high = draw(st.integers(low, most))
    # A dam, or a pipe that rises and falls, asks fuel to stand higher than air must stay below.
    return low + (draw(st.sampled_from([0, 0, 0, 1, 2])) if lift else 0), high


@st.composite
def _boxes(draw: st.DrawFn, *, one_way: bool) -> UprightBoxes:
    names = "ABCD"[: draw(st.integers(1, 4))]
    floor = {name: draw(st.integers(0, 3)) for name in names}
    top = {name: floor[name] + draw(st.integers(2, 6)) for name in names}
    bare = UprightBoxes(floor=floor, top=top, ways=(), tee=False)
    numbers = count(1)
    ways: list[Way] = []
    for _ in range(draw(st.integers(0, 7)) if len(names) > 1 else 0):
        pair = draw(st.permutations(names))[:2]
        heights = _rim(draw, bare, tuple(pair), lift=True)
        if heights is None:
            continue
        flap = draw(st.sampled_from([None, None, pair[0]])) if one_way else None
        both = draw(st.booleans()) if flap else False
        name = f"o{next(numbers)}"
        ways.append(bare.way(name, tuple(pair), None, *heights, one_way=flap, air_both=both))
    for outside, least, most in ((Outside.OUTLET, 1, 2), (Outside.FILLER, 1, 2), (Outside.VENT, 0, 2)):
        for _ in range(draw(st.integers(least, most))):
            cell = draw(st.sampled_from(names))
            heights = _rim(draw, bare, (cell,), lift=outside is not Outside.FILLER)
            assert heights is not None
            ways.append(bare.way(f"{outside.value}{next(numbers)}", (cell,), outside, *heights))
    return replace(bare, ways=tuple(ways), tee=draw(st.booleans()))


@pytest.fixture(scope="session")
def networks() -> type[UprightBoxes]:
    return UprightBoxes


@pytest.fixture(scope="session")
def build() -> type[Builder]:
    return Builder


@pytest.fixture(scope="session")
def ground() -> Attitude:
    return GROUND


@pytest.fixture(scope="session")
def level() -> Attitude:
    return LEVEL
