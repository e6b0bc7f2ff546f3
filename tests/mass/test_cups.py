"""Where each cup went."""

from __future__ import annotations

import math
from typing import Any

import pytest

from ledger.mass.charges import charges
from ledger.mass.magnitudes import GEOMETRY_TOLERANCE, RESIN_HABIT, SCATTER_WITHIN_LOT, SPLIT_UNKNOWN
from ledger.mass.report import BatchAccount
from ledger.model.acts import Bond, BuildUp, Coat, Lay, Scrap
from ledger.model.things import Share


def account(shop: Any, batch: str = "B1") -> BatchAccount:
    found: BatchAccount = next(one for one in shop.weights().batches if one.batch == batch)
    return found


def lay(step: int, grams: float | None = None, piece: str = "SKIN/1") -> Lay:
    return Lay(piece=piece, step=step, lots=(Share(what="LT"),), batches=(Share(what="B1", mass_kg=grams),))


def resin(shop: Any) -> dict[int, float | None]:
    return {
        one.step: one.mass_kg
        for one in charges(shop.snapshot())
        if one.source == "B1" and one.step is not None
    }


def test_without_a_residue_a_ply_has_its_nominal_resin_and_the_account_stays_open(shop: Any) -> None:
    shop.mix("B1", 0.8, 0.2)
    shop.log(lay(1))
    assert resin(shop) == pytest.approx({1: 0.3})
    assert account(shop).unaccounted_kg is None


def test_with_a_residue_the_plies_share_what_is_left_by_nominal_demand(shop: Any) -> None:
    shop.mix("B1", 0.8, 0.2, residue_kg=0.05, bled_kg=0.05)
    shop.log(lay(1))
    shop.log(Lay(piece="SKIN/1", step=2, lots=(Share(what="LT"),), batches=(Share(what="B1"),), area_m2=0.75))
    assert resin(shop) == pytest.approx({1: 0.6, 2: 0.3})
    closed = account(shop)
    assert (closed.charged_kg, closed.unaccounted_kg) == pytest.approx((0.9, 0.0))
    assert (closed.shared_kg, closed.demand_kg) == pytest.approx((0.9, 0.45))


def test_stated_grams_stand_and_the_rest_is_shared(shop: Any) -> None:
    shop.mix("B1", 0.8, 0.2, residue_kg=0.1)
    shop.log(lay(1, 0.4))
    shop.log(lay(2))
    assert resin(shop) == pytest.approx({1: 0.4, 2: 0.5})


def test_what_stated_grams_leave_over_is_unaccounted_and_not_spread(shop: Any) -> None:
    # The account of the sketch of a traced batch: 269 g mixed, 96 + 71 + 20 g used, 71 g left, 11 g lost.
    shop.mix("B1", 0.205, 0.064, residue_kg=0.071)
    shop.log(lay(5, 0.096))
    shop.log(lay(6, 0.071))
    shop.log(Bond(pieces=("RIB.1/1", "RIB.2/1"), batches=(Share(what="B1", mass_kg=0.020),)))
    closed = account(shop)
    assert closed.charged_kg == pytest.approx(0.187)
    assert closed.unaccounted_kg == pytest.approx(0.011)
    assert closed.ratio_verdict == "out"


def test_mixed_is_charged_residue_bled_scrapped_and_unaccounted(shop: Any) -> None:
    shop.mix("B1", 0.8, 0.2, residue_kg=0.1, bled_kg=0.05)
    shop.log(lay(1, 0.3))
    shop.log(Coat(piece="RIB.1/1", batch="B1", mass_kg=0.1))
    shop.log(Coat(cell="L1", batch="B1", mass_kg=0.2))
    shop.log(BuildUp(piece="RIB.2/1", batch="B1", mass_kg=0.05))
    shop.log(Scrap(what="SKIN/1", why="dropped"))
    closed = account(shop)
    assert (closed.charged_kg, closed.scrapped_kg) == pytest.approx((0.35, 0.3))
    assert closed.unaccounted_kg == pytest.approx(1.0 - 0.35 - 0.3 - 0.1 - 0.05)


def test_more_used_than_mixed_is_a_shortfall_and_no_ply_goes_below_its_nominal_resin(shop: Any) -> None:
    shop.mix("B1", 0.08, 0.02, residue_kg=0.05)
    shop.log(lay(1, 0.2))
    shop.log(lay(2))
    assert resin(shop) == pytest.approx({1: 0.2, 2: 0.3})
    assert (account(shop).unaccounted_kg or 0.0) < 0.0


def test_a_split_nobody_knows_has_no_grams_in_the_trace_and_widens_the_ply(shop: Any) -> None:
    shop.mix("B1", 0.8, 0.2)
    shop.mix("B2", 0.8, 0.2)
    shop.log(
        Lay(
            piece="SKIN/1",
            step=1,
            lots=(Share(what="LT"),),
            batches=(Share(what="B1"), Share(what="B2")),
        )
    )
    split = [one.mass_kg for one in charges(shop.snapshot()) if one.what == "resin"]
    assert split == [None, None]
    assert shop.part("SKIN").built_kg == pytest.approx(0.6)
    lot, own = 0.6 * 0.06 / math.sqrt(3), 0.6 * math.hypot(SCATTER_WITHIN_LOT, GEOMETRY_TOLERANCE)
    cups = 2 * (0.15 * RESIN_HABIT) ** 2 + 2 * (0.15 * SPLIT_UNKNOWN) ** 2
    expected = math.sqrt(lot**2 + own**2 + cups)
    assert shop.part("SKIN").pieces[0].expected_u_kg == pytest.approx(expected, rel=1e-9)


def test_both_sides_of_a_bond_are_in_the_trace_and_only_one_has_the_grams(shop: Any) -> None:
    shop.mix("B1", 0.8, 0.2)
    shop.log(Bond(pieces=("JOINT/1", "RIB.1/1"), batches=(Share(what="B1"),), mass_kg=0.1))
    found = {one.piece: (one.what, one.mass_kg) for one in charges(shop.snapshot())}
    assert found == {"JOINT/1": ("adhesive", 0.1), "RIB.1/1": ("touches", 0.0)}


def test_the_ratio_of_a_lot_stands_before_the_materials(shop: Any) -> None:
    shop.receive("LQ", "resin", ratio=0.27)
    shop.mix("B1", 1.0, 0.27, resin_lot="LQ")
    assert (account(shop).ratio_wanted, account(shop).ratio_verdict) == (0.27, "in")


def test_a_running_total_is_mixed_only_once(shop: Any) -> None:
    shop.mix("B1", 0.8, 1.0, method="running total", scale="W1")
    assert account(shop).mixed_kg == pytest.approx(1.0)
    assert account(shop).ratio_verdict == "in"


def test_a_coat_by_areal_mass_in_a_cell_has_its_grams_from_the_account_of_its_cup(shop: Any) -> None:
    shop.mix("B1", 0.8, 0.2, residue_kg=0.1)
    shop.log(Coat(cell="L1", batch="B1", areal_mass_kg_m2=0.8))
    assert shop.weights().parts[-1].best_kg == pytest.approx(0.9)
    assert shop.weights().unknowns == ()
    shop.mix("B2", 0.8, 0.2)
    seq = shop.log(Coat(cell="L2", batch="B2", areal_mass_kg_m2=0.8))
    assert [one.seq for one in shop.weights().unknowns] == [seq]
