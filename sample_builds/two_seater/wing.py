"""The invented wing of the sample, as arithmetic: where a chord fraction lies in space.

Metres, build axes: x aft, y right, z up. Every generator of the wing is a straight line in y, and
all sections are similar, so each strip of skin between two chord fractions is flat.
"""

from __future__ import annotations

import math

THICKNESS, CAMBER, CAMBER_AT = 0.12, 0.02, 0.40
ROOT_Y, TIP_Y = 0.55, 4.35
ROOT_CHORD, TIP_CHORD = 0.95, 0.60
ROOT_LE_X, TIP_LE_X = 2.480, 2.620
ROOT_Z = -0.120
DIHEDRAL = math.tan(math.radians(4.0))

FRONT, MIDDLE, REAR = 0.18, 0.40, 0.64
TANK_RIBS = (0.55, 1.00, 1.45, 1.90, 2.35, 2.80, 3.25)
DRY_RIBS = (3.80, 4.35)
SKIN_M = 0.0042
WEB_M = 0.0106
RIB_M = 0.0066

Point = tuple[float, float, float]


def chord(y: float) -> float:
    """Chord at butt line `y` of the right wing."""
    return ROOT_CHORD + (TIP_CHORD - ROOT_CHORD) * (y - ROOT_Y) / (TIP_Y - ROOT_Y)


def leading_edge(y: float) -> float:
    """Station of the leading edge at butt line `y`."""
    return ROOT_LE_X + (TIP_LE_X - ROOT_LE_X) * (y - ROOT_Y) / (TIP_Y - ROOT_Y)


def half_thickness(u: float) -> float:
    """Half thickness of the four-digit section at chord fraction `u`, in chords."""
    return (
        THICKNESS / 0.2 * (0.2969 * math.sqrt(u) - 0.1260 * u - 0.3516 * u**2 + 0.2843 * u**3 - 0.1015 * u**4)
    )


def camber(u: float) -> float:
    """Mean line of the four-digit section at chord fraction `u`, in chords."""
    if u < CAMBER_AT:
        return CAMBER / CAMBER_AT**2 * (2 * CAMBER_AT * u - u * u)
    return CAMBER / (1 - CAMBER_AT) ** 2 * (1 - 2 * CAMBER_AT + 2 * CAMBER_AT * u - u * u)


def surface(u: float, y: float, side: int) -> Point:
    """The point of the upper (`side` 1) or lower (-1) surface at chord fraction `u`."""
    height = camber(u) + side * half_thickness(u)
    return leading_edge(y) + u * chord(y), y, ROOT_Z + DIHEDRAL * (y - ROOT_Y) + height * chord(y)


def fraction(x: float, y: float) -> float:
    """The chord fraction of station `x` at butt line `y`."""
    return (x - leading_edge(y)) / chord(y)


def station(u: float, y: float) -> float:
    """The station of chord fraction `u` at butt line `y`."""
    return leading_edge(y) + u * chord(y)


def spread(first: float, last: float, steps: int) -> list[float]:
    """`steps` + 1 evenly spaced numbers from first to last."""
    return [first + (last - first) * index / steps for index in range(steps + 1)]
