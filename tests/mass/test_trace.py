"""Where everything came from and where it is: the grams add up, and every way is followed to its end."""

from __future__ import annotations

from typing import Any

import pytest

from ledger.errors import Refused
from ledger.mass.trace import Trace, TraceLink, trace
from ledger.model.acts import Bond, Cut, Fit, Hold, Lay, Scrap, Weigh
from ledger.model.things import KeptOffcut, Minted, Share, ThingKind


def lay(step: int, batch: str, mass_kg: float | None, piece: str = "SKIN/1") -> Lay:
    """A ply of the skin from the cloth lot and one cup."""
    return Lay(
        piece=piece, step=step, lots=(Share(what="LT"),), batches=(Share(what=batch, mass_kg=mass_kg),)
    )


def names(links: tuple[TraceLink, ...]) -> list[str]:
    """What the links lead to."""
    return [link.what for link in links]


def link_to(links: tuple[TraceLink, ...], what: str) -> TraceLink:
    """The first link that leads to a thing."""
    return next(link for link in links if link.what == what)


def two_plies(shop: Any) -> None:
    """A cup of 250 g: 90 g in ply 1, 100 g in ply 2, 20 g left in the cup."""
    shop.mix("B1", 0.2, 0.05, residue_kg=0.02, scale="W1")
    shop.log(lay(1, "B1", 0.09))
    shop.log(lay(2, "B1", 0.1))


def test_a_cup_went_into_each_ply_and_the_rest_is_not_accounted_for(shop: Any) -> None:
    two_plies(shop)
    went = trace(shop.snapshot(), "B1").went_into
    assert [(link.what, link.how) for link in went[:2]] == [("SKIN/1", "ply 1"), ("SKIN/1", "ply 2")]
    assert [link.mass_kg for link in went[:2]] == pytest.approx([0.09, 0.1])
    assert link_to(went, "not accounted for").mass_kg == pytest.approx(0.04)
    assert sum(link.mass_kg or 0.0 for link in went) == pytest.approx(0.25, abs=1e-12)


def test_without_a_residue_what_was_not_used_is_in_the_cup_or_lost(shop: Any) -> None:
    shop.mix("B1", 0.2, 0.05)
    (fresh,) = trace(shop.snapshot(), "B1").went_into
    assert fresh.what == "in the cup or lost"
    assert fresh.mass_kg == pytest.approx(0.25)
    shop.log(lay(1, "B1", 0.09))
    went = trace(shop.snapshot(), "B1").went_into
    assert names(went) == ["SKIN/1", "in the cup or lost"]
    assert went[1].mass_kg == pytest.approx(0.16)


def test_of_a_scrapped_cup_and_of_one_overdrawn_what_is_missing_is_not_known(shop: Any) -> None:
    shop.mix("B1", 0.2, 0.05)
    shop.log(Scrap(what="B1", why="past"))
    shop.mix("B2", 0.2, 0.05)
    shop.log(lay(1, "B2", 0.3))
    for cup in ("B1", "B2"):
        went = trace(shop.snapshot(), cup).went_into
        assert (went[-1].what, went[-1].mass_kg) == ("not accounted for", None)


def test_a_cup_was_made_from_its_two_lots_on_its_scale(shop: Any) -> None:
    two_plies(shop)
    made = trace(shop.snapshot(), "B1").made_from
    assert [(link.what, link.kind, link.how) for link in made] == [
        ("LR", "lot", "resin"),
        ("LH", "lot", "hardener"),
        ("W1", "instrument", "weighed out on"),
    ]
    assert [link.mass_kg for link in made] == pytest.approx([0.2, 0.05, None])
    assert names(made[0].made_from) == ["resin"]


def test_a_running_total_gives_each_half_by_difference(shop: Any) -> None:
    shop.mix("B1", 0.2, 0.25, method="running total")
    made = trace(shop.snapshot(), "B1").made_from
    assert [link.mass_kg for link in made] == pytest.approx([0.2, 0.05])


def test_a_lot_is_followed_through_cup_and_piece_to_the_whole_wing(shop: Any) -> None:
    two_plies(shop)
    shop.log(Fit(piece="SKIN/1", into="WING/LEFT/skins"))
    (cup,) = trace(shop.snapshot(), "lr").went_into
    piece = link_to(cup.went_into, "SKIN/1")
    way = [piece]
    while way[-1].went_into:
        way.append(way[-1].went_into[0])
    assert names(tuple(way)) == ["SKIN/1", "WING/LEFT/skins", "WING/LEFT", "WING"]
    assert piece.state == "fitted"


def test_a_piece_is_followed_back_to_every_lot(shop: Any) -> None:
    two_plies(shop)
    made = trace(shop.snapshot(), "SKIN").made_from
    assert {link.what for link in made} == {"LT", "B1"}
    assert {link.what for link in link_to(made, "B1").made_from} == {"LR", "LH", "W1"}


def test_a_sheet_went_into_pieces_and_its_offcut_and_the_offcut_further(shop: Any) -> None:
    shop.sheet("S1", "bought", 1.0, 1.0, mass_kg=1.6, lots=("LT",))
    offcut = Minted(kind=ThingKind.OFFCUT, number="F1", name="F1")
    kept = KeptOffcut(length_m=0.5, width_m=0.5)
    shop.log(Cut(pieces=("RIB.1/1",), sheet="S1", offcut=kept, minted=(offcut,)))
    shop.log(Cut(pieces=("RIB.2/1",), sheet="F1"))
    sheet = trace(shop.snapshot(), "S1")
    assert sheet.state == "cut"
    assert names(sheet.made_from) == ["LT"]
    assert set(names(sheet.went_into)) == {"RIB.1/1", "F1"}
    assert link_to(sheet.went_into, "RIB.1/1").mass_kg == pytest.approx(0.2 * 1.6)
    assert names(link_to(sheet.went_into, "F1").went_into) == ["RIB.2/1"]
    assert names(trace(shop.snapshot(), "RIB.2/1").made_from) == ["F1"]


def test_a_cup_of_adhesive_is_in_every_face_of_the_joint(shop: Any) -> None:
    shop.mix("B2", 0.1, 0.025)
    shop.log(
        Bond(pieces=("JOINT/1", "RIB.1/1", "RIB.2/1"), batches=(Share(what="B2", mass_kg=0.1),), mass_kg=0.1)
    )
    went = trace(shop.snapshot(), "B2").went_into
    assert {link.what: link.mass_kg for link in went if link.kind == "piece"} == pytest.approx(
        {"JOINT/1": 0.1, "RIB.1/1": 0.0, "RIB.2/1": 0.0}
    )


def test_held_and_scrapped_come_before_every_other_state(shop: Any) -> None:
    two_plies(shop)
    shop.log(Hold(what="B1", why="mixed short"))
    shop.log(Scrap(what="SKIN/1", why="dry"))
    snapshot = shop.snapshot()
    assert trace(snapshot, "B1").state == "on hold"
    assert trace(snapshot, "SKIN/1").state == "scrapped"
    assert link_to(trace(snapshot, "B1").went_into, "SKIN/1").state == "scrapped"


def test_entries_are_all_that_name_the_thing_or_gave_it_its_number(shop: Any) -> None:
    before = len(shop.logged)
    two_plies(shop)
    shop.log(Hold(what="B1", why="mixed short"))
    shop.log(Weigh(what="SKIN/1", reading_kg=(1.0,)))
    found = trace(shop.snapshot(), "B1")
    assert found.entries == tuple(before + number for number in (1, 2, 3, 4))


@pytest.mark.parametrize("word", ["SKIN/1", "skin/1", "P001", " SKIN ", "p001"])
def test_a_piece_is_found_by_name_tag_or_its_part(shop: Any, word: str) -> None:
    two_plies(shop)
    assert trace(shop.snapshot(), word).what == "SKIN/1"


def test_an_assembly_is_found_by_the_end_of_its_path_and_holds_its_pieces(shop: Any) -> None:
    two_plies(shop)
    shop.log(Fit(piece="SKIN/1", into="WING/LEFT/skins"))
    found = trace(shop.snapshot(), "skins")
    assert (found.what, found.kind, names(found.made_from)) == ("WING/LEFT/skins", "assembly", ["SKIN/1"])


def test_what_a_scale_weighed_is_found_from_the_scale(shop: Any) -> None:
    two_plies(shop)
    shop.log(Weigh(what="SKIN/1", reading_kg=(1.0,), scale="W1"))
    assert names(trace(shop.snapshot(), "W1").went_into) == ["B1", "SKIN/1"]


def test_a_part_nobody_has_begun_has_come_from_nothing(shop: Any) -> None:
    found = trace(shop.snapshot(), "PIN")
    assert found == Trace(
        what="PIN", kind="part", state="in the plan", made_from=(), went_into=(), entries=()
    )


@pytest.mark.parametrize("word", ["B999", "", "SKIN/2", "LEFT/sk"])
def test_what_nothing_is_called_is_refused(shop: Any, word: str) -> None:
    two_plies(shop)
    with pytest.raises(Refused):
        trace(shop.snapshot(), word)


def test_pieces_fitted_into_each_other_do_not_go_on_for_ever(shop: Any) -> None:
    two_plies(shop)
    shop.log(Cut(pieces=("RIB.1/1",), sheet="S1"))
    shop.log(Fit(piece="RIB.1/1", into="SKIN/1"))
    shop.log(Fit(piece="SKIN/1", into="RIB.1/1"))
    found = trace(shop.snapshot(), "SKIN/1")
    assert names(found.went_into) == ["RIB.1/1"]
    assert names(found.went_into[0].went_into) == []
