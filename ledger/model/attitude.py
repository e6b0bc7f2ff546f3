"""How the aircraft stands, and which way is up for the fuel in it."""

from __future__ import annotations

import math
from dataclasses import dataclass
from enum import StrEnum

from ledger.errors import LedgerError
from ledger.model.vectors import Vector

_LEAST_UP = 0.05


class Seen(StrEnum):
    """Against which vertical the angles are given: the true one, or the one a bubble shows."""

    TRUE = "true"
    APPARENT = "apparent"


class NotUpward(LedgerError):
    """The fuel's surface would have no upward side in this attitude."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Attitude:
    """Pitch nose up positive, roll right wing down positive, accelerations along the body axes.

    `ax_g` is forward, `ay_g` right, `az_g` up; all 0 in steady flight.
    """

    name: str
    pitch_deg: float = 0.0
    roll_deg: float = 0.0
    ax_g: float = 0.0
    ay_g: float = 0.0
    az_g: float = 0.0
    seen: Seen = Seen.TRUE
    fill: bool = False
    flight: bool = True

    @property
    def up(self) -> Vector:
        """The unit vector that points up out of the fuel, in build axes (x aft, y right, z up)."""
        return up_direction(self)


def up_direction(attitude: Attitude) -> Vector:
    """The unit normal of the fuel's free surface, in build axes.

    With angles seen against the true vertical, the reaction to the body's acceleration is added to
    gravity's before normalising. A bubble shows the sum already, so accelerations are refused there.

    Raises
        NotUpward: the sum is near zero or does not point to the upper side of the aircraft.
    """
    pitch, roll = math.radians(attitude.pitch_deg), math.radians(attitude.roll_deg)
    if attitude.seen is Seen.APPARENT and (attitude.ax_g, attitude.ay_g, attitude.az_g) != (0.0, 0.0, 0.0):
        raise NotUpward(
            f"attitude {attitude.name!r}: a bubble already shows accelerations; leave out ax_g, ay_g, az_g"
        )
    x = -math.sin(pitch) - attitude.ax_g
    y = -math.cos(pitch) * math.sin(roll) + attitude.ay_g
    z = math.cos(pitch) * math.cos(roll) + attitude.az_g
    length = math.sqrt(x * x + y * y + z * z)
    if not math.isfinite(length) or length < _LEAST_UP or z / length < _LEAST_UP:
        raise NotUpward(f"attitude {attitude.name!r}: up does not point to the upper side of the aircraft")
    return (x / length, y / length, z / length)
