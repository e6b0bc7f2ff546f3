"""CG and inertia of many things, against point masses and hand values."""

from __future__ import annotations

import math
from typing import Any

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from ledger.mass.roll_up import Gathered
from ledger.model.acts import Weigh
from ledger.model.plan import Form, PartClass, Shape
from ledger.model.vectors import Matrix, Vector

# An L of two strips of even mass per area: 4 x 1 along x from the origin, 1 x 2 on top of its root end.
_STRIPS = (((0.0, 0.0), (4.0, 1.0)), ((0.0, 1.0), (1.0, 3.0)))


def l_shape(sign: float) -> Shape:
    """The L, or its mirror image at y = 0, by hand from its two strips."""
    area = x = y = 0.0
    for (x0, y0), (x1, y1) in _STRIPS:
        one = (x1 - x0) * (y1 - y0)
        area += one
        x += one * (x0 + x1) / 2
        y += one * (y0 + y1) / 2
    x, y = x / area, y / area
    xx = yy = xy = 0.0
    for (x0, y0), (x1, y1) in _STRIPS:
        one = (x1 - x0) * (y1 - y0) / area
        dx, dy = (x0 + x1) / 2 - x, (y0 + y1) / 2 - y
        xx += one * ((x1 - x0) ** 2 / 12 + dx * dx)
        yy += one * ((y1 - y0) ** 2 / 12 + dy * dy)
        xy += one * dx * dy
    second: Matrix = ((xx, sign * xy, 0.0), (sign * xy, yy, 0.0), (0.0, 0.0, 0.0))
    return Shape(measure=area, centroid_m=(x, sign * y, 0.0), second_m2=second, digest="l")


def inertia(*placed: tuple[float, Shape]) -> Matrix:
    gathered = Gathered()
    for mass, shape in placed:
        gathered.add(mass, shape)
    found = gathered.inertia_kg_m2()
    assert found is not None
    return found


def test_a_mirrored_l_has_the_opposite_product_of_inertia() -> None:
    left, right = inertia((6.0, l_shape(-1.0))), inertia((6.0, l_shape(1.0)))
    # By hand, 1 kg/m2: strips of 4 and 2 kg with their centroids at (2, 0.5) and (0.5, 2), the whole at
    # (1.5, 1): sum of m dx dy = 4 x 0.5 x -0.5 + 2 x -1 x 1 = -3, and I_xy is minus that.
    assert right[0][1] == pytest.approx(3.0, rel=1e-12)
    assert left[0][1] == pytest.approx(-3.0, rel=1e-12)
    # By hand: I_xx = 4 / 12 + 4 x 0.25 + 2 x 4 / 12 + 2 x 1
    assert (right[0][0], left[0][0]) == pytest.approx((4.0, 4.0), rel=1e-12)


def test_a_pair_of_mirrored_parts_has_no_product_with_y() -> None:
    both = inertia((6.0, l_shape(1.0)), (6.0, l_shape(-1.0)))
    assert both[0][1] == pytest.approx(0.0, abs=1e-12)
    assert both[1][2] == pytest.approx(0.0, abs=1e-12)


_POINT = st.tuples(*[st.floats(-5, 5)] * 3)
_BODIES = st.lists(
    st.tuples(st.floats(0.01, 20.0), st.lists(_POINT, min_size=1, max_size=5)), min_size=1, max_size=8
)


def cloud(points: list[Vector]) -> Shape:
    array = np.array(points)
    centroid = array.mean(axis=0)
    second = (array - centroid).T @ (array - centroid) / len(array)
    x, y, z = (float(value) for value in centroid)
    rows: list[Vector] = [(float(row[0]), float(row[1]), float(row[2])) for row in second]
    return Shape(measure=1.0, centroid_m=(x, y, z), second_m2=(rows[0], rows[1], rows[2]), digest="c")


@settings(max_examples=80, deadline=None)
@given(bodies=_BODIES)
def test_the_roll_up_is_that_of_all_the_point_masses_at_once(bodies: Any) -> None:
    gathered = Gathered()
    masses, points = [], []
    for mass, places in bodies:
        gathered.add(mass, cloud(places))
        for place in places:
            masses.append(mass / len(places))
            points.append(place)
    m, r = np.array(masses), np.array(points)
    cg = (m[:, None] * r).sum(axis=0) / m.sum()
    d = r - cg
    expected = (
        m[:, None, None] * ((d * d).sum(axis=1)[:, None, None] * np.eye(3) - d[:, :, None] * d[:, None])
    ).sum(axis=0)
    assert gathered.cg_m == pytest.approx(cg, abs=1e-9)
    assert np.array(gathered.inertia_kg_m2()) == pytest.approx(expected, abs=1e-8)


@settings(max_examples=50, deadline=None)
@given(bodies=_BODIES, angle=st.floats(-math.pi, math.pi), order=st.randoms(use_true_random=False))
def test_turning_the_build_turns_its_inertia_and_order_does_not_matter(
    bodies: Any, angle: float, order: Any
) -> None:
    turn = np.array(
        [[math.cos(angle), -math.sin(angle), 0], [math.sin(angle), math.cos(angle), 0], [0, 0, 1.0]]
    )
    straight = np.array(inertia(*((mass, cloud(places)) for mass, places in bodies)))
    turned = [(mass, [tuple(turn @ np.array(place)) for place in places]) for mass, places in bodies]
    order.shuffle(turned)
    found = np.array(inertia(*((mass, cloud(places)) for mass, places in turned)))
    assert found == pytest.approx(turn @ straight @ turn.T, abs=1e-8)


def test_an_item_is_a_point_and_one_alone_has_no_inertia() -> None:
    point = Shape(measure=1.0, centroid_m=(3, 1, 2), second_m2=((0, 0, 0),) * 3, digest="p")
    assert np.array(inertia((2.0, point))) == pytest.approx(np.zeros((3, 3)), abs=1e-12)


def test_an_empty_build_balances_nowhere() -> None:
    assert Gathered().cg_m is None
    assert Gathered().inertia_kg_m2() is None


def test_the_best_masses_are_the_ones_that_balance(make: Any) -> None:
    pins = [
        (make.part(name, Form.ITEM, None, PartClass.FITTING, planned_mass_kg=1.0), make.shape(1.0, at))
        for name, at in (("A", (0.0, 0.0, 0.0)), ("B", (4.0, 0.0, 0.0)))
    ]
    shop = make.shop(make.plan(*pins))
    assert shop.weights().total.cg_m == pytest.approx((2.0, 0.0, 0.0))
    shop.log(Weigh(what="B/1", reading_kg=(3.0,)))
    total = shop.weights().total
    assert total.cg_m == pytest.approx((3.0, 0.0, 0.0))
    assert total.inertia_kg_m2[1][1] == pytest.approx(1.0 * 9 + 3.0 * 1)


def test_every_assembly_weighs_what_is_in_it_and_below_it(shop: Any) -> None:
    report = shop.weights()
    best = {node.path: node.best_kg for node in report.assemblies}
    assert [(node.path, node.depth) for node in report.assemblies][:3] == [
        ("", 0),
        ("WING", 1),
        ("WING/LEFT", 2),
    ]
    assert best["WING/LEFT"] == pytest.approx(best["WING/LEFT/skins"] + best["WING/LEFT/ribs"] + 0.15)
    assert best["WING"] == pytest.approx(best["WING/LEFT"] + 0.25)
    assert best[""] == pytest.approx(report.total.best_kg)
