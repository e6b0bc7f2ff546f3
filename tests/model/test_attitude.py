"""Which way is up: signs by hand, and the whole rule against rotation matrices."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.spatial.transform import Rotation

from ledger.model.attitude import Attitude, NotUpward, Seen, up_direction

ANGLES = st.floats(-60, 60)
LOADS = st.floats(-0.3, 0.3)


@pytest.mark.parametrize(
    ("attitude", "up"),
    [
        (Attitude(name="level"), (0.0, 0.0, 1.0)),
        # Nose up: the fuel runs aft, so up leans forward, to smaller x.
        (Attitude(name="climb", pitch_deg=30.0), (-0.5, 0.0, math.sqrt(0.75))),
        # Right wing down: the fuel runs right, so up leans left.
        (Attitude(name="bank", roll_deg=30.0), (0.0, -0.5, math.sqrt(0.75))),
        # Pushed forward at 1 g: the fuel runs aft.
        (Attitude(name="launch", ax_g=1.0), (-math.sqrt(0.5), 0.0, math.sqrt(0.5))),
        # Pushed to the right at 1 g: the fuel runs left.
        (Attitude(name="skid", ay_g=1.0), (0.0, math.sqrt(0.5), math.sqrt(0.5))),
        (Attitude(name="pull", az_g=1.0), (0.0, 0.0, 1.0)),
    ],
)
def test_up_leans_away_from_where_the_fuel_runs(attitude: Attitude, up: tuple[float, float, float]) -> None:
    assert attitude.up == pytest.approx(up, abs=1e-15)


@given(ANGLES, ANGLES, LOADS, LOADS, LOADS)
def test_up_is_gravity_turned_into_the_body_and_loaded(
    pitch: float, roll: float, ax: float, ay: float, az: float
) -> None:
    # Independent: aerospace axes (x forward, y right, z down), yaw-pitch-roll from earth to body, then turned
    # into build axes (x aft, y right, z up). What a mass feels is gravity less acceleration.
    down = Rotation.from_euler("ZYX", [0.0, pitch, roll], degrees=True).inv().apply([0.0, 0.0, 1.0])
    felt = down - np.array([ax, ay, -az])
    expected = -felt * np.array([-1.0, 1.0, -1.0])
    if expected[2] / np.linalg.norm(expected) < 0.06:
        return
    got = up_direction(Attitude(name="a", pitch_deg=pitch, roll_deg=roll, ax_g=ax, ay_g=ay, az_g=az))
    assert got == pytest.approx(tuple(expected / np.linalg.norm(expected)), abs=1e-12)
    assert math.hypot(*got) == pytest.approx(1.0, abs=1e-15)


def test_a_bubble_shows_the_angles_as_they_are() -> None:
    seen = Attitude(name="a", pitch_deg=10.0, roll_deg=5.0, seen=Seen.APPARENT)
    assert seen.up == Attitude(name="a", pitch_deg=10.0, roll_deg=5.0).up


@pytest.mark.parametrize(
    "attitude",
    [
        Attitude(name="weightless", az_g=-1.0),
        Attitude(name="inverted", roll_deg=180.0),
        Attitude(name="on its tail", pitch_deg=90.0),
        Attitude(name="pushed over", az_g=-1.5),
        Attitude(name="nowhere", pitch_deg=math.nan),
        Attitude(name="bubble", ax_g=0.1, seen=Seen.APPARENT),
    ],
)
def test_an_attitude_without_an_upper_side_is_refused(attitude: Attitude) -> None:
    with pytest.raises(NotUpward, match=attitude.name):
        _ = attitude.up
