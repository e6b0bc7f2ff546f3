"""Two iterations compared with all of them over time, on a box whose masses are known by hand.

Floor 0.5 m2 at 5.6 kg/m2, lid 0.5 m2, two walls of 0.2 m2 and two ends of 0.1 m2 at 2 kg/m2:
2.8 + 1.0 + 0.8 + 0.4 = 5.0 kg. The cell is 1.0 x 0.5 x 0.2 m.
"""

from __future__ import annotations

from collections.abc import Callable
from datetime import UTC, datetime, timedelta
from pathlib import Path

import pytest

from ledger.errors import Refused, WrongUse
from ledger.operations.adopt_plan import adopt_plan
from ledger.operations.log_entry import log_entry
from ledger.operations.look_at_iterations import (
    IterationsView,
    Wanted,
    look_at_iterations,
    look_back,
    names_of,
)
from ledger.operations.open_build import open_build
from ledger.operations.outline_plan import outline_plan
from ledger.operations.reckon_fuel import reckon_fuel
from ledger.operations.start_book import start_book
from ledger.operations.withdraw_entry import withdraw_entry

NOON = datetime(2026, 3, 4, 12, 0, tzinfo=UTC)
BoxPlan = Callable[..., Path]
LIGHT_FLOOR = {"laminates.csv": ("FLOOR 5600,5600", "FLOOR 5600,5000")}
LESS_FUEL = {"tanks.toml": ("expansion_percent = 2.0", "expansion_percent = 40.0")}


@pytest.fixture
def book(tmp_path: Path, box_plan: BoxPlan) -> Path:
    """r1; a wall weighed 50 g heavy; r2 with a lighter floor; the lid weighed 30 g light; r3 less fuel."""
    book = tmp_path / "box.book"
    start_book(book, box_plan("r1"), by="JK", now=NOON)
    log_entry(book, "weigh", {"what": "WALL.IN", "reading": "450 g"}, by="JK", now=_day(1))
    adopt_plan(book, box_plan("r2", LIGHT_FLOOR), by="AB", now=_day(2))
    log_entry(book, "weigh", {"what": "LID", "reading": "970 g"}, by="JK", now=_day(3))
    adopt_plan(book, box_plan("r3", LESS_FUEL), by="AB", now=_day(4))
    return book


def _day(number: int) -> datetime:
    return NOON + timedelta(days=number)


def _look(book: Path, a: str, b: str | None, **more: object) -> IterationsView:
    return look_at_iterations(open_build(book), Wanted(a=a, b=b, **more))  # type: ignore[arg-type]


def test_each_iteration_keeps_the_mass_known_when_the_next_one_came(book: Path) -> None:
    history = look_back(open_build(book))
    assert [(one.name, one.by, one.at, one.withdrawn) for one in history] == [
        ("r1", "JK", NOON, False),
        ("r2", "AB", _day(2), False),
        ("r3", "AB", _day(4), False),
    ]
    assert [one.estimated_kg for one in history] == pytest.approx([5.0, 4.7, 5.0], abs=1e-9)
    # 5.0 + 0.050; 4.7 + 0.050 - 0.030; the floor of r3 is that of r1 again.
    assert [one.best_kg for one in history] == pytest.approx([5.05, 4.72, 5.02], abs=1e-9)
    assert [one.forecast_kg for one in history] == [None, None, None]


def test_usable_over_time_is_what_fuel_says_of_each_plan(book: Path, tmp_path: Path) -> None:
    history = look_back(open_build(book))
    for one in history:
        alone = tmp_path / f"{one.name}.book"
        start_book(alone, tmp_path / f"plan {one.name}", by="JK", now=NOON)
        (tank,) = reckon_fuel(alone).report.tanks
        assert one.usable_m3 == pytest.approx(tank.usable_m3, abs=1e-12)
    assert history[0].usable_m3 == history[1].usable_m3
    assert history[2].usable_m3 is not None
    assert history[2].usable_m3 < 0.95 * (history[1].usable_m3 or 0.0)


def test_a_reading_put_right_later_was_wrong_in_the_history_too(book: Path) -> None:
    withdraw_entry(book, 2, "wrong piece on the scale", by="JK", now=_day(5))
    history = look_back(open_build(book))
    assert [one.best_kg for one in history] == pytest.approx([5.0, 4.67, 4.97], abs=1e-9)


def test_a_withdrawn_iteration_is_shown_as_such_without_figures(book: Path) -> None:
    withdraw_entry(book, 5, "not yet", by="JK", now=_day(5))
    build = open_build(book)
    assert names_of(build.snapshot) == ("r1", "r2")
    history = look_back(build)
    assert [(one.name, one.withdrawn) for one in history] == [("r1", False), ("r2", False), ("r3", True)]
    assert (history[2].best_kg, history[2].estimated_kg, history[2].usable_m3) == (None, None, None)
    # r2 is the current one again: its mass is that of today.
    assert history[1].best_kg == pytest.approx(4.72, abs=1e-9)


def test_the_two_asked_for_are_compared(book: Path) -> None:
    view = _look(book, "r1", "r2")
    assert view.comparison is not None
    assert (view.comparison.a, view.comparison.b, view.comparison.adopted) == ("r1", "r2", True)
    # By the record of today, so the lid counts under both.
    assert view.comparison.mass.now_kg.a == pytest.approx(5.02, abs=1e-9)
    assert view.comparison.mass.now_kg.change == pytest.approx(-0.3, abs=1e-9)
    assert [one.name for one in view.history] == ["r1", "r2", "r3"]
    assert view.plans is None


def test_one_alone_has_a_history_and_nothing_to_compare(tmp_path: Path, box_plan: BoxPlan) -> None:
    book = tmp_path / "one.book"
    start_book(book, box_plan("r1"), by="JK", now=NOON)
    view = _look(book, "r1", None)
    assert view.comparison is None
    assert [one.name for one in view.history] == ["r1"]


def test_a_folder_is_compared_without_writing_anything(book: Path, box_plan: BoxPlan) -> None:
    folder, content = box_plan("r4", LIGHT_FLOOR), book.read_bytes()
    view = _look(book, "r3", None, folder=folder)
    assert view.comparison is not None
    assert (view.comparison.b, view.comparison.adopted) == ("r4", False)
    assert view.comparison.mass.now_kg.change == pytest.approx(-0.3, abs=1e-9)
    assert book.read_bytes() == content


def test_a_folder_that_is_no_plan_is_refused_with_all_its_findings(book: Path, box_plan: BoxPlan) -> None:
    folder = box_plan("r4", {"parts.csv": ("part,title", "part,titel")})
    with pytest.raises(Refused):
        _look(book, "r3", None, folder=folder)
    with pytest.raises(WrongUse):
        _look(book, "r3", None, folder=folder / "nowhere")


def test_both_plans_are_drawn_from_above_where_asked(book: Path) -> None:
    view = _look(book, "r1", "r2", drawn=True)
    assert view.plans is not None
    assert view.plans[0] == view.plans[1]


def test_upright_panels_are_lines_and_lying_ones_and_cells_areas(book: Path) -> None:
    drawn = outline_plan(open_build(book))
    corners = {frozenset((round(fs, 6), round(bl, 6)) for fs, bl in line) for line in drawn.panels}
    box = frozenset({(2.0, 0.1), (3.0, 0.1), (3.0, 0.6), (2.0, 0.6)})
    assert corners == {
        box,
        frozenset({(2.0, 0.1), (3.0, 0.1)}),
        frozenset({(2.0, 0.6), (3.0, 0.6)}),
        frozenset({(2.0, 0.1), (2.0, 0.6)}),
        frozenset({(3.0, 0.1), (3.0, 0.6)}),
    }
    (cell,) = drawn.cells
    assert {(round(fs, 6), round(bl, 6)) for fs, bl in cell} == set(box)


def test_a_mirrored_panel_is_drawn_on_its_own_side(tmp_path: Path, box_plan: BoxPlan) -> None:
    row = "END.A,aft end,rib,C,BOX,panel,WALL 2000,geometry/panels.dxf#END,mm,3 0.1 0,0 1 0,0 0 1"
    mirrored = row.replace("rib,C", "rib,R") + ",\nEND.A-L,aft end,rib,L,BOX,panel,WALL 2000,,,,,,END.A"
    folder = box_plan("r1", {"parts.csv": (row, mirrored)})
    text = (folder / "parts.csv").read_text().replace("across,up_axis\n", "across,up_axis,mirror_of\n")
    (folder / "parts.csv").write_text(text)
    start_book(tmp_path / "one.book", folder, by="JK", now=NOON)
    drawn = outline_plan(open_build(tmp_path / "one.book"))
    rounded = [{(round(fs, 6), round(bl, 6)) for fs, bl in line} for line in drawn.panels]
    assert {(3.0, -0.1), (3.0, -0.6)} in rounded
