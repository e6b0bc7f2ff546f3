from __future__ import annotations

import math
from dataclasses import replace
from typing import Any

import numpy as np
import pytest

from ledger.fuel.rims import crests_of, middle_of, normal_of, rim_points, widened
from ledger.model.tanks import Circle, Opening, Outside, Pipe, Polygon

UP = (0.0, 0.0, 1.0)


def hole(rim: Circle | Polygon | Pipe, outside: Outside | None = None, **more: Any) -> Opening:
    cells = ("A",) if outside else ("A", "B")
    return Opening(name="o", cells=cells, outside=outside, rim=rim, **more)


UPRIGHT = Circle(centre_m=(1.0, 2.0, 3.0), diameter_m=0.2, normal=(0.0, 5.0, 0.0))


def test_an_upright_hole_reaches_its_radius_up_and_down() -> None:
    crests = crests_of(hole(UPRIGHT), UP)
    assert (crests.low_m, crests.high_m) == pytest.approx((2.9, 3.1), abs=1e-15)


def test_a_hole_in_the_floor_has_one_height() -> None:
    crests = crests_of(hole(replace(UPRIGHT, normal=(0.0, 0.0, -1.0))), UP)
    assert (crests.low_m, crests.high_m) == (3.0, 3.0)


@pytest.mark.parametrize("normal", [(1.0, 2.0, 3.0), (0.3, -1.0, 0.2), (0.0, 1.0, 1.0)])
@pytest.mark.parametrize("up", [(0.0, 0.6, 0.8), (0.1, -0.3, 0.9486832980505138)])
def test_a_leaning_hole_reaches_as_far_as_the_highest_of_its_many_points(
    normal: tuple[float, float, float], up: tuple[float, float, float]
) -> None:
    rim = replace(UPRIGHT, normal=normal)
    heights = np.array(rim_points(rim, 20000)) @ np.array(up)
    crests = crests_of(hole(rim), up)
    assert crests.low_m == pytest.approx(heights.min(), abs=1e-8)
    assert crests.high_m == pytest.approx(heights.max(), abs=1e-8)


def test_a_thick_wall_raises_what_fuel_must_clear_and_lowers_what_air_must() -> None:
    leaning = replace(UPRIGHT, normal=(0.0, 0.6, 0.8))
    thin, thick = crests_of(hole(leaning), UP), crests_of(hole(leaning, depth_m=0.05), UP)
    assert thick.low_m - thin.low_m == pytest.approx(0.025 * 0.8, abs=1e-15)
    assert thin.high_m - thick.high_m == pytest.approx(0.025 * 0.8, abs=1e-15)
    assert crests_of(hole(UPRIGHT, depth_m=0.05), UP) == crests_of(hole(UPRIGHT), UP)


def test_an_outlet_is_covered_only_when_its_higher_rim_is() -> None:
    leaning = replace(UPRIGHT, normal=(0.0, 0.6, 0.8))
    thin = crests_of(hole(leaning, Outside.OUTLET), UP)
    thick = crests_of(hole(leaning, Outside.OUTLET, depth_m=0.05), UP)
    assert thick.high_m - thin.high_m == pytest.approx(0.025 * 0.8, abs=1e-15)
    assert thick.low_m - thin.low_m == pytest.approx(0.025 * 0.8, abs=1e-15)


def test_a_dam_and_a_flap_raise_what_fuel_must_clear_and_leave_the_air_alone() -> None:
    plain = crests_of(hole(UPRIGHT), UP)
    raised = crests_of(hole(UPRIGHT, dam_m=0.01, opens_at_m=0.002), UP)
    assert raised.low_m - plain.low_m == pytest.approx(0.012, abs=1e-15)
    assert raised.high_m == plain.high_m


def test_a_polygon_reaches_from_its_lowest_to_its_highest_corner() -> None:
    slot = Polygon(points_m=((0.0, 0.0, 0.1), (0.0, 1.0, 0.3), (0.0, 1.0, 0.9), (0.0, 0.0, 0.5)))
    crests = crests_of(hole(slot), UP)
    assert (crests.low_m, crests.high_m) == (0.1, 0.9)
    assert normal_of(slot) == pytest.approx((1.0, 0.0, 0.0))


@pytest.mark.parametrize(
    ("points", "low", "high"),
    [
        # Level: the bore itself.
        (((0.0, 0.0, 1.0), (1.0, 0.0, 1.0)), 0.9, 1.1),
        # A standpipe: fuel must reach its top, air must clear its foot.
        (((0.0, 0.0, 0.0), (0.0, 0.0, 2.0)), 2.0, 0.0),
        # Over a hump: the lower surface of the level part.
        (((0.0, 0.0, 0.0), (0.0, 0.0, 2.0), (1.0, 0.0, 2.0), (1.0, 0.0, 0.0)), 1.9, 0.0),
        # Through a sag: air must get past the upper surface of the level part.
        (((0.0, 0.0, 2.0), (0.0, 0.0, 0.0), (1.0, 0.0, 0.0), (1.0, 0.0, 2.0)), 2.0, 0.1),
        # At 45 degrees the square-cut ends reach 0.1 cos 45 each way.
        (((0.0, 0.0, 0.0), (1.0, 0.0, 1.0)), 1.0 - 0.1 * math.sqrt(0.5), 0.1 * math.sqrt(0.5)),
        # A point given twice changes nothing.
        (((0.0, 0.0, 1.0), (0.0, 0.0, 1.0), (1.0, 0.0, 1.0)), 0.9, 1.1),
    ],
)
def test_a_pipe_passes_fuel_over_its_highest_floor_and_air_under_its_lowest_roof(
    points: tuple[tuple[float, float, float], ...], low: float, high: float
) -> None:
    crests = crests_of(hole(Pipe(points_m=points, bore_m=0.2)), UP)
    assert (crests.low_m, crests.high_m) == pytest.approx((low, high), abs=1e-14)


def test_a_pipe_with_a_point_more_on_a_straight_run_is_the_same_pipe() -> None:
    up = (0.2, 0.3, math.sqrt(1.0 - 0.04 - 0.09))
    two = Pipe(points_m=((0.0, 0.0, 0.0), (1.0, 2.0, 1.0)), bore_m=0.05)
    three = Pipe(points_m=((0.0, 0.0, 0.0), (0.5, 1.0, 0.5), (1.0, 2.0, 1.0)), bore_m=0.05)
    first, second = crests_of(hole(two), up), crests_of(hole(three), up)
    assert (first.low_m, first.high_m) == pytest.approx((second.low_m, second.high_m), abs=1e-14)


def test_a_hairpin_reaches_no_farther_than_its_bore() -> None:
    pipe = Pipe(points_m=((0.0, 0.0, 0.0), (0.0, 0.0, 1.0), (0.0, 0.0, 0.0)), bore_m=0.2)
    assert crests_of(hole(pipe), UP).low_m == pytest.approx(0.9)


def test_heights_follow_when_opening_and_up_turn_together() -> None:
    rng = np.random.default_rng(7)
    turn, _ = np.linalg.qr(rng.normal(size=(3, 3)))
    up = (0.1, -0.2, math.sqrt(0.95))

    def turned(point: Any) -> tuple[float, float, float]:
        x, y, z = (turn @ np.array(point)).tolist()
        return (x, y, z)

    leaning = Circle(centre_m=(1.0, 2.0, 3.0), diameter_m=0.2, normal=(0.3, 1.0, 0.5))
    moved = Circle(centre_m=turned(leaning.centre_m), diameter_m=0.2, normal=turned(leaning.normal))
    one = crests_of(hole(leaning, depth_m=0.01), up)
    two = crests_of(hole(moved, depth_m=0.01), turned(up))
    assert (one.low_m, one.high_m) == pytest.approx((two.low_m, two.high_m), abs=1e-13)


def test_a_wider_rim_keeps_its_middle() -> None:
    slot = Polygon(points_m=((0.0, 0.0, 0.1), (0.0, 1.0, 0.1), (0.0, 1.0, 0.3), (0.0, 0.0, 0.3)))
    for rim in (UPRIGHT, slot, Pipe(points_m=((0.0, 0.0, 0.0), (1.0, 0.0, 0.0)), bore_m=0.1)):
        wider = widened(hole(rim), 1.1)
        assert middle_of(wider.rim) == pytest.approx(middle_of(rim), abs=1e-15)
        before, after = crests_of(hole(rim), UP), crests_of(wider, UP)
        assert after.high_m - after.low_m == pytest.approx(1.1 * (before.high_m - before.low_m), abs=1e-14)


def test_a_hole_without_a_direction_is_a_mistake_of_the_program() -> None:
    with pytest.raises(ValueError, match="length"):
        crests_of(hole(replace(UPRIGHT, normal=(0.0, 0.0, 0.0))), UP)
