"""Two iterations compared in words: the one line that says it all, and figures that err to the safe side."""

from __future__ import annotations

from dataclasses import replace
from typing import Any

import pytest

from ledger.fuel.report import FuelReport
from ledger.mass.report import WeightReport
from ledger.model.comparison import (
    AttitudeChange,
    Choice,
    Comparison,
    EntryToMake,
    FuelChange,
    InertiaPair,
    MassChange,
    Pair,
    PartChange,
    PlacePair,
    TankChange,
    UnfitPiece,
)
from ledger.model.plan import FuelGrade, Plan
from ledger.reports.compare_lines import choice_lines, compare_lines, headline
from ledger.reports.demo_lines import ROWS, demo_lines
from ledger.units import Display

NOT_KNOWN = Pair(a=None, b=None)


def a_plan(display: Display = Display.METRIC) -> Plan:
    """An empty plan with fuel."""
    fuel = FuelGrade(grade="avgas", density_15c_kg_m3=715.0)
    return Plan(
        name="x", title="", display=display, materials=(), laminates=(), parts=(), shapes=(), fuel=fuel
    )


def a_tank(usable: Pair, trapped: Pair) -> TankChange:
    """A tank with one attitude."""
    attitude = AttitudeChange(
        attitude="climb", flight=True, trapped_m3=trapped, usable_m3=usable, remark=None
    )
    whole = Pair(a=0.15, b=0.15)
    return TankChange(
        tank="all tanks",
        gross_m3=whole,
        capacity_m3=whole,
        caught_air_m3=Pair(a=0.00011, b=0.00012),
        usable_m3=usable,
        attitudes=(attitude,),
        remark=None,
    )


def a_comparison(**changes: Any) -> Comparison:
    """The figures of the sketch."""
    mass = MassChange(
        now_kg=Pair(a=48.80, b=48.18),
        remade_kg=Pair(a=48.80, b=48.10),
        estimated_kg=Pair(a=48.0, b=47.4),
        cg_m=PlacePair(a=(2.900, 0.0, 0.1), b=(2.904, 0.0, 0.1)),
        inertia_kg_m2=InertiaPair(a=None, b=None),
        parts=(),
        parts_same=71,
    )
    tank = a_tank(Pair(a=0.11849, b=0.12161), Pair(a=0.00182, b=0.00181))
    whole = Comparison(
        a="r2",
        b="r3",
        plan_a=a_plan(),
        plan_b=a_plan(),
        adopted=True,
        mass=mass,
        fuel=FuelChange(whole=tank, tanks=(tank,)),
        fuel_density_kg_m3=715.0,
        saved_as_fuel_m3=0.62 / 715.0,
        no_longer_fits=(),
        stays=("RIB/1",),
        fits_again=(),
        findings=(),
    )
    return replace(whole, **changes)


def unfit(piece: str) -> UnfitPiece:
    """A piece with one choice of two entries."""
    entries = (
        EntryToMake(kind="scrap", fields=(("what", piece),), asks=("why",)),
        EntryToMake(kind="cut", fields=(("pieces", "RIB/9"),), asks=("sheet",)),
    )
    return UnfitPiece(
        piece=piece,
        number="P0016",
        part="RIB",
        state="open",
        begun_under="r2",
        why="r3: area -4.1 %",
        best_kg=0.31,
        fitted_before=True,
        choices=(Choice(choice="cut again", does="", entries=entries),),
    )


@pytest.mark.parametrize(
    ("count", "ending"),
    [(0, ""), (1, "   1 BUILT PIECE NO LONGER FITS"), (5, "   5 BUILT PIECES NO LONGER FIT")],
)
def test_the_headline_says_kilograms_millimetres_litres_and_built_work(count: int, ending: str) -> None:
    compared = a_comparison(no_longer_fits=tuple(unfit(f"RIB/{number}") for number in range(count)))
    assert headline(compared) == f"r3 for r2:  -0.62 kg  CG 4 mm aft  usable +3.1 L{ending}"


def test_the_demo_report_says_it_below_the_name_of_the_iteration(
    weights: WeightReport, fuel: FuelReport
) -> None:
    compared = a_comparison(no_longer_fits=(unfit("RIB/1"),))
    lines = demo_lines(weights, fuel, (), Display.METRIC, change=compared)
    named = next(number for number, line in enumerate(lines) if line.startswith("iteration "))
    assert lines[named + 1] == headline(compared)
    assert len(lines) <= ROWS


def test_the_headline_of_a_us_build_is_in_its_units() -> None:
    assert headline(a_comparison(plan_b=a_plan(Display.US))) == (
        "r3 for r2:  -1.37 lb  CG 0.16 in aft  usable +0.82 US gal"
    )


def test_what_is_not_known_is_said_and_never_shown_as_nothing() -> None:
    compared = a_comparison()
    mass = replace(compared.mass, cg_m=PlacePair(a=None, b=(1.0, 0.0, 0.0)), now_kg=NOT_KNOWN)
    tank = a_tank(NOT_KNOWN, Pair(a=0.001, b=None))
    unknown = replace(compared, mass=mass, fuel=FuelChange(whole=tank, tanks=(tank,)))
    assert headline(unknown) == "r3 for r2:  mass not known  usable not known"
    row = next(line for line in compare_lines(unknown, "b") if line.startswith("climb"))
    assert row.split() == ["climb", "1.0", "-", "-", "-", "-", "-"]


def test_usable_is_rounded_down_and_trapped_up_on_both_sides_and_a_change_to_the_nearest() -> None:
    rows = {line.split()[0]: line.split() for line in compare_lines(a_comparison(), "b") if line}
    assert rows["usable"][2:5] == ["118.4", "121.6", "+3.1"]
    # 1.82 and 1.81 L trapped are shown as 1.9, and 0.01 L less as no less.
    assert rows["climb"][1:4] == ["1.9", "1.9", "0.0"]
    assert rows["climb"][4:7] == ["118.4", "121.6", "+3.1"]
    assert rows["caught"][3:5] == ["0.2", "0.2"]
    fewer = a_tank(Pair(a=0.1, b=0.09999), Pair(a=0.001, b=0.00101))
    lines = compare_lines(a_comparison(fuel=FuelChange(whole=fewer, tanks=(fewer,))), "b")
    assert "usable 0.0 L" in lines[0]
    assert next(line for line in lines if line.startswith("climb")).split()[3] == "0.0"


@pytest.mark.parametrize(
    ("saved_kg", "said"),
    [
        (0.62, "the mass saved is that of 0.8 L of avgas at 715.0 kg/m3"),
        (-0.62, "the mass added is that of 0.9 L of avgas at 715.0 kg/m3"),
        (0.02, None),
        (0.0, None),
    ],
)
def test_what_mass_is_worth_as_fuel_errs_to_the_safe_side(saved_kg: float, said: str | None) -> None:
    compared = a_comparison(saved_as_fuel_m3=saved_kg / 715.0)
    compared = replace(compared, mass=replace(compared.mass, now_kg=Pair(a=48.8, b=48.8 - saved_kg)))
    assert [line for line in compare_lines(compared, "b") if "the mass" in line] == ([said] if said else [])


def test_without_a_density_it_is_said_that_the_worth_is_not_known() -> None:
    lines = compare_lines(a_comparison(fuel_density_kg_m3=None, saved_as_fuel_m3=None), "b")
    assert "what the change of mass is worth as fuel is not known: [fuel] has no density_15C" in lines


def test_parts_are_counted_and_one_in_one_plan_only_changes_the_wing_by_all_it_weighs() -> None:
    def part(name: str, change: str, a: float | None, b: float | None) -> PartChange:
        return PartChange(
            part=name, title="", change=change, planned_kg=Pair(a=a, b=b), now_kg=NOT_KNOWN, why=("why",)
        )

    parts = (part("A", "removed", 0.4, None), part("B", "added", None, 0.3), part("C", "changed", 0.2, 0.187))
    compared = a_comparison()
    lines = compare_lines(replace(compared, mass=replace(compared.mass, parts=parts)), "b")
    assert "PARTS  1 out  1 in  1 changed  71 same" in lines
    rows = {line.split()[0]: line.split()[1:5] for line in lines if line[:2] in ("A ", "B ", "C ")}
    assert rows == {
        "A": ["removed", "0.400", "-", "-0.400"],
        "B": ["added", "-", "0.300", "+0.300"],
        "C": ["changed", "0.200", "0.187", "-0.013"],
    }


def test_a_choice_is_printed_as_commands_with_the_name_on_the_first_only() -> None:
    assert choice_lines(unfit("RIB/1"), "my book") == (
        "    cut again  wingledger enter 'my book' scrap what=RIB/1 why=WHY",
        "               wingledger enter 'my book' cut pieces=RIB/9 sheet=SHEET",
    )


def test_a_preview_and_pieces_that_fit_again_are_told() -> None:
    lines = compare_lines(a_comparison(adopted=False, fits_again=("RIB/1",)), "b")
    assert lines[2] == "PREVIEW: r3 is not adopted, nothing was written"
    assert "BUILT  1 built piece stays, 1 of them did not fit r2: RIB/1, every one that counts" in lines
    assert "COMPUTED, for planning" in lines[1]


def test_the_usable_of_all_tanks_says_that_each_is_at_its_own_worst() -> None:
    remark = "COMPUTED, each tank at its own worst"
    compared = a_comparison()
    assert compared.fuel is not None
    one = compared.fuel.whole
    # All at their worst in one attitude: then it is no sum over several.
    alike = replace(compared, fuel=FuelChange(whole=one, tanks=(one, one)))
    assert not any(remark in line for line in compare_lines(alike, "b"))
    (climb,) = one.attitudes
    more = replace(climb, usable_m3=Pair(a=0.12, b=0.125))
    whole = replace(one, attitudes=(more, replace(more, attitude="slip")))
    lone = replace(compared, fuel=FuelChange(whole=whole, tanks=(one,)))
    assert not any(remark in line for line in compare_lines(lone, "b"))
    two = replace(compared, fuel=FuelChange(whole=whole, tanks=(one, one)))
    assert [remark in line for line in compare_lines(two, "b") if line.startswith("usable L")] == [
        True,
        False,
        False,
    ]


def test_a_piece_on_hold_and_a_spare_one_are_named() -> None:
    compared = a_comparison(stays=("RIB/1", "PIN/1"), on_hold=("RIB/1",), spare=("RIB/2",))
    said = (
        "BUILT  2 built pieces stay, 1 of them ON HOLD: RIB/1, every one that counts;"
        " 1 spare or kept for stock: RIB/2"
    )
    assert any(said in line for line in compare_lines(compared, "b"))
    none = a_comparison(stays=(), spare=("RIB/2",))
    assert any("1 spare or kept for stock: RIB/2" in line for line in compare_lines(none, "b"))
