"""Whose entry it is: badges, the second pair of eyes, the half hour, the lock, the doubted clock."""

from __future__ import annotations

from collections.abc import Callable
from contextlib import AbstractAsyncContextManager
from datetime import timedelta
from pathlib import Path
from typing import Any

import pytest

from ledger.operations.open_build import open_build
from ledger.operations.watch_clock import clock_seen_at, doubt_of, see_clock
from ledger.tui.wall_clock import DOUBTED, WallClock, read_told_time

OpenBench = Callable[..., AbstractAsyncContextManager[Any]]


def entries(book: Path) -> tuple[Any, ...]:
    return open_build(book).logged


async def write_note(bench: Any, text: str = "radius looks right") -> None:
    for typed in ("note", text, "log"):
        await bench.type(typed)


async def test_nobody_logs_before_a_badge_and_the_slip_stays(
    small_book: Path, open_bench: OpenBench, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.delenv("WINGLEDGER_BY")
    before = len(entries(small_book))
    async with open_bench(small_book) as bench:
        assert "nobody logs" in bench.shown
        await write_note(bench)
        assert len(entries(small_book)) == before
        assert "scan your badge" in bench.said[-1]
        assert bench.app.bench.desk.slip.value("text") == "radius looks right"
        await bench.scan("BADGE MT")
        await bench.type("log")
        assert entries(small_book)[-1].by == "MT"


async def test_thirty_idle_minutes_ask_for_a_badge(small_book: Path, open_bench: OpenBench) -> None:
    before = len(entries(small_book))
    async with open_bench(small_book) as bench:
        bench.clock.go_on(minutes=29)
        await write_note(bench)
        assert len(entries(small_book)) == before + 1
        bench.clock.go_on(minutes=30)
        await write_note(bench)
        assert len(entries(small_book)) == before + 1
        assert "scan your badge" in bench.said[-1]
        assert "logs JK (badge)" in bench.shown
        await bench.scan("BADGE JK")
        await bench.type("log")
        assert len(entries(small_book)) == before + 2


async def test_whoever_logs_cannot_have_seen_it(
    small_book: Path, open_bench: OpenBench, cup_of_600: str
) -> None:
    before = len(entries(small_book))
    async with open_bench(small_book) as bench:
        await bench.scan("SKIN.UPR-L")
        await bench.type("lay")
        await bench.scan("BADGE JK")
        assert bench.app.bench.desk.slip.value("seen_by") == ""
        assert bench.app.rung[-1] == 2
        assert "somebody else" in bench.said[-1]
        await bench.scan("BADGE AB")
        assert bench.app.bench.desk.slip.value("seen_by") == "AB"
        bench.app.badge("AB")
        await bench.type("log")
        assert "AB logs: somebody else must have seen it" in bench.said[-1]
        assert len(entries(small_book)) == before
        bench.app.badge("JK")
        await bench.type("log")
        entry = entries(small_book)[-1]
        assert (entry.by, entry.act.seen_by, entry.act.batches[0].what) == ("JK", "AB", cup_of_600)


async def test_with_is_kept_in_the_entry(small_book: Path, open_bench: OpenBench) -> None:
    async with open_bench(small_book) as bench:
        await bench.type("with +AB MT")
        assert "logs JK with AB MT" in bench.shown
        await write_note(bench)
        assert entries(small_book)[-1].act.with_others == ("AB", "MT")


async def test_the_lock_hears_nothing_but_a_badge(small_book: Path, open_bench: OpenBench) -> None:
    before = len(entries(small_book))
    async with open_bench(small_book) as bench:
        await bench.type("note")
        await bench.type("radius looks right")
        await bench.key("f12")
        for key in ("enter", "escape", "f2", "f3", "f8", "f9", "tab", "delete"):
            await bench.key(key)
        await bench.type("log")
        assert "LOCKED" in bench.shown
        assert bench.app.current_mode == "bench"
        assert len(entries(small_book)) == before
        await bench.scan("BADGE MT")
        assert bench.app.crew.by == "MT"
        assert bench.app.bench.desk.slip.value("text") == "radius looks right"


# -- the clock


async def test_a_clock_behind_the_last_entry_asks_for_the_time(
    small_book: Path, open_bench: OpenBench, clock: Any
) -> None:
    last = entries(small_book)[-1].logged_at
    clock.wall = last - timedelta(hours=3)
    async with open_bench(small_book) as bench:
        await write_note(bench)
        assert entries(small_book)[-1].kind != "note"
        assert "before the last entry of 03 Nov 09:10: what time is it?" in bench.said[-1]
        await bench.type("10:42")
        await bench.type("log")
        entry = entries(small_book)[-1]
        assert entry.act.text == "radius looks right"
        assert entry.act.remark == DOUBTED
        assert f"{entry.at:%d %b %H:%M}" == "03 Nov 10:42"
        await write_note(bench, "and so does this")
        assert entries(small_book)[-1].act.remark == DOUBTED


async def test_a_clock_twelve_hours_on_asks_once(small_book: Path, open_bench: OpenBench, clock: Any) -> None:
    see_clock(clock.wall)
    clock.go_on(hours=12, minutes=1)
    async with open_bench(small_book) as bench:
        await write_note(bench)
        assert "was last seen 03 Nov 10:42" in bench.said[-1]
        await bench.scan("TAG CLOCK RIGHT")
        await bench.type("log")
        assert entries(small_book)[-1].act.remark == DOUBTED
        await write_note(bench, "and this")
        assert entries(small_book)[-1].act.remark is None


async def test_eleven_hours_on_nothing_is_asked(small_book: Path, open_bench: OpenBench, clock: Any) -> None:
    see_clock(clock.wall)
    clock.go_on(hours=11)
    async with open_bench(small_book) as bench:
        await write_note(bench)
        assert entries(small_book)[-1].act.remark is None


def test_two_laptops_a_minute_apart_are_not_doubted(at_nine_thirty: Any) -> None:
    assert doubt_of(at_nine_thirty, at_nine_thirty + timedelta(seconds=59), None) is None
    assert doubt_of(at_nine_thirty, at_nine_thirty + timedelta(seconds=61), None) is not None


def test_when_the_clock_was_seen_survives(at_nine_thirty: Any) -> None:
    assert clock_seen_at() is None
    see_clock(at_nine_thirty)
    assert clock_seen_at() == at_nine_thirty
    assert WallClock(lambda: at_nine_thirty).doubt is None


@pytest.mark.parametrize("text", ["", "10", "10:61", "25:00", "radius 10:30", "2026-13-01 10:00"])
def test_what_is_no_time_is_not_read_as_one(text: str, at_nine_thirty: Any) -> None:
    assert read_told_time(text, at_nine_thirty) is None
