"""Withdrawing an entry of each kind leaves the build as if it had never been logged, and the record whole."""

from __future__ import annotations

import dataclasses
from collections.abc import Callable
from typing import Any

import pytest

from ledger.errors import Refused
from ledger.model.snapshot import Snapshot
from ledger.operations.check_book import check_book
from ledger.operations.open_build import newest_entry, open_build
from ledger.operations.withdraw_entry import withdraw_entry

CASES: dict[str, dict[str, str]] = {
    "receive": {"material": "epoxy", "quantity": "1 kg", "lot": "NEW"},
    "instrument": {"instrument": "W9", "what": "scale", "resolution": "1 g"},
    "sheet": {"laminate": "SANDWICH", "length": "1 m", "width": "1 m", "sheet": "S9"},
    "mix": {
        "resin_lot": "RESIN",
        "resin": "100 g",
        "hardener_lot": "HARD",
        "hardener": "27 g",
        "batch": "CUP9",
    },
    "cut": {"pieces": "RIB.01-R", "sheet": "PLATE", "offcut": "600 mm x 400 mm"},
    "lay": {"piece": "SKIN-L", "step": "1", "lots": "CLOTH 100 g"},
    "bond": {"pieces": "RIB.01-L; BOLT", "batches": "CUP"},
    "coat": {"piece": "RIB.01-L", "lot": "RESIN", "mass": "5 g"},
    "trim": {"piece": "RIB.01-L", "mass": "5 g", "why": "x"},
    "build_up": {"piece": "RIB.01-L", "mass": "5 g", "lot": "RESIN"},
    "weigh": {"what": "RIB.01-L", "reading": "100 g", "state": "finished"},
    "fit": {"piece": "RIB.01-L", "into": "LEFT/ribs"},
    "scrap": {"what": "RIB.01-L", "why": "x"},
    "hold": {"what": "CLOTH", "why": "x"},
    "note": {"text": "x"},
}


def _state(snapshot: Snapshot) -> dict[str, Any]:
    fields = {field.name: getattr(snapshot, field.name) for field in dataclasses.fields(snapshot)}
    kept = {name: fields[name] for name in fields if name not in ("last_seq", "last_digest", "now", "logged")}
    return {**kept, "counting": [entry for entry in snapshot.logged if entry.kind != "withdraw"]}


@pytest.fixture
def cut_shop(shop: Any) -> Any:
    """The shop with a cup and a rib cut."""
    shop.log("mix", resin_lot="RESIN", resin="100 g", hardener_lot="HARD", hardener="27 g", batch="CUP")
    shop.log("cut", pieces="RIB.01-L", sheet="PLATE")
    return shop


@pytest.mark.parametrize("kind", list(CASES))
def test_a_withdrawn_entry_leaves_no_trace_in_the_build(cut_shop: Any, kind: str) -> None:
    before = _state(open_build(cut_shop.book).snapshot)
    logged = cut_shop.log(kind, **CASES[kind])
    assert _state(open_build(cut_shop.book).snapshot) != before
    withdrawn = withdraw_entry(cut_shop.book, logged.seq, "wrong", by="AB", now=cut_shop.now)
    assert withdrawn.says == f"entry {logged.seq} withdrawn: wrong"
    assert withdrawn.by == "AB"
    assert _state(open_build(cut_shop.book).snapshot) == before
    checked = check_book(cut_shop.book)
    assert (checked.chain_ok, checked.replay_ok, checked.entries) == (True, True, logged.seq + 1)


def test_a_withdrawn_release_holds_again_and_a_withdrawn_acceptance_opens_again(shop: Any) -> None:
    shop.log("hold", what="CLOTH", why="x")
    release = shop.log("release", what="CLOTH", why="x")
    withdraw_entry(shop.book, release.seq, "not yet", now=shop.now)
    assert open_build(shop.book).snapshot.held == {"CLOTH": 7}
    shop.log("scrap", what="RESIN", why="x")
    coat = shop.log("coat", piece="BOLT", lot="RESIN", mass="1 g")
    found = next(finding for finding in coat.findings if finding.code == "scrapped-used")
    accept = shop.log(
        "accept", finding=found.code, what=found.where.thing or str(found.where.entry), why="fine"
    )
    again = withdraw_entry(shop.book, accept.seq, "not fine", now=shop.now)
    assert found in again.findings


def test_withdrawing_the_last_plan_brings_back_the_earlier(shop: Any) -> None:
    shop.adopt("r2")
    assert open_build(shop.book).snapshot.plan.name == "r2"
    withdraw_entry(shop.book, 7, "no", now=shop.now)
    assert open_build(shop.book).snapshot.plan.name == "r1"
    with pytest.raises(Refused) as caught:
        withdraw_entry(shop.book, 1, "no", now=shop.now)
    assert [finding.code for finding in caught.value.findings] == ["only-plan"]


def test_a_withdrawal_stands(shop: Any) -> None:
    withdrawn = withdraw_entry(shop.book, 2, "wrong", now=shop.now)
    for seq in (2, withdrawn.seq):
        with pytest.raises(Refused):
            withdraw_entry(shop.book, seq, "again", now=shop.now)
    assert newest_entry(shop.book)[0] == withdrawn.seq


def test_what_depends_on_a_withdrawn_entry_stays_and_is_found(shop: Any) -> None:
    shop.log("lay", piece="SKIN-L", step="1", lots="CLOTH")
    withdrawn = withdraw_entry(shop.book, 2, "never came", now=shop.now)
    assert ("names-something-withdrawn", 7) in {
        (finding.code, finding.where.entry) for finding in withdrawn.findings
    }
    assert [entry.seq for entry in open_build(shop.book).snapshot.logged] == [1, 3, 4, 5, 6, 7, 8]


def test_entries_of_a_withdrawn_beginning_keep_their_piece(make_shop: Callable[[str], Any]) -> None:
    shop = make_shop("other.book")
    shop.log("sheet", laminate="SANDWICH", length="1 m", width="1 m", sheet="S")
    cut = shop.log("cut", pieces="RIB.01-L", sheet="S")
    shop.log("weigh", what="RIB.01-L", reading="10 g")
    withdraw_entry(shop.book, cut.seq, "wrong sheet", now=shop.now)
    piece = open_build(shop.book).snapshot.pieces["RIB.01-L/1"]
    assert piece.number == cut.minted[0].number
    assert shop.log("cut", pieces="RIB.01-L", sheet="S").minted == ()
