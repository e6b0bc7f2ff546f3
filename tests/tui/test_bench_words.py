"""What the bench says: whose finding it is, what a mistyped number could be, and nothing that is over."""

from __future__ import annotations

from collections.abc import Callable
from contextlib import AbstractAsyncContextManager
from datetime import timedelta
from pathlib import Path
from typing import Any

import pytest

from ledger.errors import Finding, Severity, Where
from ledger.operations.log_entry import LoggedEntry, log_entry
from ledger.tui.logging_slips import said_of
from ledger.tui.scan import ScanLine

OpenBench = Callable[..., AbstractAsyncContextManager[Any]]


def drawn(bench: Any) -> str:
    return str(bench.app.screen.query_one("#messages").words)


def test_a_finding_said_after_logging_names_its_thing(at_nine_thirty: Any) -> None:
    finding = Finding(
        code="off-estimate",
        severity=Severity.LOOK,
        where=Where(thing="RIB.F7-R"),
        what="27.5 g heavy",
        do="weigh it again",
    )
    entry = LoggedEntry(
        seq=9,
        digest="",
        kind="weigh",
        at=at_nine_thirty,
        by="JK",
        minted=(),
        findings=(finding,),
        says="weighed",
    )
    assert said_of(entry)[1] == ("LOOK", "RIB.F7-R  27.5 g heavy; weigh it again")


async def test_a_mistyped_number_says_so_and_what_was_meant(
    small_book: Path, open_bench: OpenBench, cup_of_600: str
) -> None:
    wrong = cup_of_600[:-1] + ("X" if cup_of_600[-1] != "X" else "Y")
    async with open_bench(small_book) as bench:
        await bench.type(wrong)
        assert f"'{wrong}' is mistyped: its last character does not fit" in bench.said[-1]
        assert f"did you mean {cup_of_600}" in bench.said[-1]


async def test_a_reading_that_can_be_read_two_ways_is_not_logged_and_says_both(
    small_book: Path, open_bench: OpenBench
) -> None:
    async with open_bench(small_book) as bench:
        await bench.scan("RIB.01-L")
        await bench.type("1,450")
        assert bench.app.bench.desk.reading is None
        assert "1450" in bench.said[-1]
        assert "1.450" in bench.said[-1]
        await bench.type("313")
        assert bench.app.stock.build.logged[-1].act.reading_kg == (0.313,)


async def test_what_is_typed_after_a_refusal_takes_the_refused_text_s_place(
    small_book: Path, open_bench: OpenBench
) -> None:
    async with open_bench(small_book) as bench:
        for text in ("hold", "RIB.99-L"):
            await bench.type(text)
        assert "piece" in bench.said[-1]
        assert bench.app.line.text == "RIB.99-L"
        await bench.type("TWILL-A")
        assert bench.app.bench.desk.slip.value("what") == "TWILL-A"


def test_backspace_mends_what_was_refused_instead_of_emptying_it() -> None:
    line = ScanLine()
    line.put_refused("1450x")
    line.press("backspace", None, 1.0)
    line.press("5", "5", 2.0)
    assert line.text == "14505"


async def test_a_refusal_is_not_shown_once_its_slip_is_gone(small_book: Path, open_bench: OpenBench) -> None:
    async with open_bench(small_book) as bench:
        for text in ("weigh", "RIB.99-L"):
            await bench.type(text)
        assert "RIB.99-L" in drawn(bench)
        await bench.key("escape")
        assert "RIB.99-L" not in drawn(bench)
        assert any("RIB.99-L" in line for line in bench.said)


async def test_a_reminder_goes_when_the_slip_has_what_it_asked_for(
    small_book: Path, open_bench: OpenBench, cup_of_600: str, clock: Any
) -> None:
    def mix(grams: int) -> str:
        fields = {"resin_lot": "RESIN-A", "hardener_lot": "HARD-A"}
        poured = {"resin": f"{grams} g", "hardener": f"{0.27 * grams:.1f} g"}
        now = clock.now() - timedelta(minutes=12)
        return log_entry(small_book, "mix", {**fields, **poured}, by="MT", now=now).minted[0].number

    mix(30)
    async with open_bench(small_book) as bench:
        await bench.scan("SKIN.UPR-L")
        await bench.scan("TAG NEXT PLY")
        assert "scan a second cup" in drawn(bench)
        await bench.scan("GLASS-A")
        await bench.scan(cup_of_600)
        assert "scan a second cup" not in drawn(bench)


async def test_a_time_on_a_slip_is_shown_as_a_clock_shows_it(
    small_book: Path, open_bench: OpenBench, at_nine_thirty: Any
) -> None:
    log_entry(small_book, "note", {"text": "x"}, by="JK", now=at_nine_thirty + timedelta(microseconds=7))
    async with open_bench(small_book) as bench:
        await bench.key("f9")
        row = next(row for row in bench.shown.splitlines() if row.strip().startswith("at "))
        shown = at_nine_thirty.astimezone(bench.clock.now().tzinfo)
        assert row.split()[1] == f"{shown:%H:%M}"


async def test_expected_and_its_band_are_the_same_before_and_after_a_reading(
    small_book: Path, open_bench: OpenBench
) -> None:
    async with open_bench(small_book) as bench:
        await bench.scan("RIB.01-L")
        before = next(row for row in bench.shown.splitlines() if "expected 312.0 g" in row)
        await bench.scan("+  313.4 g")
        after = next(row for row in bench.shown.splitlines() if "expected 312.0 g" in row)
        band = before.split("+-")[1].split(" g")[0]
        assert band == after.split("+-")[1].split(" g")[0]


@pytest.mark.parametrize("weighed", [False, True])
async def test_a_skin_with_every_ply_in_it_is_still_something_to_do(
    small_book: Path, open_bench: OpenBench, at_nine_thirty: Any, weighed: bool
) -> None:
    cloth = {1: "GLASS-A", 4: "FOAM-A", 7: "PEEL-A"}
    for step in range(1, 8):
        fields = {"piece": "SKIN.UPR-L", "step": str(step), "lots": cloth.get(step, "TWILL-A")}
        log_entry(small_book, "lay", fields, by="JK", now=at_nine_thirty)
    if weighed:
        fields = {"what": "SKIN.UPR-L", "reading": "2 kg"}
        log_entry(small_book, "weigh", fields, by="JK", now=at_nine_thirty)
    async with open_bench(small_book) as bench:
        jobs = {job.thing: job.words for job in bench.app.bench.view.jobs}
        assert jobs["SKIN.UPR-L/1"] == ("weigh finished" if weighed else "weigh")
