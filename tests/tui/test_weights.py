"""The Weights screen with hands and reader: its figures, its mark, what it hears and what it refuses."""

from __future__ import annotations

import re
import shutil
from collections.abc import Callable
from contextlib import AbstractAsyncContextManager
from pathlib import Path
from typing import Any

import pytest

from ledger.operations.log_entry import log_entry
from ledger.operations.start_book import start_book
from ledger.tui.area import Area
from ledger.tui.weights_screen import WeightsScreen

OpenBench = Callable[..., AbstractAsyncContextManager[Any]]
WIDE = (160, 48)


def words(bench: Any, area: str) -> list[str]:
    """The rows of one area as they are drawn."""
    return [line.rstrip() for line in bench.app.screen.query_one(f"#{area}", Area).words.split("\n")]


def marked(bench: Any) -> str:
    """The row under the mark."""
    rows = [line for line in words(bench, "weights-tree") if line.startswith(">")]
    assert len(rows) == 1
    return rows[0]


def tree_rows(lines: list[str]) -> dict[str, list[str]]:
    """Figures by the name of their row."""
    found = (re.match(r">? *[-+]? ?(\S.*?) +(\d+/\d+) +(.*)", line) for line in lines)
    return {row[1]: [row[2], *row[3].split()] for row in found if row is not None}


# -- figures


@pytest.mark.parametrize("whose", ["sample", "small"])
async def test_every_part_has_the_figures_of_the_command_to_the_last_digit(
    whose: str, small_book: Path, demo_book: Path, open_bench: OpenBench, printed: Callable[..., Any]
) -> None:
    book = demo_book if whose == "sample" else small_book
    asked = printed("weights", book)
    async with open_bench(book, screen=WeightsScreen, size=WIDE) as bench:
        await bench.type("open all")
        seen: dict[str, list[str]] = {}
        for _ in range(20):
            seen |= tree_rows(words(bench, "weights-tree"))
            await bench.key("pagedown")
    parts = {part["part"]: part for part in asked["parts"]}
    assert parts
    for name, part in parts.items():
        estimated, best, spread = (
            "-" if part[key] is None else f"{part[key]:.3f}"
            for key in ("estimated_kg", "best_kg", "best_u_kg")
        )
        assert seen[name][1:4] == [estimated, best, spread], name


@pytest.mark.parametrize("whose", ["sample", "small"])
async def test_the_headline_the_shares_and_the_causes_are_those_of_the_command(
    whose: str, small_book: Path, demo_book: Path, open_bench: OpenBench, printed: Callable[..., Any]
) -> None:
    book = demo_book if whose == "sample" else small_book
    asked = printed("weights", book)
    total = asked["total"]
    async with open_bench(book, screen=WeightsScreen) as bench:
        (headline,) = words(bench, "weights-headline")
        (known,) = words(bench, "weights-known")
        causes = "\n".join(words(bench, "weights-causes"))
    assert f"FINISHED {total['best_kg']:.2f} kg" in headline
    assert f"estimated {total['estimated_kg']:.2f} kg" in headline
    assert f" {100 * total['share_actual']:.0f} %" in known
    assert len(asked["off_plan"]) == 8
    for cause in asked["off_plan"]:
        value = f"{cause['mass_kg']:+.3f}".replace("+0.000", "0.000").replace("-0.000", "0.000")
        name = cause["cause"].replace("_", ", ")
        assert any(
            row.split()[-2:-1] == [value] or value in row.split() for row in causes.split("\n") if name in row
        ), (name, value)


async def test_a_heavy_wing_is_not_chance_and_an_unbuilt_one_is_on_plan(
    small_book: Path, demo_book: Path, open_bench: OpenBench
) -> None:
    async with open_bench(demo_book, screen=WeightsScreen) as bench:
        assert words(bench, "weights-headline")[0].endswith("kg, not chance")
        assert "HEAVY" in words(bench, "weights-headline")[0]
    async with open_bench(small_book, screen=WeightsScreen) as bench:
        assert "   on plan  " in words(bench, "weights-headline")[0]


async def test_a_weighing_moves_the_figures_while_the_screen_is_up(
    small_book: Path, open_bench: OpenBench
) -> None:
    async with open_bench(small_book, screen=WeightsScreen) as bench:
        await bench.scan("RIB.01-L")
        assert marked(bench).split()[2:] == ["RIB.01-L", "0/1", "0.312", "0.312", "0.010", "E", "0.000", "|"]
        log_entry(small_book, "weigh", {"what": "RIB.01-L", "reading": "350 g", "scale": "W1"}, by="MT")
        bench.app.book_changed()
        await bench.key("f3")
        row = marked(bench).split()
        assert row[2:6] == ["RIB.01-L", "1/1", "0.312", "0.350"]
        assert row[7:9] == ["A", "+0.038"]


# -- the mark


async def test_a_scan_puts_the_mark_on_the_piece_and_opens_what_hides_it(
    demo_book: Path, open_bench: OpenBench
) -> None:
    async with open_bench(demo_book, screen=WeightsScreen) as bench:
        await bench.scan("SKIN.LWR-L/1")
        assert "SKIN.LWR-L/1" in marked(bench)
        await bench.scan("RIB.F1-R")
        assert "RIB.F1-R" in marked(bench)
        assert bench.app.work_screen.WORD == "weights"


async def test_arrows_open_and_close_branches_and_home_and_end_go_to_the_ends(
    small_book: Path, open_bench: OpenBench
) -> None:
    async with open_bench(small_book, screen=WeightsScreen) as bench:
        assert marked(bench).startswith(">- WING")
        await bench.key("left")
        assert marked(bench).startswith(">+ WING")
        assert len(tree_rows(words(bench, "weights-tree"))) == 1
        await bench.key("right", "down")
        assert "LEFT" in marked(bench)
        await bench.key("enter")
        assert "+ LEFT" in marked(bench)
        await bench.key("end")
        assert words(bench, "weights-tree")[-1] == "" or marked(bench) == words(bench, "weights-tree")[-1]
        assert not marked(bench).startswith(">+ WING")
        await bench.key("up", "home")
        assert "WING" in marked(bench)
        await bench.key("pagedown", "pageup", "up")
        assert "WING" in marked(bench)


async def test_space_goes_round_the_rows_that_are_flagged_and_says_what_to_do(
    demo_book: Path, open_bench: OpenBench
) -> None:
    async with open_bench(demo_book, screen=WeightsScreen) as bench:
        await bench.type("next look")
        assert "SKIN.LWR-L" in marked(bench)
        # Closed, the row shows the graver word of the piece inside it; what is said is its own.
        assert "STOP" in marked(bench)
        assert "accept it or mend it" in bench.said[-1]
        await bench.type("next look")
        assert "SKIN.LWR-L/1" in marked(bench)
        assert "B014Z" in bench.said[-1]
        for flagged in ("RIB.F9-R/1", "WEB.M.OUT-R/1", "SKIN.LWR-R/1"):
            await bench.type("next look")
            assert flagged in marked(bench)


async def test_a_piece_not_begun_is_one_of_several_and_its_word_opens_with_the_part(
    demo_book: Path, open_bench: OpenBench
) -> None:
    async with open_bench(demo_book, screen=WeightsScreen) as bench:
        await bench.scan("FIT.HINGE-R")
        await bench.key("right", "down", "down")
        assert marked(bench).split()[1:4] == ["not", "begun", "0/1"]
        screen = bench.app.work_screen
        at = screen.at
        bench.app.book_changed()
        await bench.key("f3")
        assert screen.at == at
        assert screen.thing_in_hand().name == "FIT.HINGE-R"


async def test_a_word_begins_with_the_thing_under_the_mark(demo_book: Path, open_bench: OpenBench) -> None:
    async with open_bench(demo_book, screen=WeightsScreen) as bench:
        await bench.scan("RIB.F3-R")
        await bench.type("weigh")
        assert bench.app.work_screen.WORD == "bench"
        assert "RIB.F3-R" in bench.shown


# -- what it says


@pytest.mark.parametrize("wrong", ["nonsense", "12 kg", "SKIN.NONE", "/", "-1", "[red]x[/]"])
async def test_a_word_nobody_knows_is_refused_with_two_bells_and_moves_nothing(
    wrong: str, small_book: Path, open_bench: OpenBench
) -> None:
    async with open_bench(small_book, screen=WeightsScreen) as bench:
        before = words(bench, "weights-tree")
        await bench.type(wrong)
        assert bench.app.rung[-1] == 2
        assert wrong in bench.said[-1]
        assert words(bench, "weights-tree") == before
        assert bench.app.work_screen.WORD == "weights"


async def test_beside_the_tree_stand_the_causes_the_readings_and_the_findings_of_the_chosen_row(
    demo_book: Path, open_bench: OpenBench, printed: Callable[..., Any]
) -> None:
    part = next(one for one in printed("weights", demo_book)["parts"] if one["part"] == "SKIN.LWR-L")
    async with open_bench(demo_book, screen=WeightsScreen, size=WIDE) as bench:
        await bench.type("next look")
        beside = words(bench, "weights-chosen")
        assert beside[0] == "SKIN.LWR-L  lower skin"
        assert beside[1].startswith(f"now {1000 * part['best_kg']:.1f} g")
        causes = [float(row[13:22]) for row in beside[4:12]]
        assert sum(causes) == pytest.approx(part["best_kg"] - part["estimated_kg"], abs=8 * 0.0005)
        assert any("5590.0 g" in row and "W2" in row and "before trim" in row for row in beside)
        assert any(row.startswith("LOOK  606.0 g heavy") for row in beside)
        await bench.scan("RIB.F3-R")
        assert "ok    no rule has noticed anything" in words(bench, "weights-chosen")


async def test_with_colour_gone_every_row_reads_the_same(demo_book: Path, open_bench: OpenBench) -> None:
    async with open_bench(demo_book, screen=WeightsScreen, size=WIDE) as bench:
        await bench.type("next look")
        shown = set()
        for _ in range(3):
            shown.add(
                "\n".join(
                    row for area in ("tree", "chosen", "causes") for row in words(bench, f"weights-{area}")
                )
            )
            await bench.type("theme")
        assert len(shown) == 1
        assert "LOOK" in shown.pop()


async def test_at_80_by_24_and_160_by_48_no_row_is_wider_than_the_screen_or_wrapped(
    demo_book: Path, open_bench: OpenBench
) -> None:
    for size in ((80, 24), WIDE):
        async with open_bench(demo_book, screen=WeightsScreen, size=size) as bench:
            await bench.type("open all")
            lines = bench.shown.split("\n")
            assert len(lines) == size[1]
            assert all(len(line) == size[0] for line in lines)
            assert "light|heavy" in bench.shown.replace(" ", "")


async def test_a_title_of_the_user_is_shown_as_it_is_written(
    small_plan: Path, tmp_path: Path, open_bench: OpenBench
) -> None:
    plan = tmp_path / "plan"
    shutil.copytree(small_plan, plan)
    table = plan / "parts.csv"
    table.write_text(table.read_text().replace("RIB.01-L,rib", "RIB.01-L,[bold]rib[/bold]"), encoding="utf-8")
    book = tmp_path / "named.wingledger"
    start_book(book, plan, by="JK")
    async with open_bench(book, screen=WeightsScreen, size=WIDE) as bench:
        await bench.scan("RIB.01-L")
        assert words(bench, "weights-chosen")[0] == "RIB.01-L  [bold]rib[/bold]"


@pytest.mark.parametrize("size", [(80, 24), WIDE])
async def test_tab_shows_the_causes_of_the_row_and_of_the_wing_again(
    size: tuple[int, int], demo_book: Path, open_bench: OpenBench
) -> None:
    async with open_bench(demo_book, screen=WeightsScreen, size=size) as bench:
        wing = words(bench, "weights-causes")
        await bench.scan("SKIN.LWR-L")
        assert words(bench, "weights-causes") == wing
        await bench.key("tab")
        row = words(bench, "weights-causes")
        assert row[0].startswith("SKIN.LWR-L/1 OFF PLAN BY CAUSE")
        assert row[1:] != wing[1:]
        await bench.key("down")
        assert not words(bench, "weights-causes")[0].startswith("SKIN.LWR-L/1 OFF")
        await bench.key("tab")
        assert words(bench, "weights-causes") == wing
