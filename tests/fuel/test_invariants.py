"""What must not change, and what may only change one way, whatever the tank."""

from __future__ import annotations

import math
from dataclasses import replace
from typing import Any

import numpy as np
import pytest
from hypothesis import HealthCheck, assume, given, settings
from hypothesis import strategies as st
from numpy.typing import NDArray

from ledger.fuel.reckon import reckon
from ledger.fuel.report import FuelReport
from ledger.fuel.rims import crests_of
from ledger.geometry.closed_cell import ClosedCell
from ledger.model.attitude import Attitude
from ledger.model.tanks import Cell, Circle, Opening, Outside, Pipe, Polygon, Tank, Tanks
from ledger.model.vectors import Vector

FIXED = settings(
    max_examples=40, derandomize=True, deadline=None, suppress_health_check=[HealthCheck.too_slow]
)
GROUND = Attitude(name="ground", pitch_deg=3.0, fill=True, flight=False)
FLIGHTS = (
    Attitude(name="climb", pitch_deg=10.0),
    Attitude(name="descent", pitch_deg=-6.0),
    Attitude(name="slip", pitch_deg=2.0, roll_deg=6.0),
)
FACES = np.array(
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


def box(low: Vector, high: Vector) -> ClosedCell:
    corners = [[x, y, z] for x in (low[0], high[0]) for y in (low[1], high[1]) for z in (low[2], high[2])]
    return ClosedCell.from_proved(np.array(corners), FACES)


@st.composite
def tanks_of_boxes(draw: st.DrawFn) -> tuple[Tanks, dict[str, ClosedCell]]:
    """A row of two to four boxes along y, holes through the walls between them, and ways outside."""
    millimetres = st.integers(0, 200)
    names = "ABCD"[: draw(st.integers(2, 4))]
    floors = {name: draw(st.integers(0, 80)) / 1000.0 for name in names}
    cells = {
        name: box((0.0, 0.5 * k, floors[name]), (0.6, 0.5 * k + 0.5, floors[name] + 0.2))
        for k, name in enumerate(names)
    }

    def hole(name: str, own: tuple[str, ...], y: float, outside: Outside | None, **more: Any) -> Opening:
        z = max(floors[cell] for cell in own) + draw(millimetres) / 1000.0
        diameter = draw(st.integers(4, 30)) / 1000.0
        normal = (0.0, 1.0, 0.0) if outside is None else (0.0, 0.0, 1.0)
        rim = Circle(centre_m=(draw(st.integers(0, 600)) / 1000.0, y, z), diameter_m=diameter, normal=normal)
        return Opening(name=name, cells=own, outside=outside, rim=rim, **more)

    openings = []
    for k in range(len(names) - 1):
        pair = (names[k], names[k + 1])
        for n in range(draw(st.integers(1, 3))):
            flap = draw(st.sampled_from([None, None, None, *pair]))
            depth = draw(st.sampled_from([None, 0.006]))
            openings.append(
                hole(f"hole {k} {n}", pair, 0.5 * k + 0.5, None, one_way=flap, depth_m=depth, air_both=n == 0)
            )
    for outside, most in ((Outside.OUTLET, 2), (Outside.FILLER, 2), (Outside.VENT, 2)):
        for n in range(draw(st.integers(1, most))):
            k = draw(st.integers(0, len(names) - 1))
            openings.append(hole(f"{outside.value} {n}", (names[k],), 0.5 * k + 0.25, outside))
    tanks = Tanks(
        tanks=(Tank(name="t", cells=tuple(names), expansion=draw(st.sampled_from([None, 0.02]))),),
        cells=tuple(Cell(name=name, mesh=name) for name in names),
        openings=tuple(openings),
    )
    return tanks, cells


def reckoned(tanks: Tanks, cells: dict[str, ClosedCell], attitudes: tuple[Attitude, ...]) -> FuelReport:
    return reckon(tanks, cells, {}, attitudes, None, levels=4)


class Turned(Attitude):
    """An attitude whose up is given outright, for a build turned as a whole."""

    __slots__ = ("towards",)
    towards: Vector

    @property
    def up(self) -> Vector:
        return self.towards


def turned_attitude(attitude: Attitude, turn: NDArray[np.float64]) -> Attitude:
    turned = Turned(
        name=attitude.name,
        pitch_deg=attitude.pitch_deg,
        roll_deg=attitude.roll_deg,
        fill=attitude.fill,
        flight=attitude.flight,
    )
    object.__setattr__(turned, "towards", turned_point(attitude.up, turn))
    return turned


def turned_point(point: Vector, turn: NDArray[np.float64]) -> Vector:
    x, y, z = (turn @ np.array(point)).tolist()
    return (x, y, z)


def turned_opening(opening: Opening, turn: NDArray[np.float64]) -> Opening:
    rim = opening.rim
    if isinstance(rim, Circle):
        return replace(
            opening,
            rim=replace(
                rim, centre_m=turned_point(rim.centre_m, turn), normal=turned_point(rim.normal, turn)
            ),
        )
    assert isinstance(rim, Polygon | Pipe)
    return replace(opening, rim=replace(rim, points_m=tuple(turned_point(p, turn) for p in rim.points_m)))


@FIXED
@given(tanks_of_boxes(), st.integers(0, 1000))
def test_nothing_changes_when_everything_turns_together_or_faces_are_permuted(
    drawn: tuple[Tanks, dict[str, ClosedCell]], seed: int
) -> None:
    tanks, cells = drawn
    rng = np.random.default_rng(seed)
    turn, upper = np.linalg.qr(rng.normal(size=(3, 3)))
    turn = turn * np.sign(np.diag(upper))
    if np.linalg.det(turn) < 0.0:
        turn[:, 0] = -turn[:, 0]
    turned_cells = {
        name: ClosedCell.from_proved(
            cell.vertices_m @ turn.T, np.roll(cell.faces[rng.permutation(12)], int(rng.integers(3)), axis=1)
        )
        for name, cell in cells.items()
    }
    moved = replace(tanks, openings=tuple(turned_opening(opening, turn) for opening in tanks.openings))
    attitudes = (GROUND, *FLIGHTS)
    one = reckoned(tanks, cells, attitudes).tanks[0]
    two = reckoned(moved, turned_cells, tuple(turned_attitude(a, turn) for a in attitudes)).tanks[0]
    assert two.gross_m3 == pytest.approx(one.gross_m3, rel=1e-12)
    for name in ("capacity_m3", "caught_air_m3", "usable_m3", "usable_u_m3"):
        assert getattr(two, name) == pytest.approx(getattr(one, name), rel=1e-9, abs=1e-11)
    for was, now in zip(one.attitudes, two.attitudes, strict=True):
        assert now.trapped_m3 == pytest.approx(was.trapped_m3, rel=1e-9, abs=1e-11)
        assert now.lost_m3 == pytest.approx(was.lost_m3, rel=1e-9, abs=1e-11)
        assert [cell.trapped_by for cell in now.cells] == [cell.trapped_by for cell in was.cells]
        for before, after in zip(was.drained, now.drained, strict=True):
            if before.cg_m is not None and before.quantity_m3 > 1e-6:
                assert after.cg_m == pytest.approx(turned_point(before.cg_m, turn), abs=1e-7)


@FIXED
@given(tanks_of_boxes())
def test_quantities_keep_their_order(drawn: tuple[Tanks, dict[str, ClosedCell]]) -> None:
    tanks, cells = drawn
    tank = reckoned(tanks, cells, (GROUND, *FLIGHTS)).tanks[0]
    assert tank.capacity_m3 is not None
    assert tank.usable_m3 is not None
    assert 0.0 <= tank.usable_m3 <= tank.capacity_m3 <= tank.gross_m3 * (1.0 + 1e-12)
    for one in tank.attitudes:
        assert one.trapped_m3 is not None
        assert 0.0 <= one.trapped_m3 <= tank.gross_m3 * (1.0 + 1e-12)
        assert one.lost_m3 is not None
        assert 0.0 <= one.lost_m3 <= tank.capacity_m3
        quantities = [row.quantity_m3 for row in one.drained]
        assert quantities == sorted(quantities)
        if quantities:
            assert quantities[0] == pytest.approx(one.trapped_m3, rel=1e-12)
            assert quantities[-1] == pytest.approx(tank.capacity_m3 - one.lost_m3, rel=1e-12)


@FIXED
@given(tanks_of_boxes(), st.integers(0, 20))
def test_usable_never_rises_when_a_hole_is_blocked(
    drawn: tuple[Tanks, dict[str, ClosedCell]], which: int
) -> None:
    tanks, cells = drawn
    holes = [opening for opening in tanks.openings if opening.outside is None]
    blocked = holes[which % len(holes)]
    # With too little room for expansion, a cell that is no longer reached asks for none.
    tanks = replace(tanks, tanks=(replace(tanks.tanks[0], expansion=None),))
    fewer = replace(tanks, openings=tuple(one for one in tanks.openings if one is not blocked))
    before = reckoned(tanks, cells, (GROUND, *FLIGHTS)).tanks[0]
    after = reckoned(fewer, cells, (GROUND, *FLIGHTS)).tanks[0]
    assert before.usable_m3 is not None
    assert after.usable_m3 is not None
    # A cell cut off for good is charged with nothing, though before it may have been charged with more
    # than it was ever filled with.
    assume([cell.dry for cell in before.cells] == [cell.dry for cell in after.cells])
    assert after.usable_m3 <= before.usable_m3 + 1e-12


@FIXED
@given(tanks_of_boxes(), st.floats(-15.0, 15.0), st.floats(-10.0, 10.0))
def test_usable_never_rises_when_an_attitude_is_added(
    drawn: tuple[Tanks, dict[str, ClosedCell]], pitch: float, roll: float
) -> None:
    tanks, cells = drawn
    more = Attitude(name="more", pitch_deg=pitch, roll_deg=roll)
    before = reckoned(tanks, cells, (GROUND, *FLIGHTS)).tanks[0].usable_m3
    after = reckoned(tanks, cells, (GROUND, *FLIGHTS, more)).tanks[0].usable_m3
    assert before is not None
    assert after is not None
    assert after <= before


@FIXED
@given(tanks_of_boxes())
def test_the_report_is_the_sum_of_its_cells_by_level(drawn: tuple[Tanks, dict[str, ClosedCell]]) -> None:
    tanks, cells = drawn
    tank = reckoned(tanks, cells, (GROUND, *FLIGHTS)).tanks[0]
    for one in tank.attitudes:
        assert one.trapped_m3 == pytest.approx(sum(cell.trapped_m3 or 0.0 for cell in one.cells), abs=1e-15)
        for cell in one.cells:
            named = [opening for opening in tanks.openings if opening.name == cell.trapped_by]
            if named and cell.level_m is not None:
                assert cell.level_m == pytest.approx(crests_of(named[0], one.up).low_m, abs=1e-12)
        assert math.isclose(one.table[-1].volume_m3, tank.gross_m3, rel_tol=1e-12)
