"""The polygon that stands for a wing section has the area of the section itself."""

from __future__ import annotations

from functools import cache
from typing import Any

import numpy as np
import pytest
from numpy.typing import NDArray
from scipy.integrate import quad
from shapely import LineString, Point

from ledger.loft.profile import chord_shares, section_ring
from ledger.loft.section import camber_line, half_thickness

Floats = NDArray[np.float64]

FINENESS = 48


def ring_of(wings: Any, profile: str, corners: int = FINENESS, **other: Any) -> Floats:
    section = wings.section(profile=profile, **other)
    return section_ring(section, chord_shares(corners, (0.15, 0.65)))


@cache
def exact(number: str) -> tuple[float, tuple[float, float]]:
    """Area and centroid by quadrature: of a strip laid square to a bent line, with its lean and its turn."""
    thickness = int(number[-2:]) / 100.0
    step = 1e-6

    def parts(x: float) -> tuple[float, float, float, float]:
        at = np.array([x - step, x, x + step]).clip(0.0, 1.0)
        camber, slope = camber_line(number, at)
        angle = np.arctan(slope)
        turn = (angle[2] - angle[0]) / (at[2] - at[0])
        return float(camber[1]), float(angle[1]), float(turn), float(half_thickness(thickness, at[1:2])[0])

    def strip(moment: int) -> float:
        # A place (x - n sin, camber + n cos), n from -h to h: its area element is sec(angle) - n turn.
        def element(x: float) -> float:
            camber, angle, turn, h = parts(x)
            flat, bend = 2.0 * h / np.cos(angle), -2.0 / 3.0 * turn * h**3
            if moment == 0:
                return float(flat)
            middle, way = (x, -np.sin(angle)) if moment == 1 else (camber, np.cos(angle))
            return float(middle * flat + way * bend)

        knees = {4: [int(number[1]) / 10.0], 5: [0.058, 0.126, 0.2025, 0.217, 0.29, 0.318, 0.391, 0.441]}
        inner = [knee for knee in knees[len(number)] if 0.0 < knee < 1.0]
        found: float = quad(element, 0.0, 1.0, points=inner, limit=400, epsabs=1e-11)[0]
        return found

    area = strip(0)
    return area, (strip(1) / area, strip(2) / area)


@pytest.mark.parametrize(
    ("number", "area", "centroid"),
    [
        # checks: polynomial read, integrals computed; area in c^2
        ("0012", 0.0822100, (0.420435, 0.0)),
        ("2412", 0.082282, (0.420309, 0.015586)),
        ("4415", 0.103122, (0.419925, 0.031319)),
    ],
)
def test_area_and_centroid_at_the_default_fineness(
    wings: Any, polygon_moments: Any, number: str, area: float, centroid: tuple[float, float]
) -> None:
    found, at = polygon_moments(ring_of(wings, number))
    assert found == pytest.approx(area, abs=1e-6)
    assert at == pytest.approx(centroid, abs=1e-5)


@pytest.mark.parametrize("corners", [8, 12, 24, 48, 150])
@pytest.mark.parametrize("number", ["0012", "2412", "23012", "24018", "23112", "25112", "6409"])
def test_area_is_that_of_the_curve_at_any_fineness(
    wings: Any, polygon_moments: Any, number: str, corners: int
) -> None:
    area, centroid = exact(number)
    found, at = polygon_moments(ring_of(wings, number, corners))
    assert found == pytest.approx(area, rel=1e-10)
    # Area is set right as a whole; where it lies is right to the fourth power of the fineness.
    assert at == pytest.approx(centroid, abs=1.5 / corners**4 + 1e-10)


def test_the_box_between_two_webs(wings: Any, polygon_moments: Any) -> None:
    # checks: box from 0.15 c to 0.65 c: 0.455344 t c^2 at 0.388653 c (computed)
    ring = ring_of(wings, "0012")
    # Corners stand off the curve, so the cut is made across the pieces where the webs stand.
    half = len(ring) // 2
    x, top = ring[half::-1].T
    low = np.interp(0.15, x, top), np.interp(0.65, x, top)
    between = ring[(ring[:, 0] > 0.15) & (ring[:, 0] < 0.65)]
    upper = between[between[:, 1] > 0.0]
    corners = np.array(
        [(0.65, low[1]), *upper, (0.15, low[0]), (0.15, -low[0]), *upper[::-1] * (1, -1), (0.65, -low[1])]
    )
    area, centroid = polygon_moments(corners)
    assert area == pytest.approx(0.455344 * 0.12, abs=1e-5)
    assert centroid == pytest.approx((0.388653, 0.0), abs=1e-5)


def test_half_ordinates_of_0012(wings: Any) -> None:
    # Theory of Wing Sections, % c (from memory)
    stations = (1.25, 5.0, 10.0, 20.0, 30.0, 50.0, 70.0, 90.0)
    ordinates = (1.894, 3.555, 4.683, 5.737, 6.002, 5.294, 3.664, 1.448)
    ring = ring_of(wings, "0012", 200)
    x, z = 100.0 * ring[len(ring) // 2 :: -1].T
    assert np.interp(stations, x, z) == pytest.approx(ordinates, abs=2e-3)


@pytest.mark.parametrize("blunt", [True, False])
@pytest.mark.parametrize("spacing", ["cosine", "even", "uneven"])
@pytest.mark.parametrize("number", ["0012", "2412", "4415"])
def test_an_outline_of_points_has_the_area_of_its_section(
    wings: Any, polygon_moments: Any, number: str, spacing: str, blunt: bool
) -> None:
    outline = outline_of(number, spacing, blunt)
    found, at = polygon_moments(ring_of(wings, "points.dat", coordinates=outline))
    area, centroid = exact(number)
    lost = 0.0 if blunt else sharpened(number)
    assert found == pytest.approx(area - lost, rel=2e-5)
    if blunt:
        assert at == pytest.approx(centroid, abs=2e-6)


def outline_of(number: str, spacing: str, blunt: bool) -> tuple[tuple[float, float], ...]:
    angle = np.linspace(0.0, np.pi, 41)
    x = {
        "cosine": 0.5 * (1.0 - np.cos(angle)),
        "even": np.concatenate(([0.0, 0.0025, 0.0075], np.linspace(0.0, 1.0, 51)[1:])),
        # As old tables have it: close at the nose, and less and less so.
        "uneven": np.array([0, 0.5, 1.25, 2.5, 5, 7.5, 10, 15, 20, 25, 30, 40, 50, 60, 70, 80, 90, 95, 100])
        / 100.0,
    }[spacing]
    camber, slope = camber_line(number, x)
    turn = np.arctan(slope)
    half = half_thickness(int(number[2:]) / 100.0, x)
    if not blunt:
        half = half - x * half[-1]
    upper = np.column_stack((x - half * np.sin(turn), camber + half * np.cos(turn)))
    lower = np.column_stack((x + half * np.sin(turn), camber - half * np.cos(turn)))
    return tuple((float(a), float(b)) for a, b in np.concatenate((upper[::-1], lower[1:])))


def sharpened(number: str) -> float:
    """Area of what is taken off: half the opening at the tail, in proportion to x, on both sides."""
    tail = float(half_thickness(int(number[2:]) / 100.0, np.array([1.0]))[0])
    return float(
        quad(lambda x: 2.0 * tail * x / np.cos(np.arctan(camber_line(number, np.array([x]))[1][0])), 0, 1)[0]
    )


def test_wanted_shares_are_among_the_corners() -> None:
    wanted = (0.08, 0.25, 0.5001)
    shares = chord_shares(48, wanted)
    assert set(wanted) <= set(shares)
    assert (shares[0], shares[-1]) == (0.0, 1.0)
    assert (np.diff(shares) > 0.2 / 48**2).all()


def test_corners_stand_off_the_curve_by_no_more_than_a_strip_bulges(wings: Any) -> None:
    # With twice as many corners they come four times as near: the polygon goes to the curve.
    angle = np.linspace(0.0, np.pi, 20001)
    x = 0.5 * (1.0 - np.cos(angle))
    curve = LineString(np.column_stack((x, half_thickness(0.12, x))))

    def farthest(corners: int) -> float:
        ring = ring_of(wings, "0012", corners)
        return max(curve.distance(Point(corner)) for corner in ring[: len(ring) // 2])

    assert farthest(48) < 2e-4
    assert farthest(96) < 0.35 * farthest(48)
