"""Cups nothing is to be wetted from: shown, named, never proposed."""

from __future__ import annotations

from collections.abc import Callable
from contextlib import AbstractAsyncContextManager
from dataclasses import replace
from datetime import timedelta
from pathlib import Path
from typing import Any

import pytest

from ledger.operations.clock_cups import Cup, best_cup
from ledger.operations.log_entry import log_entry
from ledger.tui.bench_drawing import cups_text
from ledger.tui.large_cups import cups_by_urgency, large_cup
from ledger.tui.large_print import large_text
from ledger.tui.room import Room
from ledger.tui.themes import PLAIN, SIGNS

OpenBench = Callable[..., AbstractAsyncContextManager[Any]]


@pytest.fixture
def out_cup(small_book: Path, clock: Any) -> str:
    """A cup mixed 100:40 where 100:27 is wanted, a minute old."""
    logged = log_entry(
        small_book,
        "mix",
        {"resin_lot": "RESIN-A", "resin": "500 g", "hardener_lot": "HARD-A", "hardener": "200 g"},
        by="MT",
        now=clock.now() - timedelta(minutes=1),
    )
    return logged.minted[0].number


def cup(number: str, at: Any, *, minutes: float = 10.0, left_kg: float = 0.1, verdict: str = "in") -> Cup:
    return Cup(
        number=number,
        what="lam",
        resin_material="lam resin",
        mixed_at=at,
        pot_life_s=1500.0,
        minutes_left=minutes,
        left_kg=left_kg,
        held=False,
        verdict=verdict,
    )


async def test_a_cup_out_of_ratio_shows_stop_and_is_not_proposed(
    small_book: Path, open_bench: OpenBench, out_cup: str
) -> None:
    async with open_bench(small_book) as bench:
        row = next(row for row in bench.shown.splitlines() if f"{out_cup}" in row and "OUT OF RATIO" in row)
        assert row.rstrip().endswith("STOP")
        await bench.scan("SKIN.UPR-L")
        await bench.scan("TAG NEXT PLY")
        desk = bench.app.bench.desk
        assert desk.slip.value("batches") == ""
        await bench.scan("GLASS-A")
        await bench.scan(out_cup)
        assert desk.slip.value("batches") == out_cup
        assert any(
            "STOP" in row and f"{out_cup} is out of ratio" in row for row in bench.shown.splitlines()
        ), bench.shown


async def test_a_cup_mixed_out_of_ratio_is_named_and_not_put_into_what_waited(
    small_book: Path, open_bench: OpenBench
) -> None:
    async with open_bench(small_book) as bench:
        await bench.scan("SKIN.UPR-L")
        await bench.scan("TAG NEXT PLY")
        await bench.scan("TAG NEW CUP")
        for code in ("RESIN-A", "+ 500.0 g", "HARD-A", "+ 200.0 g", "TAG LOG"):
            await bench.scan(code)
        desk = bench.app.bench.desk
        assert (desk.slip.kind, desk.slip.value("batches")) == ("lay", "")
        number = bench.app.stock.build.logged[-1].act.minted[0].number
        assert any(line.startswith(f"STOP {number} mixed 40.0") for line in bench.said) or any(
            line.startswith(f"STOP {number}  mixed ") for line in bench.said
        ), bench.said
        assert bench.said[-1].startswith(f"STOP {number} is out of ratio: not put into lay")


def test_of_fit_cups_with_something_in_them_the_first_is_proposed(
    at_nine_thirty: Any,
) -> None:
    short, long = (cup(f"B{n}", at_nine_thirty, minutes=n) for n in (3, 20))
    empty = cup("B3", at_nine_thirty, minutes=30, left_kg=0.0)
    out = cup("B4", at_nine_thirty, minutes=40, verdict="out")
    past = cup("B5", at_nine_thirty, minutes=-4)
    held = replace(cup("B6", at_nine_thirty, minutes=50), held=True)
    assert best_cup((empty, short, out, long, past, held)) == short
    assert best_cup((empty, out, past, held)) is None


def test_out_and_past_cups_are_never_crowded_out(at_nine_thirty: Any) -> None:
    cups = [cup(f"B{n}", at_nine_thirty, minutes=n) for n in range(1, 9)]
    cups += [cup("B10", at_nine_thirty, verdict="out"), cup("B11", at_nine_thirty, minutes=-4)]
    room = Room(width=30, height=6, signs=SIGNS["none"], lines=PLAIN, here=False)
    rows = cups_text(cups, room).plain.splitlines()
    assert any("B10" in row and row.endswith("STOP") for row in rows)
    assert any("B11" in row and row.endswith("STOP") for row in rows)


def test_large_print_keeps_a_row_for_a_past_cup_and_puts_empty_ones_last(at_nine_thirty: Any) -> None:
    running = [cup(f"B00{n}K", at_nine_thirty, minutes=10 + n) for n in (1, 2, 3)]
    empty = cup("B004K", at_nine_thirty, left_kg=0.0)
    past = cup("B005K", at_nine_thirty, minutes=-14)
    ordered = cups_by_urgency([empty, *running, past], 3)
    assert [one.number for one in ordered] == ["B001K", "B002K", "B005K", "B003K", "B004K"]
    drawn = large_text(tuple(large_cup(one) for one in ordered), 80, 19).plain.splitlines()
    # Three in large letters, and the rest small below: nothing is cut away.
    assert sum("#" in row for row in drawn) == 15
    assert drawn[-1] == "B003K 13 MIN   B004K EMPTY"
    assert max(map(len, drawn)) <= 80
