"""Built pieces that no longer fit, on the Iterations screen: cut again, accept, keep for stock."""

from __future__ import annotations

from collections.abc import Callable
from contextlib import AbstractAsyncContextManager
from datetime import datetime
from pathlib import Path
from typing import Any

from ledger.operations.keep_draft import drafts_of

OpenBench = Callable[..., AbstractAsyncContextManager[Any]]
BoxPlan = Callable[..., Path]
AtMinute = Callable[[int], datetime]
WIDE = (160, 48)


async def choose(bench: Any, word: str) -> Any:
    """Say what is to become of the first built piece that does not fit; the desk with its slip."""
    await bench.key("tab", "tab")
    await bench.type(word)
    await bench.reckoned()
    return bench.app.bench.desk


async def log(bench: Any) -> None:
    await bench.type("log")
    await bench.reckoned()


async def test_cut_again_opens_its_slips_on_the_bench_the_first_open_the_others_kept(
    box_book: Path, at_iterations: OpenBench
) -> None:
    async with at_iterations(box_book) as bench:
        await bench.type("cut again")
        assert bench.said[-1].startswith("LOOK Tab to the built pieces")
        await bench.key("tab", "tab", "down")
        await bench.type("cut again")
        await bench.reckoned()
        assert bench.app.current_mode == "bench"
        desk = bench.app.bench.desk
        assert (desk.slip.kind, desk.slip.value("what")) == ("scrap", "WALL.OUT/1")
        assert bench.said[-1] == "LOOK after scrap: cut; each waits as a draft"
        await bench.type("moved in r2")
        await log(bench)
        assert (desk.slip.kind, desk.slip.value("pieces")) == ("cut", "WALL.OUT/2")


async def test_accept_is_about_the_marked_piece_and_then_it_is_gone_from_the_list(
    box_book: Path, at_iterations: OpenBench
) -> None:
    async with at_iterations(box_book) as bench:
        slip = (await choose(bench, "accept")).slip
        assert (slip.kind, slip.value("finding"), slip.value("what")) == (
            "accept",
            "built-to-earlier-iteration",
            "FLOOR/1",
        )
        await bench.type("heavier but sound")
        await log(bench)
        await bench.key("f7")
        await bench.reckoned()
        assert bench.words("unfit")[0].split()[-1] == "1"
        assert bench.words("unfit")[1].startswith(">WALL.OUT/1")


async def test_keep_for_stock_opens_what_puts_the_piece_aside_and_then_the_one_in_its_stead(
    box_book: Path, at_iterations: OpenBench
) -> None:
    async with at_iterations(box_book) as bench:
        await bench.key("tab", "tab")
        await bench.type("keep for stock")
        await bench.reckoned()
        slip = bench.app.bench.desk.slip
        assert (slip.kind, slip.value("what"), slip.value("why")) == ("hold", "FLOOR/1", "kept for stock")
        await log(bench)
        slip = bench.app.bench.desk.slip
        assert (slip.kind, slip.value("pieces")) == ("cut", "FLOOR/2")


async def test_outside_that_area_cut_and_accept_are_the_ordinary_words(
    box_book: Path, at_iterations: OpenBench
) -> None:
    for word in ("cut", "accept"):
        async with at_iterations(box_book) as bench:
            await bench.type(word)
            await bench.reckoned()
            assert bench.app.current_mode == "bench"
            assert bench.app.bench.desk.slip.kind == word


async def test_a_prepared_slip_put_away_by_escape_is_kept_as_it_was_prepared(
    box_book: Path, at_iterations: OpenBench
) -> None:
    async with at_iterations(box_book) as bench:
        desk = await choose(bench, "keep for stock")
        await log(bench)
        prepared = dict(desk.slip.values)
        assert (desk.slip.kind, prepared["pieces"]) == ("cut", "FLOOR/2")
        await bench.key("escape")
        assert bench.said[-1].startswith("cut put away, its draft kept")
        assert desk.slip is None
    assert [(draft.kind, dict(draft.values)) for draft in drafts_of(box_book)] == [("cut", prepared)]


async def test_the_second_slip_comes_also_where_the_first_was_put_away_and_brought_back(
    box_book: Path, at_iterations: OpenBench
) -> None:
    async with at_iterations(box_book) as bench:
        desk = await choose(bench, "keep for stock")
        await bench.key("escape")
        await bench.type("hold")
        assert desk.slip.value("what") == "FLOOR/1"
        await log(bench)
        assert (desk.slip.kind, desk.slip.value("pieces")) == ("cut", "FLOOR/2")


async def test_a_refused_word_does_not_follow_to_the_next_screen(
    box_book: Path, at_iterations: OpenBench
) -> None:
    async with at_iterations(box_book) as bench:
        desk = await choose(bench, "cut again")
        desk.slip = desk.slip.moved_to("what")
        await bench.type("MYS1")
        assert bench.app.line.text == "MYS1"
        await bench.key("f7")
        await bench.reckoned()
        assert bench.app.line.text == ""
