"""Each rule about masses, cups and stock: where it speaks and where it is silent."""

from __future__ import annotations

from datetime import date
from typing import Any

import pytest

from ledger.checks.batch_account_short import batch_account_short
from ledger.checks.bonded_without_peel_ply_recorded import bonded_without_peel_ply_recorded
from ledger.checks.cut_turned import cut_turned
from ledger.checks.fabric_wet_with_paste import fabric_wet_with_paste
from ledger.checks.facts import Facts, Rule
from ledger.checks.held_used import held_used
from ledger.checks.instrument_out_of_calibration import instrument_out_of_calibration
from ledger.checks.lot_expired import lot_expired
from ledger.checks.mass_off_plan import mass_off_plan
from ledger.checks.mass_unknown import mass_unknown
from ledger.checks.mix_ratio_out import mix_ratio_out
from ledger.checks.mix_ratio_out_used import mix_ratio_out_used
from ledger.checks.mix_ratio_unprovable import mix_ratio_unprovable
from ledger.checks.peel_ply_not_said import peel_ply_not_said
from ledger.checks.ply_missing import ply_missing
from ledger.checks.ply_not_in_plan import ply_not_in_plan
from ledger.checks.ply_of_other_material import ply_of_other_material
from ledger.checks.ply_out_of_order import ply_out_of_order
from ledger.checks.ply_twice import ply_twice
from ledger.checks.ply_wrong_way import ply_wrong_way
from ledger.checks.pot_life_exceeded import pot_life_exceeded
from ledger.checks.readings_disagree import readings_disagree
from ledger.checks.resin_share_far_off import resin_share_far_off
from ledger.checks.sheet_over_cut import sheet_over_cut
from ledger.checks.weighed_before_last_ply import weighed_before_last_ply
from ledger.checks.weighed_with_nothing_fitted import weighed_with_nothing_fitted
from ledger.checks.weighed_with_things_missing import weighed_with_things_missing
from ledger.model.acts import Bond, BuildUp, Coat, Cut, Fit, Hold, Lay, Release, Scrap, Trim, Weigh
from ledger.model.plan import Form, PartClass, Side
from ledger.model.things import KeptOffcut, Minted, Share, ThingKind


def say(shop: Any, rule: Rule) -> list[tuple[str, str | None, int | None]]:
    """What a rule says: severity, thing and entry of each finding."""
    snapshot = shop.snapshot()
    findings = rule(Facts(snapshot=snapshot, weights=shop.weights(), fuel=None))
    for finding in findings:
        assert finding.what
        assert finding.do
        assert rule.__module__.endswith("." + finding.code.replace("-", "_"))
    return [(one.severity.value, one.where.thing, one.where.entry) for one in findings]


def lay(step: int, piece: str = "SKIN/1", **more: Any) -> Lay:
    more = {"lots": (Share(what="LT"),)} | more
    return Lay(piece=piece, step=step, **more)


def weigh(what: str, *readings: float, **more: Any) -> Weigh:
    return Weigh(what=what, reading_kg=readings, **({"scale": "W1"} | more))


def cut(*pieces: str, **more: Any) -> Cut:
    return Cut(pieces=pieces, **({"sheet": "S1"} | more))


def bond(*pieces: str, **more: Any) -> Bond:
    return Bond(pieces=pieces, batches=(Share(what="B1", mass_kg=0.02),), **more)


# -- cups ----------------------------------------------------------------------------------------


def test_a_mix_proved_out_stops_and_one_proved_in_does_not(shop: Any) -> None:
    shop.scale("W2", 0.0001, 0.0001)
    good = shop.mix("B1", 0.4, 0.1, scale="W2")
    bad = shop.mix("B2", 0.4, 0.13, scale="W2")
    assert good < bad
    assert say(shop, mix_ratio_out) == [("stop", "B2", bad)]
    assert say(shop, mix_ratio_unprovable) == []


def test_a_small_cup_on_a_coarse_scale_cannot_be_told(shop: Any) -> None:
    seq = shop.mix("B1", 0.1, 0.025, scale="W1")
    assert say(shop, mix_ratio_unprovable) == [("look", "B1", seq)]
    assert say(shop, mix_ratio_out) == []


def test_a_mix_with_no_tolerance_declared_cannot_be_told(shop: Any) -> None:
    seq = shop.mix("B1", 4.0, 1.0, resin_lot="LT", hardener_lot="LT", scale="W1")
    assert say(shop, mix_ratio_unprovable) == [("look", "B1", seq)]


def test_a_cup_is_past_its_pot_life_only_when_it_is(shop: Any) -> None:
    shop.log(weigh("PIN/1", 0.2))
    mixed = shop.mix("B1", 0.4, 0.1)
    shop.log(lay(1, batches=(Share(what="B1"),)), minute=mixed + 30)
    assert say(shop, pot_life_exceeded) == []
    late = shop.log(lay(2, batches=(Share(what="B1"),)), minute=mixed + 31)
    assert say(shop, pot_life_exceeded) == [("stop", "B1", late)]


def test_the_pot_life_of_a_lot_stands_before_the_materials(shop: Any) -> None:
    shop.receive("LQ", "resin", pot_life_s=600.0)
    mixed = shop.mix("B1", 0.4, 0.1, resin_lot="LQ")
    late = shop.log(Coat(piece="RIB.1/1", batch="B1", mass_kg=0.01), minute=mixed + 11)
    assert say(shop, pot_life_exceeded) == [("stop", "B1", late)]


def test_more_used_than_mixed_is_short(shop: Any) -> None:
    seq = shop.mix("B1", 0.08, 0.02)
    shop.log(lay(1, batches=(Share(what="B1", mass_kg=0.09),)))
    assert say(shop, batch_account_short) == []
    shop.log(BuildUp(piece="SKIN/1", batch="B1", mass_kg=0.05))
    assert say(shop, batch_account_short) == [("look", "B1", seq)]


def test_an_account_that_makes_plies_impossibly_wet_is_looked_at(shop: Any) -> None:
    seq = shop.mix("B1", 0.8, 0.2, residue_kg=0.1)
    shop.log(lay(1, batches=(Share(what="B1"),)))
    assert say(shop, resin_share_far_off) == [("look", "B1", seq)]
    shop.log(lay(2, batches=(Share(what="B1"),)))
    shop.log(lay(3, batches=(Share(what="B1"),)))
    assert say(shop, resin_share_far_off) == []


def test_every_live_piece_and_cell_that_holds_a_bad_cup_stops(shop: Any) -> None:
    shop.scale("W2", 0.0001, 0.0001)
    shop.mix("B1", 0.4, 0.1, scale="W2")
    shop.mix("B2", 0.4, 0.13, scale="W2")
    shop.log(lay(1, batches=(Share(what="B1"),)))
    assert say(shop, mix_ratio_out_used) == []
    shop.log(lay(2, batches=(Share(what="B1"), Share(what="B2"))))
    shop.log(Coat(cell="L1", batch="B2", mass_kg=0.01))
    shop.log(BuildUp(piece="RIB.1/1", batch="B2", mass_kg=0.01))
    assert say(shop, mix_ratio_out_used) == [
        ("stop", "SKIN/1", None),
        ("stop", "L1", None),
        ("stop", "RIB.1/1", None),
    ]
    shop.log(Scrap(what="SKIN/1", why="wrong mix"))
    assert say(shop, mix_ratio_out_used) == [("stop", "L1", None), ("stop", "RIB.1/1", None)]


def test_a_fabric_wet_with_a_cup_of_paste_stops(shop: Any) -> None:
    shop.receive("LP", "paste")
    shop.mix("B1", 0.4, 0.1)
    shop.mix("B2", 0.4, 0.1, resin_lot="LP")
    shop.log(lay(1, batches=(Share(what="B1"),)))
    assert say(shop, fabric_wet_with_paste) == []
    seq = shop.log(lay(2, batches=(Share(what="B1"), Share(what="B2"))))
    assert say(shop, fabric_wet_with_paste) == [("stop", "SKIN/1", seq)]


# -- plies ---------------------------------------------------------------------------------------


def test_a_ply_is_missing_only_from_a_finished_piece(shop: Any) -> None:
    for step in (1, 2, 3, 5, 6):
        shop.log(lay(step))
    assert say(shop, ply_missing) == []
    shop.log(weigh("SKIN/1", 3.0, state="finished"))
    assert say(shop, ply_missing) == [("stop", "SKIN/1", None)]
    shop.log(lay(4))
    assert say(shop, ply_missing) == []


def test_a_step_laid_over_one_that_was_not_there_is_looked_at_once(shop: Any) -> None:
    shop.log(lay(1), minute=50)
    over = shop.log(lay(3), minute=52)
    shop.log(lay(4), minute=53)
    assert say(shop, ply_out_of_order) == [("look", "SKIN/1", over)]
    shop.log(lay(2), minute=54)
    assert say(shop, ply_out_of_order) == [("look", "SKIN/1", over)]


def test_a_step_entered_late_with_its_true_time_was_there(shop: Any) -> None:
    shop.log(lay(1), minute=50)
    shop.log(lay(3), minute=52)
    shop.log(lay(2), minute=51)
    assert say(shop, ply_out_of_order) == []


def test_peel_ply_not_logged_is_no_ply_missing(make: Any) -> None:
    shop = sandwich(make)
    for step in (1, 2, 3):
        shop.log(lay(step, "RIB/1"))
    shop.log(Fit(piece="RIB/1", into="WING/LEFT/ribs"))
    assert say(shop, ply_missing) == []


def test_a_ply_laid_again_is_twice_and_one_in_two_cloths_is_not(shop: Any) -> None:
    shop.log(lay(1, area_m2=0.7))
    shop.log(lay(1, area_m2=0.8))
    assert say(shop, ply_twice) == []
    shop.log(lay(2))
    again = shop.log(lay(2))
    assert say(shop, ply_twice) == [("look", "SKIN/1", again)]


def test_a_step_the_laminate_does_not_have_is_looked_at(shop: Any) -> None:
    shop.log(lay(6))
    assert say(shop, ply_not_in_plan) == []
    seq = shop.log(lay(7))
    assert say(shop, ply_not_in_plan) == [("look", "SKIN/1", seq)]


def test_a_ply_from_a_lot_of_another_material_is_looked_at(shop: Any) -> None:
    shop.receive("LF", "foam")
    shop.log(lay(1))
    assert say(shop, ply_of_other_material) == []
    seq = shop.log(lay(2, lots=(Share(what="LF"),)))
    assert say(shop, ply_of_other_material) == [("look", "SKIN/1", seq)]


def test_a_ply_at_the_other_hands_angle_is_the_wrong_way(shop: Any) -> None:
    shop.log(lay(1, orientation_deg=45.0))
    shop.log(lay(2, orientation_deg=180.0))
    shop.log(lay(3, orientation_deg=-90.0))
    shop.log(lay(4, orientation_deg=87.0))
    assert say(shop, ply_wrong_way) == []
    seq = shop.log(lay(6, orientation_deg=-45.0))
    assert say(shop, ply_wrong_way) == [("stop", "SKIN/1", seq)]


@pytest.mark.parametrize("both", [True, False])
def test_a_mirrored_part_wants_the_opposite_sign(make: Any, both: bool) -> None:
    left = make.part("S-L", Form.SKIN, "six", PartClass.SKIN, mirror_of="S-R" if both else None)
    right = make.part("S-R", Form.SKIN, "six", PartClass.SKIN, side=Side.RIGHT, mirror_of="S-L")
    shop = make.shop(make.plan((left, make.shape(1.0)), (right, make.shape(1.0))))
    shop.receive("LT", "twill")
    shop.log(lay(1, "S-L/1", orientation_deg=45.0))
    shop.log(lay(1, "S-R/1", orientation_deg=-45.0))
    assert say(shop, ply_wrong_way) == []
    seq = shop.log(lay(6, "S-R/1", orientation_deg=45.0))
    assert say(shop, ply_wrong_way) == [("stop", "S-R/1", seq)]


def test_a_skin_weighed_between_plies_is_known_not_to_hold_the_rest(shop: Any) -> None:
    shop.log(lay(1))
    assert say(shop, weighed_before_last_ply) == []
    shop.log(weigh("SKIN/1", 0.6))
    assert say(shop, weighed_before_last_ply) == [("look", "SKIN/1", None)]
    for step in range(2, 7):
        shop.log(lay(step))
    assert say(shop, weighed_before_last_ply) == []


# -- weighings -----------------------------------------------------------------------------------


def test_a_part_is_off_plan_only_beyond_tolerance_and_beyond_chance(make: Any) -> None:
    tolerances = ((PartClass.RIB, 0.05),)
    shop = make.shop(make.plan(*make.standard_parts(), tolerances=tolerances))
    shop.scale("W1", 0.001, 0.002)
    shop.scale("COARSE", 0.05, 0.05)
    shop.log(weigh("RIB.1/1", 0.312))
    shop.log(weigh("RIB.2/1", 0.17, scale="COARSE"))
    shop.log(weigh("SKIN/1", 9.0))
    assert say(shop, mass_off_plan) == []
    shop.log(weigh("RIB.2/1", 0.17))
    assert say(shop, mass_off_plan) == [("look", "RIB.2", None)]


def test_a_weighing_with_contents_missing_is_looked_at_until_it_is_made_complete(shop: Any) -> None:
    shop.log(Fit(piece="RIB.1/1", into="WING/LEFT/ribs"))
    shop.log(Fit(piece="RIB.2/1", into="WING/LEFT/ribs"))
    seq = shop.log(weigh("WING/LEFT/ribs", 0.3, missing=("RIB.2/1",)))
    assert say(shop, weighed_with_things_missing) == [("look", "WING/LEFT/ribs", seq)]
    shop.log(weigh("WING/LEFT/ribs", 0.45))
    assert say(shop, weighed_with_things_missing) == []


def test_an_assembly_weighed_with_nothing_fitted_is_looked_at(shop: Any) -> None:
    shop.log(Trim(piece="RIB.1/1", mass_kg=0.001, why="sand"))
    seq = shop.log(weigh("WING/LEFT/ribs", 0.3))
    assert say(shop, weighed_with_nothing_fitted) == [("look", "WING/LEFT/ribs", seq)]
    shop.log(Fit(piece="RIB.1/1", into="WING/LEFT/ribs"))
    shop.log(weigh("WING/LEFT/ribs", 0.3))
    assert say(shop, weighed_with_nothing_fitted) == []


def test_two_readings_a_step_apart_agree_and_two_further_apart_do_not(shop: Any) -> None:
    shop.log(weigh("SKIN/1", 3.600, 3.601))
    assert say(shop, readings_disagree) == []
    seq = shop.log(weigh("RIB.1/1", 0.300, 0.304))
    assert say(shop, readings_disagree) == [("look", "RIB.1/1", seq)]


def test_a_weighing_at_odds_with_the_one_before_disagrees_unless_an_entry_says_why(shop: Any) -> None:
    shop.log(weigh("SKIN/1", 3.600))
    shop.log(Trim(piece="SKIN/1", mass_kg=0.1, why="sand"))
    shop.log(weigh("SKIN/1", 3.500))
    assert say(shop, readings_disagree) == []
    seq = shop.log(weigh("SKIN/1", 3.450))
    assert say(shop, readings_disagree) == [("look", "SKIN/1", seq)]


def test_a_bagged_piece_is_weighed_with_a_word_about_its_peel_ply(make: Any) -> None:
    shop = sandwich(make)
    seq = shop.log(weigh("RIB/1", 1.0))
    assert say(shop, peel_ply_not_said) == [("look", "RIB/1", seq)]
    shop.log(weigh("RIB/1", 1.0, present=(Share(what="peel ply", mass_kg=0.0),)))
    assert say(shop, peel_ply_not_said) == []


def test_a_piece_with_no_peel_ply_planned_needs_no_word(shop: Any) -> None:
    shop.log(weigh("SKIN/1", 3.6))
    assert say(shop, peel_ply_not_said) == []


def test_an_instrument_is_out_of_calibration_the_day_after_it_was_due(shop: Any) -> None:
    shop.scale("W2", 0.001, due=date(2026, 3, 2))
    shop.scale("W3", 0.001, due=date(2026, 3, 1))
    shop.log(weigh("SKIN/1", 3.6, scale="W2"))
    seq = shop.log(weigh("RIB.1/1", 0.3, scale="W3"))
    assert say(shop, instrument_out_of_calibration) == [("look", "W3", seq)]


def test_a_mass_nobody_can_know_is_named(shop: Any) -> None:
    assert say(shop, mass_unknown) == []
    seq = shop.log(weigh("SKIN/1", 3.6, present=(Share(what="jig"),)))
    assert say(shop, mass_unknown) == [("look", "SKIN/1", seq)]


# -- bonds, sheets and lots ----------------------------------------------------------------------


def test_a_bond_wants_its_peel_ply_recorded_as_removed(make: Any) -> None:
    shop = sandwich(make)
    shop.mix("B1", 0.4, 0.1)
    shop.log(bond("RIB/1", peel_ply_removed=True))
    assert say(shop, bonded_without_peel_ply_recorded) == []
    silent = shop.log(bond("RIB/1"))
    left_on = shop.log(bond("RIB/1", peel_ply_removed=False))
    assert say(shop, bonded_without_peel_ply_recorded) == [
        ("look", "RIB/1", silent),
        ("stop", "RIB/1", left_on),
    ]


def test_a_bond_between_fittings_has_no_peel_ply(shop: Any) -> None:
    shop.mix("B1", 0.4, 0.1)
    shop.log(bond("PIN/1"))
    assert say(shop, bonded_without_peel_ply_recorded) == []


def test_a_sheet_is_over_cut_by_pieces_and_kept_offcuts_together(shop: Any) -> None:
    shop.sheet("S1", "bought", 1.0, 0.5)
    kept = Minted(kind=ThingKind.OFFCUT, number="F1", name="F1")
    shop.log(cut("RIB.1/1", offcut=KeptOffcut(length_m=0.5, width_m=0.6), minted=(kept,)))
    assert say(shop, sheet_over_cut) == []
    seq = shop.log(cut("RIB.2/1"))
    assert say(shop, sheet_over_cut) == [("look", "S1", seq)]


def test_an_offcut_is_over_cut_by_its_own_area(shop: Any) -> None:
    shop.sheet("S1", "bought", 1.0, 1.0)
    kept = Minted(kind=ThingKind.OFFCUT, number="F1", name="F1")
    shop.log(cut("RIB.1/1", offcut=KeptOffcut(length_m=0.3, width_m=0.3), minted=(kept,)))
    seq = shop.log(cut("RIB.2/1", sheet="F1"))
    assert say(shop, sheet_over_cut) == [("look", "F1", seq)]


@pytest.mark.parametrize(("angle", "turned"), [(0, False), (180, False), (1, False), (90, True), (30, True)])
def test_a_cut_turned_on_a_sheet_with_its_faces_at_0(make: Any, angle: float, turned: bool) -> None:
    shop = sandwich(make)
    shop.sheet("S1", "sandwich", 2.0, 1.0)
    seq = shop.log(cut("RIB/1", angle_deg=float(angle)))
    assert say(shop, cut_turned) == ([("look", "RIB/1", seq)] if turned else [])


@pytest.mark.parametrize(("angle", "turned"), [(90, False), (45, True)])
def test_a_cut_turned_on_a_sheet_of_which_no_direction_is_known(
    shop: Any, angle: float, turned: bool
) -> None:
    shop.sheet("S1", "bought", 2.0, 1.0)
    seq = shop.log(cut("RIB.1/1", angle_deg=float(angle)))
    assert say(shop, cut_turned) == ([("look", "RIB.1/1", seq)] if turned else [])


def test_a_lot_is_expired_the_day_after_its_date(shop: Any) -> None:
    shop.receive("LA", "twill", expiry=date(2026, 3, 2))
    shop.receive("LB", "twill", expiry=date(2026, 3, 1))
    shop.log(lay(1, lots=(Share(what="LA"),)))
    seq = shop.log(lay(2, lots=(Share(what="LB"),)))
    assert say(shop, lot_expired) == [("stop", "LB", seq)]


def test_an_expired_resin_mixed_is_noticed_at_the_mix(shop: Any) -> None:
    shop.receive("LB", "resin", expiry=date(2026, 3, 1))
    seq = shop.mix("B1", 0.4, 0.1, resin_lot="LB")
    assert say(shop, lot_expired) == [("stop", "LB", seq)]


def test_a_hold_speaks_of_pieces_that_hold_the_thing_and_of_later_use(shop: Any) -> None:
    shop.mix("B1", 0.4, 0.1)
    shop.log(lay(1, batches=(Share(what="B1"),)))
    assert say(shop, held_used) == []
    shop.log(Hold(what="LR", why="cloudy"))
    assert say(shop, held_used) == [("look", "SKIN/1", None)]
    seq = shop.log(Coat(piece="RIB.1/1", batch="B1", mass_kg=0.01))
    assert say(shop, held_used) == [("stop", "B1", seq), ("look", "SKIN/1", None), ("look", "RIB.1/1", None)]
    shop.log(Release(what="LR", why="tested"))
    assert say(shop, held_used) == []


def test_a_held_sheet_taints_its_offcut_and_a_scrapped_piece_is_let_be(shop: Any) -> None:
    shop.sheet("S1", "bought", 1.0, 1.0)
    kept = Minted(kind=ThingKind.OFFCUT, number="F1", name="F1")
    shop.log(cut("RIB.1/1", offcut=KeptOffcut(length_m=0.5, width_m=0.5), minted=(kept,)))
    shop.log(Hold(what="S1", why="dented"))
    seq = shop.log(cut("RIB.2/1", sheet="F1"))
    shop.log(Scrap(what="RIB.1/1", why="dented"))
    assert say(shop, held_used) == [("stop", "F1", seq), ("look", "RIB.2/1", None)]


def test_fitting_a_held_piece_is_use_of_it(shop: Any) -> None:
    shop.log(Trim(piece="RIB.1/1", mass_kg=0.001, why="sand"))
    shop.log(Hold(what="RIB.1/1", why="cracked"))
    assert say(shop, held_used) == []
    seq = shop.log(Fit(piece="RIB.1/1", into="WING/LEFT/ribs"))
    assert say(shop, held_used) == [("stop", "RIB.1/1", seq)]


def sandwich(make: Any) -> Any:
    """A shop with one rib of cloth, foam, cloth and peel ply."""
    rib = make.part("RIB", Form.PANEL, "sandwich", PartClass.RIB)
    shop = make.shop(make.plan((rib, make.shape(0.5))))
    shop.receive("LT", "twill")
    shop.receive("LR", "resin")
    shop.receive("LH", "hardener")
    shop.scale("W1", 0.001, 0.002)
    return shop
