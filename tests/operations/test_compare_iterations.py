"""Two designs held against each other: closed forms, what changed of each part, and nothing written."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import pytest

from ledger.errors import Refused, Stopped
from ledger.model.comparison import Comparison
from ledger.operations import open_build as opening
from ledger.operations.adopt_plan import adopt_plan
from ledger.operations.compare_iterations import compare_iterations


def part(comparison: Comparison, name: str) -> Any:
    """What changed about one part."""
    return next(one for one in comparison.mass.parts if one.part == name)


def test_mass_cg_and_inertia_of_two_weights_moved_apart_are_the_closed_form(
    drawing: Any, two: Any, close: Any
) -> None:
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


def every_change(drawing: Any) -> tuple[dict[str, Any], dict[str, Any]]:
    """Two plans, of which one part each is gone, longer, more, moved, both, of other plies, or new."""
    first = [
        *(drawing.rib(name) for name in ("SAME", "GONE", "LONGER", "MORE", "MOVED", "BOTH")),
        drawing.PLIES,
        drawing.item("PIN", "12 g"),
    ]
    second = [
        drawing.rib("SAME"),
        drawing.rib("LONGER", file="long"),
        drawing.rib("MORE", quantity=3),
        drawing.rib("MOVED", x=0.04),
        drawing.rib("BOTH", file="long").replace("SHEET", "THICK"),
        drawing.PLIES,
        drawing.item("PIN", "12 g"),
        drawing.rib("NEW", quantity=2),
    ]
    return {"rows": first}, {"rows": second, "steps": (0, -45, 90)}


RIB_KG, PLY_KG = 1.5 * 0.1, 0.4
PLIES_CHANGED = (
    "laminate SKIN: step 2 cloth at -45 deg 50 % resin, was cloth at 45 deg 50 % resin;"
    " step 3 cloth at 90 deg 50 % resin added"
)
# Part: what became of it, why, and the planned kg of all its pieces before and after.
EVERY_CHANGE: dict[str, tuple[str, tuple[str, ...], float | None, float | None]] = {
    "GONE": ("removed", ("not in r2",), RIB_KG, None),
    "LONGER": ("changed", ("area +10.0 %", "middle 25.0 mm aft"), RIB_KG, 1.1 * RIB_KG),
    "MORE": ("changed", ("3 pieces, was 1",), RIB_KG, 3 * RIB_KG),
    "MOVED": ("changed", ("placed 40.0 mm aft",), RIB_KG, RIB_KG),
    "BOTH": (
        "changed",
        ("area +10.0 %", "middle 25.0 mm aft", "of THICK, was SHEET"),
        RIB_KG,
        2.2 * RIB_KG,
    ),
    "PLIES": ("changed", (PLIES_CHANGED,), 2 * PLY_KG, 3 * PLY_KG),
    "NEW": ("added", ("skin 0.100 m2 of SHEET, 2 pieces",), None, 2 * RIB_KG),
}


def test_every_change_of_a_part_is_told_with_its_figures_and_the_masses_of_all_its_pieces(
    drawing: Any, two: Any
) -> None:
    compared = two(*every_change(drawing))
    told = {one.part: (one.change, one.why) for one in compared.mass.parts}
    assert told == {name: (change, why) for name, (change, why, _, _) in EVERY_CHANGE.items()}
    assert compared.mass.parts_same == 2
    figures = {one.part: (one.planned_kg.a, one.planned_kg.b) for one in compared.mass.parts}
    for name, (_, _, a_kg, b_kg) in EVERY_CHANGE.items():
        assert [kg is None for kg in figures[name]] == [a_kg is None, b_kg is None]
        assert [kg or 0.0 for kg in figures[name]] == pytest.approx([a_kg or 0.0, b_kg or 0.0])
    changes = sum((b or 0.0) - (a or 0.0) for a, b in figures.values())
    assert compared.mass.estimated_kg.change == pytest.approx(changes, abs=1e-12)
    assert compared.mass.now_kg.change == pytest.approx(changes, abs=1e-12)


def test_a_planned_mass_left_as_it_was_is_told_where_the_outline_says_otherwise(
    drawing: Any, two: Any, close: Any
) -> None:
    compared = two({"rows": [drawing.rib() + "150 g"]}, {"rows": [drawing.rib(file="long") + "150 g"]})
    said = "its planned mass stays, though geometry and materials give +10.0 %"
    assert said in part(compared, "RIB").why
    assert close(compared.mass.estimated_kg, 0.15, 0.15)


def test_comparing_back_gives_the_same_changes_with_the_other_sign(
    drawing: Any, two: Any, tmp_path: Path
) -> None:
    head = drawing.fuel("715 kg/m3") + drawing.GROUND + drawing.CRUISE
    shared = {"head": head, "files": {"box": drawing.box(1.0, 0.5)}}
    there = two(
        shared | {"rows": [drawing.rib(), drawing.item("PIN", "1 kg")], "tank": drawing.tank("box", low=0.0)},
        shared
        | {
            "rows": [drawing.rib(file="long"), drawing.item("PIN", "2 kg")],
            "tank": drawing.tank("box", low=0.01),
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
    head = drawing.fuel("715 kg/m3") + drawing.GROUND + drawing.CRUISE
    shared = {"rows": [drawing.rib(), drawing.PLIES], "head": head}
    tank = drawing.tank("box", low=0.0)
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
    head = drawing.fuel("715 kg/m3") + drawing.GROUND + drawing.CRUISE
    first = {"rows": [drawing.rib()], "head": head, "tank": drawing.tank("box", low=0.0)}
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
