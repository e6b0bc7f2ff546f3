"""Each rule about plies: where it speaks and where it is silent."""

from __future__ import annotations

from typing import Any

import pytest

from ledger.checks.ply_missing import ply_missing
from ledger.checks.ply_not_in_plan import ply_not_in_plan
from ledger.checks.ply_of_other_material import ply_of_other_material
from ledger.checks.ply_out_of_order import ply_out_of_order
from ledger.checks.ply_twice import ply_twice
from ledger.checks.ply_wrong_way import ply_wrong_way
from ledger.checks.weighed_before_last_ply import weighed_before_last_ply
from ledger.model.acts import Fit
from ledger.model.plan import Form, PartClass, Side
from ledger.model.things import Share


def test_a_ply_is_missing_only_from_a_finished_piece(shop: Any) -> None:
    for step in (1, 2, 3, 5, 6):
        shop.log(shop.lay(step))
    assert shop.say(ply_missing) == []
    shop.log(shop.weigh("SKIN/1", 3.0, state="finished"))
    assert shop.say(ply_missing) == [("stop", "SKIN/1", None)]
    shop.log(shop.lay(4))
    assert shop.say(ply_missing) == []


def test_a_step_laid_over_one_that_was_not_there_is_looked_at_once(shop: Any) -> None:
    shop.log(shop.lay(1), minute=50)
    over = shop.log(shop.lay(3), minute=52)
    shop.log(shop.lay(4), minute=53)
    assert shop.say(ply_out_of_order) == [("look", "SKIN/1", over)]
    shop.log(shop.lay(2), minute=54)
    assert shop.say(ply_out_of_order) == [("look", "SKIN/1", over)]


def test_a_step_entered_late_with_its_true_time_was_there(shop: Any) -> None:
    shop.log(shop.lay(1), minute=50)
    shop.log(shop.lay(3), minute=52)
    shop.log(shop.lay(2), minute=51)
    assert shop.say(ply_out_of_order) == []


def test_peel_ply_not_logged_is_no_ply_missing(make: Any) -> None:
    shop = make.sandwich_shop()
    for step in (1, 2, 3):
        shop.log(shop.lay(step, "RIB/1"))
    shop.log(Fit(piece="RIB/1", into="WING/LEFT/ribs"))
    assert shop.say(ply_missing) == []


def test_a_ply_laid_again_is_twice_and_one_in_two_cloths_is_not(shop: Any) -> None:
    shop.log(shop.lay(1, area_m2=0.7))
    shop.log(shop.lay(1, area_m2=0.8))
    assert shop.say(ply_twice) == []
    shop.log(shop.lay(2))
    again = shop.log(shop.lay(2))
    assert shop.say(ply_twice) == [("look", "SKIN/1", again)]


def test_a_step_the_laminate_does_not_have_is_looked_at(shop: Any) -> None:
    shop.log(shop.lay(6))
    assert shop.say(ply_not_in_plan) == []
    seq = shop.log(shop.lay(7))
    assert shop.say(ply_not_in_plan) == [("look", "SKIN/1", seq)]


def test_a_ply_from_a_lot_of_another_material_is_looked_at(shop: Any) -> None:
    shop.receive("LF", "foam")
    shop.log(shop.lay(1))
    assert shop.say(ply_of_other_material) == []
    seq = shop.log(shop.lay(2, lots=(Share(what="LF"),)))
    assert shop.say(ply_of_other_material) == [("look", "SKIN/1", seq)]


def test_a_ply_at_the_other_hands_angle_is_the_wrong_way(shop: Any) -> None:
    shop.log(shop.lay(1, orientation_deg=45.0))
    shop.log(shop.lay(2, orientation_deg=180.0))
    shop.log(shop.lay(3, orientation_deg=-90.0))
    shop.log(shop.lay(4, orientation_deg=87.0))
    assert shop.say(ply_wrong_way) == []
    seq = shop.log(shop.lay(6, orientation_deg=-45.0))
    assert shop.say(ply_wrong_way) == [("stop", "SKIN/1", seq)]


@pytest.mark.parametrize("both", [True, False])
def test_a_mirrored_part_wants_the_opposite_sign(make: Any, both: bool) -> None:
    left = make.part("S-L", Form.SKIN, "six", PartClass.SKIN, mirror_of="S-R" if both else None)
    right = make.part("S-R", Form.SKIN, "six", PartClass.SKIN, side=Side.RIGHT, mirror_of="S-L")
    shop = make.shop(make.plan((left, make.shape(1.0)), (right, make.shape(1.0))))
    shop.receive("LT", "twill")
    shop.log(shop.lay(1, "S-L/1", orientation_deg=45.0))
    shop.log(shop.lay(1, "S-R/1", orientation_deg=-45.0))
    assert shop.say(ply_wrong_way) == []
    seq = shop.log(shop.lay(6, "S-R/1", orientation_deg=45.0))
    assert shop.say(ply_wrong_way) == [("stop", "S-R/1", seq)]


def test_a_skin_weighed_between_plies_is_known_not_to_hold_the_rest(shop: Any) -> None:
    shop.log(shop.lay(1))
    assert shop.say(weighed_before_last_ply) == []
    shop.log(shop.weigh("SKIN/1", 0.6))
    assert shop.say(weighed_before_last_ply) == [("look", "SKIN/1", None)]
    for step in range(2, 7):
        shop.log(shop.lay(step))
    assert shop.say(weighed_before_last_ply) == []
