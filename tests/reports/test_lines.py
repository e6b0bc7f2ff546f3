"""What a person reads: the build's units, words for state, and rounding that errs to the safe side."""

from __future__ import annotations

import dataclasses

import pytest

from ledger.errors import Finding, Severity, Where
from ledger.fuel.report import FuelReport
from ledger.mass.report import WeightReport
from ledger.mass.trace import Trace
from ledger.reports.demo_lines import COLUMNS, ROWS, demo_lines
from ledger.reports.entry_lines import unfit_lines
from ledger.reports.finding_lines import counted, finding_line
from ledger.reports.fuel_lines import density_line, fuel_lines, hole_line, trapped_text, usable_text
from ledger.reports.plain import width_of
from ledger.reports.trace_lines import trace_lines
from ledger.reports.weight_lines import weight_lines
from ledger.units import Display


def finding(number: int, severity: Severity = Severity.STOP) -> Finding:
    """A finding with a long text."""
    return Finding(
        code="ply-missing",
        severity=severity,
        where=Where(thing=f"SKIN.{number}"),
        what=f"SKIN.{number} has no ply 3 " + "and more words " * 9,
        do="lay it",
    )


def line_with(lines: tuple[str, ...], word: str) -> str:
    """The only line that begins with a word."""
    (line,) = [line for line in lines if line.startswith(word)]
    return line


def test_usable_goes_down_and_trapped_goes_up() -> None:
    assert usable_text(0.0592599, Display.METRIC) == "59.2 L"
    assert trapped_text(0.00101, Display.METRIC) == "1.1 L"


def test_a_round_figure_is_not_moved_by_binary_arithmetic() -> None:
    assert usable_text(0.1 + 0.2, Display.METRIC) == "300.0 L"
    assert trapped_text(0.1 + 0.2, Display.METRIC) == "300.0 L"


@pytest.mark.parametrize(("display", "usable"), [(Display.METRIC, "59.2 L"), (Display.US, "15.65 US gal")])
def test_fuel_is_shown_in_the_units_of_the_build(fuel: FuelReport, display: Display, usable: str) -> None:
    # 59.2599 / 3.785411784 = 15.6548...: exact definition of the US gallon
    line = line_with(fuel_lines(fuel, display), "usable")
    assert usable in line
    assert "at best climb" in line
    assert "COMPUTED" in line


def test_fuel_says_that_a_flow_test_decides_and_never_says_unusable(fuel: FuelReport) -> None:
    text = "\n".join(fuel_lines(fuel, Display.METRIC, tables=True))
    assert "COMPUTED: a flow test decides" in text
    assert "unusable" not in text


def test_fuel_names_the_hole_that_traps_and_the_hole_that_catches_air(fuel: FuelReport) -> None:
    text = "\n".join(fuel_lines(fuel, Display.METRIC))
    assert "behind drain L4-L6" in text
    assert "under vent L6-L8" in text


def test_a_way_out_that_is_missing_is_not_said_to_be_behind_something(fuel: FuelReport) -> None:
    text = "\n".join(fuel_lines(fuel, Display.METRIC, tables=True))
    assert "no way out" in text
    assert "behind no way out" not in text


def test_a_tank_dry_throughout_has_no_trapped_figure(fuel: FuelReport) -> None:
    tank = fuel.tanks[0]
    climb = tank.attitudes[0]
    dry = tuple(dataclasses.replace(cell, trapped_m3=0.0, trapped_by="dry") for cell in climb.cells)
    for cells, trapped in ((dry, "-"), ((dry[0], dataclasses.replace(dry[1], trapped_by="outlet")), "0.0")):
        one = dataclasses.replace(climb, trapped_m3=0.0, cells=cells)
        report = dataclasses.replace(fuel, tanks=(dataclasses.replace(tank, attitudes=(one,)),))
        row = line_with(fuel_lines(report, Display.METRIC), "best climb  ")
        assert row.removeprefix("best climb").split()[3:] == [trapped, "0.0", "-"]


def test_what_is_lost_says_of_what_and_in_which_unit(fuel: FuelReport) -> None:
    for display, unit in ((Display.METRIC, "L"), (Display.US, "US gal")):
        assert f"  lost out of vents {unit}  " in line_with(fuel_lines(fuel, display), "attitude")


def test_the_density_stands_under_the_caution_when_a_temperature_was_asked_for(fuel: FuelReport) -> None:
    # 1 kg/m3 = 0.0624279605761 lb/ft3: exact definitions of pound and foot
    assert density_line(703.14, 301.15, Display.METRIC) == "density 703.1 kg/m3 at 28 C"
    assert density_line(703.14, 301.15, Display.US) == "density 43.90 lb/ft3 at 82.4 F"
    assert density_line(None, 301.15, Display.METRIC).startswith("density not known")
    lines = fuel_lines(fuel, Display.METRIC, density="density 1 kg/m3 at 28 C")
    assert lines[2] == "density 1 kg/m3 at 28 C"
    assert not any(line.startswith("density") for line in fuel_lines(fuel, Display.METRIC))


def test_a_plan_without_tanks_says_so() -> None:
    assert fuel_lines(FuelReport(tanks=(), feeds=()), Display.METRIC) == ("no tanks in the plan",)


def test_weights_add_up_off_plan_and_show_it_signed(weights: WeightReport) -> None:
    lines = weight_lines(weights, Display.METRIC, "title")
    assert line_with(lines, "in all").split()[-1] == "+0.013"
    assert line_with(lines, "unexplained").split()[-1] == "+0.008"


def test_weights_in_pounds_show_no_kilogram(weights: WeightReport) -> None:
    # 0.413 kg / 0.45359237 = 0.9105 lb: exact definition of the pound
    lines = weight_lines(weights, Display.US)
    assert "0.91 lb" in line_with(lines, "now")
    assert "kg" not in "\n".join(lines)


def test_a_figure_that_does_not_exist_is_a_dash(weights: WeightReport) -> None:
    row = line_with(weight_lines(weights, Display.METRIC), "SKIN.UPR-L")
    assert row.split() == ["SKIN.UPR-L", "skin", "0/1", "planned", *"--------"]


def test_weights_say_that_they_are_not_approved(weights: WeightReport) -> None:
    assert "not approved weight and balance" in "\n".join(weight_lines(weights, Display.METRIC))


def test_a_title_with_an_escape_code_reaches_no_terminal(weights: WeightReport) -> None:
    lines = weight_lines(dataclasses.replace(weights, iteration="r\x1b[31m"), Display.METRIC, "a\nb")
    assert not any(ord(char) < 32 for line in lines for char in line)


def test_a_trace_shows_state_first_and_grams_of_each_destination(trace_of_a_cup: Trace) -> None:
    lines = trace_lines(trace_of_a_cup, Display.METRIC)
    assert lines[0] == "B0279  batch  ON HOLD"
    assert any("SKIN.LWR-L/1" in line and "258.0 g" in line and "fitted" in line for line in lines)
    assert any("not accounted for" in line and "11.0 g" in line for line in lines)
    assert lines[-1] == "entries  12, 14"


def test_a_mass_of_a_trace_is_what_was_used_not_what_is_in_stock(trace_of_a_cup: Trace) -> None:
    lines = trace_lines(trace_of_a_cup, Display.METRIC)
    heads = [line.split()[-4:] for line in lines if line.startswith(("MADE FROM", "WENT INTO"))]
    assert heads == [["kind", "how", "used", "now"]] * 2


def test_a_trace_counts_the_pieces_near_and_far_once_each(trace_of_a_cup: Trace) -> None:
    skin = trace_of_a_cup.went_into[0]
    again = dataclasses.replace(skin, how="ply 6")
    far = dataclasses.replace(skin, what="RIB.03-L/1", state="open")
    further = dataclasses.replace(again, went_into=(far,))
    trace = dataclasses.replace(trace_of_a_cup, went_into=(skin, further))
    assert trace_lines(trace, Display.METRIC)[1] == "in 2 pieces: 1 fitted, 1 open"


@pytest.mark.parametrize(
    ("kind", "went_into", "said"),
    [
        ("batch", 1, "in 1 piece, fitted"),
        ("batch", 0, "in no piece yet"),
        ("lot", 0, "in no piece yet"),
        # A piece or an assembly goes into no piece as a rule: nothing is said of it.
        ("piece", 0, ""),
        ("piece", 1, "in 1 piece, fitted"),
        ("assembly", 0, ""),
        ("instrument", 0, ""),
    ],
)
def test_a_trace_says_how_many_pieces_in_plain_words(
    trace_of_a_cup: Trace, kind: str, went_into: int, said: str
) -> None:
    trace = dataclasses.replace(trace_of_a_cup, kind=kind, went_into=trace_of_a_cup.went_into[:went_into])
    assert trace_lines(trace, Display.METRIC)[1] == said


@pytest.mark.parametrize(("count", "said"), [(0, "none"), (1, "1 built piece"), (2, "2 built pieces")])
def test_what_no_longer_fits_is_counted_in_plain_words(count: int, said: str) -> None:
    lines = unfit_lines((("RIB.1/1", "open", "its outline changed"),) * count)
    assert lines[0] == f"no longer fits  {said}"


def test_what_is_further_away_stands_further_in(trace_of_a_cup: Trace) -> None:
    lines = trace_lines(trace_of_a_cup, Display.METRIC)
    lot = next(line for line in lines if "L0096" in line)
    material = next(line for line in lines if "EPX" in line)
    assert len(material) - len(material.lstrip()) > len(lot) - len(lot.lstrip())


def test_a_finding_says_its_word_where_what_and_what_to_do() -> None:
    one = Finding(
        code="x",
        severity=Severity.LOOK,
        where=Where(file="parts.csv", row=14, column="planned_mass"),
        what="'heavy' is not a mass",
        do="write a number and a unit",
    )
    assert finding_line(one) == (
        "LOOK  parts.csv:14:planned_mass  'heavy' is not a mass; write a number and a unit"
    )
    assert counted((one, finding(1))) == "STOP 1  LOOK 1  note 0"


@pytest.mark.parametrize("many", [0, 1, 3, 40])
def test_the_demo_report_fits_one_small_screen(weights: WeightReport, fuel: FuelReport, many: int) -> None:
    findings = tuple(finding(number) for number in range(many))
    lines = demo_lines(weights, fuel, findings, Display.METRIC)
    assert len(lines) <= ROWS == 24
    assert max(width_of(line) for line in lines) <= COLUMNS == 80
    assert any("COMPUTED" in line for line in lines)
    assert any("usable 59.2 L" in line for line in lines)


def test_the_demo_report_shows_one_of_each_rule_before_a_second_of_any(
    weights: WeightReport, fuel: FuelReport
) -> None:
    other = dataclasses.replace(finding(7), code="sheet-over-cut")
    findings = (*(finding(number) for number in range(7)), finding(3), other)
    lines = demo_lines(weights, fuel, findings, Display.METRIC)
    assert lines[1].startswith("STOP  SKIN.0")
    assert lines[2].startswith("STOP  SKIN.7")
    assert next(line for line in lines if line.startswith("STOP  SKIN.3")).endswith("(+1)")


def test_the_demo_report_counts_what_it_has_no_room_for(weights: WeightReport, fuel: FuelReport) -> None:
    lines = demo_lines(weights, fuel, tuple(finding(number) for number in range(40)), Display.METRIC)
    shown = sum(line.startswith("STOP  SKIN") for line in lines)
    assert any(line.startswith(f"and {40 - shown} more") for line in lines)


def test_the_demo_report_begins_with_what_is_wrong(weights: WeightReport, fuel: FuelReport) -> None:
    lines = demo_lines(weights, fuel, (finding(1), finding(2, Severity.LOOK)), Display.METRIC)
    assert lines[0] == "STOP 1  LOOK 1  note 0"
    assert lines[1].startswith("STOP  SKIN.1  has no ply 3")
    assert lines[2].startswith("LOOK  SKIN.2")


def test_the_hole_that_keeps_most_back_in_flight_is_named_under_its_tank(fuel: FuelReport) -> None:
    tank = fuel.tanks[0]
    climb = next(one for one in tank.attitudes if one.flight)
    cell = dataclasses.replace(climb.cells[0], trapped_m3=0.0021, trapped_by="drain A-B")
    worse = dataclasses.replace(cell, trapped_m3=0.009, trapped_by="outlet")
    ground = dataclasses.replace(climb, attitude="ground", flight=False, cells=(worse,))
    climb = dataclasses.replace(climb, cells=(cell, worse))
    tank = dataclasses.replace(tank, attitudes=(ground, climb))
    indent = " " * (len(tank.tank) + 2)
    said = f"{indent}keeps 2.1 L in {cell.cell}, behind drain A-B, at {climb.attitude}"
    assert hole_line(tank, Display.METRIC) == (said,)
    only_outlet = dataclasses.replace(tank, attitudes=(dataclasses.replace(climb, cells=(worse,)),))
    assert hole_line(only_outlet, Display.METRIC) == ()


def test_a_feed_that_is_the_sum_of_tanks_each_at_its_own_worst_says_so(fuel: FuelReport) -> None:
    (left,), (feed,) = fuel.tanks, fuel.feeds
    right = dataclasses.replace(left, tank="right", governing_attitude="slip right")
    both = dataclasses.replace(feed, usable_m3=2 * (left.usable_m3 or 0.0))
    told = fuel_lines(FuelReport(tanks=(left, right), feeds=(both,)), Display.METRIC)[-1]
    assert told.endswith("  each tank at its own worst: best climb, slip right")
    alike = dataclasses.replace(right, governing_attitude="best climb")
    told = fuel_lines(FuelReport(tanks=(left, alike), feeds=(both,)), Display.METRIC)[-1]
    assert told.endswith(" at best climb")
    # Through a tee, and from one tank of the two, there is one worst attitude.
    for one in (dataclasses.replace(both, join="tee"), feed):
        told = fuel_lines(FuelReport(tanks=(left, right), feeds=(one,)), Display.METRIC)[-1]
        assert told.endswith(" at best climb")
