"""Laminates and coats that someone weighed, or that the trade reckons with."""

from __future__ import annotations

import math

import pytest

from ledger.mass.laminate import dry_areal_mass, laminate_areal_mass, ply_areal_mass
from ledger.model.plan import Laminate, Material, MaterialKind, Step
from ledger.units import Dimension, to_si

SQUARE_FOOT_M2 = 0.3048**2
INCH_M = 0.0254


@pytest.mark.parametrize(
    ("ounces", "share"),
    # checks: practice plate, six plies of 8.8 oz/yd2 glass, 10 x 16 in: 11 oz right, 10.5 to 11.5
    # accepted, 12.5 far too heavy (practice); resin shares computed
    [(11.0, 0.407), (10.5, 0.379), (11.5, 0.433), (12.5, 0.479)],
)
def test_what_a_practice_plate_weighs_tells_its_resin(ounces: float, share: float) -> None:
    fabric = 6.0 * to_si(8.8, "oz/yd2", Dimension.AREAL_MASS) * 160.0 * INCH_M**2
    whole = to_si(ounces, "oz", Dimension.MASS)
    assert 1.0 - fabric / whole == pytest.approx(share, abs=5e-4)
    assert ply_areal_mass(fabric, 1.0 - fabric / whole) == pytest.approx(whole, rel=1e-12)


@pytest.mark.parametrize(
    ("foam", "cloth", "resin", "whole"),
    # checks: Sport Aviation, October 1976 (read): 12 x 12 x 1 in foam, both faces, weighed, grams
    [(89.6, 19.6, 39.6, 148.8), (90.4, 20.7, 102.9, 214.0)],
)
def test_a_foam_sandwich_weighs_what_its_foam_cloth_and_resin_did(
    foam: float, cloth: float, resin: float, whole: float
) -> None:
    materials = {
        "foam": Material(
            name="foam",
            kind=MaterialKind.CORE,
            density_kg_m3=foam / 1000.0 / (SQUARE_FOOT_M2 * INCH_M),
            thickness_m=INCH_M,
        ),
        "cloth": Material(
            name="cloth", kind=MaterialKind.FABRIC, areal_mass_kg_m2=cloth / 2000.0 / SQUARE_FOOT_M2
        ),
    }
    share = resin / (cloth + resin)
    face = (Step(number=number, material="cloth", resin_fraction=share) for number in (1, 3))
    steps = (next(face), Step(number=2, material="foam"), next(face))
    areal = laminate_areal_mass(Laminate(name="test piece", steps=steps), materials)
    assert areal is not None
    # The article's own figures add up to a tenth of a gram.
    assert 1000.0 * areal * SQUARE_FOOT_M2 == pytest.approx(whole, abs=0.05)


def test_a_roll_of_prepreg_at_the_limits_of_its_acceptance() -> None:
    # checks: NCAMP NMS 451/11 (read): resin 32 +-3 % each roll, fibre 145 +-7 g/m2
    nominal, light, heavy = (
        1000.0 * ply_areal_mass(fibre / 1000.0, share)
        for fibre, share in ((145.0, 0.32), (138.0, 0.29), (152.0, 0.35))
    )
    # checks: 213.24 g/m2 (computed)
    assert nominal == pytest.approx(213.24, abs=5e-3)
    assert light == pytest.approx(138.0 / 0.71, rel=1e-12)
    assert heavy == pytest.approx(152.0 / 0.65, rel=1e-12)


def test_half_a_millimetre_of_tank_sealant_weighs_775_grams_a_square_metre() -> None:
    # checks: polysulfide 1.55 g/cm3 (data sheet to AMS-S-8802, read): 0.5 mm coat 775 g/m2
    sealant = Material(
        name="polysulfide", kind=MaterialKind.SEALANT, density_kg_m3=1550.0, thickness_m=0.0005
    )
    assert dry_areal_mass(sealant) == pytest.approx(0.775, rel=1e-12)


@pytest.mark.parametrize(
    ("section_m2", "grams_a_metre"),
    # checks: at 1.15 g/cm3 (memory): fillets of 6 mm, hollow 0.2146 r2 8.88 and flat 0.5 r2 20.7 g/m;
    # a bond line of 25 x 0.5 mm 14.4 g/m
    [((1.0 - math.pi / 4.0) * 0.006**2, 8.88), (0.5 * 0.006**2, 20.7), (0.025 * 0.0005, 14.4)],
)
def test_fillets_and_bond_lines_weigh_their_section(section_m2: float, grams_a_metre: float) -> None:
    paste = Material(name="paste", kind=MaterialKind.PASTE, density_kg_m3=1150.0, thickness_m=section_m2)
    # A metre of section is a square metre of that thickness, one metre wide.
    per_metre = dry_areal_mass(paste)
    assert per_metre is not None
    assert 1000.0 * per_metre == pytest.approx(grams_a_metre, rel=3e-3)
