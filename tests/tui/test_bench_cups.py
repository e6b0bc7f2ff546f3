"""Cups: what to pour, time zero at the first press, clocks that survive, bells."""

from __future__ import annotations

from collections.abc import Callable
from contextlib import AbstractAsyncContextManager
from datetime import timedelta
from pathlib import Path
from typing import Any

from ledger.operations.clock_cups import Cup
from ledger.operations.keep_draft import drafts_of
from ledger.operations.log_entry import log_entry
from ledger.operations.open_build import open_build
from ledger.tui.bench_drawing import cups_text
from ledger.tui.room import Room
from ledger.tui.themes import SIGNS

OpenBench = Callable[..., AbstractAsyncContextManager[Any]]


async def open_mix(bench: Any) -> None:
    await bench.type("mix")
    desk = bench.app.bench.desk
    for word, text in (("resin_lot", "RESIN-A"), ("resin", "200"), ("hardener_lot", "HARD-A")):
        desk.slip = desk.slip.moved_to(word)
        await bench.type(text)


async def test_target_and_window_show_before_the_second_component(
    small_book: Path, open_bench: OpenBench
) -> None:
    async with open_bench(small_book) as bench:
        await open_mix(bench)
        assert bench.app.bench.desk.slip.current.word == "hardener"
        # 100:27 with 4 %: 54.0 g, and 200 x 0.27 x 1.04 = 56.2 less what the scale cannot tell.
        assert "pour hardener 54.0 g, between 5" in bench.shown


async def test_time_zero_is_on_the_disk_at_the_first_press(small_book: Path, open_bench: OpenBench) -> None:
    async with open_bench(small_book) as bench:
        await open_mix(bench)
        assert drafts_of(small_book)[0].stamped_at is None
        pressed = bench.clock.wall
        await bench.pilot.press("5")
        assert drafts_of(small_book)[0].stamped_at == pressed
        bench.clock.go_on(minutes=3)
        await bench.type("4")
        await bench.type("log")
    mix = open_build(small_book).logged[-1]
    assert (mix.kind, mix.at) == ("mix", pressed)


async def test_a_scan_that_does_not_fit_is_no_press(small_book: Path, open_bench: OpenBench) -> None:
    async with open_bench(small_book) as bench:
        await open_mix(bench)
        await bench.scan("RIB.01-L")
        assert bench.app.bench.desk.slip.stamped_at is None
        assert drafts_of(small_book)[0].stamped_at is None
        await bench.scan("+  54.0 g")
        assert bench.app.bench.desk.slip.stamped_at is not None


async def test_after_a_kill_every_cup_runs_on_from_its_time_zero(
    small_book: Path, open_bench: OpenBench, cup_of_600: str
) -> None:
    async with open_bench(small_book) as bench:
        await open_mix(bench)
        await bench.type("5", enter=False)
        # Nothing is put away or saved here: the program is gone from one moment to the next.
    async with open_bench(small_book) as bench:
        bench.clock.go_on(minutes=4)
        bench.app.bench.tick()
        left = {cup.number: cup.minutes_left for cup in bench.app.bench._cups()}
        assert set(left) == {"mixing", cup_of_600}
        assert 20.5 < left["mixing"] <= 21.1
        assert 10.5 < left[cup_of_600] < 11.1
        assert "mixing lam" in bench.shown
        slip = bench.app.bench.desk.slip
        assert (slip.kind, slip.value("resin"), slip.current.word) == ("mix", "200 g", "hardener")


async def test_a_cup_rings_three_times_near_its_end_and_when_past(
    small_book: Path, open_bench: OpenBench, cup_of_600: str
) -> None:
    async with open_bench(small_book) as bench:
        bench.app.bench.tick()
        assert bench.app.rung == []
        bench.clock.go_on(minutes=11)
        bench.app.bench.tick()
        assert bench.app.rung == [3]
        assert bench.said[-1] == f"LOOK {cup_of_600} has 4 min left"
        bench.clock.go_on(minutes=5)
        bench.app.bench.tick()
        bench.app.bench.tick()
        assert bench.app.rung == [3, 3]
        assert bench.said[-1] == f"STOP {cup_of_600} is PAST its pot life"
        row = next(row for row in bench.shown.splitlines() if cup_of_600 in row and "PAST" in row)
        assert row.rstrip().endswith("STOP")


def cup(number: str, minutes: float, at: Any) -> Cup:
    return Cup(
        number=number,
        what="lam",
        resin_material="lam resin",
        mixed_at=at,
        pot_life_s=1500.0,
        minutes_left=minutes,
        left_kg=0.1,
        held=False,
        verdict="in",
    )


def test_past_cups_are_never_crowded_out(at_nine_thirty: Any) -> None:
    running = [cup(f"R{n}", 5.0 + n, at_nine_thirty + timedelta(minutes=n)) for n in range(7)]
    past = [cup(f"P{n}", -1.0 - n, at_nine_thirty) for n in range(3)]
    rows = cups_text([*running, *past], Room(width=30, height=6, signs=SIGNS["none"])).plain.splitlines()
    assert [row.split()[0] for row in rows[1:5]] == ["R0", "R1", "P0", "P1"]
    assert rows[5] == "and 6 more, 1 PAST"
    assert all(len(row) <= 30 for row in rows)


async def test_four_cups_show_at_80_by_24(
    small_book: Path, open_bench: OpenBench, at_nine_thirty: Any
) -> None:
    fields = {"resin_lot": "RESIN-A", "resin": "100 g", "hardener_lot": "HARD-A", "hardener": "27 g"}
    for minutes in (0, 20, 50, 60):
        log_entry(small_book, "mix", fields, by="MT", now=at_nine_thirty + timedelta(minutes=minutes))
    async with open_bench(small_book) as bench:
        rows = bench.app.screen.query_one("#cups").words.splitlines()[1:]
        assert [("PAST" in row, row.rstrip().endswith("STOP")) for row in rows[:4]] == [
            (False, False),
            (False, False),
            (True, True),
            (True, True),
        ]


async def test_a_new_cup_comes_back_to_the_ply_that_wanted_it(
    small_book: Path, open_bench: OpenBench
) -> None:
    async with open_bench(small_book) as bench:
        await bench.scan("SKIN.UPR-L")
        await bench.type("lay")
        await bench.scan("TAG NEW CUP")
        for code in ("RESIN-A", "+ 200.0 g", "HARD-A", "+ 54.0 g", "TAG LOG"):
            await bench.scan(code)
        slip = bench.app.bench.desk.slip
        made = open_build(small_book).logged[-1].act.minted[0].number
        assert (slip.kind, slip.value("batches")) == ("lay", made)


async def test_a_second_cup_joins_one_that_holds_too_little(
    small_book: Path, open_bench: OpenBench, at_nine_thirty: Any
) -> None:
    small = {"resin_lot": "RESIN-A", "resin": "40 g", "hardener_lot": "HARD-A", "hardener": "10.8 g"}
    big = {"resin_lot": "RESIN-A", "resin": "400 g", "hardener_lot": "HARD-A", "hardener": "108 g"}
    numbers = [
        log_entry(small_book, "mix", fields, by="MT", now=at_nine_thirty + timedelta(minutes=60 + n))
        .minted[0]
        .number
        for n, fields in enumerate((small, big))
    ]
    async with open_bench(small_book) as bench:
        await bench.scan("SKIN.UPR-L")
        await bench.type("lay")
        assert f"{numbers[0]} has 51" in bench.shown
        assert any("scan a second cup" in line for line in bench.said)
        await bench.scan(numbers[1])
        slip = bench.app.bench.desk.slip
        assert slip.value("batches") == f"{numbers[0]} 50.8 g; {numbers[1]}"
        assert not slip.cup_is_short
