"""Two designs held against each other: closed forms, what it costs in built work, and nothing written."""

from __future__ import annotations

from collections.abc import Callable
from datetime import UTC, datetime
from pathlib import Path
from typing import Any

import pytest

from ledger.errors import Refused, Stopped
from ledger.model.comparison import Comparison, Pair
from ledger.operations import open_build as opening
from ledger.operations.adopt_plan import adopt_plan
from ledger.operations.compare_iterations import compare_iterations
from ledger.operations.reckon_fuel import reckon_build
from ledger.operations.start_book import start_book

NOON = datetime(2026, 3, 4, 12, 0, tzinfo=UTC)
LB, US_GAL = 0.45359237, 0.003785411784
TANK = """length_unit = "m"
[[tank]]
name = "{tank}"
cells = ["B1"]
[[cell]]
name = "B1"
mesh = "geometry/box.obj"
[[opening]]
name = "outlet"
between = ["B1", "outlet"]
shape = "circle"
centre = [0.0, 0.25, {low}]
diameter = 1e-6
normal = [1, 0, 0]
[[opening]]
name = "cap"
between = ["B1", "filler"]
shape = "circle"
centre = [0.5, 0.25, 0.2]
diameter = 0.05
normal = [0, 0, 1]
[[opening]]
name = "breather"
between = ["B1", "vent"]
shape = "circle"
centre = [0.4, 0.25, 0.2]
diameter = 0.01
normal = [0, 0, 1]
"""
FUEL = '[fuel]\ngrade = "avgas"\ndensity_15C = "{density}"\n'
GROUND = '[[attitude]]\nname = "ground"\nfill = true\nflight = false\n'
CRUISE = '[[attitude]]\nname = "cruise"\n'
CLIMB = '[[attitude]]\nname = "climb"\npitch_deg = {pitch}\n'


@pytest.fixture
def two(drawing: Any, tmp_path: Path) -> Callable[..., Comparison]:
    """A book begun with one plan, and the second adopted or only compared with."""

    def compare(first: dict[str, Any], second: dict[str, Any], *, adopted: bool = True) -> Comparison:
        book = tmp_path / "wing.book"
        start_book(book, drawing.write(tmp_path / "one", "r1", **first), by="JK", now=NOON)
        folder = drawing.write(tmp_path / "two", "r2", **second)
        if adopted:
            adopt_plan(book, folder, by="JK", now=NOON)
        return compare_iterations(book, "r1", "r2" if adopted else str(folder))

    return compare


def part(comparison: Comparison, name: str) -> Any:
    """What changed about one part."""
    return next(one for one in comparison.mass.parts if one.part == name)


def close(pair: Pair, a: float, b: float, tolerance: float = 1e-12) -> bool:
    """Whether a pair and its change are these."""
    assert (pair.a, pair.b, pair.change) == pytest.approx((a, b, b - a), abs=tolerance)
    return True


def test_mass_cg_and_inertia_of_two_weights_moved_apart_are_the_closed_form(drawing: Any, two: Any) -> None:
    first = {"rows": [drawing.item("A", "2 kg", y=-1.0), drawing.item("B", "2 kg", y=1.0)]}
    second = {"rows": [drawing.item("A", "1 kg", 0.3, -2.0), drawing.item("B", "2 kg", y=2.0)]}
    compared = two(first, second)
    mass = compared.mass
    assert close(mass.now_kg, 4.0, 3.0)
    assert close(mass.estimated_kg, 4.0, 3.0)
    assert mass.cg_m.change == pytest.approx((0.1, 2 / 3, 0.0), abs=1e-12)
    # Two points: the reduced mass times the square of what lies between them, about x.
    assert mass.inertia_kg_m2.a[0][0] == pytest.approx(4.0, abs=1e-12)
    assert mass.inertia_kg_m2.b[0][0] == pytest.approx(2 / 3 * 16.0, abs=1e-12)
    assert mass.inertia_kg_m2.change[0][0] == pytest.approx(2 / 3 * 16.0 - 4.0, abs=1e-12)
    assert mass.inertia_kg_m2.change[0][1] == pytest.approx(2 / 3 * 0.3 * 4.0, abs=1e-12)
    assert part(compared, "A").why == ("placed 300.0 mm aft, 1000.0 mm left", "planned mass 1.000, was 2.000")
    assert part(compared, "B").why == ("placed 1000.0 mm right",)
    assert (compared.fuel, compared.saved_as_fuel_m3, compared.mass.parts_same) == (None, None, 0)


def test_every_change_of_a_part_is_told_with_its_figures_and_the_masses_of_all_its_pieces(
    drawing: Any, two: Any
) -> None:
    first = {
        "rows": [
            drawing.rib("SAME"),
            drawing.rib("GONE"),
            drawing.rib("LONGER"),
            drawing.rib("MORE"),
            drawing.rib("MOVED"),
            drawing.rib("BOTH"),
            drawing.PLIES,
            drawing.item("PIN", "12 g"),
        ],
    }
    second = {
        "rows": [
            drawing.rib("SAME"),
            drawing.rib("LONGER", file="long"),
            drawing.rib("MORE", quantity=3),
            drawing.rib("MOVED", x=0.04),
            drawing.rib("BOTH", file="long").replace("SHEET", "THICK"),
            drawing.PLIES,
            drawing.item("PIN", "12 g"),
            drawing.rib("NEW", quantity=2),
        ],
        "steps": (0, -45, 90),
    }
    compared = two(first, second)
    told = {one.part: (one.change, one.why) for one in compared.mass.parts}
    assert told == {
        "GONE": ("removed", ("not in r2",)),
        "LONGER": ("changed", ("area +10.0 %", "middle 25.0 mm aft")),
        "MORE": ("changed", ("3 pieces, was 1",)),
        "MOVED": ("changed", ("placed 40.0 mm aft",)),
        "BOTH": ("changed", ("area +10.0 %", "middle 25.0 mm aft", "of THICK, was SHEET")),
        "PLIES": (
            "changed",
            (
                "laminate SKIN: step 2 cloth at -45 deg 50 % resin, was cloth at 45 deg 50 % resin;"
                " step 3 cloth at 90 deg 50 % resin added",
            ),
        ),
        "NEW": ("added", ("skin 0.100 m2 of SHEET, 2 pieces",)),
    }
    assert compared.mass.parts_same == 2
    rib_kg, ply_kg = 1.5 * 0.1, 0.4
    figures = {one.part: (one.planned_kg.a, one.planned_kg.b) for one in compared.mass.parts}
    assert figures == {
        "GONE": (pytest.approx(rib_kg), None),
        "LONGER": pytest.approx((rib_kg, 1.1 * rib_kg)),
        "MORE": pytest.approx((rib_kg, 3 * rib_kg)),
        "MOVED": pytest.approx((rib_kg, rib_kg)),
        "BOTH": pytest.approx((rib_kg, 2.2 * rib_kg)),
        "PLIES": pytest.approx((2 * ply_kg, 3 * ply_kg)),
        "NEW": (None, pytest.approx(2 * rib_kg)),
    }
    changes = sum((b or 0.0) - (a or 0.0) for a, b in figures.values())
    assert compared.mass.estimated_kg.change == pytest.approx(changes, abs=1e-12)
    assert compared.mass.now_kg.change == pytest.approx(changes, abs=1e-12)


def test_a_planned_mass_left_as_it_was_is_told_where_the_outline_says_otherwise(
    drawing: Any, two: Any
) -> None:
    compared = two({"rows": [drawing.rib() + "150 g"]}, {"rows": [drawing.rib(file="long") + "150 g"]})
    said = "its planned mass stays, though geometry and materials give +10.0 %"
    assert said in part(compared, "RIB").why
    assert close(compared.mass.estimated_kg, 0.15, 0.15)


def test_fuel_of_a_wider_box_with_a_higher_outlet_is_the_closed_form(drawing: Any, two: Any) -> None:
    head = FUEL.format(density="715 kg/m3") + GROUND + CRUISE
    rows = [drawing.item("PIN", "12 g")]
    first = {"rows": rows, "tank": TANK.format(tank="box", low=0.0), "head": head}
    second = first | {"tank": TANK.format(tank="box", low=0.02), "files": {"box": drawing.box(1.0, 0.6)}}
    compared = two(first | {"files": {"box": drawing.box(1.0, 0.5)}}, second)
    for tank in (compared.fuel.whole, *compared.fuel.tanks):
        assert close(tank.gross_m3, 0.1, 0.12)
        assert close(tank.capacity_m3, 0.1, 0.12)
        assert close(tank.caught_air_m3, 0.0, 0.0)
        # What stands below the rim, whose radius is half a micrometre, stays.
        assert close(tank.usable_m3, 0.1, 0.108, 1e-6)
        ground, cruise = tank.attitudes
        assert close(cruise.trapped_m3, 0.0, 0.012, 1e-6)
        assert close(cruise.usable_m3, 0.1, 0.108, 1e-6)
        assert (ground.attitude, ground.flight, ground.usable_m3) == ("ground", False, Pair(a=None, b=None))
        assert (tank.remark, ground.remark, cruise.remark) == (None, None, None)
    assert compared.saved_as_fuel_m3 == pytest.approx(0.0, abs=1e-12)


def test_an_attitude_or_a_tank_of_one_plan_only_and_an_attitude_turned_are_told(
    drawing: Any, two: Any
) -> None:
    head = FUEL.format(density="715 kg/m3") + GROUND
    rows, files = [drawing.item("PIN", "12 g")], {"box": drawing.box(1.0, 0.5)}
    first = {"rows": rows, "files": files, "tank": TANK.format(tank="main", low=0.0)}
    second = {"rows": rows, "files": files, "tank": TANK.format(tank="wing", low=0.0)}
    compared = two(
        first | {"head": head + CRUISE + CLIMB.format(pitch=5.0)},
        second | {"head": head + CLIMB.format(pitch=8.0) + CRUISE.replace("cruise", "dive")},
    )
    remarks = {one.attitude: one.remark for one in compared.fuel.whole.attitudes}
    assert remarks == {
        "ground": None,
        "climb": "pitch 5.0 roll 0.0 in r1, pitch 8.0 roll 0.0 in r2",
        "cruise": "only in r1",
        "dive": "only in r2",
    }
    assert {one.tank: one.remark for one in compared.fuel.tanks} == {
        "main": "only in r1",
        "wing": "only in r2",
    }
    cruise = next(one for one in compared.fuel.whole.attitudes if one.attitude == "cruise")
    assert (cruise.trapped_m3.b, cruise.trapped_m3.change, cruise.usable_m3.b) == (None, None, None)


def test_both_sides_are_what_fuel_says_of_each_plan_by_itself(drawing: Any, two: Any, tmp_path: Path) -> None:
    head = FUEL.format(density="715 kg/m3") + GROUND + CRUISE + CLIMB.format(pitch=5.0)
    rows = [drawing.item("PIN", "12 g")]
    first = {"rows": rows, "head": head, "tank": TANK.format(tank="box", low=0.01)}
    compared = two(
        first | {"files": {"box": drawing.box(1.0, 0.5)}}, first | {"files": {"box": drawing.box(1.2, 0.5)}}
    )
    for word, folder in (("a", "one"), ("b", "two")):
        alone = tmp_path / f"{folder}.book"
        start_book(alone, tmp_path / folder, by="JK")
        (tank,) = reckon_build(opening.open_build(alone)).tanks
        (seen,) = compared.fuel.tanks
        for key in ("gross_m3", "capacity_m3", "caught_air_m3", "usable_m3"):
            assert getattr(getattr(seen, key), word) == getattr(tank, key), key
        assert {one.attitude: getattr(one.trapped_m3, word) for one in seen.attitudes} == {
            one.attitude: one.trapped_m3 for one in tank.attitudes
        }


@pytest.mark.parametrize(
    ("saved_lb", "worth_us_gal"),
    # Common practice, no source: a wing of about 100 lb that saves a tenth saves about 10 lb, and 5 US gal
    # of avgas is about 30 lb. FAA-H-8083-30 (read): avgas 6 lb/US gal.
    [(10.0, 10.0 / 6.0), (30.0, 5.0), (-30.0, -5.0)],
)
def test_saved_mass_is_worth_the_fuel_that_weighs_it(
    drawing: Any, two: Any, saved_lb: float, worth_us_gal: float
) -> None:
    shared = {
        "head": FUEL.format(density="6 lb/US gal") + GROUND + CRUISE,
        "tank": TANK.format(tank="box", low=0.0),
        "files": {"box": drawing.box(1.0, 0.5)},
    }
    compared = two(
        {"rows": [drawing.item("WING", "100 lb")]} | shared,
        {"rows": [drawing.item("WING", f"{100 - saved_lb} lb")]} | shared,
    )
    assert compared.mass.now_kg.change == pytest.approx(-saved_lb * LB, rel=1e-12)
    assert compared.saved_as_fuel_m3 / US_GAL == pytest.approx(worth_us_gal, rel=1e-9)


def test_without_a_density_nobody_says_what_saved_mass_is_worth(drawing: Any, two: Any) -> None:
    shared = {
        "head": '[fuel]\ngrade = "avgas"\n' + GROUND + CRUISE,
        "tank": TANK.format(tank="box", low=0.0),
        "files": {"box": drawing.box(1.0, 0.5)},
    }
    compared = two(
        {"rows": [drawing.item("PIN", "2 kg")]} | shared, {"rows": [drawing.item("PIN", "1 kg")]} | shared
    )
    assert (compared.saved_as_fuel_m3, compared.fuel_density_kg_m3) == (None, None)


def test_a_tank_without_an_outlet_has_no_usable_in_any_attitude(drawing: Any, two: Any) -> None:
    head = FUEL.format(density="715 kg/m3") + GROUND + CRUISE
    tank = TANK.format(tank="box", low=0.0)
    blind = tank.replace('between = ["B1", "outlet"]', 'between = ["B1", "drain"]')
    shared = {"rows": [drawing.item("PIN", "12 g")], "head": head, "files": {"box": drawing.box(1.0, 0.5)}}
    compared = two(shared | {"tank": tank}, shared | {"tank": blind})
    (box_change,) = compared.fuel.tanks
    cruise = next(one for one in box_change.attitudes if one.attitude == "cruise")
    for pair in (compared.fuel.whole.usable_m3, box_change.usable_m3, cruise.usable_m3):
        assert pair.a == pytest.approx(0.1, abs=1e-6)
        assert (pair.b, pair.change) == (None, None)


def test_comparing_back_gives_the_same_changes_with_the_other_sign(
    drawing: Any, two: Any, tmp_path: Path
) -> None:
    head = FUEL.format(density="715 kg/m3") + GROUND + CRUISE
    shared = {"head": head, "files": {"box": drawing.box(1.0, 0.5)}}
    there = two(
        shared
        | {"rows": [drawing.rib(), drawing.item("PIN", "1 kg")], "tank": TANK.format(tank="box", low=0.0)},
        shared
        | {
            "rows": [drawing.rib(file="long"), drawing.item("PIN", "2 kg")],
            "tank": TANK.format(tank="box", low=0.01),
        },
    )
    back = compare_iterations(tmp_path / "wing.book", "r2", "r1")
    assert (back.mass.now_kg.a, back.mass.now_kg.b) == (there.mass.now_kg.b, there.mass.now_kg.a)
    assert back.mass.cg_m.change == pytest.approx([-one for one in there.mass.cg_m.change], abs=1e-15)
    assert back.fuel is not None
    assert back.fuel.whole.usable_m3.change == -there.fuel.whole.usable_m3.change
    assert back.saved_as_fuel_m3 == pytest.approx(-there.saved_as_fuel_m3, rel=1e-12)
    same = compare_iterations(tmp_path / "wing.book", "r1", "r1")
    assert same.fuel is not None
    assert (same.mass.now_kg.change, same.mass.parts, same.fuel.whole.usable_m3.change) == (0.0, (), 0.0)


def test_two_adopted_iterations_are_compared_without_computing_any_geometry(
    drawing: Any, two: Any, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    head = FUEL.format(density="715 kg/m3") + GROUND + CRUISE
    shared = {"rows": [drawing.rib(), drawing.PLIES], "head": head}
    tank = TANK.format(tank="box", low=0.0)
    first = two(
        shared | {"tank": tank, "files": {"box": drawing.box(1.0, 0.5)}},
        shared | {"tank": tank, "files": {"box": drawing.box(1.0, 0.6)}},
    )
    book = tmp_path / "wing.book"
    opening.forget(book)
    opening._cells.clear()

    def refuse(*_: object, **__: object) -> None:
        raise AssertionError("geometry was computed again")

    monkeypatch.setattr("ledger.geometry.closed_cell.ClosedCell.from_mesh", refuse)
    monkeypatch.setattr("ledger.exchange.mesh_files.read_mesh_file", refuse)
    monkeypatch.setattr("ledger.exchange.plan_folder.read_plan_files", refuse)
    assert compare_iterations(book, "r1", "r2") == first


def test_a_folder_is_compared_as_if_it_were_adopted_and_nothing_is_written(
    drawing: Any, two: Any, tmp_path: Path
) -> None:
    first, second = {"rows": [drawing.rib()]}, {"rows": [drawing.rib(file="long")]}
    previewed = two(first, second, adopted=False)
    book = tmp_path / "wing.book"
    content = book.read_bytes()
    again = compare_iterations(book, "R1", str(tmp_path / "two"))
    assert book.read_bytes() == content
    assert (again.adopted, again.a, again.b) == (False, "r1", "r2")
    assert sorted(path.name for path in tmp_path.iterdir()) == ["one", "two", "wing.book"]
    adopt_plan(book, tmp_path / "two", by="JK")
    adopted = compare_iterations(book, "r1", "r2")
    assert adopted.adopted
    assert (adopted.mass, adopted.fuel) == (previewed.mass, previewed.fuel)


def test_a_name_wins_over_a_path_and_a_folder_of_a_taken_name_goes_by_its_path(
    drawing: Any, two: Any, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    two({"rows": [drawing.rib()]}, {"rows": [drawing.rib(file="long")]})
    drawing.write(tmp_path / "r2", "r2", [drawing.rib(x=1.0)])
    monkeypatch.chdir(tmp_path)
    assert compare_iterations(tmp_path / "wing.book", "r1", "r2").adopted
    folder = compare_iterations(tmp_path / "wing.book", "r2", "./r2")
    assert (folder.b, folder.adopted) == ("./r2", False)
    assert part(folder, "RIB").why == ("area -9.1 %", "middle 975.0 mm aft")


@pytest.mark.parametrize(("a", "b"), [("r1", "r7"), ("r7", "r1"), ("r7", "r8"), ("one", "r1")])
def test_an_unknown_name_is_refused_with_the_names_there_are(
    drawing: Any, two: Any, tmp_path: Path, a: str, b: str
) -> None:
    two({"rows": [drawing.rib()]}, {"rows": [drawing.rib(file="long")]})
    with pytest.raises(Refused) as caught:
        compare_iterations(tmp_path / "wing.book", a, b)
    asked = [name for name in (a, b) if name != "r1"]
    assert [str(finding.where) for finding in caught.value.findings] == asked
    assert {finding.do for finding in caught.value.findings} == {"choose one of: r1, r2"}


def test_a_folder_with_errors_is_refused_with_all_of_them(drawing: Any, two: Any, tmp_path: Path) -> None:
    two({"rows": [drawing.rib()]}, {"rows": [drawing.rib()]}, adopted=False)
    drawing.write(tmp_path / "bad", "r3", [drawing.rib(quantity=0), drawing.item("PIN", "heavy")])
    with pytest.raises(Refused) as caught:
        compare_iterations(tmp_path / "wing.book", "r1", str(tmp_path / "bad"))
    assert [finding.where.column for finding in caught.value.findings] == ["quantity", "planned_mass"]


@pytest.mark.parametrize("stop_at", [1, 3, 5, 7])
def test_work_that_is_stopped_on_the_way_leaves_the_book_as_it_was(
    drawing: Any, two: Any, tmp_path: Path, stop_at: int
) -> None:
    head = FUEL.format(density="715 kg/m3") + GROUND + CRUISE
    first = {"rows": [drawing.rib()], "head": head, "tank": TANK.format(tank="box", low=0.0)}
    two(
        first | {"files": {"box": drawing.box(1.0, 0.5)}},
        first | {"files": {"box": drawing.box(1.0, 0.6)}},
        adopted=False,
    )
    book = tmp_path / "wing.book"
    content = book.read_bytes()
    told: list[str] = []

    def stop(what: str, done: int, of: int) -> None:
        assert 0 <= done <= of
        told.append(what)
        if len(told) == stop_at:
            raise Stopped("stopped")

    with pytest.raises(Stopped):
        adopt_plan(book, tmp_path / "two", by="JK", preview=True, progress=stop)
    assert len(told) == stop_at
    told.clear()
    with pytest.raises(Stopped):
        compare_iterations(book, "r1", str(tmp_path / "two"), progress=stop)
    assert book.read_bytes() == content
