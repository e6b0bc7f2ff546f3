"""A layout becomes a plan folder that the book takes, or nothing at all."""

from __future__ import annotations

import errno
import os
import shutil
from collections.abc import Callable, Iterator
from pathlib import Path

import pytest

from ledger.errors import Refused, Severity, Stopped, WrongUse
from ledger.exchange.plan_folder import ReadPlan, read_plan
from ledger.loft.lofted_plan import LoftedPlan
from ledger.model.plan import PartClass
from ledger.operations import loft_wing as operation
from ledger.operations.loft_wing import loft_wing
from ledger.operations.log_entry import log_entry
from ledger.operations.reckon_fuel import reckon_fuel
from ledger.operations.start_book import start_book
from ledger.operations.weigh_up_build import weigh_up_build

STRAIGHT = Path(__file__).resolve().parents[1] / "loft" / "straight_wing"
LAYOUT = STRAIGHT / "wing.toml"


@pytest.fixture(scope="module")
def lofted(tmp_path_factory: pytest.TempPathFactory) -> LoftedPlan:
    """The straight wing, lofted once."""
    return loft_wing(LAYOUT, tmp_path_factory.mktemp("lofted") / "s1")


@pytest.fixture
def changed(tmp_path: Path) -> Callable[..., Path]:
    """The layout with pieces of its text replaced, in a folder of its own."""

    def change(*pairs: tuple[str, str]) -> Path:
        folder = tmp_path / "given"
        shutil.copytree(STRAIGHT, folder)
        text = (folder / "wing.toml").read_text()
        for old, new in pairs:
            assert text.count(old) == 1, old
            text = text.replace(old, new)
        (folder / "wing.toml").write_text(text)
        return folder / "wing.toml"

    return change


def nothing_left(out: Path) -> bool:
    """Whether there is neither the folder nor anything begun beside it."""
    return not [path for path in out.parent.iterdir() if out.name in path.name]


def test_what_was_made_is_counted_on_both_sides(lofted: LoftedPlan) -> None:
    assert (lofted.name, lofted.title) == ("s1", "a straight wing")
    assert (lofted.parts, lofted.cells, lofted.openings) == (18, 4, 10)
    assert {each.part_class: each.pieces for each in lofted.classes} == {
        PartClass.RIB: 6,
        PartClass.WEB: 4,
        PartClass.SKIN: 4,
        PartClass.JOINT: 2,
        PartClass.FITTING: 6,
    }
    assert lofted.findings == ()
    assert lofted.deviation < 1e-6


def test_masses_are_those_of_the_book_that_starts_from_it(lofted: LoftedPlan, tmp_path: Path) -> None:
    start_book(tmp_path / "wing.book", lofted.folder, by="JK")
    report = weigh_up_build(tmp_path / "wing.book").report
    assert lofted.estimated_kg == pytest.approx(report.total.estimated_kg, rel=1e-12)
    for each in lofted.classes:
        parts = [part for part in report.parts if part.part_class is each.part_class]
        assert each.estimated_kg == pytest.approx(sum(part.estimated_kg or 0.0 for part in parts), rel=1e-12)
    joint = next(each for each in lofted.classes if each.part_class is PartClass.JOINT)
    assert joint.area_m2 is None


def test_gross_is_that_of_the_fuel_report_and_of_the_account(lofted: LoftedPlan, tmp_path: Path) -> None:
    start_book(tmp_path / "wing.book", lofted.folder, by="JK")
    tanks = reckon_fuel(tmp_path / "wing.book", levels=2).report.tanks
    assert [tank.tank for tank in tanks] == ["left", "right"]
    assert lofted.gross_m3 == pytest.approx(sum(tank.gross_m3 for tank in tanks), rel=1e-12)
    read = read_plan(lofted.folder).plan
    assert read is not None
    displaced = sum(cell.displaced_m3 or 0.0 for cell in read.tanks.cells)
    # The account is of one wing, its cells before fillets.
    assert lofted.gross_m3 + displaced == pytest.approx(2.0 * lofted.account.cells_m3, rel=1e-12)
    assert all(tank.usable_m3 is not None for tank in tanks)


def test_a_skin_has_the_area_of_its_surface(lofted: LoftedPlan) -> None:
    import numpy as np

    from ledger.loft.section import naca_section

    outline = naca_section("0012", 20)
    around = float(np.hypot(*np.diff(outline, axis=0).T).sum())
    skins = next(each for each in lofted.classes if each.part_class is PartClass.SKIN)
    # Both wings, 1 m of chord and 1 m of span each; ten straight pieces on each surface.
    assert skins.area_m2 == pytest.approx(2.0 * around, rel=1e-3)


def test_bonding_with_the_lots_of_the_paste_weighs_the_joint(lofted: LoftedPlan, tmp_path: Path) -> None:
    book = tmp_path / "wing.book"
    start_book(book, lofted.folder, by="JK")
    for kind, fields in (
        ("receive", {"material": "bond base", "quantity": "4 kg", "lot": "BASE"}),
        ("receive", {"material": "bond hardener", "quantity": "2 kg", "lot": "HARD"}),
        (
            "mix",
            {
                "resin_lot": "BASE",
                "resin": "70 g",
                "hardener_lot": "HARD",
                "hardener": "30.8 g",
                "batch": "C1",
            },
        ),
        ("bond", {"pieces": "JNT.WEB-R", "batches": "C1", "mass": "95 g"}),
    ):
        entered = log_entry(book, kind, fields, by="JK")
        assert [str(finding) for finding in entered.findings if finding.severity is Severity.STOP] == []
    joint = next(part for part in weigh_up_build(book).report.parts if part.part == "JNT.WEB-R")
    assert joint.calculated_kg == pytest.approx(0.095, rel=1e-12)


def test_a_wrong_layout_is_told_whole_and_nothing_is_written(
    tmp_path: Path, changed: Callable[..., Path]
) -> None:
    layout = changed(
        ('rows = ["F"]\nribs', 'rows = ["G"]\nribs'),
        ('chord = 0.2\nsheet = "PANEL"', 'chord = 0.2\nsheet = "PANL"'),
    )
    with pytest.raises(Refused) as refused:
        loft_wing(layout, tmp_path / "out")
    lines = layout.read_text().splitlines()
    told = {(each.code, lines[(each.where.row or 0) - 1]) for each in refused.value.findings}
    assert told >= {("laminate-unknown", 'sheet = "PANL"'), ("row-unknown", 'rows = ["G"]')}
    assert nothing_left(tmp_path / "out")


def test_what_cannot_be_lofted_is_told_with_its_line(tmp_path: Path, changed: Callable[..., Path]) -> None:
    layout = changed(("diameter = 16", "diameter = 160"))
    with pytest.raises(Refused) as refused:
        loft_wing(layout, tmp_path / "out")
    assert all(each.where.file == "wing.toml" and each.where.row for each in refused.value.findings)
    assert nothing_left(tmp_path / "out")


def test_a_layout_that_is_not_there_is_wrong_use(tmp_path: Path) -> None:
    with pytest.raises(WrongUse):
        loft_wing(tmp_path / "no.toml", tmp_path / "out")
    with pytest.raises(WrongUse):
        loft_wing(tmp_path, tmp_path / "out")


def test_no_folder_to_put_it_in_is_wrong_use(tmp_path: Path) -> None:
    with pytest.raises(WrongUse, match="there is no such folder"):
        loft_wing(LAYOUT, tmp_path / "no" / "out")


def test_a_folder_with_something_in_it_is_refused_untouched(tmp_path: Path) -> None:
    (tmp_path / "out").mkdir()
    (tmp_path / "out" / "notes.txt").write_text("mine")
    with pytest.raises(Refused, match="the folder is not empty"):
        loft_wing(LAYOUT, tmp_path / "out")
    assert [path.name for path in (tmp_path / "out").iterdir()] == ["notes.txt"]


def test_an_empty_folder_is_filled(tmp_path: Path) -> None:
    (tmp_path / "out").mkdir()
    loft_wing(LAYOUT, tmp_path / "out")
    assert read_plan(tmp_path / "out").plan is not None
    assert list(tmp_path.iterdir()) == [tmp_path / "out"]


def test_the_same_layout_gives_the_same_bytes(lofted: LoftedPlan, tmp_path: Path) -> None:
    again = loft_wing(LAYOUT, tmp_path / "again").folder
    for path in lofted.folder.rglob("*"):
        if path.is_file():
            assert (again / path.relative_to(lofted.folder)).read_bytes() == path.read_bytes()


def test_stopped_between_any_two_steps_nothing_is_left(tmp_path: Path) -> None:
    told: list[str] = []
    loft_wing(LAYOUT, tmp_path / "whole", progress=lambda what, *_: told.append(what))
    last = {what: number for number, what in enumerate(told)}
    assert {"layout", "drawings", "files", "plan, part SKIN.UPR-R", "plan, cell L1"} <= set(last)
    for at in [0, *last.values()]:
        count = iter(range(at))

        def stop(*_: object, left: Iterator[int] = count) -> None:
            if next(left, None) is None:
                raise Stopped("stopped")

        with pytest.raises(Stopped):
            loft_wing(LAYOUT, tmp_path / "out", progress=stop)
        assert nothing_left(tmp_path / "out"), told[at]


@pytest.mark.parametrize("code", [errno.ENOSPC, errno.EACCES, errno.EROFS])
def test_where_it_cannot_be_written_it_is_refused_in_words(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, code: int
) -> None:
    def fail(_: int) -> None:
        raise OSError(code, os.strerror(code))

    monkeypatch.setattr(os, "fsync", fail)
    with pytest.raises(Refused) as refused:
        loft_wing(LAYOUT, tmp_path / "out")
    (finding,) = refused.value.findings
    assert os.strerror(code).lower() in finding.what
    assert "nothing was written" in finding.do
    assert nothing_left(tmp_path / "out")


def test_a_plan_that_does_not_read_back_is_refused(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def spoilt(folder: Path, **_: object) -> ReadPlan:
        (folder / "geometry" / "R1.obj").write_text("v 0 0 0\n")
        return read_plan(folder)

    monkeypatch.setattr(operation, "read_plan", spoilt)
    with pytest.raises(Refused) as refused:
        loft_wing(LAYOUT, tmp_path / "out")
    assert any(each.where.file == "tanks.toml" for each in refused.value.findings)
    assert nothing_left(tmp_path / "out")
