"""Long work is told step by step, and ended between any two of them leaves nothing behind."""

from __future__ import annotations

import shutil
from collections.abc import Callable
from datetime import UTC, datetime
from pathlib import Path
from typing import Any

import pytest

import ledger.operations.look_at_iterations as look_at_iterations_module
from ledger.errors import Stopped
from ledger.exchange.plan_folder import read_plan
from ledger.model.progress import Progress, unwatched
from ledger.operations.adopt_plan import adopt_plan
from ledger.operations.back_up import back_up
from ledger.operations.check_book import check_book
from ledger.operations.lay_out_demo import lay_out_demo
from ledger.operations.log_file import log_file
from ledger.operations.look_at_iterations import Wanted, look_at_iterations
from ledger.operations.open_build import open_build
from ledger.operations.reckon_fuel import reckon_fuel
from ledger.operations.rescue_book import rescue_book
from ledger.operations.restore_book import restore_book
from ledger.operations.start_book import start_book

NOON = datetime(2026, 3, 4, 12, 0, tzinfo=UTC)
BoxPlan = Callable[..., Path]
Work = Callable[[Progress], Any]


@pytest.fixture
def folder(tmp_path: Path, box_plan: BoxPlan) -> Path:
    """A folder with the box's book, its first two plans, and a file of rows."""
    start_book(tmp_path / "box.book", box_plan("r1"), by="JK", now=NOON)
    box_plan("r2", {"laminates.csv": ("FLOOR 5600,5600", "FLOOR 5600,5000")})
    rows = "".join(f"note,row {number}\n" for number in range(30))
    (tmp_path / "rows.csv").write_text(f"kind,text\n{rows}")
    shutil.copyfile(tmp_path / "box.book", tmp_path / "copied.book")
    return tmp_path


WORKS: dict[str, Callable[[Path], Work]] = {
    "log a file": lambda at: (
        lambda tell: log_file(at / "box.book", at / "rows.csv", by="JK", now=NOON, progress=tell)
    ),
    "start": lambda at: (
        lambda tell: start_book(at / "new.book", at / "plan r1", by="JK", now=NOON, progress=tell)
    ),
    "adopt": lambda at: (
        lambda tell: adopt_plan(at / "box.book", at / "plan r2", by="JK", now=NOON, progress=tell)
    ),
    "preview": lambda at: (
        lambda tell: adopt_plan(
            at / "box.book", at / "plan r2", by="JK", now=NOON, preview=True, progress=tell
        )
    ),
    "back up": lambda at: lambda tell: back_up(at / "box.book", at / "copy.book", progress=tell),
    "restore": lambda at: lambda tell: restore_book(at / "copied.book", at / "back.book", progress=tell),
    "rescue": lambda at: lambda tell: rescue_book(at / "box.book", at / "saved.book", progress=tell),
    "check": lambda at: lambda tell: check_book(at / "box.book", now=NOON, progress=tell),
    "fuel": lambda at: lambda tell: reckon_fuel(at / "box.book", progress=tell),
    "compare": lambda at: (
        lambda tell: look_at_iterations(
            open_build(at / "box.book"), Wanted(a="r1", b=None, folder=at / "plan r2", drawn=True), tell
        )
    ),
}


def _content(folder: Path) -> dict[str, bytes]:
    return {
        str(file.relative_to(folder)): file.read_bytes()
        for file in sorted(folder.rglob("*"))
        # Side files come and go with every look into a book.
        if file.is_file() and not file.name.endswith(("-wal", "-shm"))
    }


def _steps(name: str, folder: Path) -> int:
    trial = folder.with_name(f"{folder.name} trial")
    shutil.copytree(folder, trial)
    told: list[str] = []
    WORKS[name](trial)(lambda what, done, of: told.append(what))  # noqa: ARG005
    return len(told)


@pytest.mark.parametrize("name", sorted(WORKS))
def test_ended_between_any_two_steps_it_leaves_everything_as_it_was(name: str, folder: Path) -> None:
    before, many = _content(folder), _steps(name, folder)
    assert many >= 1
    for last in sorted({1, many, *range(1, many, 1 + many // 6)}):
        steps = 0

        def tell(what: str, done: int, of: int, last: int = last) -> None:
            nonlocal steps
            del what, done, of
            steps += 1
            if steps == last:
                raise Stopped("enough")

        look_at_iterations_module.forget_plans()
        with pytest.raises(Stopped):
            WORKS[name](folder)(tell)
        assert _content(folder) == before


@pytest.mark.parametrize("name", sorted(WORKS))
def test_each_step_is_told_before_it_with_how_many_there_are(name: str, folder: Path) -> None:
    told: list[tuple[str, int, int]] = []
    WORKS[name](folder)(lambda what, done, of: told.append((what, done, of)))
    assert all(what and 0 <= done <= of for what, done, of in told)


def test_watching_changes_nothing_of_what_comes_out(folder: Path) -> None:
    def ignore(what: str, done: int, of: int) -> None:
        del what, done, of

    assert reckon_fuel(folder / "box.book", progress=ignore) == reckon_fuel(folder / "box.book")
    read = read_plan(folder / "plan r2", progress=ignore)
    assert read.plan is not None
    assert read.plan == read_plan(folder / "plan r2", progress=unwatched).plan


def test_a_plan_tells_its_parts_one_by_one_and_then_its_cells(folder: Path) -> None:
    told: list[tuple[str, int, int]] = []
    read_plan(folder / "plan r1", progress=lambda what, done, of: told.append((what, done, of)))
    parts = ["FLOOR", "LID", "WALL.IN", "WALL.OUT", "END.F", "END.A"]
    assert told == [
        *((f"plan, part {part}", done, 6) for done, part in enumerate(parts)),
        ("plan, cell B1", 0, 1),
    ]


def test_fuel_is_told_attitude_by_attitude_and_tank_by_tank(folder: Path) -> None:
    told: list[tuple[str, int, int]] = []
    reckon_fuel(folder / "box.book", progress=lambda what, done, of: told.append((what, done, of)))
    assert told == [
        ("fuel, ground", 0, 6),
        ("fuel, level", 1, 6),
        ("fuel, climb", 2, 6),
        ("fuel, box at ground", 3, 6),
        ("fuel, box at level", 4, 6),
        ("fuel, box at climb", 5, 6),
        ("fuel", 6, 6),
    ]


def test_a_file_tells_every_row(folder: Path) -> None:
    told: list[tuple[str, int, int]] = []
    log_file(
        folder / "box.book",
        folder / "rows.csv",
        by="JK",
        now=NOON,
        progress=lambda what, done, of: told.append((what, done, of)),
    )
    assert told == [("rows", done, 30) for done in range(31)]


def test_a_demo_ended_half_way_leaves_no_folder(tmp_path: Path) -> None:
    steps = 0

    def tell(what: str, done: int, of: int) -> None:
        nonlocal steps
        del what, of
        steps += 1
        if done == 20:
            raise Stopped("enough")

    with pytest.raises(Stopped):
        lay_out_demo(tmp_path / "demo", progress=tell)
    assert steps == 21
    assert list(tmp_path.iterdir()) == []
