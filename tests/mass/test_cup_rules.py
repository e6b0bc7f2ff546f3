"""Each rule about cups: where it speaks and where it is silent."""

from __future__ import annotations

from typing import Any

from ledger.checks.batch_account_short import batch_account_short
from ledger.checks.fabric_wet_with_paste import fabric_wet_with_paste
from ledger.checks.mix_ratio_out import mix_ratio_out
from ledger.checks.mix_ratio_out_used import mix_ratio_out_used
from ledger.checks.mix_ratio_unprovable import mix_ratio_unprovable
from ledger.checks.pot_life_exceeded import pot_life_exceeded
from ledger.checks.resin_share_far_off import resin_share_far_off
from ledger.model.acts import BuildUp, Coat, Scrap
from ledger.model.things import Share


def test_a_mix_proved_out_stops_and_one_proved_in_does_not(shop: Any) -> None:
    shop.scale("W2", 0.0001, 0.0001)
    good = shop.mix("B1", 0.4, 0.1, scale="W2")
    bad = shop.mix("B2", 0.4, 0.13, scale="W2")
    assert good < bad
    assert shop.say(mix_ratio_out) == [("stop", "B2", bad)]
    assert shop.say(mix_ratio_unprovable) == []


def test_a_small_cup_on_a_coarse_scale_cannot_be_told(shop: Any) -> None:
    seq = shop.mix("B1", 0.1, 0.025, scale="W1")
    assert shop.say(mix_ratio_unprovable) == [("look", "B1", seq)]
    assert shop.say(mix_ratio_out) == []


def test_a_mix_with_no_tolerance_declared_cannot_be_told(shop: Any) -> None:
    seq = shop.mix("B1", 4.0, 1.0, resin_lot="LT", hardener_lot="LT", scale="W1")
    assert shop.say(mix_ratio_unprovable) == [("look", "B1", seq)]


def test_a_cup_is_past_its_pot_life_only_when_it_is(shop: Any) -> None:
    shop.log(shop.weigh("PIN/1", 0.2))
    mixed = shop.mix("B1", 0.4, 0.1)
    shop.log(shop.lay(1, batches=(Share(what="B1"),)), minute=mixed + 30)
    assert shop.say(pot_life_exceeded) == []
    late = shop.log(shop.lay(2, batches=(Share(what="B1"),)), minute=mixed + 31)
    assert shop.say(pot_life_exceeded) == [("stop", "B1", late)]


def test_the_pot_life_of_a_lot_stands_before_the_materials(shop: Any) -> None:
    shop.receive("LQ", "resin", pot_life_s=600.0)
    mixed = shop.mix("B1", 0.4, 0.1, resin_lot="LQ")
    late = shop.log(Coat(piece="RIB.1/1", batch="B1", mass_kg=0.01), minute=mixed + 11)
    assert shop.say(pot_life_exceeded) == [("stop", "B1", late)]


def test_more_used_than_mixed_is_short(shop: Any) -> None:
    seq = shop.mix("B1", 0.08, 0.02)
    shop.log(shop.lay(1, batches=(Share(what="B1", mass_kg=0.09),)))
    assert shop.say(batch_account_short) == []
    shop.log(BuildUp(piece="SKIN/1", batch="B1", mass_kg=0.05))
    assert shop.say(batch_account_short) == [("look", "B1", seq)]


def test_an_account_that_makes_plies_impossibly_wet_is_looked_at(shop: Any) -> None:
    seq = shop.mix("B1", 0.8, 0.2, residue_kg=0.1)
    shop.log(shop.lay(1, batches=(Share(what="B1"),)))
    assert shop.say(resin_share_far_off) == [("look", "B1", seq)]
    shop.log(shop.lay(2, batches=(Share(what="B1"),)))
    shop.log(shop.lay(3, batches=(Share(what="B1"),)))
    assert shop.say(resin_share_far_off) == []


def test_every_live_piece_and_cell_that_holds_a_bad_cup_stops(shop: Any) -> None:
    shop.scale("W2", 0.0001, 0.0001)
    shop.mix("B1", 0.4, 0.1, scale="W2")
    shop.mix("B2", 0.4, 0.13, scale="W2")
    shop.log(shop.lay(1, batches=(Share(what="B1"),)))
    assert shop.say(mix_ratio_out_used) == []
    shop.log(shop.lay(2, batches=(Share(what="B1"), Share(what="B2"))))
    shop.log(Coat(cell="L1", batch="B2", mass_kg=0.01))
    shop.log(BuildUp(piece="RIB.1/1", batch="B2", mass_kg=0.01))
    assert shop.say(mix_ratio_out_used) == [
        ("stop", "SKIN/1", None),
        ("stop", "L1", None),
        ("stop", "RIB.1/1", None),
    ]
    shop.log(Scrap(what="SKIN/1", why="wrong mix"))
    assert shop.say(mix_ratio_out_used) == [("stop", "L1", None), ("stop", "RIB.1/1", None)]


def test_a_fabric_wet_with_a_cup_of_paste_stops(shop: Any) -> None:
    shop.receive("LP", "paste")
    shop.mix("B1", 0.4, 0.1)
    shop.mix("B2", 0.4, 0.1, resin_lot="LP")
    shop.log(shop.lay(1, batches=(Share(what="B1"),)))
    assert shop.say(fabric_wet_with_paste) == []
    seq = shop.log(shop.lay(2, batches=(Share(what="B1"), Share(what="B2"))))
    assert shop.say(fabric_wet_with_paste) == [("stop", "SKIN/1", seq)]
