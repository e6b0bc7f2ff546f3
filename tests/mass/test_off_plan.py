"""Planted causes come back one by one."""

from __future__ import annotations

from dataclasses import replace
from typing import Any

import pytest

from ledger.mass.report import CAUSES
from ledger.model.acts import Bond, BuildUp, Coat, Cut, Fit, Lay, Trim, Weigh
from ledger.model.plan import Form, Material, MaterialKind, PartClass
from ledger.model.things import Share

PLY_KG = 0.6
SKIN_KG = 3.6


@pytest.fixture
def skin(shop: Any) -> Any:
    """A shop in which a skin can be laid with one cause planted."""

    def build(
        *, areas: float | None = None, lot: str = "LT", leave_out: int = 0, grams: float | None = None
    ) -> Any:
        shop.mix("B1", 4.0, 1.0)
        for step in range(1, 7):
            if step != leave_out:
                shop.log(
                    Lay(
                        piece="SKIN/1",
                        step=step,
                        lots=(Share(what=lot),),
                        batches=(Share(what="B1", mass_kg=grams),),
                        area_m2=areas,
                    )
                )
        shop.log(Fit(piece="SKIN/1", into="WING/LEFT/skins"))
        return shop

    return build


def only(causes: dict[str, float], cause: str, mass_kg: float) -> None:
    """One cause has that mass and every other none."""
    expected = dict.fromkeys(CAUSES, 0.0) | {cause: mass_kg}
    assert causes == pytest.approx(expected, abs=1e-12)


def test_an_area_two_percent_over_is_geometry(skin: Any, make: Any) -> None:
    only(make.causes(skin(areas=1.53).part("SKIN")), "geometry", 0.02 * SKIN_KG)


def test_a_heavy_lot_of_cloth_is_stock(shop: Any, skin: Any, make: Any) -> None:
    shop.receive("LX", "twill", areal_mass_kg_m2=0.206)
    only(make.causes(skin(lot="LX").part("SKIN")), "stock", 0.03 * SKIN_KG)


def test_a_heavy_sheet_is_stock(shop: Any, make: Any) -> None:
    shop.sheet("S1", "bought", 2.0, 1.0, mass_kg=3.3)
    shop.log(Cut(pieces=("RIB.1/1",), sheet="S1"))
    only(make.causes(shop.part("RIB.1")), "stock", 0.2 * 0.15)


def test_a_missing_ply_is_plies(skin: Any, make: Any) -> None:
    only(make.causes(skin(leave_out=3).part("SKIN")), "plies", -PLY_KG)


def test_a_ply_laid_twice_is_plies(shop: Any, skin: Any, make: Any) -> None:
    built = skin()
    shop.log(Lay(piece="SKIN/1", step=4, lots=(Share(what="LT"),), batches=(Share(what="B1"),)))
    only(make.causes(built.part("SKIN")), "plies", PLY_KG)


def test_a_ply_laid_in_two_cloths_is_one_ply(shop: Any, make: Any) -> None:
    for area in (0.7, 0.8):
        shop.log(Lay(piece="SKIN/1", step=1, lots=(Share(what="LT"),), area_m2=area))
    only(make.causes(shop.part("SKIN")), "plies", 0.0)
    assert shop.weights().plies == ()


def test_wet_plies_are_resin(skin: Any, make: Any) -> None:
    only(make.causes(skin(grams=0.35).part("SKIN")), "resin", 6 * 0.05)


def test_sanding_is_trim_and_repair(shop: Any, skin: Any, make: Any) -> None:
    built = skin()
    shop.log(Trim(piece="SKIN/1", mass_kg=0.05, why="sanding"))
    shop.log(BuildUp(piece="SKIN/1", mass_kg=0.02, lot="LT", why="filler"))
    only(make.causes(built.part("SKIN")), "trim_repair", -0.03)


def test_paint_is_bond_and_coat(shop: Any, skin: Any, make: Any) -> None:
    built = skin()
    shop.log(Coat(piece="SKIN/1", lot="LR", areal_mass_kg_m2=0.1))
    only(make.causes(built.part("SKIN")), "bond_coat", 0.15)


def test_what_a_scale_says_beyond_the_entries_is_unexplained(shop: Any, skin: Any, make: Any) -> None:
    built = skin()
    shop.log(Weigh(what="SKIN/1", reading_kg=(3.8,), scale="W1"))
    only(make.causes(built.part("SKIN")), "unexplained", 3.8 - SKIN_KG)


def test_a_planned_mass_that_geometry_does_not_bear_out_is_planning(make: Any) -> None:
    rib = make.part("RIB", Form.PANEL, "bought", PartClass.RIB, planned_mass_kg=0.35)
    shop = make.shop(make.plan((rib, make.shape(0.2))))
    only(make.causes(shop.part("RIB")), "planning", 0.0)
    shop.sheet("S1", "bought", 2.0, 1.0, mass_kg=3.0)
    shop.log(Cut(pieces=("RIB/1",), sheet="S1"))
    only(make.causes(shop.part("RIB")), "planning", -0.05)


def test_causes_are_taken_each_at_the_values_already_substituted(shop: Any, skin: Any, make: Any) -> None:
    shop.receive("LX", "twill", areal_mass_kg_m2=0.22)
    causes = make.causes(skin(areas=1.65, lot="LX", leave_out=6).part("SKIN"))
    assert causes["geometry"] == pytest.approx(5 * 0.15 * 0.4)
    assert causes["stock"] == pytest.approx(5 * 1.65 * 0.04)
    assert causes["plies"] == pytest.approx(-1.5 * 0.4)
    assert sum(causes.values()) == pytest.approx(5 * 1.65 * 0.44 - SKIN_KG)


def test_a_coat_stands_for_the_planned_step_of_the_same_material(make: Any) -> None:
    painted = replace(
        make.laminates[1],
        name="painted",
        steps=(
            *make.laminates[0].steps[:1],
            replace(make.laminates[1].steps[1], number=2, material="sealant"),
        ),
    )
    part = make.part("SKIN", Form.SKIN, "painted", PartClass.SKIN)
    shop = make.shop(make.plan((part, make.shape(1.0)), laminates=(painted,)))
    shop.receive("LT", "twill")
    shop.receive("LS", "sealant")
    shop.log(Lay(piece="SKIN/1", step=1, lots=(Share(what="LT"),)))
    assert shop.part("SKIN").calculated_kg == pytest.approx(0.4 + 0.8)
    shop.log(Coat(piece="SKIN/1", lot="LS", mass_kg=0.9))
    part_now = shop.part("SKIN")
    assert part_now.calculated_kg == pytest.approx(0.4 + 0.9)
    only(make.causes(part_now), "bond_coat", 0.1)


def test_adhesive_on_a_metal_strip_adds_to_the_strip(make: Any) -> None:
    strip = Material(name="strip", kind=MaterialKind.SOLID, linear_mass_kg_m=0.2)
    run = make.part("HINGE", Form.RUN, "strip", PartClass.JOINT)
    shop = make.shop(make.plan((run, make.shape(2.0)), materials=(*make.materials, strip)))
    shop.receive("LR", "resin")
    shop.receive("LH", "hardener")
    shop.mix("B1", 0.4, 0.1)
    shop.log(Bond(pieces=("HINGE/1",), batches=(Share(what="B1"),), mass_kg=0.03))
    assert shop.part("HINGE").best_kg == pytest.approx(0.43)
    only(make.causes(shop.part("HINGE")), "bond_coat", 0.03)
