"""Each rule about weighings, bonds, sheets and lots: where it speaks and where it is silent."""

from __future__ import annotations

from datetime import date
from typing import Any

import pytest

from ledger.checks.bonded_without_peel_ply_recorded import bonded_without_peel_ply_recorded
from ledger.checks.cut_turned import cut_turned
from ledger.checks.held_used import held_used
from ledger.checks.instrument_out_of_calibration import instrument_out_of_calibration
from ledger.checks.lot_expired import lot_expired
from ledger.checks.mass_off_plan import mass_off_plan
from ledger.checks.mass_unknown import mass_unknown
from ledger.checks.peel_ply_not_said import peel_ply_not_said
from ledger.checks.readings_disagree import readings_disagree
from ledger.checks.sheet_over_cut import sheet_over_cut
from ledger.checks.weighed_with_nothing_fitted import weighed_with_nothing_fitted
from ledger.checks.weighed_with_things_missing import weighed_with_things_missing
from ledger.model.acts import Coat, Fit, Hold, Release, Scrap, Trim
from ledger.model.plan import PartClass
from ledger.model.things import KeptOffcut, Minted, Share, ThingKind

# -- weighings -----------------------------------------------------------------------------------


def test_a_part_is_off_plan_only_beyond_tolerance_and_beyond_chance(make: Any) -> None:
    tolerances = ((PartClass.RIB, 0.05),)
    shop = make.shop(make.plan(*make.standard_parts(), tolerances=tolerances))
    shop.scale("W1", 0.001, 0.002)
    shop.scale("COARSE", 0.05, 0.05)
    shop.log(shop.weigh("RIB.1/1", 0.312))
    shop.log(shop.weigh("RIB.2/1", 0.17, scale="COARSE"))
    shop.log(shop.weigh("SKIN/1", 9.0))
    assert shop.say(mass_off_plan) == []
    shop.log(shop.weigh("RIB.2/1", 0.17))
    assert shop.say(mass_off_plan) == [("look", "RIB.2", None)]


def test_a_weighing_with_contents_missing_is_looked_at_until_it_is_made_complete(shop: Any) -> None:
    shop.log(Fit(piece="RIB.1/1", into="WING/LEFT/ribs"))
    shop.log(Fit(piece="RIB.2/1", into="WING/LEFT/ribs"))
    seq = shop.log(shop.weigh("WING/LEFT/ribs", 0.3, missing=("RIB.2/1",)))
    assert shop.say(weighed_with_things_missing) == [("look", "WING/LEFT/ribs", seq)]
    shop.log(shop.weigh("WING/LEFT/ribs", 0.45))
    assert shop.say(weighed_with_things_missing) == []


def test_an_assembly_weighed_with_nothing_fitted_is_looked_at(shop: Any) -> None:
    shop.log(Trim(piece="RIB.1/1", mass_kg=0.001, why="sand"))
    seq = shop.log(shop.weigh("WING/LEFT/ribs", 0.3))
    assert shop.say(weighed_with_nothing_fitted) == [("look", "WING/LEFT/ribs", seq)]
    shop.log(Fit(piece="RIB.1/1", into="WING/LEFT/ribs"))
    shop.log(shop.weigh("WING/LEFT/ribs", 0.3))
    assert shop.say(weighed_with_nothing_fitted) == []


def test_two_readings_a_step_apart_agree_and_two_further_apart_do_not(shop: Any) -> None:
    shop.log(shop.weigh("SKIN/1", 3.600, 3.601))
    assert shop.say(readings_disagree) == []
    seq = shop.log(shop.weigh("RIB.1/1", 0.300, 0.304))
    assert shop.say(readings_disagree) == [("look", "RIB.1/1", seq)]


def test_a_weighing_at_odds_with_the_one_before_disagrees_unless_an_entry_says_why(shop: Any) -> None:
    shop.log(shop.weigh("SKIN/1", 3.600))
    shop.log(Trim(piece="SKIN/1", mass_kg=0.1, why="sand"))
    shop.log(shop.weigh("SKIN/1", 3.500))
    assert shop.say(readings_disagree) == []
    seq = shop.log(shop.weigh("SKIN/1", 3.450))
    assert shop.say(readings_disagree) == [("look", "SKIN/1", seq)]


def test_a_bagged_piece_is_weighed_with_a_word_about_its_peel_ply(make: Any) -> None:
    shop = make.sandwich_shop()
    seq = shop.log(shop.weigh("RIB/1", 1.0))
    assert shop.say(peel_ply_not_said) == [("look", "RIB/1", seq)]
    shop.log(shop.weigh("RIB/1", 1.0, present=(Share(what="peel ply", mass_kg=0.0),)))
    assert shop.say(peel_ply_not_said) == []


def test_a_piece_with_no_peel_ply_planned_needs_no_word(shop: Any) -> None:
    shop.log(shop.weigh("SKIN/1", 3.6))
    assert shop.say(peel_ply_not_said) == []


def test_an_instrument_is_out_of_calibration_the_day_after_it_was_due(shop: Any) -> None:
    shop.scale("W2", 0.001, due=date(2026, 3, 2))
    shop.scale("W3", 0.001, due=date(2026, 3, 1))
    shop.log(shop.weigh("SKIN/1", 3.6, scale="W2"))
    seq = shop.log(shop.weigh("RIB.1/1", 0.3, scale="W3"))
    assert shop.say(instrument_out_of_calibration) == [("look", "W3", seq)]


def test_a_mass_nobody_can_know_is_named(shop: Any) -> None:
    assert shop.say(mass_unknown) == []
    seq = shop.log(shop.weigh("SKIN/1", 3.6, present=(Share(what="jig"),)))
    assert shop.say(mass_unknown) == [("look", "SKIN/1", seq)]


# -- bonds, sheets and lots ----------------------------------------------------------------------


def test_a_bond_wants_its_peel_ply_recorded_as_removed(make: Any) -> None:
    shop = make.sandwich_shop()
    shop.mix("B1", 0.4, 0.1)
    shop.log(shop.bond("RIB/1", peel_ply_removed=True))
    assert shop.say(bonded_without_peel_ply_recorded) == []
    silent = shop.log(shop.bond("RIB/1"))
    left_on = shop.log(shop.bond("RIB/1", peel_ply_removed=False))
    assert shop.say(bonded_without_peel_ply_recorded) == [
        ("look", "RIB/1", silent),
        ("stop", "RIB/1", left_on),
    ]


def test_a_bond_between_fittings_has_no_peel_ply(shop: Any) -> None:
    shop.mix("B1", 0.4, 0.1)
    shop.log(shop.bond("PIN/1"))
    assert shop.say(bonded_without_peel_ply_recorded) == []


def test_a_sheet_is_over_cut_by_pieces_and_kept_offcuts_together(shop: Any) -> None:
    shop.sheet("S1", "bought", 1.0, 0.5)
    kept = Minted(kind=ThingKind.OFFCUT, number="F1", name="F1")
    shop.log(shop.cut("RIB.1/1", offcut=KeptOffcut(length_m=0.5, width_m=0.6), minted=(kept,)))
    assert shop.say(sheet_over_cut) == []
    seq = shop.log(shop.cut("RIB.2/1"))
    assert shop.say(sheet_over_cut) == [("look", "S1", seq)]


def test_an_offcut_is_over_cut_by_its_own_area(shop: Any) -> None:
    shop.sheet("S1", "bought", 1.0, 1.0)
    kept = Minted(kind=ThingKind.OFFCUT, number="F1", name="F1")
    shop.log(shop.cut("RIB.1/1", offcut=KeptOffcut(length_m=0.3, width_m=0.3), minted=(kept,)))
    seq = shop.log(shop.cut("RIB.2/1", sheet="F1"))
    assert shop.say(sheet_over_cut) == [("look", "F1", seq)]


@pytest.mark.parametrize(("angle", "turned"), [(0, False), (180, False), (1, False), (90, True), (30, True)])
def test_a_cut_turned_on_a_sheet_with_its_faces_at_0(make: Any, angle: float, turned: bool) -> None:
    shop = make.sandwich_shop()
    shop.sheet("S1", "sandwich", 2.0, 1.0)
    seq = shop.log(shop.cut("RIB/1", angle_deg=float(angle)))
    assert shop.say(cut_turned) == ([("look", "RIB/1", seq)] if turned else [])


@pytest.mark.parametrize(("angle", "turned"), [(90, False), (45, True)])
def test_a_cut_turned_on_a_sheet_of_which_no_direction_is_known(
    shop: Any, angle: float, turned: bool
) -> None:
    shop.sheet("S1", "bought", 2.0, 1.0)
    seq = shop.log(shop.cut("RIB.1/1", angle_deg=float(angle)))
    assert shop.say(cut_turned) == ([("look", "RIB.1/1", seq)] if turned else [])


def test_a_lot_is_expired_the_day_after_its_date(shop: Any) -> None:
    shop.receive("LA", "twill", expiry=date(2026, 3, 2))
    shop.receive("LB", "twill", expiry=date(2026, 3, 1))
    shop.log(shop.lay(1, lots=(Share(what="LA"),)))
    seq = shop.log(shop.lay(2, lots=(Share(what="LB"),)))
    assert shop.say(lot_expired) == [("stop", "LB", seq)]


def test_an_expired_resin_mixed_is_noticed_at_the_mix(shop: Any) -> None:
    shop.receive("LB", "resin", expiry=date(2026, 3, 1))
    seq = shop.mix("B1", 0.4, 0.1, resin_lot="LB")
    assert shop.say(lot_expired) == [("stop", "LB", seq)]


def test_a_hold_speaks_of_pieces_that_hold_the_thing_and_of_later_use(shop: Any) -> None:
    shop.mix("B1", 0.4, 0.1)
    shop.log(shop.lay(1, batches=(Share(what="B1"),)))
    assert shop.say(held_used) == []
    shop.log(Hold(what="LR", why="cloudy"))
    assert shop.say(held_used) == [("look", "SKIN/1", None)]
    seq = shop.log(Coat(piece="RIB.1/1", batch="B1", mass_kg=0.01))
    assert shop.say(held_used) == [("stop", "B1", seq), ("look", "SKIN/1", None), ("look", "RIB.1/1", None)]
    shop.log(Release(what="LR", why="tested"))
    assert shop.say(held_used) == []


def test_a_held_sheet_taints_its_offcut_and_a_scrapped_piece_is_let_be(shop: Any) -> None:
    shop.sheet("S1", "bought", 1.0, 1.0)
    kept = Minted(kind=ThingKind.OFFCUT, number="F1", name="F1")
    shop.log(shop.cut("RIB.1/1", offcut=KeptOffcut(length_m=0.5, width_m=0.5), minted=(kept,)))
    shop.log(Hold(what="S1", why="dented"))
    seq = shop.log(shop.cut("RIB.2/1", sheet="F1"))
    shop.log(Scrap(what="RIB.1/1", why="dented"))
    assert shop.say(held_used) == [("stop", "F1", seq), ("look", "RIB.2/1", None)]


def test_fitting_a_held_piece_is_use_of_it(shop: Any) -> None:
    shop.log(Trim(piece="RIB.1/1", mass_kg=0.001, why="sand"))
    shop.log(Hold(what="RIB.1/1", why="cracked"))
    assert shop.say(held_used) == []
    seq = shop.log(Fit(piece="RIB.1/1", into="WING/LEFT/ribs"))
    assert shop.say(held_used) == [("stop", "RIB.1/1", seq)]
