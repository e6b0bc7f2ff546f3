"""Loose curves chained into loops."""

from __future__ import annotations

import math
import random

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from ledger.geometry.loops import OutlineRefused, chain, polygon
from ledger.geometry.outlines import Arc, Curve, Line, Outline, outline_moments

PI = math.pi


def slot(gap: float = 0.0) -> list[Curve]:
    """A 3 x 1 slot with round ends, each piece drawn a little short of the next."""
    return [
        Line(start=(0.0 + gap, 0.0), end=(3.0, 0.0)),
        Arc.bulged((3.0, 0.0), (3.0, 1.0), 1.0),
        Line(start=(0.0, 1.0), end=(3.0 - gap, 1.0)),
        Arc.bulged((0.0, 1.0), (0.0, 0.0), 1.0),
    ]


def area_of(curves: list[Curve], gap: float) -> float:
    return outline_moments(Outline(loops=chain(curves, gap))).area


@settings(max_examples=15, deadline=None)
@given(seed=st.integers(0, 10**6))
def test_pieces_in_any_order_and_direction_make_the_loop(seed: int) -> None:
    rng = random.Random(seed)
    pieces: list[Curve] = [*slot(), Arc.ccw((1.5, 0.5), 0.25, 0.0, 0.0)]
    rng.shuffle(pieces)
    pieces = [piece.reversed() if rng.random() < 0.5 else piece for piece in pieces]
    loops = chain(pieces, 1e-6)
    assert sorted(len(loop.curves) for loop in loops)[-1] >= 4
    expected = 3.0 + PI / 4.0 - PI / 16.0
    assert outline_moments(Outline(loops=loops)).area == pytest.approx(expected, rel=1e-12)


def test_a_gap_within_the_tolerance_is_bridged_straight() -> None:
    assert area_of(slot(1e-5), 1e-4) == pytest.approx(3.0 + PI / 4.0, abs=1e-12)


def test_a_line_that_runs_past_its_corner_is_drawn_back() -> None:
    pieces = slot()
    pieces[0] = Line(start=(-2e-5, 0.0), end=(3.0 + 3e-5, 0.0))
    assert area_of(pieces, 1e-4) == pytest.approx(3.0 + PI / 4.0, abs=1e-12)


def test_two_arcs_that_fall_short_of_one_another_are_bridged() -> None:
    halves: list[Curve] = [
        Arc(centre=(0, 0), radius=1.0, start_angle_rad=1e-5, end_angle_rad=PI),
        Arc(centre=(0, 0), radius=1.0, start_angle_rad=PI, end_angle_rad=2 * PI - 1e-5),
    ]
    (loop,) = chain(halves, 1e-4)
    assert len(loop.curves) == 3
    assert outline_moments(Outline(loops=(loop,))).area == pytest.approx(PI, abs=1e-12)


def test_a_wider_gap_is_refused_and_its_ends_are_named() -> None:
    with pytest.raises(OutlineRefused, match=r"4 ends meet no other within 0\.1 mm") as caught:
        chain(slot(1e-3), 1e-4)
    assert caught.value.code == "outline-open"
    assert "(1, 0) mm" in caught.value.what
    assert "and 1 more" in caught.value.what


def test_a_missing_piece_leaves_two_free_ends() -> None:
    with pytest.raises(OutlineRefused, match="2 ends meet no other"):
        chain(slot()[:3], 1e-6)


def test_a_third_line_at_a_corner_is_left_over() -> None:
    with pytest.raises(OutlineRefused) as caught:
        chain([*slot(), Line(start=(0.0, 0.0), end=(-1.0, 0.0))], 1e-6)
    assert caught.value.code == "outline-open"


def test_a_piece_drawn_twice_is_named() -> None:
    for copy in (slot()[0], slot()[0].reversed()):
        with pytest.raises(OutlineRefused, match=r"drawn twice from \(") as caught:
            chain([*slot(), copy], 1e-6)
        assert caught.value.code == "outline-doubled"
    # The same ends by another way are no copy.
    half = [Arc.bulged((0.0, 0.0), (1.0, 0.0), 1.0), Arc.bulged((0.0, 0.0), (1.0, 0.0), -1.0)]
    assert area_of(half, 1e-6) == pytest.approx(PI / 4.0)


def test_a_piece_shorter_than_the_gap_is_still_a_piece() -> None:
    pieces: list[Curve] = [
        Line(start=(0.0, 0.0), end=(1.0, 0.0)),
        Line(start=(1.0, 0.0), end=(1.0, 0.0005)),
        Line(start=(1.0, 0.0005), end=(1.0, 1.0)),
        Line(start=(1.0, 1.0), end=(0.0, 0.0)),
    ]
    assert area_of(pieces, 1e-3) == pytest.approx(0.5, abs=1e-3)


def test_two_loops_stay_two() -> None:
    pieces: list[Curve] = [
        *polygon([(0, 0), (1, 0), (0, 1)]).curves,
        *polygon([(5, 0), (6, 0), (5, 1)]).curves,
    ]
    loops = chain(pieces[::-1], 1e-6)
    assert len(loops) == 2
    assert outline_moments(Outline(loops=loops)).area == pytest.approx(1.0)


def test_nothing_chains_to_nothing() -> None:
    assert chain([], 1e-3) == ()
    with pytest.raises(ValueError, match="gap_m must not"):
        chain([], -1.0)
