from __future__ import annotations

import math

import pytest

from ledger.fuel.density import density_at, expansion_per_k, volume_correction
from ledger.model.plan import FuelGrade

# checks: Measurement Canada, table 54B, January 2016 (read)
PUBLISHED_54B = [
    (710.0, -40.0, 1.0700),
    (710.0, -39.0, 1.0688),
    (710.0, -37.3, 1.0667),
    (710.0, -30.5, 1.0582),
    (710.0, -30.0, 1.0576),
    (710.0, -25.0, 1.0513),
    (710.0, -20.0, 1.0450),
    (800.0, -40.0, 1.0502),
    (800.0, -39.5, 1.0498),
    (800.0, -30.0, 1.0412),
    (800.0, -25.0, 1.0367),
    (800.0, -20.0, 1.0322),
    # checks: copies of table 54B (read)
    (990.3, 34.0, 0.9870),
    (992.0, 36.0, 0.9857),
]
# checks: computed only, warm side
COMPUTED = [(710.0, 30.0, 0.980311), (710.0, 40.0, 0.967072), (800.0, 30.0, 0.986009)]


@pytest.mark.parametrize(("density", "celsius", "factor"), PUBLISHED_54B)
def test_every_published_correction_is_met_at_four_decimals(
    density: float, celsius: float, factor: float
) -> None:
    assert round(volume_correction(density, celsius + 273.15), 4) == factor


@pytest.mark.parametrize(("density", "celsius", "factor"), COMPUTED)
def test_the_warm_side_is_as_computed(density: float, celsius: float, factor: float) -> None:
    assert volume_correction(density, celsius + 273.15) == pytest.approx(factor, abs=5e-7)


def test_the_fahrenheit_constants_are_not_the_ones_used() -> None:
    # checks: mixing the sets gives 1.0252 for 710 kg/m3 at -20 C (read)
    assert volume_correction(710.0, 253.15) > 1.04


def test_nothing_is_corrected_at_15_c() -> None:
    for density in (600.0, 715.0, 780.0, 800.0, 850.0):
        assert volume_correction(density, 288.15) == 1.0


def test_the_group_follows_from_the_density_at_its_limits() -> None:
    petrol = 346.4228 / 770.4999**2 + 0.4388 / 770.4999
    assert expansion_per_k(770.4999) == pytest.approx(petrol, rel=1e-15)
    assert expansion_per_k(770.5) == pytest.approx(2680.3206 / 770.5**2 - 0.00336312, rel=1e-15)
    assert expansion_per_k(787.5) == pytest.approx(594.5418 / 787.5**2, rel=1e-15)
    assert expansion_per_k(839.0) == pytest.approx(186.9696 / 839.0**2 + 0.4862 / 839.0, rel=1e-15)


@pytest.mark.parametrize("limit", [770.5, 787.5, 839.0])
def test_the_groups_meet_at_their_limits_to_a_hundredth_of_a_percent_over_30_k(limit: float) -> None:
    below, above = (volume_correction(limit + step, 258.15) for step in (-1e-9, 1e-9))
    assert below == pytest.approx(above, abs=2e-4)


def test_density_at_a_temperature_is_the_corrected_one_and_none_stays_none() -> None:
    avgas = FuelGrade(grade="avgas", density_15c_kg_m3=710.0)
    assert density_at(avgas, 253.15) == pytest.approx(710.0 * 1.0450, abs=0.04)
    assert density_at(avgas, None) == 710.0
    assert density_at(None, 288.15) is None
    assert density_at(FuelGrade(grade="avgas", density_15c_kg_m3=None), 288.15) is None


def test_a_density_or_temperature_that_is_none_is_a_mistake_of_the_program() -> None:
    for density, kelvin in ((0.0, 288.15), (math.nan, 288.15), (715.0, math.inf)):
        with pytest.raises(ValueError, match="finite"):
            volume_correction(density, kelvin)
