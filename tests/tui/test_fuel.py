"""The Fuel screen with hands and reader: figures, tilt, quantity, cut, cell, and what it refuses."""

from __future__ import annotations

import math
import re
import shutil
from collections.abc import Callable
from contextlib import AbstractAsyncContextManager
from pathlib import Path
from typing import Any

import pytest

from ledger.operations.start_book import start_book
from ledger.tui.fuel_screen import FuelScreen
from ledger.units import M3_PER_US_GAL

OpenBench = Callable[..., AbstractAsyncContextManager[Any]]
WIDE = (160, 48)
BOX = Path(__file__).parents[2] / "sample_builds" / "one_cell_box" / "plan"


def up(value: float, scale: float = 1e3) -> str:
    """Litres rounded up to a tenth, as trapped fuel is."""
    return f"{math.ceil(10 * scale * value - 1e-6) / 10:.1f} L"


def down(value: float, scale: float = 1e3) -> str:
    """Litres rounded down to a tenth, as usable fuel is."""
    return f"{math.floor(10 * scale * value + 1e-6) / 10:.1f} L"


# -- figures


async def test_at_every_attitude_of_the_plan_the_figures_are_those_of_the_command(
    demo_book: Path, open_bench: OpenBench, printed: Callable[..., Any]
) -> None:
    left, right = printed("fuel", demo_book)["tanks"]
    async with open_bench(demo_book, screen=FuelScreen) as bench:
        for tank in (left, right):
            await bench.type(tank["tank"])
            headline = bench.words("headline")[0]
            assert headline.startswith(f"{tank['tank'].upper()} tank")
            assert "COMPUTED: a flow test decides" in headline
            assert "measured: none yet" in headline
            for attitude in tank["attitudes"]:
                await bench.type(attitude["attitude"])
                figures = "\n".join(bench.words("figures"))
                worst = max(attitude["cells"], key=lambda cell: cell["trapped_m3"])
                assert f'as "{attitude["attitude"]}"' in figures
                assert f"TRAPPED {up(attitude['trapped_m3'])}" in figures
                assert f"{worst['cell']} {up(worst['trapped_m3'])}" in figures
                assert f"behind {worst['trapped_by']}" in figures
                assert f"capacity {1e3 * tank['capacity_m3']:>7.1f} L" in figures
                assert f"usable   {down(tank['usable_m3']):>9}  COMPUTED" in figures
                assert f"worst at {tank['governing_attitude']}" in figures


async def test_at_a_tilt_of_its_own_the_figures_are_those_of_the_command_asked_for_that_tilt(
    demo_book: Path, open_bench: OpenBench, printed: Callable[..., Any]
) -> None:
    asked = printed("fuel", demo_book, "--pitch", "5", "--roll=-1")["tanks"][0]["attitudes"][-1]
    assert asked["attitude"] == "asked"
    drained = next(row for row in asked["drained"] if row["cg_m"] is not None and row["quantity_m3"] < 0.06)
    async with open_bench(demo_book, screen=FuelScreen) as bench:
        await bench.type("nose 5")
        await bench.type("roll -1")
        await bench.type(f"{1e3 * drained['quantity_m3']:.9f} L")
        figures = "\n".join(bench.words("figures"))
        assert "NOSE UP 5" in figures
        assert "ROLL LEFT 1" in figures
        assert "as no attitude of the plan" in figures
        assert f"TRAPPED {up(asked['trapped_m3'])}" in figures
        assert f"{drained['mass_kg']:.2f} kg" in figures
        fs, bl = (1e3 * drained["cg_m"][axis] for axis in (0, 1))
        assert f"CG FS {fs:.1f} BL {bl:.1f} mm" in figures


# Box: outlet at the front of the floor, so nose up 5 deg traps behind it. checks (computed by hand):
# the surface passes through the aft rim of the outlet, 10 mm aft of the front wall.
async def test_the_box_holds_and_keeps_what_hand_calculation_says(
    one_cell_book: Path, open_bench: OpenBench, printed: Callable[..., Any]
) -> None:
    tank = printed("fuel", one_cell_book)["tanks"][0]
    climb = next(one for one in tank["attitudes"] if one["attitude"] == "climb")
    async with open_bench(one_cell_book, screen=FuelScreen) as bench:
        await bench.type("50 L")
        await bench.type("level")
        figures = "\n".join(bench.words("figures"))
        # Half of 100 L in a box 200 mm high from WL 0: the surface lies at WL 100 wherever the outlet is.
        assert tank["gross_m3"] == pytest.approx(0.1)
        assert "level WL 100.0 mm at outlet" in figures
        await bench.type("climb")
        figures = "\n".join(bench.words("figures"))
        assert f"TRAPPED {up(climb['trapped_m3'])}" in figures
        # Full to half, tilted about the middle of the floor plan: WL 100 less the slope over half a metre.
        wl = 100.0 - math.tan(math.radians(5.0)) * 495.0
        assert f"level WL {wl:.1f} mm at outlet" in figures


async def test_no_tank_says_what_to_do_and_every_key_is_refused(
    small_book: Path, open_bench: OpenBench
) -> None:
    async with open_bench(small_book, screen=FuelScreen) as bench:
        assert bench.words("headline")[0].startswith("no tank in the plan: add tanks.toml")
        assert "adopt BOOK PLAN" in bench.words("headline")[0]
        for key in ("up", "down", "left", "right", "pageup", "pagedown", "home", "end", "shift+right"):
            before = len(bench.app.rung)
            await bench.key(key)
            assert bench.app.rung[before:] == [2], key
            assert bench.said[-1].endswith("adopt BOOK PLAN")
        await bench.key("tab", "enter", "escape")
        await bench.type("20 L")
        assert bench.app.rung[-1] == 2


# -- keys


async def test_arrows_move_what_tab_is_on(demo_book: Path, open_bench: OpenBench) -> None:
    async with open_bench(demo_book, screen=FuelScreen) as bench:
        screen = bench.app.work_screen
        await bench.key("home")
        assert (screen.asked.attitude.pitch_deg, screen.asked.attitude.roll_deg) == (0.0, 0.0)
        assert bench.words("above")[0].endswith("arrows move: TILT")
        await bench.key("up", "up", "right")
        assert (screen.asked.attitude.pitch_deg, screen.asked.attitude.roll_deg) == (2.0, 1.0)
        await bench.key("down", "left", "left")
        assert (screen.asked.attitude.pitch_deg, screen.asked.attitude.roll_deg) == (1.0, -1.0)
        litres = 1e3 * screen.asked.quantity_m3
        await bench.key("tab", "up", "up", "down", "right")
        assert bench.words("above")[0].endswith("arrows move: FUEL")
        assert 1e3 * screen.asked.quantity_m3 == pytest.approx(litres + 1.1)
        await bench.key("tab")
        assert bench.words("above")[0].endswith("arrows move: CUT")
        at = screen.asked.at_m
        await bench.key("right")
        assert screen.asked.axis == 1
        assert screen.asked.at_m > at
        await bench.key("up")
        assert screen.asked.axis == 0
        assert bench.words("cut-title")[0].startswith("CUT FS")
        await bench.key("tab", "left")
        assert bench.words("above")[0].endswith("arrows move: CELL")
        assert screen.cell == "L3"
        assert "L3" in bench.said[-1]
        await bench.key("tab")
        assert bench.words("above")[0].endswith("arrows move: TILT")


async def test_page_keys_pour_a_litre_and_stop_at_empty_and_full(
    one_cell_book: Path, open_bench: OpenBench
) -> None:
    async with open_bench(one_cell_book, screen=FuelScreen) as bench:
        screen = bench.app.work_screen
        await bench.type("2 L")
        await bench.key("pagedown", "pagedown", "pagedown")
        assert screen.asked.quantity_m3 == 0.0
        assert "empty" in "\n".join(bench.words("figures"))
        await bench.key("pageup")
        assert screen.asked.quantity_m3 == pytest.approx(0.001)
        await bench.type("500 L")
        assert screen.asked.quantity_m3 == screen.drawn.most_m3
        assert "full: it holds" in bench.said[-1]


async def test_end_goes_round_the_attitudes_of_the_plan(demo_book: Path, open_bench: OpenBench) -> None:
    async with open_bench(demo_book, screen=FuelScreen) as bench:
        names = []
        for _ in range(8):
            names.append(bench.words("figures")[1])
            await bench.key("end")
        assert names[0] == names[7] == 'as "descent"'
        assert len(set(names)) == 7


async def test_one_degree_from_a_push_keeps_the_push(demo_book: Path, open_bench: OpenBench) -> None:
    async with open_bench(demo_book, screen=FuelScreen) as bench:
        await bench.type("take-off run")
        assert "ax 0.12 g" in bench.words("figures")[1]
        await bench.key("up")
        attitude = bench.app.work_screen.asked.attitude
        assert (attitude.pitch_deg, attitude.ax_g) == (4.0, 0.12)
        await bench.key("home")
        assert bench.app.work_screen.asked.attitude.ax_g == 0.0


async def test_enter_lists_the_openings_by_what_moving_them_frees_and_enter_draws_again(
    demo_book: Path, open_bench: OpenBench
) -> None:
    async with open_bench(demo_book, screen=FuelScreen) as bench:
        await bench.key("enter")
        assert bench.app.screen.query_one("#fuel-listed").display
        assert not bench.app.screen.query_one("#fuel-plan").display
        rows = [row for row in bench.words("listed") if row.endswith("mL")]
        freed = [max(float(part.split()[-1]) for part in row.split(" mL")[:2]) for row in rows]
        assert freed == sorted(freed, reverse=True)
        assert rows[0].startswith("outlet left")
        figures = "\n".join(bench.words("figures"))
        lower, wider = rows[0].split(" mL")[0].split()[-1], rows[0].split(" mL")[1].split()[-1]
        assert f"1 mm lower frees {lower} mL" in figures
        assert f"10 % wider costs {wider.lstrip('-')} mL" in figures
        await bench.key("enter")
        assert bench.app.screen.query_one("#fuel-plan").display


@pytest.mark.parametrize("size", [(80, 24), WIDE])
async def test_a_wider_outlet_that_costs_fuel_says_why(
    size: tuple[int, int], demo_book: Path, open_bench: OpenBench
) -> None:
    async with open_bench(demo_book, screen=FuelScreen, size=size) as bench:
        await bench.key("f4")
        figures = bench.words("figures")
        place = next(at for at, row in enumerate(figures) if row.startswith("10 % wider costs"))
        assert figures[place - 2] == "behind outlet"
        said = figures[place] if size == WIDE else figures[place + 1]
        assert "draws air sooner" in said
        assert figures[-1].startswith("worst at")
        await bench.type("best climb")
        climb = "\n".join(bench.words("figures"))
        assert "behind drain L4-L6" in climb
        assert "air sooner" not in climb


# -- typed and scanned


async def test_a_scanned_cell_or_opening_is_chosen_with_its_tank(
    demo_book: Path, open_bench: OpenBench
) -> None:
    async with open_bench(demo_book, screen=FuelScreen) as bench:
        screen = bench.app.work_screen
        await bench.scan("R7")
        assert screen.cell == "R7"
        assert bench.words("headline")[0].startswith("RIGHT tank")
        assert bench.said[-1].startswith("R7 ")
        await bench.scan("drain L4-L6")
        assert screen.cell in ("L4", "L6")
        assert bench.words("headline")[0].startswith("LEFT tank")


@pytest.mark.parametrize(
    ("wrong", "says"),
    [
        ("nonsense", "nonsense"),
        ("20", "20"),
        ("20 kg", "kg"),
        ("1,250 L", "1,250"),
        ("5 gal", "US gal"),
        ("nose high", "high"),
        ("nose nan", "nan"),
        ("nose 95", "no farther"),
        ("roll -90", "no farther"),
        ("nose 1e400", "1e400"),
    ],
)
async def test_what_cannot_be_meant_is_refused_with_two_bells_and_changes_nothing(
    wrong: str, says: str, one_cell_book: Path, open_bench: OpenBench
) -> None:
    async with open_bench(one_cell_book, screen=FuelScreen) as bench:
        screen = bench.app.work_screen
        before = screen.asked
        await bench.type(wrong)
        assert bench.app.rung[-1:] == [2]
        assert says in bench.said[-1]
        assert screen.asked == before
        assert bench.app.work_screen is screen


async def test_a_negative_quantity_is_empty_and_not_an_error(
    one_cell_book: Path, open_bench: OpenBench
) -> None:
    async with open_bench(one_cell_book, screen=FuelScreen) as bench:
        await bench.type("-5 L")
        assert bench.app.work_screen.asked.quantity_m3 == 0.0


async def test_in_us_units_a_press_is_a_quarter_gallon(tmp_path: Path, open_bench: OpenBench) -> None:
    plan = tmp_path / "plan"
    shutil.copytree(BOX, plan)
    text = (plan / "plan.toml").read_text(encoding="utf-8")
    (plan / "plan.toml").write_text(text.replace('"metric"', '"us"'), encoding="utf-8")
    book = tmp_path / "us.wingledger"
    start_book(book, plan, by="JK")
    async with open_bench(book, screen=FuelScreen) as bench:
        await bench.type("4 US gal")
        await bench.key("pageup")
        assert bench.app.work_screen.asked.quantity_m3 == pytest.approx(4.25 * M3_PER_US_GAL)
        assert "PgUp PgDn 0.25 gal" in bench.words("keys")[0]
        assert "fl oz" in "\n".join(bench.words("figures"))
        figures = bench.words("figures")
        assert figures[2].endswith(" lb")
        assert figures[-2].endswith("US gal COMPUTED")
        assert figures[-3].endswith("US gal")
        assert all(len(row) <= 28 for row in figures)
        # The counts of the plate stand whole at the end of row 2, however long the units are.
        assert re.search(r"STOP \d+  LOOK \d+$", bench.shown.split("\n")[1].rstrip())
