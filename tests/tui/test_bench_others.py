"""Drafts that survive, and what other people log while a slip is open."""

from __future__ import annotations

import asyncio
import time
from collections.abc import Callable
from contextlib import AbstractAsyncContextManager
from pathlib import Path
from typing import Any

from ledger.operations.keep_draft import drafts_of
from ledger.operations.log_entry import log_entry
from ledger.operations.open_build import open_build
from ledger.operations.withdraw_entry import withdraw_entry

OpenBench = Callable[..., AbstractAsyncContextManager[Any]]

HELD = "MT 09:30: HARD-A"


async def open_mix(bench: Any) -> None:
    for text in ("mix", "RESIN-A", "100", "HARD-A"):
        await bench.type(text)


async def test_a_draft_is_back_after_a_kill(small_book: Path, open_bench: OpenBench) -> None:
    async with open_bench(small_book) as bench:
        await open_mix(bench)
    async with open_bench(small_book) as bench:
        slip = bench.app.bench.desk.slip
        assert (slip.value("resin_lot"), slip.value("resin"), slip.value("hardener_lot")) == (
            "RESIN-A",
            "100 g",
            "HARD-A",
        )
        assert slip.current.word == "hardener"
        assert any("is open again" in line for line in bench.said)


async def test_a_lay_draft_is_back_with_its_ply(
    small_book: Path, open_bench: OpenBench, cup_of_600: str
) -> None:
    async with open_bench(small_book) as bench:
        await bench.scan("SKIN.UPR-L")
        await bench.type("lay")
    async with open_bench(small_book) as bench:
        slip = bench.app.bench.desk.slip
        assert (slip.ply.step, slip.ply.steps, slip.value("batches")) == (1, 7, cup_of_600)
        assert "ply 1 of 7" in bench.shown


async def test_escape_keeps_the_draft_and_its_word_brings_it_back(
    small_book: Path, open_bench: OpenBench
) -> None:
    async with open_bench(small_book) as bench:
        await open_mix(bench)
        desk = bench.app.bench.desk
        await bench.key("escape")
        assert "drafts kept: mix" in bench.shown
        assert (desk.slip, list(desk.drafts)) == (None, ["mix"])
        await bench.type("mix")
        assert bench.app.bench.desk.slip.value("resin") == "100 g"
        await bench.type("throw away")
        assert drafts_of(small_book) == ()


async def test_an_entry_by_another_process_is_said_within_two_seconds_and_must_be_looked_at(
    small_book: Path, open_bench: OpenBench, at_nine_thirty: Any
) -> None:
    async with open_bench(small_book) as bench:
        await open_mix(bench)
        await bench.type("27", enter=False)
        before = bench.app.bench.desk.slip
        # Long enough for the book to have been looked at once.
        await asyncio.sleep(0.8)
        begun = time.monotonic()
        log_entry(small_book, "hold", {"what": "HARD-A", "why": "lid open"}, by="MT", now=at_nine_thirty)
        while HELD not in bench.shown and time.monotonic() - begun < 5:
            await bench.pilot.pause(0.05)
        assert time.monotonic() - begun < 2.0, bench.said
        slip = bench.app.bench.desk.slip
        assert bench.app.line.text == "27"
        assert (slip.values, slip.at_field) == (before.values, before.at_field)
        await bench.key("enter")
        logged = len(open_build(small_book).logged)
        await bench.type("log")
        assert len(open_build(small_book).logged) == logged
        assert "type looked" in bench.said[-1]
        await bench.scan("looked")
        assert bench.app.bench.desk.slip.changes
        await bench.type("looked")
        await bench.type("log")
        assert open_build(small_book).logged[-1].kind == "mix"


async def test_a_withdrawal_that_a_slip_leans_on_is_said_too(
    small_book: Path, open_bench: OpenBench, at_nine_thirty: Any
) -> None:
    seq = next(entry.seq for entry in open_build(small_book).logged if "HARD-A" in str(entry.act))
    async with open_bench(small_book) as bench:
        await open_mix(bench)
        withdraw_entry(small_book, seq, "not ours", by="AB", now=at_nine_thirty)
        bench.app.book_changed()
        await bench.settle()
        assert [change.by for change in bench.app.bench.desk.slip.changes] == ["AB"]
        assert "AB 09:30" in bench.shown


async def test_an_entry_that_no_slip_leans_on_only_shows(
    small_book: Path, open_bench: OpenBench, at_nine_thirty: Any
) -> None:
    async with open_bench(small_book) as bench:
        await open_mix(bench)
        log_entry(small_book, "hold", {"what": "TWILL-A", "why": "creased"}, by="MT", now=at_nine_thirty)
        bench.app.book_changed()
        await bench.settle()
        assert bench.app.bench.desk.slip.changes == ()
        assert "MT 09:30 No." in bench.said[-1]


async def test_what_one_logged_oneself_is_no_change_under_a_draft(
    small_book: Path, open_bench: OpenBench, cup_of_600: str
) -> None:
    async with open_bench(small_book) as bench:
        await bench.scan("SKIN.UPR-L")
        await bench.type("lay")
        await bench.key("escape", "escape")
        for text in ("hold", "TWILL-A", "creased", "log"):
            await bench.type(text)
        assert open_build(small_book).logged[-1].kind == "hold"
        await bench.type("lay")
        slip = bench.app.bench.desk.slip
        assert slip.value("batches") == cup_of_600
        assert slip.changes == ()
