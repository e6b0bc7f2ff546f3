"""What the Fuel screen draws of a tank: signs, outline, plan, cut, map and curve, true to the fuel in it."""

from __future__ import annotations

from collections.abc import Callable
from contextlib import AbstractAsyncContextManager
from pathlib import Path
from typing import Any

import pytest

from ledger.tui.fuel_actions import FUEL_ACTIONS
from ledger.tui.fuel_screen import FuelScreen
from ledger.tui.list_screen import help_listed

OpenBench = Callable[..., AbstractAsyncContextManager[Any]]
WIDE = (160, 48)


@pytest.mark.parametrize("size", [(80, 24), WIDE])
async def test_every_sign_of_the_drawing_is_explained_on_the_screen(
    size: tuple[int, int], demo_book: Path, open_bench: OpenBench
) -> None:
    async with open_bench(demo_book, screen=FuelScreen, size=size) as bench:
        await bench.key("f4")
        below = bench.words("rule-bottom")[0]
        assert len(below) == size[0]
        signs = f"{bench.words('ends')[0]}  {below}"
        for sign in ("# trapped", "= feeds", "o air", "> chosen", "d v hole", "p pipe"):
            assert f"{sign}" in signs, sign
        for sign in ("V vent", "D drain", "F filler", "out outlet"):
            assert f" {sign} " in signs, sign
        if size != WIDE:
            await bench.key("enter")
            assert "vent" not in bench.words("rule-bottom")[0]


def test_help_says_which_area_each_arrow_is_of_and_names_enter() -> None:
    rows = help_listed("fuel", FUEL_ACTIONS)
    ups = [says for key, says in rows if key == "Up"]
    assert [says.split(": ")[1] for says in ups] == [f"Tab on {area}" for area in FuelScreen.AREAS]
    assert [says for key, says in rows if key == "Enter"] == [
        "openings: on an empty line: openings by litres gained"
    ]


async def test_without_colour_trapped_feeding_empty_and_caught_air_are_told_apart(
    demo_book: Path, open_bench: OpenBench
) -> None:
    async with open_bench(demo_book, screen=FuelScreen) as bench:
        shown = set()
        for _ in range(3):
            shown.add("\n".join(bench.words("plan") + bench.words("cut") + bench.words("figures")))
            await bench.type("theme")
        assert len(shown) == 1
        text = shown.pop()
        assert "#" in text
        assert "=" in text
        box = [row.split("d")[0] for row in bench.words("plan")[1:3]]
        assert box[0].strip("|>") == "L11    "


async def test_the_chosen_cell_is_marked_by_a_sign_and_no_hole_is_lost_for_it(
    demo_book: Path, open_bench: OpenBench
) -> None:
    async with open_bench(demo_book, screen=FuelScreen) as bench:
        await bench.scan("L5")
        plan = "\n".join(bench.words("plan"))
        assert ">L5" in plan
        assert plan.count(">") == 1
        await bench.key("right")
        after = "\n".join(bench.words("plan"))
        assert ">L3" in after
        assert after.count("d") == plan.count("d") > 10


async def test_level_and_full_the_whole_box_is_fuel_and_empty_it_is_blank(
    one_cell_book: Path, open_bench: OpenBench
) -> None:
    async with open_bench(one_cell_book, screen=FuelScreen) as bench:
        await bench.type("level")
        await bench.type("500 L")
        full = "\n".join(bench.words("cut"))
        assert full.count("=") > 50
        await bench.type("0 L")
        empty = "\n".join(bench.words("cut") + bench.words("plan"))
        assert "=" not in empty
        assert "#" not in empty


async def test_nose_up_the_fuel_runs_aft_in_the_plan_and_in_the_cut(
    one_cell_book: Path, open_bench: OpenBench
) -> None:
    async with open_bench(one_cell_book, screen=FuelScreen) as bench:
        await bench.type("nose 12")
        await bench.type("30 L")
        plan, cut = bench.words("plan"), bench.words("cut")
        signs = [sum(row.count(sign) for sign in "=#") for row in plan[1:-1]]
        assert signs[0] == 0
        assert min(signs[-2:]) > 20
        middle = len(cut[0]) // 2
        front = sum(row[:middle].count(sign) for row in cut for sign in "=#")
        rear = sum(row[middle:].count(sign) for row in cut for sign in "=#")
        assert rear > 2 * front


async def test_wide_shows_true_outline_openings_and_curve_beside_and_the_map_on_space(
    demo_book: Path, open_bench: OpenBench
) -> None:
    async with open_bench(demo_book, screen=FuelScreen, size=WIDE) as bench:
        await bench.key("f4")
        outline = "\n".join(bench.words("outline"))
        assert all(f"L{number}" in outline for number in range(1, 13))
        assert outline.count("d") >= 10
        assert bench.words("outline-title")[0].startswith("TRUE OUTLINE")
        assert bench.words("gains")[2].startswith("outlet left")
        assert bench.words("map")[0].startswith("CURVE")
        await bench.type("map")
        await bench.key("f4")
        assert bench.words("map")[0].startswith("MAP")
        assert bench.app.screen.query_one("#fuel-plan").display
        lines = bench.shown.split("\n")
        assert len(lines) == 48
        assert all(len(line) == 160 for line in lines)


async def test_a_row_of_the_curve_poured_in_stands_at_its_level(
    demo_book: Path, open_bench: OpenBench
) -> None:
    async with open_bench(demo_book, screen=FuelScreen, size=WIDE) as bench:
        await bench.key("f4")
        rows = [row for row in bench.words("map") if "|" in row]
        assert len(rows) == 10
        litres = [float(row.split()[-1]) for row in rows]
        assert litres == sorted(litres, reverse=True)
        assert litres[0] == pytest.approx(1e3 * bench.app.work_screen.drawn.most_m3, abs=0.05)
        assert "#" in rows[-1]
        assert "=" not in rows[-1]
        rung = bench.app.work_screen.curve[2]
        await bench.type(f"{1e3 * rung.volume_m3:.9f} L")
        assert f"level WL {1e3 * rung.outlet_wl_m:.1f} mm at outlet" in "\n".join(bench.words("figures"))
        (marked,) = [row for row in bench.words("map") if row.startswith(">")]
        assert f" {1e3 * rung.outlet_wl_m:.1f} |" in marked


async def test_another_tank_has_its_own_openings_and_curve(demo_book: Path, open_bench: OpenBench) -> None:
    async with open_bench(demo_book, screen=FuelScreen, size=WIDE) as bench:
        await bench.scan("R7")
        await bench.key("f4")
        assert bench.words("gains")[2].startswith("outlet right")
        await bench.type("left")
        await bench.key("f4")
        assert bench.words("gains")[2].startswith("outlet left")
