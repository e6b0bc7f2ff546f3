"""A scan presses no key, on no screen and in no field; what does not fit changes nothing and is named."""

from __future__ import annotations

from collections.abc import Callable
from contextlib import AbstractAsyncContextManager
from pathlib import Path
from typing import Any

import pytest

from ledger.model import acts  # noqa: F401  the kinds are declared when this is imported
from ledger.model.declare import KINDS
from ledger.operations.open_build import open_build

OpenBench = Callable[..., AbstractAsyncContextManager[Any]]

# Whole actions, digits that are screens by themselves, words that log, and what is on no tag here.
CODES = ("1111", "2345", "log ", "leave", "keep", "ZZ-999", "bench1", "    ")


async def test_a_scan_is_no_key_on_any_screen(demo_book: Path, open_bench: OpenBench) -> None:
    before = len(open_build(demo_book).logged)
    async with open_bench(demo_book) as bench:
        for word in ("weights", "fuel", "trace", "bench"):
            await bench.app.go(word)
            await bench.settle()
            for code in CODES:
                for end in ("enter", "tab", "silence"):
                    await bench.scan(code, end)
                    assert bench.app.current_mode == word, (code, end)
                    assert bench.app.line.text == ""
        assert bench.app.is_running
    assert len(open_build(demo_book).logged) == before


async def test_a_scan_is_no_key_over_a_list_or_under_the_lock(demo_book: Path, open_bench: OpenBench) -> None:
    before = len(open_build(demo_book).logged)
    async with open_bench(demo_book) as bench:
        await bench.key("f12")
        for code in ("1111", "log ", "TAG LOG", "leave"):
            await bench.scan(code)
            assert type(bench.app.screen).__name__ == "LockScreen"
        await bench.scan("BADGE AB")
        assert bench.app.crew.by == "AB"
        for word in ("actions", "help", "findings"):
            await bench.type(word)
            await bench.settle()
            await bench.scan("2222")
            assert bench.app.current_mode == "bench"
    assert len(open_build(demo_book).logged) == before


@pytest.mark.parametrize("kind", [kind for kind in KINDS if kind != "adopt"])
async def test_a_scan_in_any_field_logs_nothing_and_moves_no_screen(
    kind: str, small_book: Path, open_bench: OpenBench
) -> None:
    before = len(open_build(small_book).logged)
    async with open_bench(small_book) as bench:
        await bench.type(kind)
        desk = bench.app.bench.desk
        for field in desk.slip.fields:
            for code in ("1111", "log ", "ZZ-999"):
                desk.slip = desk.slip.moved_to(field.word)
                await bench.scan(code)
                assert bench.app.current_mode == "bench"
                assert desk.slip is not None, (field.word, code)
                assert desk.slip.kind == kind
        desk.slip = desk.slip.moved_to("remark").moved(1)
        assert desk.slip.current is None
        for code in ("1111", "log ", "keep", "ZZ-999"):
            await bench.scan(code)
            assert desk.slip is not None
    assert len(open_build(small_book).logged) == before


async def test_a_scan_that_does_not_fit_changes_nothing_and_names_what_would_take_it(
    small_book: Path, open_bench: OpenBench
) -> None:
    async with open_bench(small_book) as bench:
        await bench.type("mix")
        await bench.scan("RESIN-A")
        before = bench.app.bench.desk.slip
        assert before.current.word == "resin"
        await bench.scan("HARD-A")
        assert bench.app.bench.desk.slip == before
        assert bench.app.rung[-1] == 2
        assert bench.said[-1].startswith("LOOK scanned lot HARD-A")
        assert "resin lot or hardener lot would take it" in bench.said[-1]
        await bench.scan("RIB.01-L")
        assert bench.app.bench.desk.slip == before
        assert "put the slip away (Esc) and scan again" in bench.said[-1]
        await bench.scan("4006381333931")
        assert bench.app.bench.desk.slip == before
        assert "scanned 4006381333931: nothing known" in bench.said[-1]


async def test_a_rib_scanned_by_mistake_never_takes_the_place_of_the_skin_in_hand(
    small_book: Path, open_bench: OpenBench, cup_of_600: str
) -> None:
    async with open_bench(small_book) as bench:
        await bench.scan("SKIN.UPR-L")
        await bench.type("lay")
        await bench.scan("GLASS-A")
        await bench.scan(cup_of_600)
        before = bench.app.bench.desk.slip
        for code in ("RIB.01-L", "GLASS-A"):
            await bench.scan(code)
            assert bench.app.bench.desk.slip == before
            assert bench.app.rung[-1] == 2
        assert "lots would take it" in bench.said[-1]


async def test_a_scan_leaves_what_a_hand_was_typing(small_book: Path, open_bench: OpenBench) -> None:
    async with open_bench(small_book) as bench:
        await bench.type("note")
        await bench.type("radius lo", enter=False)
        await bench.scan("ZZ-999")
        assert bench.app.line.text == "radius lo"
        assert bench.app.bench.desk.slip is not None


async def test_a_lone_digit_is_a_screen_only_where_no_field_waits(
    small_book: Path, open_bench: OpenBench
) -> None:
    async with open_bench(small_book) as bench:
        await bench.pilot.press("2")
        bench.clock.go_on(milliseconds=260)
        bench.app.let_silence_speak()
        await bench.settle()
        assert bench.app.current_mode == "weights"
        await bench.type("bench")
        await bench.type("mix")
        await bench.pilot.press("2")
        bench.clock.go_on(seconds=2)
        bench.app.let_silence_speak()
        await bench.settle()
        assert bench.app.current_mode == "bench"
        assert bench.app.line.text == "2"
