"""Wing sections of the four- and five-digit families.

The thickness is the polynomial of the published families with its open trailing edge; camber lines
are two parabolas (four digits) or a cubic and a straight line (five digits). Ordinates are laid off
square to the camber line.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]

# Half thickness over t is 5 (a0 sqrt x + a1 x + a2 x^2 + a3 x^3 + a4 x^4).
THICKNESS = (0.2969, -0.1260, -0.3516, 0.2843, -0.1015)

# Five-digit camber by its first three digits: end of the curved part m, and k1, from the published table.
SIMPLE_CAMBER = {
    "210": (0.0580, 361.400),
    "220": (0.1260, 51.640),
    "230": (0.2025, 15.957),
    "240": (0.2900, 6.643),
    "250": (0.3910, 3.230),
}
# Reflexed: m, k1 and the ratio k2 / k1.
REFLEX_CAMBER = {
    "221": (0.1300, 51.990, 0.000764),
    "231": (0.2170, 15.793, 0.00677),
    "241": (0.3180, 6.520, 0.0303),
    "251": (0.4410, 3.191, 0.1355),
}


def naca_section(number: str, points: int) -> Floats:
    """The outline of a section of unit chord.

    number : four or five digits, such as '2412' or '23012'.
    points : int, at least 8
        About how many corners the outline gets; they crowd at both edges as the cosine does.
    Returns
        (n, 2) float, x aft from the leading edge and z up, shares of the chord: from the upper
        trailing edge forward round the nose to the lower trailing edge; n is 2 * (points // 2) + 1.
        The trailing edge is open: a straight line from the last corner to the first closes it.
    Raises ValueError for a number of no family, or too few points.
    """
    if points < 8:
        raise ValueError("a section needs at least 8 points")
    x = 0.5 * (1.0 - np.cos(np.linspace(0.0, np.pi, points // 2 + 1)))
    upper, lower = (naca_surface(number, x, upper=upper) for upper in (True, False))
    return np.concatenate((upper[::-1], lower[1:]))


def naca_surface(number: str, x: Floats, *, upper: bool) -> Floats:
    """One surface of a section of unit chord, (n, 2): laid off square to the camber line at shares x (n,).

    Raises ValueError for a number of no family.
    """
    thickness = _checked(number)
    camber, slope = camber_line(number, x)
    half = half_thickness(thickness, x) * (1.0 if upper else -1.0)
    angle = np.arctan(slope)
    return np.stack((x - half * np.sin(angle), camber + half * np.cos(angle)), axis=1)


def half_thickness(thickness: float, x: Floats) -> Floats:
    """Half ordinates (n,) of a section without camber; `thickness` and x (n,) as shares of the chord."""
    a0, a1, a2, a3, a4 = THICKNESS
    return np.asarray(5.0 * thickness * (a0 * np.sqrt(x) + x * (a1 + x * (a2 + x * (a3 + x * a4)))))


def camber_line(number: str, x: Floats) -> tuple[Floats, Floats]:
    """Height (n,) and slope (n,) of the camber line at shares x (n,) of the chord."""
    _checked(number)
    if len(number) == 4:
        return _four_digit_camber(int(number[0]) / 100.0, int(number[1]) / 10.0, x)
    if number[:3] in SIMPLE_CAMBER:
        m, k1 = SIMPLE_CAMBER[number[:3]]
        return _five_digit_camber(m, k1, x)
    m, k1, ratio = REFLEX_CAMBER[number[:3]]
    return _reflex_camber(m, k1, ratio, x)


def _checked(number: str) -> float:
    """The thickness, once the number is known to name a section."""
    if not (number.isascii() and number.isdigit() and len(number) in {4, 5}):
        raise ValueError(f"{number!r} is not a section of four or five digits")
    if len(number) == 5 and number[:3] not in SIMPLE_CAMBER and number[:3] not in REFLEX_CAMBER:
        known = ", ".join(sorted((*SIMPLE_CAMBER, *REFLEX_CAMBER)))
        raise ValueError(f"{number!r} has no camber line; the first three digits are one of {known}")
    if len(number) == 4 and (number[0] == "0") != (number[1] == "0"):
        raise ValueError(f"{number!r} has camber without a place for it, or a place without camber")
    thickness = int(number[-2:]) / 100.0
    if thickness == 0.0:
        raise ValueError(f"{number!r} has no thickness")
    return thickness


def _four_digit_camber(m: float, p: float, x: Floats) -> tuple[Floats, Floats]:
    if m == 0.0:
        return np.zeros_like(x), np.zeros_like(x)
    fore = x < p
    rest = np.where(fore, p**2, (1.0 - p) ** 2)
    height = m * (np.where(fore, 0.0, 1.0 - 2.0 * p) + 2.0 * p * x - x * x) / rest
    return height, 2.0 * m * (p - x) / rest


def _five_digit_camber(m: float, k1: float, x: Floats) -> tuple[Floats, Floats]:
    fore = x < m
    curved = x**3 - 3.0 * m * x**2 + m**2 * (3.0 - m) * x
    height = k1 / 6.0 * np.where(fore, curved, m**3 * (1.0 - x))
    return height, k1 / 6.0 * np.where(fore, 3.0 * x**2 - 6.0 * m * x + m**2 * (3.0 - m), -(m**3))


def _reflex_camber(m: float, k1: float, ratio: float, x: Floats) -> tuple[Floats, Floats]:
    fore = x < m
    share = np.where(fore, 1.0, ratio)
    height = k1 / 6.0 * (share * (x - m) ** 3 - ratio * (1.0 - m) ** 3 * x - m**3 * x + m**3)
    return height, k1 / 6.0 * (3.0 * share * (x - m) ** 2 - ratio * (1.0 - m) ** 3 - m**3)
