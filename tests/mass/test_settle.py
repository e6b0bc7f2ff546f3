"""Weighings of several pieces at once."""

from __future__ import annotations

from typing import Any

import pytest

from ledger.model.acts import BuildUp, Cut, Fit, Trim, Weigh
from ledger.model.plan import Form, Material, MaterialKind, PartClass
from ledger.model.things import Share


@pytest.fixture
def ribs(shop: Any) -> Any:
    """Two ribs cut, 0.30 and 0.15 kg by the sheet."""
    shop.sheet("S1", "bought", 2.0, 1.0, mass_kg=3.0)
    shop.log(Cut(pieces=("RIB.1/1", "RIB.2/1"), sheet="S1"))
    return shop


def fit(shop: Any, *pieces: str, into: str = "WING/LEFT/ribs") -> None:
    for piece in pieces:
        shop.log(Fit(piece=piece, into=into))


def weigh(shop: Any, what: str, reading: float, **more: Any) -> int:
    seq: int = shop.log(Weigh(what=what, reading_kg=(reading,), scale="W1", **more))
    return seq


def best(shop: Any, *parts: str) -> list[float]:
    return [shop.part(part).best_kg for part in parts]


def node(shop: Any, path: str) -> Any:
    return next(one for one in shop.weights().assemblies if one.path == path)


def test_the_difference_goes_to_contents_not_weighed_themselves(ribs: Any, make: Any) -> None:
    weigh(ribs, "RIB.1/1", 0.31)
    fit(ribs, "RIB.1/1", "RIB.2/1")
    weigh(ribs, "WING/LEFT/ribs", 0.48)
    assert best(ribs, "RIB.1", "RIB.2") == pytest.approx([0.31, 0.17])
    assert make.causes(ribs.part("RIB.2"))["unexplained"] == pytest.approx(0.02)
    listed = ribs.weights().weighed[0]
    assert (listed.net_kg, listed.unexplained_kg) == pytest.approx((0.48, 0.02))
    assert listed.spread_over == ("RIB.2/1",)
    assert ribs.part("RIB.2").actual_kg is None


def test_between_contents_not_weighed_it_is_spread_by_their_uncertainty(ribs: Any) -> None:
    before = {part: ribs.part(part) for part in ("RIB.1", "RIB.2")}
    fit(ribs, "RIB.1/1", "RIB.2/1")
    weigh(ribs, "WING/LEFT/ribs", 0.48)
    u = {part: record.best_u_kg for part, record in before.items()}
    for part, record in before.items():
        share = u[part] / sum(u.values())
        assert ribs.part(part).best_kg == pytest.approx(record.best_kg + share * 0.03)


def test_pieces_missing_are_added_and_things_present_are_taken_off(ribs: Any) -> None:
    fit(ribs, "RIB.1/1", "RIB.2/1")
    weigh(ribs, "WING/LEFT/ribs", 0.82, missing=("RIB.2/1",), present=(Share(what="jig", mass_kg=0.5),))
    assert best(ribs, "RIB.1", "RIB.2") == pytest.approx([0.32, 0.15])
    assert node(ribs, "WING/LEFT/ribs").best_kg == pytest.approx(0.47)


def test_what_is_fitted_later_adds(ribs: Any) -> None:
    fit(ribs, "RIB.1/1")
    weigh(ribs, "WING/LEFT/ribs", 0.32)
    fit(ribs, "RIB.2/1")
    assert best(ribs, "RIB.1", "RIB.2") == pytest.approx([0.32, 0.15])


def test_entries_after_an_assembly_weighing_move_its_pieces_by_exactly_their_masses(ribs: Any) -> None:
    fit(ribs, "RIB.1/1", "RIB.2/1")
    weigh(ribs, "WING/LEFT/ribs", 0.48)
    ribs.log(Trim(piece="RIB.1/1", mass_kg=0.01, why="sanding"))
    ribs.log(BuildUp(piece="RIB.2/1", mass_kg=0.004, lot="LT"))
    assert node(ribs, "WING/LEFT/ribs").best_kg == pytest.approx(0.48 - 0.01 + 0.004, abs=1e-12)


def test_the_outermost_weighing_has_the_last_word_and_the_inner_one_keeps_its_share(ribs: Any) -> None:
    fit(ribs, "RIB.1/1", "RIB.2/1")
    weigh(ribs, "WING/LEFT/ribs", 0.48)
    fit(ribs, "PIN/1", into="WING")
    weigh(ribs, "WING", 0.75)
    assert node(ribs, "WING/LEFT/ribs").best_kg == pytest.approx(0.48)
    assert ribs.part("PIN").best_kg == pytest.approx(0.27)


def test_with_nothing_else_to_take_it_the_outer_difference_goes_over_everything(ribs: Any) -> None:
    fit(ribs, "RIB.1/1", "RIB.2/1")
    weigh(ribs, "RIB.1/1", 0.31)
    weigh(ribs, "RIB.2/1", 0.15)
    weigh(ribs, "WING/LEFT/ribs", 0.48)
    assert sum(best(ribs, "RIB.1", "RIB.2")) == pytest.approx(0.48)


def test_pieces_weighed_alone_after_their_assembly_are_known_better_than_it_knows_them(ribs: Any) -> None:
    fit(ribs, "RIB.1/1", "RIB.2/1")
    weigh(ribs, "WING/LEFT/ribs", 0.48)
    weigh(ribs, "RIB.1/1", 0.31)
    assert best(ribs, "RIB.1", "RIB.2") == pytest.approx([0.31, 0.17])
    weigh(ribs, "RIB.2/1", 0.16)
    assert best(ribs, "RIB.1", "RIB.2") == pytest.approx([0.31, 0.16])


def test_a_piece_weighed_with_another_fitted_into_it_is_weighed_less_that_other(ribs: Any) -> None:
    weigh(ribs, "RIB.2/1", 0.16)
    fit(ribs, "RIB.2/1", into="RIB.1/1")
    weigh(ribs, "RIB.1/1", 0.50)
    assert best(ribs, "RIB.1", "RIB.2") == pytest.approx([0.34, 0.16])
    assert ribs.part("RIB.1").actual_kg == pytest.approx(0.34)
    assert ribs.part("RIB.1").pieces[0].expected_kg == pytest.approx(0.50)


def test_a_piece_fitted_in_a_piece_goes_along_into_an_assembly(ribs: Any) -> None:
    fit(ribs, "RIB.2/1", into="RIB.1/1")
    fit(ribs, "RIB.1/1")
    weigh(ribs, "WING/LEFT/ribs", 0.46)
    assert ribs.weights().weighed[0].contents == ("RIB.1/1", "RIB.2/1")


def test_a_piece_taken_out_is_no_longer_on_the_scale(ribs: Any) -> None:
    fit(ribs, "RIB.1/1", "RIB.2/1")
    ribs.log(Fit(piece="RIB.2/1", out_of="WING/LEFT/ribs"))
    weigh(ribs, "WING/LEFT/ribs", 0.33)
    assert best(ribs, "RIB.1", "RIB.2") == pytest.approx([0.33, 0.15])


def test_an_assembly_taken_out_whole_is_not_in_the_wing_on_the_scale(ribs: Any) -> None:
    fit(ribs, "RIB.1/1")
    fit(ribs, "RIB.2/1", into="WING/LEFT")
    ribs.log(Fit(piece="WING/LEFT/ribs", out_of="WING/LEFT"))
    weigh(ribs, "WING", 0.17)
    assert best(ribs, "RIB.1", "RIB.2") == pytest.approx([0.30, 0.17])


def test_a_later_weighing_of_the_same_assembly_supersedes_the_earlier(ribs: Any) -> None:
    fit(ribs, "RIB.1/1", "RIB.2/1")
    weigh(ribs, "WING/LEFT/ribs", 0.60)
    weigh(ribs, "WING/LEFT/ribs", 0.46)
    assert sum(best(ribs, "RIB.1", "RIB.2")) == pytest.approx(0.46)


def test_an_assembly_with_nothing_fitted_holds_its_planned_pieces_begun_and_says_so(ribs: Any) -> None:
    weigh(ribs, "WING/LEFT/ribs", 0.48)
    listed = ribs.weights().weighed[0]
    assert listed.presumed
    assert sum(best(ribs, "RIB.1", "RIB.2")) == pytest.approx(0.48)


def test_a_wing_weighed_whole_is_wholly_weighed(ribs: Any) -> None:
    for piece, into in (("SKIN/1", "WING/LEFT/skins"), ("JOINT/1", "WING/LEFT"), ("PIN/1", "WING")):
        fit(ribs, piece, into=into)
    fit(ribs, "RIB.1/1", "RIB.2/1")
    weigh(ribs, "WING", 5.0)
    total = ribs.weights().total
    assert (total.best_kg, total.actual_kg, total.share_actual) == pytest.approx((5.0, 5.0, 1.0))


def test_a_piece_of_which_nothing_says_what_it_weighs_takes_the_whole_difference(make: Any) -> None:
    bare = Material(name="bare", kind=MaterialKind.SOLID)
    plan = make.plan(
        (make.part("BLOCK", Form.SOLID, "bare", PartClass.FITTING), make.shape(0.001)),
        (make.part("PIN", Form.ITEM, None, PartClass.FITTING, planned_mass_kg=0.2), make.shape(1.0)),
        materials=(*make.materials, bare),
    )
    shop = make.shop(plan)
    shop.scale("W1", 0.001, 0.002)
    fit(shop, "BLOCK/1", "PIN/1")
    weigh(shop, "WING/LEFT/ribs", 0.9)
    assert best(shop, "BLOCK", "PIN") == pytest.approx([0.7, 0.2])
    assert shop.weights().unknowns == ()
