"""A correction keeps numbers, tags, time and place, so that what depends on it still does."""

from __future__ import annotations

import sqlite3
from typing import Any

import pytest

from ledger.errors import BookUnusable, Refused, WrongUse
from ledger.model.acts import Coat, Cut, Lay, Mix, Receive, Weigh
from ledger.operations.check_book import check_book
from ledger.operations.correct_entry import Corrected, correct_entry, fields_of
from ledger.operations.open_build import newest_entry, open_build


def _correct(shop: Any, seq: int, **fields: str) -> Corrected:
    corrected = correct_entry(shop.book, seq, fields, by="AB", now=shop.now)
    checked = check_book(shop.book)
    assert (checked.chain_ok, checked.replay_ok) == (True, True)
    return corrected


def _act(shop: Any, seq: int) -> Any:
    return next(entry for entry in open_build(shop.book).snapshot.logged if entry.seq == seq).act


def test_a_corrected_delivery_keeps_its_number_and_its_dependants(shop: Any) -> None:
    lot = shop.log("receive", material="carbon 200", quantity="5 m2").minted[0].number
    shop.log("lay", piece="SKIN-L", step="1", lots=lot)
    corrected = _correct(shop, 7, quantity="6 m2")
    assert corrected.withdrawn.says == "entry 7 withdrawn: corrected"
    assert corrected.entered.says == f"{lot} received: 6 m2 carbon 200 (corrects entry 7)"
    assert (corrected.withdrawn.seq, corrected.entered.seq) == (9, 10)
    snapshot = open_build(shop.book).snapshot
    assert snapshot.lots[lot].receive.quantity.value == 6.0
    assert [entry.seq for entry in snapshot.logged if entry.kind != "withdraw"] == [1, 2, 3, 4, 5, 6, 10, 8]
    assert corrected.entered.findings == ()


def test_a_correction_keeps_the_time_and_says_who_corrected(shop: Any) -> None:
    first = shop.log("note", text="one", at="2026-03-01T08:30+01:00", with_="MT", remark="r")
    entered = _correct(shop, first.seq, text="two").entered
    assert entered.at == first.at
    assert entered.by == "AB"
    act = _act(shop, entered.seq)
    assert (act.with_others, act.remark, act.corrects) == (("MT",), "r", first.seq)


def test_a_corrected_cut_keeps_the_tags_of_the_same_pieces_and_its_offcut(shop: Any) -> None:
    cut = shop.log("cut", pieces="RIB.01-L; RIB.01-R", sheet="PLATE", offcut="600 mm x 400 mm")
    shop.log("weigh", what="RIB.01-L", reading="100 g")
    entered = _correct(shop, cut.seq, angle="10 deg", offcut="600 mm x 300 mm").entered
    assert entered.minted == cut.minted
    act = _act(shop, entered.seq)
    assert isinstance(act, Cut)
    assert (act.angle_deg, act.offcut is not None and act.offcut.width_m) == (10.0, 0.3)


def test_a_corrected_cut_keeps_its_running_number_though_later_ones_have_begun(shop: Any) -> None:
    first = shop.log("cut", pieces="CLIP", sheet="PLATE")
    shop.log("cut", pieces="CLIP", sheet="PLATE")
    entered = _correct(shop, first.seq, kerf="3 mm").entered
    assert entered.minted == first.minted
    assert set(open_build(shop.book).snapshot.pieces) == {"CLIP/1", "CLIP/2"}


def test_a_corrected_cut_of_another_part_begins_another_piece(shop: Any) -> None:
    cut = shop.log("cut", pieces="RIB.01-L", sheet="PLATE")
    entered = _correct(shop, cut.seq, pieces="RIB.01-R").entered
    assert [minted.name for minted in entered.minted] == ["RIB.01-R/1"]
    assert entered.minted[0].number != cut.minted[0].number
    assert set(open_build(shop.book).snapshot.pieces) == {"RIB.01-R/1"}


def test_pours_and_shares_come_through_a_correction_to_the_last_bit(shop: Any) -> None:
    shop.log(
        "mix", resin_lot="RESIN", resin="205.3 g; 0,1 lb", hardener_lot="HARD", hardener="64 g", batch="CUP"
    )
    shop.log("lay", piece="SKIN-L", step="1", lots="CLOTH 3.3 oz", batches="CUP split unknown")
    mixed, laid = _act(shop, 7), _act(shop, 8)
    assert isinstance(mixed, Mix)
    assert isinstance(laid, Lay)
    again = _act(shop, _correct(shop, 7, residue="5 g").entered.seq)
    assert (again.resin_kg, again.hardener_kg, again.batch) == (mixed.resin_kg, mixed.hardener_kg, "CUP")
    relaid = _act(shop, _correct(shop, 8, orientation="45 deg").entered.seq)
    assert (relaid.lots, relaid.batches, relaid.piece) == (laid.lots, laid.batches, laid.piece)


def test_another_choice_of_a_group_takes_the_place_of_the_first(shop: Any) -> None:
    coat = shop.log("coat", piece="BOLT", lot="RESIN", mass="5 g")
    act = _act(shop, _correct(shop, coat.seq, areal_mass="100 g/m2").entered.seq)
    assert isinstance(act, Coat)
    assert (act.mass_kg, act.areal_mass_kg_m2) == (None, 0.1)


def test_an_empty_value_takes_a_field_away(shop: Any) -> None:
    weigh = shop.log("weigh", what="BOLT", reading="5 g", scale="W2")
    act = _act(shop, _correct(shop, weigh.seq, scale="").entered.seq)
    assert isinstance(act, Weigh)
    assert act.scale is None


def test_a_head_may_carry_the_unit(shop: Any) -> None:
    weigh = shop.log("weigh", what="BOLT", reading="5 g")
    act = _act(shop, correct_entry(shop.book, weigh.seq, {"reading [oz]": "2"}).entered.seq)
    # checks: 1 oz is 1/16 of the international pound, 0.45359237 kg
    assert act.reading_kg == (2 * 0.45359237 / 16,)


def test_a_correction_of_a_correction_stays_in_the_first_place(shop: Any) -> None:
    shop.log("note", text="one")
    shop.log("note", text="after")
    first = _correct(shop, 7, text="two").entered
    second = _correct(shop, first.seq, text="three").entered
    notes = [entry.seq for entry in open_build(shop.book).snapshot.logged if entry.kind == "note"]
    assert notes == [second.seq, 8]


def test_a_preview_of_a_correction_writes_nothing(shop: Any) -> None:
    before = newest_entry(shop.book)
    previewed = correct_entry(shop.book, 2, {"quantity": "9 m2"}, now=shop.now, preview=True)
    assert previewed.entered.says.startswith("CLOTH received: 9 m2")
    assert newest_entry(shop.book) == before


@pytest.mark.parametrize(
    ("seq", "fields", "error", "code"),
    [
        (99, {"text": "x"}, Refused, "no-such-entry"),
        (-1, {"text": "x"}, Refused, "no-such-entry"),
        (1, {"plan": "x"}, WrongUse, "not-corrected"),
        (2, {"colour": "red"}, WrongUse, "unknown-field"),
        (2, {"quantity": "5"}, Refused, "field-unreadable"),
        (2, {"material": "nothing"}, Refused, "name-unknown"),
        (2, {"material": ""}, Refused, "field-missing"),
    ],
)
def test_a_correction_that_cannot_be_leaves_the_book_alone(
    shop: Any, seq: int, fields: dict[str, str], error: type[Refused], code: str
) -> None:
    before = newest_entry(shop.book)
    with pytest.raises(error) as caught:
        correct_entry(shop.book, seq, fields, now=shop.now)
    assert [finding.code for finding in caught.value.findings] == [code]
    assert newest_entry(shop.book) == before
    assert check_book(shop.book).replay_ok


def test_what_is_withdrawn_is_not_corrected(shop: Any) -> None:
    _correct(shop, 2, quantity="9 m2")
    with pytest.raises(Refused) as caught:
        correct_entry(shop.book, 2, {"quantity": "8 m2"})
    assert [finding.code for finding in caught.value.findings] == ["withdrawn-already"]
    with pytest.raises(WrongUse):
        correct_entry(shop.book, 7, {"why": "no"})


def test_every_kind_reads_back_from_the_fields_it_shows(shop: Any) -> None:
    shop.log(
        "receive", material="epoxy", quantity="2 kg", ratio="100:27", pot_life="25 min", expiry="2027-01-01"
    )
    shop.log("mix", resin_lot="RESIN", resin="100 g", hardener_lot="HARD", hardener="27 g", humidity="45 %")
    shop.log("cut", pieces="RIB.01-L", sheet="PLATE", offcut="binned", kerf="3 mm")
    shop.log("bond", pieces="RIB.01-L; BOLT", batches="B0018 5 g", peel_ply_removed="yes", length="1 m")
    shop.log("weigh", what="WING", reading="10 kg", present="jig 1 kg; bag", state="finished", missing="BOLT")
    shop.log("fit", piece="BOLT", into="WING")
    build = open_build(shop.book)
    for entry in build.snapshot.logged:
        if entry.kind in ("adopt", "withdraw"):
            continue
        before = fields_of(entry)
        corrected = correct_entry(shop.book, entry.seq, {"remark": "again"}, by=entry.by, now=shop.now)
        after = next(e for e in open_build(shop.book).logged if e.seq == corrected.entered.seq)
        assert fields_of(after) == {**before, "remark": "again"}
    assert check_book(shop.book).replay_ok


def test_both_halves_are_written_or_none(shop: Any) -> None:
    connection = sqlite3.connect(shop.book)
    connection.execute(
        "CREATE TRIGGER sly BEFORE INSERT ON entry WHEN NEW.kind = 'receive' "
        "BEGIN SELECT RAISE(ABORT, 'no'); END"
    )
    connection.close()
    before = newest_entry(shop.book)
    with pytest.raises(BookUnusable, match="refused"):
        correct_entry(shop.book, 2, {"quantity": "9 m2"})
    assert newest_entry(shop.book) == before
    assert isinstance(_act(shop, 2), Receive)
