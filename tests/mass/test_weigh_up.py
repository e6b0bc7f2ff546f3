"""What pieces, parts and the wing weigh, from plan, entries and weighings."""

from __future__ import annotations

from dataclasses import replace
from typing import Any

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from ledger.mass.charges import charges
from ledger.mass.report import PartMass
from ledger.mass.weigh_up import weigh_up
from ledger.model.acts import Bond, BuildUp, Coat, Cut, Fit, Lay, Scrap, Trim, Weigh
from ledger.model.plan import Form, Material, MaterialKind, PartClass
from ledger.model.tanks import Cell, Tank, Tanks
from ledger.model.things import KeptOffcut, Minted, Share, ThingKind

PLY_KG = 1.5 * 0.4
SKIN_KG = 6 * PLY_KG


def lay(step: int, *, lot: str = "LT", piece: str = "SKIN/1", **more: Any) -> Lay:
    return Lay(piece=piece, step=step, lots=(Share(what=lot),), **more)


def lay_all(shop: Any, *steps: int) -> None:
    for step in steps or range(1, 7):
        shop.log(lay(step))


def weigh(what: str, *readings: float, **more: Any) -> Weigh:
    return Weigh(what=what, reading_kg=readings, scale="W1", **more)


def as_tuple(part: PartMass) -> tuple[float | None, ...]:
    return (part.estimated_kg, part.calculated_kg, part.actual_kg, part.best_kg)


# -- estimated -----------------------------------------------------------------------------------


def test_a_plan_alone_weighs_what_its_geometry_and_materials_give(shop: Any) -> None:
    total = shop.weights().total
    assert total.estimated_kg == pytest.approx(SKIN_KG + 0.3 + 0.15 + 3 * 0.05 + 0.25, rel=1e-12)
    assert total.best_kg == pytest.approx(total.estimated_kg, rel=1e-12)
    assert (total.calculated_kg, total.actual_kg) == (None, None)
    assert (total.built_kg, total.share_estimated) == (0.0, pytest.approx(1.0))


def test_the_planned_mass_stands_before_geometry(make: Any) -> None:
    rib = make.part("RIB", Form.PANEL, "bought", PartClass.RIB, planned_mass_kg=0.35)
    part = make.shop(make.plan((rib, make.shape(0.2)))).part("RIB")
    assert as_tuple(part) == (0.35, None, None, 0.35)


def test_quantity_multiplies_a_part_in_one_place(make: Any) -> None:
    rib = make.part("RIB", Form.PANEL, "bought", PartClass.RIB, quantity=3)
    shop = make.shop(make.plan((rib, make.shape(0.2))))
    shop.sheet("S1", "bought", 2.0, 1.0, mass_kg=3.4)
    shop.log(Cut(pieces=("RIB/1", "RIB/2"), sheet="S1"))
    part = shop.part("RIB")
    assert as_tuple(part) == pytest.approx((0.9, 2 * 0.34, None, 2 * 0.34 + 0.3))
    assert part.state == "planned"
    assert part.area_m2 == 0.2
    assert [piece.state for piece in part.pieces] == ["open", "open", "planned"]


def test_a_part_without_the_figure_it_needs_has_no_mass_and_a_finding(make: Any) -> None:
    bare = Material(name="bare", kind=MaterialKind.SOLID)
    plan = make.plan(
        (make.part("BLOCK", Form.SOLID, "bare", PartClass.FITTING), make.shape(0.001)),
        (make.part("PIN", Form.ITEM, None, PartClass.FITTING, planned_mass_kg=0.2), make.shape(1.0)),
        materials=(*make.materials, bare),
    )
    report = make.shop(plan).weights()
    assert as_tuple(report.parts[0]) == (None, None, None, None)
    assert [one.thing for one in report.unknowns] == ["BLOCK"]
    assert report.total.best_kg == 0.2


def test_a_part_without_a_shape_counts_in_mass_but_not_in_place(make: Any) -> None:
    plan = make.plan(
        (make.part("A", Form.ITEM, None, PartClass.FITTING, planned_mass_kg=0.2), make.shape(1, (1, 2, 3))),
        (make.part("B", Form.ITEM, None, PartClass.FITTING, planned_mass_kg=0.3), make.shape(1)),
    )
    report = make.shop(replace(plan, shapes=plan.shapes[:1])).weights()
    assert report.total.best_kg == pytest.approx(0.5)
    assert report.total.cg_m == pytest.approx((1, 2, 3))
    assert [one.thing for one in report.unknowns] == ["B"]


# -- calculated ----------------------------------------------------------------------------------


def test_one_ply_of_six_logged_does_not_make_the_skin_a_sixth(shop: Any) -> None:
    lay_all(shop, 1)
    part = shop.part("SKIN")
    assert as_tuple(part) == pytest.approx((SKIN_KG, SKIN_KG, None, SKIN_KG))
    assert part.built_kg == pytest.approx(PLY_KG)
    assert part.pieces[0].expected_kg == pytest.approx(PLY_KG)


def test_a_ply_counts_as_left_out_only_once_the_piece_is_finished(shop: Any, make: Any) -> None:
    lay_all(shop, 1, 2, 3, 4, 5)
    assert shop.part("SKIN").calculated_kg == pytest.approx(SKIN_KG)
    shop.log(Fit(piece="SKIN/1", into="WING/LEFT/skins"))
    part = shop.part("SKIN")
    assert part.calculated_kg == pytest.approx(5 * PLY_KG)
    assert make.causes(part)["plies"] == pytest.approx(-PLY_KG)


def test_the_lot_really_used_gives_the_ply_its_mass(shop: Any) -> None:
    shop.receive("LX", "twill", areal_mass_kg_m2=0.21)
    shop.log(lay(1, lot="LX"))
    assert shop.part("SKIN").built_kg == pytest.approx(1.5 * 0.42)


def test_stated_grams_of_cloth_and_of_a_cup_stand_before_areas(shop: Any) -> None:
    shop.mix("B1", 0.4, 0.1)
    shop.log(
        Lay(
            piece="SKIN/1",
            step=1,
            lots=(Share(what="LT", mass_kg=0.31),),
            batches=(Share(what="B1", mass_kg=0.28),),
        )
    )
    assert shop.part("SKIN").built_kg == pytest.approx(0.59)


def test_a_piece_cut_from_a_weighed_sheet_has_the_sheets_own_areal_mass(shop: Any) -> None:
    shop.sheet("S1", "bought", 2.0, 1.0, mass_kg=3.2)
    shop.log(Cut(pieces=("RIB.1/1",), sheet="S1"))
    assert shop.part("RIB.1").built_kg == pytest.approx(0.2 * 1.6)


def test_a_piece_cut_from_an_offcut_has_the_areal_mass_of_the_whole_sheet(shop: Any) -> None:
    shop.sheet("S1", "bought", 2.0, 1.0, mass_kg=3.2)
    kept = Minted(kind=ThingKind.OFFCUT, number="F1", name="F1")
    shop.log(
        Cut(pieces=("RIB.1/1",), sheet="S1", offcut=KeptOffcut(length_m=1.0, width_m=1.0), minted=(kept,))
    )
    shop.log(Cut(pieces=("RIB.2/1",), sheet="F1"))
    assert shop.part("RIB.2").built_kg == pytest.approx(0.1 * 1.6)


def test_a_sheet_never_weighed_has_the_areal_mass_of_the_lots_it_was_made_from(make: Any) -> None:
    rib = make.part("RIB", Form.PANEL, "sandwich", PartClass.RIB)
    shop = make.shop(make.plan((rib, make.shape(0.5))))
    shop.receive("LC", "foam", density_kg_m3=66.0)
    shop.sheet("S1", "sandwich", 2.0, 1.0, lots=("LC",))
    shop.log(Cut(pieces=("RIB/1",), sheet="S1"))
    faces = 2 * 0.2 / 0.6
    assert shop.part("RIB").built_kg == pytest.approx(0.5 * (faces + 0.66 + 0.3))


def test_faces_laid_on_a_core_cut_from_a_sheet_are_counted_once(make: Any) -> None:
    core_sheet = replace(make.laminates[1], name="core sheet", steps=make.laminates[1].steps[1:2])
    rib = make.part("RIB", Form.PANEL, "sandwich", PartClass.RIB)
    shop = make.shop(make.plan((rib, make.shape(0.5)), laminates=(*make.laminates, core_sheet)))
    shop.receive("LT", "twill")
    shop.sheet("S1", "core sheet", 2.0, 1.0, mass_kg=2.0)
    shop.log(Cut(pieces=("RIB/1",), sheet="S1"))
    shop.log(lay(1, piece="RIB/1"))
    part = shop.part("RIB")
    assert part.calculated_kg == pytest.approx(0.5 * (1.0 + 2 * 0.2 / 0.6))
    assert part.built_kg == pytest.approx(0.5 * (1.0 + 0.2 / 0.6))
    assert shop.weights().plies == ()


def test_planned_adhesive_is_replaced_by_what_was_logged_not_added_to(shop: Any, make: Any) -> None:
    shop.mix("B1", 0.4, 0.1)
    shop.log(Bond(pieces=("JOINT/1", "RIB.1/1"), batches=(Share(what="B1", mass_kg=0.12),)))
    part = shop.part("JOINT")
    assert as_tuple(part) == pytest.approx((0.15, 0.12, None, 0.12))
    assert make.causes(part)["bond_coat"] == pytest.approx(-0.03)


def test_adhesive_bonded_over_part_of_a_joint_leaves_the_rest_planned(shop: Any) -> None:
    shop.mix("B1", 0.4, 0.1)
    shop.log(Bond(pieces=("JOINT/1",), batches=(Share(what="B1"),), mass_kg=0.06, length_m=1.0))
    assert shop.part("JOINT").calculated_kg == pytest.approx(0.06 + 2.0 * 0.05)


def test_the_adhesive_of_a_bond_belongs_to_the_first_piece_named(shop: Any) -> None:
    shop.mix("B1", 0.4, 0.1)
    shop.sheet("S1", "bought", 2.0, 1.0)
    shop.log(Cut(pieces=("RIB.1/1", "RIB.2/1"), sheet="S1"))
    shop.log(Bond(pieces=("RIB.1/1", "RIB.2/1"), batches=(Share(what="B1"),), mass_kg=0.02))
    assert shop.part("RIB.1").best_kg == pytest.approx(0.32)
    assert shop.part("RIB.2").best_kg == pytest.approx(0.15)


def test_a_bond_with_no_grams_and_none_planned_counts_nothing_and_says_so(shop: Any) -> None:
    shop.mix("B1", 0.4, 0.1)
    shop.sheet("S1", "bought", 2.0, 1.0)
    shop.log(Cut(pieces=("RIB.1/1",), sheet="S1"))
    seq = shop.log(Bond(pieces=("RIB.1/1",), batches=(Share(what="B1"),)))
    assert shop.part("RIB.1").best_kg == pytest.approx(0.3)
    assert [one.seq for one in shop.weights().unknowns] == [seq]


def test_scrapped_pieces_count_nothing_and_the_next_one_does(shop: Any) -> None:
    shop.sheet("S1", "bought", 2.0, 1.0, mass_kg=3.2)
    shop.log(Cut(pieces=("RIB.1/1",), sheet="S1"))
    shop.log(Scrap(what="RIB.1/1", why="dropped"))
    assert as_tuple(shop.part("RIB.1")) == pytest.approx((0.3, None, None, 0.3))
    shop.log(Cut(pieces=("RIB.1/2",), sheet="S1"))
    part = shop.part("RIB.1")
    assert part.best_kg == pytest.approx(0.32)
    assert [piece.state for piece in part.pieces] == ["scrapped", "open"]


def test_the_laminate_of_the_iteration_a_piece_was_begun_under_is_the_one_it_has(make: Any) -> None:
    first = make.plan(*make.standard_parts())
    skin, _ = make.standard_parts()[0]
    bigger = make.plan((skin, make.shape(1.6, digest="s2")), *make.standard_parts()[1:], name="r2")
    shop = make.shop(first)
    shop.receive("LT", "twill")
    shop.log(lay(1))
    shop.adopt(bigger)
    part = shop.part("SKIN")
    assert as_tuple(part) == pytest.approx((1.6 * 2.4, SKIN_KG, None, SKIN_KG))
    assert make.causes(part)["geometry"] == pytest.approx(-0.1 * 2.4)


# -- best ----------------------------------------------------------------------------------------


def test_a_trim_and_a_build_up_after_a_weighing_move_best_by_exactly_their_masses(shop: Any) -> None:
    lay_all(shop)
    shop.log(weigh("SKIN/1", 3.7, state="finished"))
    assert shop.part("SKIN").best_kg == 3.7
    shop.log(Trim(piece="SKIN/1", mass_kg=0.04, why="sanding"))
    shop.log(BuildUp(piece="SKIN/1", mass_kg=0.015, lot="LT", why="filler"))
    part = shop.part("SKIN")
    assert part.best_kg == pytest.approx(3.7 - 0.04 + 0.015, abs=1e-12)
    assert part.actual_kg == 3.7
    assert part.pieces[0].expected_kg == part.best_kg


def test_a_trim_by_area_takes_everything_there_with_it(shop: Any) -> None:
    lay_all(shop)
    shop.log(Trim(piece="SKIN/1", area_m2=0.1, why="edge"))
    assert shop.part("SKIN").best_kg == pytest.approx(SKIN_KG - 0.1 * 2.4)


def test_readings_are_averaged_and_tare_and_what_was_only_present_come_off(shop: Any) -> None:
    present = (Share(what="peel ply", mass_kg=0.1), Share(what="jig", mass_kg=1.0))
    shop.log(weigh("SKIN/1", 4.98, 5.02, tare_kg=0.2, present=present))
    assert shop.part("SKIN").actual_kg == pytest.approx(5.0 - 0.2 - 1.1)


def test_peel_ply_left_on_weighs_its_areal_mass_where_no_grams_were_said(make: Any) -> None:
    rib = make.part("RIB", Form.PANEL, "sandwich", PartClass.RIB)
    shop = make.shop(make.plan((rib, make.shape(0.5))))
    shop.log(Weigh(what="RIB/1", reading_kg=(1.0,), present=(Share(what="peel ply"),)))
    assert shop.part("RIB").actual_kg == pytest.approx(1.0 - 0.5 * 0.085)


def test_something_present_of_unknown_mass_is_said_to_be_in_the_reading(shop: Any) -> None:
    seq = shop.log(weigh("SKIN/1", 5.0, present=(Share(what="jig"),)))
    assert [one.seq for one in shop.weights().unknowns] == [seq]


def test_a_later_weighing_supersedes_an_earlier_one(shop: Any) -> None:
    shop.log(weigh("SKIN/1", 3.7))
    shop.log(Trim(piece="SKIN/1", mass_kg=0.04, why="sanding"))
    shop.log(weigh("SKIN/1", 3.65))
    assert shop.part("SKIN").best_kg == 3.65


def test_a_trim_entered_late_with_its_true_time_before_the_weighing_is_not_taken_off_again(
    shop: Any,
) -> None:
    shop.log(weigh("SKIN/1", 3.7), minute=100)
    shop.log(Trim(piece="SKIN/1", mass_kg=0.04, why="sanding"), minute=90)
    assert shop.part("SKIN").best_kg == pytest.approx(3.7)


def test_a_weighing_never_changes_the_resin_of_a_ply(shop: Any) -> None:
    shop.mix("B1", 0.4, 0.1, residue_kg=0.1)
    shop.log(lay(1, batches=(Share(what="B1"),)))
    before = charges(shop.snapshot())
    shop.log(weigh("SKIN/1", 9.9))
    assert charges(shop.snapshot()) == before


def test_actual_of_a_part_is_null_until_all_its_pieces_are_weighed(make: Any) -> None:
    pin = make.part("PIN", Form.ITEM, None, PartClass.FITTING, planned_mass_kg=0.2, quantity=2)
    shop = make.shop(make.plan((pin, make.shape(1.0))))
    shop.log(Weigh(what="PIN/1", reading_kg=(0.21,)))
    assert shop.part("PIN").actual_kg is None
    assert shop.part("PIN").best_kg == pytest.approx(0.41)
    assert shop.weights().total.actual_kg == 0.21
    shop.log(Weigh(what="PIN/2", reading_kg=(0.22,)))
    assert shop.part("PIN").actual_kg == pytest.approx(0.43)


# -- coats in cells ------------------------------------------------------------------------------


def test_a_coat_in_a_cell_counts_in_the_tanks_assembly_and_in_the_wing(make: Any) -> None:
    tanks = Tanks(tanks=(Tank(name="left", cells=("L1",)),), cells=(Cell(name="L1", mesh="m"),))
    shop = make.shop(make.plan(*make.standard_parts(), tanks=tanks))
    shop.receive("LS", "sealant")
    before = shop.weights()
    shop.log(Coat(cell="L1", lot="LS", mass_kg=0.4))
    after = shop.weights()
    assert after.total.best_kg - before.total.best_kg == pytest.approx(0.4)
    assert after.total.cg_m == pytest.approx(before.total.cg_m)
    weights = {node.path: node.best_kg for node in after.assemblies}
    was = {node.path: node.best_kg for node in before.assemblies}
    assert weights["WING/LEFT"] - was["WING/LEFT"] == pytest.approx(0.4)
    assert weights["WING/LEFT/ribs"] == was["WING/LEFT/ribs"]
    assert after.parts[-1].part == "coats in L1"
    assert sum(part.best_kg or 0.0 for part in after.parts) == pytest.approx(after.total.best_kg)


def test_a_coat_in_a_cell_of_known_place_pulls_the_cg_to_it(make: Any) -> None:
    pin = make.part("PIN", Form.ITEM, None, PartClass.FITTING, planned_mass_kg=1.0)
    shop = make.shop(make.plan((pin, make.shape(1.0, (0.0, 0.0, 0.0)))))
    shop.receive("LS", "sealant")
    shop.log(Coat(cell="L1", lot="LS", mass_kg=1.0))
    report = weigh_up(shop.snapshot(), {"L1": (2.0, 4.0, 0.0)})
    assert report.total.cg_m == pytest.approx((1.0, 2.0, 0.0))


# -- invariants ----------------------------------------------------------------------------------

_STEPS = st.lists(
    st.sampled_from(["lay", "trim", "build", "weigh", "coat", "cut", "fit"]), min_size=1, max_size=25
)


def _act(word: str, number: int) -> Any:
    amount = 0.001 * (number + 1)
    return {
        "lay": lay(number % 6 + 1, batches=(Share(what="B1"),)),
        "trim": Trim(piece="SKIN/1", mass_kg=amount, why="sand"),
        "build": BuildUp(piece="RIB.1/1", mass_kg=amount, batch="B1"),
        "weigh": weigh(("SKIN/1", "RIB.1/1", "WING/LEFT")[number % 3], 3.0 + amount),
        "coat": Coat(piece="RIB.2/1", batch="B1", mass_kg=amount),
        "cut": Cut(pieces=("RIB.1/1", "RIB.2/1"), sheet="S1"),
        "fit": Fit(piece=("SKIN/1", "RIB.1/1")[number % 2], into="WING/LEFT/ribs"),
    }[word]


@settings(max_examples=60, deadline=None)
@given(words=_STEPS)
def test_causes_add_to_best_less_estimated_for_every_piece_part_and_assembly(make: Any, words: Any) -> None:
    shop = make.shop(make.plan(*make.standard_parts()))
    shop.receive("LT", "twill", areal_mass_kg_m2=0.207)
    shop.receive("LR", "resin")
    shop.receive("LH", "hardener")
    shop.scale("W1", 0.001, 0.002)
    shop.mix("B1", 0.9, 0.225, residue_kg=0.05)
    shop.sheet("S1", "bought", 2.0, 1.0, mass_kg=3.2)
    for number, word in enumerate(words):
        shop.log(_act(word, number))
    report = shop.weights()
    records: list[Any] = [*report.parts, *report.assemblies]
    records += [piece for part in report.parts for piece in part.pieces]
    for record in records:
        off = sum(one.mass_kg for one in record.off_plan)
        assert off == pytest.approx(record.best_kg - record.estimated_kg, abs=1e-9)
    total = sum(one.mass_kg for one in report.off_plan)
    assert total == pytest.approx(report.total.best_kg - report.total.estimated_kg, abs=1e-9)
    assert report.total.best_kg == pytest.approx(sum(part.best_kg or 0.0 for part in report.parts))
    assert report.total.best_u_kg >= 0.0


@settings(max_examples=30, deadline=None)
@given(order=st.permutations(range(1, 7)))
def test_the_order_in_which_plies_of_one_cup_are_logged_does_not_matter(make: Any, order: Any) -> None:
    def weighed(steps: Any) -> Any:
        shop = make.shop(make.plan(*make.standard_parts()))
        shop.receive("LT", "twill")
        shop.mix("B1", 1.6, 0.4, residue_kg=0.05)
        for step in steps:
            shop.log(lay(step, batches=(Share(what="B1"),)))
        return shop.part("SKIN")

    one, other = weighed(range(1, 7)), weighed(order)
    assert other.best_kg == pytest.approx(one.best_kg, rel=1e-12)
    assert other.best_u_kg == pytest.approx(one.best_u_kg, rel=1e-12)
