"""Drafts: which are kept, which come back, and what a correction or a withdrawal is held against."""

from __future__ import annotations

from collections.abc import Callable
from contextlib import AbstractAsyncContextManager
from pathlib import Path
from typing import Any

import pytest

from ledger.operations.keep_draft import drafts_of
from ledger.operations.log_entry import log_entry
from ledger.operations.open_build import open_build

OpenBench = Callable[..., AbstractAsyncContextManager[Any]]


@pytest.fixture
def weighed(small_book: Path, at_nine_thirty: Any) -> int:
    """A rib weighed 3123.4 g where 312.34 g was on the scale: the number of that entry."""
    entry = log_entry(
        small_book,
        "weigh",
        {"what": "RIB.01-L", "reading": "3123.4 g", "scale": "W1"},
        by="JK",
        now=at_nine_thirty,
    )
    return entry.seq


async def test_a_correction_nobody_wrote_in_leaves_no_draft(
    small_book: Path, open_bench: OpenBench, weighed: int
) -> None:
    async with open_bench(small_book) as bench:
        await bench.key("f9")
        assert bench.app.bench.desk.slip.corrects == weighed
        await bench.key("escape")
        assert (drafts_of(small_book), bench.app.bench.desk.drafts) == ((), {})
        await bench.type("weigh")
        assert bench.app.bench.desk.slip.corrects is None


async def test_a_correction_put_away_has_its_own_name_and_f9_goes_on_with_it(
    small_book: Path, open_bench: OpenBench, weighed: int
) -> None:
    async with open_bench(small_book) as bench:
        desk = bench.app.bench.desk
        await bench.key("f9")
        desk.slip = desk.slip.moved_to("reading")
        await bench.type("312.3")
        await bench.key("escape")
        await bench.type("weigh")
        assert (desk.slip.corrects, desk.slip.value("reading")) == (None, "")
        await bench.key("f9")
        assert (desk.slip.corrects, desk.slip.value("reading")) == (weighed, "312.3 g")
        assert not desk.slip.untouched


async def test_the_thing_in_hand_beats_a_draft_about_another(small_book: Path, open_bench: OpenBench) -> None:
    async with open_bench(small_book) as bench:
        desk = bench.app.bench.desk
        for text in ("weigh", "RIB.01-L", "300"):
            await bench.type(text)
        await bench.key("escape")
        await bench.scan("RIB.01-R")
        await bench.type("weigh")
        assert (desk.slip.value("what"), desk.slip.value("reading")) == ("RIB.01-R", "")
        await bench.type("351")
        await bench.key("escape")
        await bench.scan("RIB.01-L")
        await bench.type("weigh")
        assert (desk.slip.value("what"), desk.slip.value("reading")) == ("RIB.01-L", "300 g")
        assert {draft.name for draft in drafts_of(small_book)} == {"weigh", "weigh of RIB.01-L"}


async def test_what_was_put_away_stays_away_and_what_was_open_opens_again(
    small_book: Path, open_bench: OpenBench
) -> None:
    async with open_bench(small_book) as bench:
        for text in ("weigh", "RIB.01-L", "300"):
            await bench.type(text)
        await bench.key("escape")
    async with open_bench(small_book) as bench:
        desk = bench.app.bench.desk
        assert (desk.slip, list(desk.drafts)) == (None, ["weigh"])
        await bench.type("weigh")
        assert desk.slip.value("reading") == "300 g"
    async with open_bench(small_book) as bench:
        assert bench.app.bench.desk.slip.value("reading") == "300 g"


async def test_a_wrong_weighing_put_right_is_not_held_against_itself(
    small_book: Path, open_bench: OpenBench, weighed: int
) -> None:
    async with open_bench(small_book) as bench:
        desk = bench.app.bench.desk
        await bench.key("f9")
        desk.slip = desk.slip.moved_to("reading")
        await bench.type("312.3")
        judged = desk.judge_slip()
        assert judged is not None
        assert (judged.expected_kg, judged.inside) == (pytest.approx(0.312), True)
        await bench.type("log")
        await bench.type("log")
    last = open_build(small_book).logged[-1]
    assert (last.kind, last.act.corrects, getattr(last.act, "reading_kg", None)) == (
        "weigh",
        weighed,
        (0.3123,),
    )


async def test_a_ply_put_right_has_the_grams_it_took_back_in_its_cup(
    small_book: Path, open_bench: OpenBench, cup_of_600: str, clock: Any
) -> None:
    log_entry(
        small_book,
        "lay",
        {"piece": "SKIN.UPR-L", "step": "1", "lots": "GLASS-A", "batches": cup_of_600},
        by="JK",
        now=clock.now(),
    )
    async with open_bench(small_book) as bench:
        before = next(cup.left_kg for cup in bench.app.bench._cups())
        await bench.key("f9")
        after = next(cup.left_kg for cup in bench.app.bench._cups())
        assert after == pytest.approx(0.762)
        assert before < 0.7


async def test_undo_offers_the_last_entry_and_says_what_it_is(
    small_book: Path, open_bench: OpenBench, at_nine_thirty: Any
) -> None:
    async with open_bench(small_book) as bench:
        desk = bench.app.bench.desk
        await bench.scan("TAG UNDO")
        desk.slip = desk.slip.moved_to("why")
        await bench.type("an older thought")
        await bench.key("escape")
        seq = log_entry(small_book, "note", {"text": "bag leaks at the tip"}, by="MT", now=at_nine_thirty).seq
        bench.app.book_changed()
        await bench.settle()
        await bench.scan("TAG UNDO")
        assert desk.slip.value("seq") == str(seq)
        assert desk.slip.value("why") == "entered by mistake"
        await bench.scan("TAG LOG")
        assert f"it would take back No. {seq} 09:30 MT" in bench.said[-1]
        assert "bag leaks at the tip" in bench.said[-1]


@pytest.mark.usefixtures("weighed")
async def test_the_entry_shown_as_last_is_the_one_f9_opens(
    small_book: Path, open_bench: OpenBench, at_nine_thirty: Any
) -> None:
    # Written last, but of an earlier hour: it stands before the weighing by its time.
    seq = log_entry(
        small_book,
        "note",
        {"text": "late thought", "at": "2026-11-03T09:20:00+00:00"},
        by="MT",
        now=at_nine_thirty,
    ).seq
    async with open_bench(small_book) as bench:
        assert bench.app.bench.view.last.seq == seq
        assert f"No. {seq} 09:20 MT" in bench.shown
        await bench.key("f9")
        assert bench.app.bench.desk.slip.corrects == seq


async def test_a_slip_nobody_wrote_in_is_kept_where_another_opens_over_it_and_not_on_escape(
    small_book: Path, open_bench: OpenBench
) -> None:
    async with open_bench(small_book) as bench:
        await bench.type("hold")
        await bench.type("note")
        assert bench.app.bench.desk.slip.kind == "note"
        assert list(bench.app.bench.desk.drafts) == ["hold"]
        await bench.key("escape")
        assert bench.app.bench.desk.slip is None
        assert list(bench.app.bench.desk.drafts) == ["hold"]
