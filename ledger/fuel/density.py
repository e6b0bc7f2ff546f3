"""Density of fuel at a temperature, from its density at 15 C.

Volume correction after API MPMS 11.1 / ASTM D1250 with the constants for Celsius and kg/m3. The group
follows from the density, not from the name of the grade. Taking the Fahrenheit constants with
degrees Celsius gives figures that look right and are not.
"""

from __future__ import annotations

import math

from ledger.model.plan import FuelGrade

BASE_K = 288.15

# Upper limit of the density at 15 C (kg/m3), then K0, K1, K2.
GROUPS: tuple[tuple[float, float, float, float], ...] = (
    (770.5, 346.4228, 0.4388, 0.0),
    (787.5, 2680.3206, 0.0, -0.00336312),
    (839.0, 594.5418, 0.0, 0.0),
    (math.inf, 186.9696, 0.4862, 0.0),
)

# Usual densities at 15 C of a grade, kg/m3.
USUAL_DENSITY_KG_M3: dict[str, tuple[float, float]] = {
    "avgas": (710.0, 720.0),
    "jet": (775.0, 840.0),
    "mogas": (720.0, 775.0),
    "diesel": (820.0, 845.0),
}


def expansion_per_k(density_15c_kg_m3: float) -> float:
    """Thermal expansion at 15 C, per kelvin, of the group the density falls in."""
    for limit, k0, k1, k2 in GROUPS:
        if density_15c_kg_m3 < limit:
            return k0 / density_15c_kg_m3**2 + k1 / density_15c_kg_m3 + k2
    raise ValueError(f"{density_15c_kg_m3} kg/m3 is not a density")


def volume_correction(density_15c_kg_m3: float, temperature_k: float) -> float:
    """Volume at 15 C over volume at the temperature: above 1 when cold."""
    if not (math.isfinite(density_15c_kg_m3) and density_15c_kg_m3 > 0.0 and math.isfinite(temperature_k)):
        raise ValueError("density must be above 0 and temperature finite")
    warmer = temperature_k - BASE_K
    alpha = expansion_per_k(density_15c_kg_m3)
    return math.exp(-alpha * warmer * (1.0 + 0.8 * alpha * warmer))


def density_at(fuel: FuelGrade | None, temperature_k: float | None) -> float | None:
    """Density in kg/m3 at the temperature (15 C where none is said); None where the plan has none."""
    if fuel is None or fuel.density_15c_kg_m3 is None:
        return None
    if temperature_k is None:
        return fuel.density_15c_kg_m3
    return fuel.density_15c_kg_m3 * volume_correction(fuel.density_15c_kg_m3, temperature_k)
