"""The Trace screen with hands and reader: from a lot down to pieces, from a piece up, good or bad."""

from __future__ import annotations

from collections.abc import Callable
from contextlib import AbstractAsyncContextManager
from pathlib import Path
from typing import Any

import pytest

from ledger.operations.log_entry import log_entry
from ledger.tui.area import Area
from ledger.tui.trace_screen import TraceScreen

OpenBench = Callable[..., AbstractAsyncContextManager[Any]]
WIDE = (160, 48)


def words(bench: Any, area: str) -> list[str]:
    """The rows of one area as they are drawn."""
    return [line.rstrip() for line in bench.app.screen.query_one(f"#trace-{area}", Area).words.split("\n")]


def pieces_of(links: list[dict[str, Any]]) -> dict[str, str]:
    """Every piece a thing went into, near or far, with its state."""
    found = {}
    for link in links:
        if link["kind"] == "piece":
            found[link["what"]] = link["state"]
        found |= pieces_of(link["went_into"])
    return found


# -- figures


async def test_grams_are_headed_used_and_a_fresh_cup_shows_what_is_still_in_it(
    demo_book: Path, open_bench: OpenBench, printed: Callable[..., Any]
) -> None:
    left = printed("trace", demo_book, "B029L")["went_into"][-1]
    assert left["what"] == "in the cup or lost"
    async with open_bench(demo_book, screen=TraceScreen) as bench:
        await bench.scan("B029L")
        for area in ("from", "into"):
            assert words(bench, area)[0].split()[-2:] == ["used", "now"]
        row = next(row for row in words(bench, "into") if "in the cup or lost" in row)
        assert row.endswith(f" {1000 * left['mass_kg']:.1f} g")


@pytest.mark.parametrize(
    "what", ["B014Z", "L004R", "L005P", "W2", "SKIN.LWR-L/1", "SKIN.LE-L/1", "WING/LEFT"]
)
async def test_every_link_both_ways_is_that_of_the_command_with_its_mass_and_state(
    what: str, demo_book: Path, open_bench: OpenBench, printed: Callable[..., Any]
) -> None:
    asked = printed("trace", demo_book, what)
    async with open_bench(demo_book, screen=TraceScreen, size=WIDE) as bench:
        await bench.scan(what)
        (headline,), (pieces,) = words(bench, "headline"), words(bench, "pieces")
        assert headline.startswith(asked["what"])
        assert asked["kind"] in headline
        for area, way in (("into", "went_into"), ("from", "made_from")):
            rows = words(bench, area)
            near = [row for row in rows[1:] if row[1:2] not in (" ", "")]
            for link, row in zip(asked[way], near, strict=False):
                mass = "" if link["mass_kg"] is None else f" {1000 * link['mass_kg']:.1f} g"
                assert row[1:].startswith(f"{link['what']} ")
                assert mass in row
                assert row.endswith(link["state"].replace("in the plan", "in plan"))
            assert near or rows[1] == "nothing in the record"
        assert words(bench, "entries")[0].endswith(f"ENTRIES  {len(asked['entries'])}")
        inside = pieces_of(asked["went_into"])
        if inside:
            many, fitted = len(inside), sum(state == "fitted" for state in inside.values())
            assert pieces.startswith(f"IN {many} {'piece' if many == 1 else 'pieces'}")
            assert ("FITTED" in pieces) == bool(fitted)


async def test_the_over_ratio_batch_is_a_stop_with_its_ratio_and_where_its_grams_are(
    demo_book: Path, open_bench: OpenBench
) -> None:
    async with open_bench(demo_book, screen=TraceScreen) as bench:
        await bench.scan("B014Z")
        (headline,), (pieces,) = words(bench, "headline"), words(bench, "pieces")
        assert headline.startswith("B014Z  batch, used  hardener 31.1-31.2 to 100, wants 27.0: OUT")
        assert headline.endswith("STOP")
        assert pieces.startswith("IN 1 piece, it is FITTED: 824.0 g of 824.0 g")
        assert pieces.endswith("NOT ON HOLD: type hold")
        assert len(headline) == len(pieces) == 80


async def test_what_was_made_with_a_cup_out_of_ratio_is_itself_a_stop(
    demo_book: Path, open_bench: OpenBench
) -> None:
    async with open_bench(demo_book, screen=TraceScreen) as bench:
        await bench.scan("SKIN.LWR-L/1")
        (headline,) = words(bench, "headline")
        assert "holds B014Z, mixed out of ratio" in headline
        assert headline.endswith("STOP")
        assert words(bench, "pieces")[0].startswith("FITTED into WING/LEFT")
        await bench.scan("SKIN.LE-L/1")
        (headline,) = words(bench, "headline")
        assert "made with B009T LOOK" in headline
        assert headline.endswith("LOOK")


async def test_from_a_lot_down_to_a_piece_and_from_the_piece_up_to_the_lot(
    demo_book: Path, open_bench: OpenBench
) -> None:
    async with open_bench(demo_book, screen=TraceScreen) as bench:
        await bench.scan("L004R")
        while "B014Z" not in next(
            row for row in words(bench, "into") if row.startswith(">") and "WENT" not in row
        ):
            await bench.key("down")
        await bench.key("right")
        assert words(bench, "headline")[0].startswith("B014Z")
        await bench.key("enter")
        assert words(bench, "headline")[0].startswith("SKIN.LWR-L/1")
        await bench.key("tab")
        assert words(bench, "from")[0].startswith("> MADE FROM")
        await bench.key("right")
        assert words(bench, "headline")[0].startswith("L003T")
        await bench.key("left", "left", "left")
        assert words(bench, "headline")[0].startswith("L004R")
        await bench.key("home")
        assert words(bench, "into")[0] == "> TO LOOK INTO  Enter follows it"


async def test_with_nothing_asked_the_gravest_comes_first_and_enter_follows_it(
    demo_book: Path, open_bench: OpenBench
) -> None:
    async with open_bench(demo_book, screen=TraceScreen) as bench:
        assert words(bench, "pieces")[0] == "7 things are on hold, or have STOP or LOOK"
        rows = words(bench, "into")[1:8]
        assert [row[1:5] for row in rows] == [*["STOP"] * 2, *["LOOK"] * 5]
        # A rib kept for stock is on hold, and no question any more.
        assert "RIB.F8-R" not in bench.shown
        await bench.key("enter")
        assert words(bench, "headline")[0].startswith("B014Z")


async def test_an_empty_record_says_how_to_begin(small_book: Path, open_bench: OpenBench) -> None:
    async with open_bench(small_book, screen=TraceScreen) as bench:
        assert words(bench, "pieces")[0] == "ok    nothing is on hold or flagged"
        assert "HOW TO BEGIN" in words(bench, "from")[0]
        for key in ("up", "down", "pageup", "pagedown", "right", "left", "enter", "tab", "home"):
            await bench.key(key)
        assert words(bench, "headline")[0].startswith("scan or type a number")


async def test_a_thing_put_on_hold_elsewhere_shows_at_once(small_book: Path, open_bench: OpenBench) -> None:
    async with open_bench(small_book, screen=TraceScreen) as bench:
        await bench.scan("TWILL-A")
        assert words(bench, "headline")[0].endswith(" ok")
        log_entry(small_book, "hold", {"what": "TWILL-A", "why": "recalled"}, by="MT")
        bench.app.book_changed()
        await bench.key("f6")
        assert "ON HOLD" in words(bench, "headline")[0]
        assert words(bench, "headline")[0].endswith("STOP")
        assert words(bench, "pieces")[0].endswith("ON HOLD")


async def test_the_word_hold_opens_a_slip_with_the_thing_that_is_followed(
    demo_book: Path, open_bench: OpenBench
) -> None:
    async with open_bench(demo_book, screen=TraceScreen) as bench:
        await bench.scan("B014Z")
        await bench.type("hold")
        assert bench.app.work_screen.WORD == "bench"
        assert "B014Z" in bench.shown


# -- what it hears and how it shows


@pytest.mark.parametrize("wrong", ["nonsense", "B999Z", "12 g", "[bold]x[/]", "-1"])
async def test_what_is_not_in_the_book_is_refused_with_two_bells_and_the_trace_stays(
    wrong: str, small_book: Path, open_bench: OpenBench
) -> None:
    async with open_bench(small_book, screen=TraceScreen) as bench:
        await bench.scan("TWILL-A")
        await bench.type(wrong)
        assert bench.app.rung[-1] == 2
        assert wrong in bench.said[-1]
        assert words(bench, "headline")[0].startswith("TWILL-A")
        await bench.scan(wrong)
        assert bench.app.rung[-1] == 2
        assert words(bench, "headline")[0].startswith("TWILL-A")


async def test_a_name_of_the_user_is_shown_as_it_is_written(small_book: Path, open_bench: OpenBench) -> None:
    fields = {"material": "twill", "quantity": "1 m2", "lot": "[red]LOT"}
    log_entry(small_book, "receive", fields, by="JK")
    async with open_bench(small_book, screen=TraceScreen) as bench:
        await bench.type("[red]LOT")
        assert words(bench, "headline")[0].startswith("[red]LOT  lot, in stock")
        assert "[red]LOT" in words(bench, "entries")[1]


async def test_more_links_than_rows_say_which_of_how_many_show(
    demo_book: Path, open_bench: OpenBench
) -> None:
    async with open_bench(demo_book, screen=TraceScreen) as bench:
        await bench.scan("L004R")
        head = words(bench, "into")[0].split()
        assert head[:4] == [">", "WENT", "INTO", "1-9"]
        many = int(head[5])
        for _ in range(5):
            await bench.key("pagedown")
        assert words(bench, "into")[0].split()[3] == f"{many - 8}-{many}"
        assert words(bench, "into")[-1].startswith(">")


async def test_with_colour_gone_every_row_reads_the_same(demo_book: Path, open_bench: OpenBench) -> None:
    async with open_bench(demo_book, screen=TraceScreen, size=WIDE) as bench:
        await bench.scan("B014Z")
        shown = set()
        for _ in range(3):
            areas = ("headline", "pieces", "from", "into", "entries", "findings")
            shown.add("\n".join(row for area in areas for row in words(bench, area)))
            await bench.type("theme")
        assert len(shown) == 1


async def test_wide_shows_two_steps_each_way_and_what_to_do(demo_book: Path, open_bench: OpenBench) -> None:
    async with open_bench(demo_book, screen=TraceScreen, size=WIDE) as bench:
        await bench.scan("B014Z")
        assert any(row.startswith("   lam resin received") for row in words(bench, "from"))
        assert any(row.startswith("   WING/LEFT fitted") for row in words(bench, "into"))
        assert words(bench, "findings")[1].startswith("STOP  mixed 31.1 to 31.2")
        assert words(bench, "findings")[2].strip().startswith("do not use it")
        lines = bench.shown.split("\n")
        assert len(lines) == 48
        assert all(len(line) == 160 for line in lines)
