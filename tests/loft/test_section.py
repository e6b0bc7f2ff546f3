"""Sections of the four- and five-digit families."""

from __future__ import annotations

import numpy as np
import pytest
from scipy.integrate import quad

from ledger.geometry.outlines import Outline, outline_moments, polygon
from ledger.loft.section import camber_line, half_thickness, naca_section


def area_and_centroid(number: str) -> tuple[float, tuple[float, float]]:
    found = outline_moments(Outline(loops=(polygon(naca_section(number, 4000)),)))
    return found.area, found.centroid


@pytest.mark.parametrize(
    ("number", "area", "centroid"),
    [
        # checks: polynomial read, integrals computed; areas in c^2
        ("0012", 0.0822100, (0.420435, 0.0)),
        ("2412", 0.082282, (0.420309, 0.015586)),
        ("4415", 0.103122, (0.419925, 0.031319)),
    ],
)
def test_area_and_centroid(number: str, area: float, centroid: tuple[float, float]) -> None:
    found, at = area_and_centroid(number)
    assert found == pytest.approx(area, abs=1e-6)
    assert at == pytest.approx(centroid, abs=2e-6)


def test_the_area_is_in_proportion_to_thickness() -> None:
    # checks: area / (t c^2) = 0.685083 (computed)
    for number in ("0006", "0012", "0021"):
        assert area_and_centroid(number)[0] / (int(number[2:]) / 100.0) == pytest.approx(0.685083, abs=2e-6)


def test_the_box_between_two_webs() -> None:
    # checks: box from 0.15 c to 0.65 c: 0.455344 t c^2 at 0.388653 c (computed)
    def depth(x: float) -> float:
        return 2.0 * float(half_thickness(1.0, np.array([x]))[0])

    area = quad(depth, 0.15, 0.65)[0]
    assert area == pytest.approx(0.455344, abs=5e-7)
    assert quad(lambda x: x * depth(x), 0.15, 0.65)[0] / area == pytest.approx(0.388653, abs=5e-7)


@pytest.mark.parametrize(
    ("station", "ordinate"),
    # Half ordinates of 0012 in % c (Theory of Wing Sections, from memory)
    [
        (1.25, 1.894),
        (5, 3.555),
        (10, 4.683),
        (20, 5.737),
        (30, 6.002),
        (50, 5.294),
        (70, 3.664),
        (90, 1.448),
    ],
)
def test_half_ordinates_of_0012(station: float, ordinate: float) -> None:
    assert 100.0 * half_thickness(0.12, np.array([station / 100.0]))[0] == pytest.approx(ordinate, abs=6e-4)


def test_the_outline_runs_from_the_upper_trailing_edge_round_the_nose() -> None:
    loop = naca_section("0012", 100)
    assert loop.shape == (101, 2)
    assert loop[50] == pytest.approx([0.0, 0.0], abs=1e-15)
    # The open trailing edge of 0012 is 2 x 0.126 % of the chord (polynomial at 1).
    assert loop[0] == pytest.approx([1.0, 0.00126], abs=1e-12)
    assert loop[-1] == pytest.approx([1.0, -0.00126], abs=1e-12)
    assert (np.diff(loop[:51, 0]) < 0.0).all()
    assert (np.diff(loop[50:, 0]) > 0.0).all()


def test_camber_is_highest_where_the_number_says() -> None:
    x = np.linspace(0.0, 1.0, 10001)
    for number, height, place in (("2412", 0.02, 0.4), ("4415", 0.04, 0.4), ("6512", 0.06, 0.5)):
        line, _ = camber_line(number, x)
        assert line.max() == pytest.approx(height, rel=1e-9)
        assert x[line.argmax()] == pytest.approx(place, abs=2e-4)
    for number, place in (("21012", 0.05), ("23012", 0.15), ("25012", 0.25)):
        line, _ = camber_line(number, x)
        assert x[line.argmax()] == pytest.approx(place, abs=2e-3)


@pytest.mark.parametrize(
    "number", ["2412", "6315", "21012", "23012", "24015", "25012", "22112", "23112", "24112", "25112"]
)
def test_the_camber_line_joins_its_ends_and_its_slope(number: str) -> None:
    x = np.linspace(0.0, 1.0, 4001)
    line, slope = camber_line(number, x)
    assert (line[0], line[-1]) == pytest.approx((0.0, 0.0), abs=1e-15)
    assert np.abs(np.diff(line)).max() < 2e-3
    middles = (line[1:] - line[:-1]) * 4000.0
    assert middles == pytest.approx((slope[1:] + slope[:-1]) / 2.0, abs=2e-4)


def test_23012_is_designed_for_a_lift_of_three_tenths() -> None:
    # Thin-section theory: the design lift coefficient of the 230 camber line is 0.3 (published, from memory).
    def slope(angle: float) -> float:
        return float(camber_line("23012", np.array([0.5 * (1.0 - np.cos(angle))]))[1][0])

    knee = float(np.arccos(1.0 - 2.0 * 0.2025))
    a0 = quad(slope, 0.0, np.pi, points=[knee])[0] / np.pi
    a1 = 2.0 / np.pi * quad(lambda t: slope(t) * np.cos(t), 0.0, np.pi, points=[knee])[0]
    # At the ideal angle the first term vanishes: cl = pi a1.
    assert np.pi * a1 == pytest.approx(0.3, abs=0.005)
    assert a0 > 0.0


def test_the_outline_is_the_polynomial_laid_square_to_the_camber_line() -> None:
    loop = naca_section("4415", 60)
    upper, lower = loop[:31][::-1], loop[30:]
    middle = 0.5 * (upper + lower)
    x = middle[:, 0]
    assert middle[:, 1] == pytest.approx(camber_line("4415", x)[0], abs=1e-12)
    assert np.linalg.norm(upper - lower, axis=1) / 2.0 == pytest.approx(half_thickness(0.15, x), abs=1e-12)


@pytest.mark.parametrize(
    "number", ["", "12", "241", "24212", "0000", "0412", "2012", "2400", "26012", "abcd", "２４１２"]
)
def test_a_number_of_no_family_is_refused(number: str) -> None:
    with pytest.raises(ValueError, match=repr(number)):
        naca_section(number, 100)


def test_too_few_points_are_refused() -> None:
    with pytest.raises(ValueError, match="at least 8"):
        naca_section("0012", 7)
