"""The rows of the Iterations screen as text: headline, history, chart and plans from above."""

from __future__ import annotations

from dataclasses import replace
from datetime import UTC, datetime, timedelta
from typing import Any

import pytest

from ledger.model.comparison import (
    Comparison,
    FuelChange,
    InertiaPair,
    MassChange,
    Pair,
    PlacePair,
    TankChange,
    UnfitPiece,
)
from ledger.model.plan import Plan
from ledger.operations.look_at_iterations import Moment
from ledger.operations.outline_plan import FromAbove
from ledger.tui.iterations_figures import figure_rows, figures_text, headline_text
from ledger.tui.iterations_history import chart_text, history_text
from ledger.tui.iterations_plans import plan_from_above_text, plans_scale
from ledger.tui.room import Room
from ledger.tui.themes import SIGNS
from ledger.units import Display

NOON = datetime(2026, 3, 4, 12, 0, tzinfo=UTC)
BOX = ((2.0, 0.1), (3.0, 0.1), (3.0, 0.6), (2.0, 0.6))


def _room(width: int, height: int = 1, *, here: bool = False) -> Room:
    return Room(width=width, height=height, signs=SIGNS["none"], here=here)


def _plan(name: str) -> Plan:
    return Plan(
        name=name, title=name, display=Display.METRIC, materials=(), laminates=(), parts=(), shapes=()
    )


def _tank(usable: Pair) -> TankChange:
    nothing = Pair(a=0.0, b=0.0)
    return TankChange(
        tank="all tanks",
        gross_m3=Pair(a=0.124, b=0.124),
        capacity_m3=nothing,
        caught_air_m3=nothing,
        usable_m3=usable,
        attitudes=(),
        remark=None,
    )


def _unfit(number: int) -> UnfitPiece:
    return UnfitPiece(
        piece=f"RIB.{number:02}-L/1",
        number=f"P{number:04}",
        part=f"RIB.{number:02}-L",
        state="finished",
        begun_under="r2",
        why="area -4.1 %",
        best_kg=0.3,
        fitted_before=True,
        choices=(),
    )


def _compared(*, mass: Pair, aft_m: float, usable: Pair, unfit: int, **more: Any) -> Comparison:
    made = Comparison(
        a="r2",
        b="r3",
        plan_a=_plan("r2"),
        plan_b=_plan("r3"),
        adopted=True,
        mass=MassChange(
            now_kg=mass,
            remade_kg=mass,
            estimated_kg=mass,
            cg_m=PlacePair(a=(2.9, 0.0, 0.0), b=(2.9 + aft_m, 0.0, 0.0)),
            inertia_kg_m2=InertiaPair(a=None, b=None),
            parts=(),
            parts_same=71,
        ),
        fuel=FuelChange(whole=_tank(usable), tanks=()),
        fuel_density_kg_m3=None,
        saved_as_fuel_m3=None,
        no_longer_fits=tuple(map(_unfit, range(unfit))),
        stays=(),
        fits_again=(),
        findings=(),
    )
    return replace(made, **more)


LIGHTER = _compared(mass=Pair(a=48.8, b=48.18), aft_m=0.004, usable=Pair(a=0.1184, b=0.1215), unfit=5)


def test_the_headline_is_kg_mm_and_litres_and_the_work_it_costs() -> None:
    assert headline_text(LIGHTER, Display.METRIC, _room(80)).plain == (
        "r3 for r2:  -0.62 kg  CG 4 mm aft  usable +3.1 L   5 BUILT PIECES NO LONGER FIT"
    )


@pytest.mark.parametrize(
    ("compared", "wanted"),
    [
        (replace(LIGHTER, no_longer_fits=()), "usable +3.1 L   ALL THAT IS BUILT FITS"),
        (replace(LIGHTER, no_longer_fits=(_unfit(1),)), "1 BUILT PIECE NO LONGER FITS"),
        (replace(LIGHTER, adopted=False), "PREVIEW r3 for r2: -0.62 kg CG 4 mm aft usable +3.1 L"),
        (replace(LIGHTER, fuel=None), "-0.62 kg  CG 4 mm aft   5 BUILT"),
        (_compared(mass=Pair(a=1.0, b=None), aft_m=-0.02, usable=Pair(a=None, b=None), unfit=0),
         "r3 for r2:  -  CG 20 mm fwd  usable -   ALL"),
        (_compared(mass=Pair(a=1.0, b=1.001), aft_m=0.0001, usable=Pair(a=0.1, b=0.1), unfit=0),
         "r3 for r2:  0.00 kg  CG same  usable 0.0 L"),
    ],
)  # fmt: skip
def test_the_headline_says_what_is_not_so_and_not_known(compared: Comparison, wanted: str) -> None:
    assert wanted in headline_text(compared, Display.METRIC, _room(80)).plain


@pytest.mark.parametrize("width", [40, 60, 80, 160])
def test_what_built_work_it_costs_is_never_cut(width: int) -> None:
    long = replace(LIGHTER, a="[red]a-very-long-name-of-an-iteration", b="another-long-name", adopted=False)
    row = headline_text(long, Display.METRIC, _room(width)).plain
    assert len(row) <= width
    assert row.endswith(("5 BUILT UNFIT", "5 BUILT NO LONGER FIT", "5 BUILT PIECES NO LONGER FIT"))


def test_us_units_are_those_of_the_build() -> None:
    row = headline_text(LIGHTER, Display.US, _room(80)).plain
    # 0.62 kg / 0.45359237; 4 mm / 25.4; 3.1 L / 3.785411784.
    assert row.startswith("r3 for r2: -1.37 lb CG 0.16 in aft usable +0.82 US gal  5 BUILT NO LONGER FIT")


def test_bars_go_left_for_less_and_right_for_more_the_greatest_share_fills_its_side() -> None:
    rows = figure_rows(LIGHTER, Display.METRIC)
    drawn = figures_text(LIGHTER, rows, 0, _room(80, 8)).plain.split("\n")
    # 0.62 of 48.8 kg is 1.27 %, 3.1 of the 124 L of the tank 2.5 %: 12 marks, and 12 x 1.27 / 2.5 = 6.1.
    assert [row.split()[-1] for row in drawn if row.startswith(" now")] == ["<<<<<<|"]
    assert [row.rsplit(" ", 1)[1] for row in drawn if row.startswith(" usable")] == [f"|{'>' * 12}"]


def test_rows_beyond_the_room_are_counted_and_come_with_the_mark() -> None:
    rows = figure_rows(LIGHTER, Display.METRIC)
    first = figures_text(LIGHTER, rows, 0, _room(80, 4, here=True)).plain.split("\n")
    last = figures_text(LIGHTER, rows, len(rows) - 1, _room(80, 4, here=True)).plain.split("\n")
    assert first[0].startswith(f"> FIGURES 1-3/{len(rows)}")
    assert first[1].startswith(">now kg")
    assert last[0].startswith(f"> FIGURES {len(rows) - 2}-{len(rows)}/{len(rows)}")
    assert last[3].startswith(">Izz kg m2")


# -- history


def _moment(name: str, day: float, best: float | None, usable: float | None, **more: Any) -> Moment:
    moment = Moment(
        seq=1,
        name=name,
        title=name,
        by="JK",
        at=NOON + timedelta(days=day),
        withdrawn=False,
        estimated_kg=47.0,
        best_kg=best,
        usable_m3=usable,
    )
    return replace(moment, **more)


MOMENTS = (
    _moment("r1", 0, 48.0, 0.110),
    _moment("r2", 10, 49.0, 0.120),
    _moment("r3", 40, 48.5, 0.115),
)


def test_a_row_tells_date_name_and_figures_and_what_does_not_exist_is_absent() -> None:
    rows = history_text(MOMENTS, 0, Display.METRIC, _room(45, 5)).plain.split("\n")
    assert rows[1].split() == ["04", "Mar", "r1", "47.00", "48.00", "-", "110.0"]
    forecast = (replace(MOMENTS[0], forecast_kg=48.25, usable_m3=None),)
    rows = history_text(forecast, 0, Display.METRIC, _room(45, 5)).plain.split("\n")
    assert rows[1].split() == ["04", "Mar", "r1", "47.00", "48.00", "48.25", "-"]


def test_the_newest_rows_show_where_there_is_no_room_for_all() -> None:
    many = [_moment(f"r{number}", number, 48.0, None) for number in range(9)]
    rows = history_text(many, 0, Display.METRIC, _room(45, 4)).plain.split("\n")
    assert [row.split()[2] for row in rows[1:]] == ["r6", "r7", "r8"]
    rows = history_text(many, 1, Display.METRIC, _room(45, 4, here=True)).plain.split("\n")
    assert [row.split()[2] for row in rows[1:]] == ["r0", "r1", "r2"]


def test_the_chart_stands_by_date_and_by_value() -> None:
    rows = chart_text(MOMENTS, Display.METRIC, _room(57, 6)).plain.split("\n")
    assert rows[0].startswith("* best kg   u usable L")
    body = [row.split("|")[1] for row in rows[1:]]
    assert [row.split("|")[0].strip() for row in rows[1:]] == ["49.00", "", "", "", "48.00"]
    assert [row.split("|")[2].strip() for row in rows[1:]] == ["120.0", "", "", "", "110.0"]
    # 41 columns; mass and fuel take the same places between their least and most.
    assert [[(column, sign) for column, sign in enumerate(row) if sign != " "] for row in body] == [
        [(11, "%")],
        [],
        [(40, "%")],
        [],
        [(0, "%")],
    ]


def test_mass_and_fuel_that_part_ways_have_a_sign_each() -> None:
    apart = (MOMENTS[0], replace(MOMENTS[1], usable_m3=0.100))
    rows = chart_text(apart, Display.METRIC, _room(40, 4)).plain.split("\n")
    top, middle, bottom = (row.split("|")[1] for row in rows[1:])
    assert (top[0], top[-1], middle.strip(), bottom[0], bottom[-1]) == ("u", "*", "", "*", "u")


@pytest.mark.parametrize("many", [0, 1, 2, 30])
@pytest.mark.parametrize("width", [10, 34, 57])
def test_any_number_of_iterations_in_any_room_is_drawn_inside_it(many: int, width: int) -> None:
    same_day = [_moment(f"r{number}", 0, 48.0 + number, None) for number in range(many)]
    for moments in (same_day, [replace(one, withdrawn=True) for one in same_day]):
        rows = chart_text(moments, Display.METRIC, _room(width, 5)).plain.split("\n")
        assert len(rows) == 5
        assert all(len(row) <= width for row in rows)


def test_iterations_of_one_day_are_set_apart() -> None:
    same_day = [_moment(f"r{number}", 0, 48.0 + number, None) for number in range(3)]
    rows = chart_text(same_day, Display.METRIC, _room(57, 6)).plain.split("\n")[1:]
    columns = [row.index("*") for row in rows if "*" in row]
    assert len(set(columns)) == 3


# -- from above


def test_panels_are_lines_and_cells_dotted_in_one_frame() -> None:
    plan = FromAbove(panels=(((2.0, 0.1), (2.0, 0.6)), ((2.0, 0.1), (3.0, 0.1))), cells=(BOX,))
    scale = plans_scale((plan,), 41, 9)
    rows = plan_from_above_text("r1", plan, scale, _room(41, 10)).plain.split("\n")
    assert rows[0].startswith("r1 FROM ABOVE, nose to the top")
    assert len(rows) == 10
    # The nose is at the top: the front wall is the first row, the inboard one the left column.
    drawn = [row for row in rows[1:] if row.strip()]
    left, right = drawn[0].index("|"), len(drawn[0].rstrip()) - 1
    assert set(drawn[0][left + 1 : right]) <= set("'-_")
    # A panel on the wall of a cell hides it; elsewhere the cell is dotted.
    assert [row[right] for row in drawn[1:]] == [":"] * len(drawn[1:])
    assert all(row[left] in "|:" for row in drawn)


def test_a_plan_with_nothing_flat_says_so() -> None:
    nothing = FromAbove(panels=(), cells=())
    assert plans_scale((nothing, nothing), 40, 9) is None
    rows = plan_from_above_text("r1", nothing, None, _room(40, 4)).plain.split("\n")
    assert rows[1] == "no panel and no cell to draw"


def test_usable_is_rounded_down_on_the_chart_as_in_the_rows() -> None:
    moments = (replace(MOMENTS[0], usable_m3=0.11009), replace(MOMENTS[1], usable_m3=0.12969))
    chart = chart_text(moments, Display.METRIC, _room(57, 6)).plain.split("\n")[1:]
    rows = history_text(moments, 0, Display.METRIC, _room(45, 5)).plain.split("\n")
    assert [rows[2].split()[-1], rows[1].split()[-1]] == ["129.6", "110.0"]
    assert [chart[0].split("|")[2].strip(), chart[-1].split("|")[2].strip()] == ["129.6", "110.0"]
