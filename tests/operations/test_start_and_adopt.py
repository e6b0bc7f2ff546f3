"""A book begun with a plan folder, and further plans adopted into it."""

from __future__ import annotations

import sqlite3
from datetime import UTC, datetime
from pathlib import Path

import pytest

from ledger.errors import FindingsError, Refused, WrongUse
from ledger.operations.adopt_plan import adopt_plan
from ledger.operations.check_book import check_book
from ledger.operations.log_entry import log_entry
from ledger.operations.open_build import forget, newest_entry, open_build
from ledger.operations.start_book import start_book
from ledger.operations.withdraw_entry import withdraw_entry

NOON = datetime(2026, 3, 4, 12, 0, tzinfo=UTC)
SQUARE = "v 0 0 0\nv {side} 0 0\nv {side} 1 0\nv 0 1 0\nf 1 2 3\nf 1 3 4\n"


def _plan(folder: Path, name: str, *, side: float = 2.0, parts: str = "") -> Path:
    folder.mkdir(exist_ok=True)
    (folder / "geometry").mkdir(exist_ok=True)
    (folder / "plan.toml").write_text(
        f'format = "plan-1"\nname = "{name}"\ntitle = "T {name}"\ndisplay = "metric"\n'
    )
    (folder / "materials.csv").write_text(
        "material,kind,areal_mass [g/m2],density [kg/m3]\ncarbon,fabric,200,\nepoxy,resin,,1150\n"
    )
    (folder / "laminates.csv").write_text(
        "laminate,step,material,orientation [deg],resin_fraction [%]\n"
        "SKIN,1,carbon,0,40\nSKIN,2,carbon,45,40\n"
    )
    (folder / "parts.csv").write_text(
        "part,title,class,side,assembly,form,made_of,geometry,geometry_unit,origin,planned_mass,quantity\n"
        "SKIN-L,upper skin,skin,L,WING/LEFT,skin,SKIN,geometry/skin.obj,m,,,1\n"
        "BOLT,bolt,fitting,C,WING,item,,,m,0 0 0,12 g,2\n" + parts
    )
    (folder / "geometry" / "skin.obj").write_text(SQUARE.format(side=side))
    return folder


@pytest.fixture
def plan(tmp_path: Path) -> Path:
    """A skin of two plies on a rectangle of 2 m2, and two bolts."""
    return _plan(tmp_path / "plan", "r1")


def _refused(error: type[FindingsError], book: Path, plan: Path) -> list[str]:
    with pytest.raises(error) as caught:
        start_book(book, plan, by="JK")
    return [finding.code for finding in caught.value.findings]


def test_a_book_is_begun_with_its_plan(plan: Path, tmp_path: Path) -> None:
    book = tmp_path / "wing.book"
    started = start_book(book, plan, by="JK", now=NOON)
    assert (started.iteration, started.seq, started.no_longer_fits) == ("r1", 1, ())
    assert newest_entry(book) == (1, started.digest)
    build = open_build(book)
    assert build.snapshot.plan.shapes[0].measure == pytest.approx(2.0, abs=1e-12)
    assert build.files["parts.csv"] == (plan / "parts.csv").read_bytes()
    assert set(build.files) == {
        "plan.toml", "materials.csv", "laminates.csv", "parts.csv", "geometry/skin.obj",
    }  # fmt: skip
    assert sorted(path.name for path in tmp_path.iterdir()) == ["plan", "wing.book"]
    checked = check_book(book)
    assert (checked.chain_ok, checked.replay_ok) == (True, True)


def test_the_plan_stays_in_the_book_when_the_folder_is_gone(plan: Path, tmp_path: Path) -> None:
    book = tmp_path / "wing.book"
    start_book(book, plan, by="JK")
    first = open_build(book).snapshot.plan
    for file in sorted(plan.rglob("*"), reverse=True):
        file.rmdir() if file.is_dir() else file.unlink()
    connection = sqlite3.connect(book)
    connection.execute("DELETE FROM geometry")
    connection.commit()
    connection.close()
    forget(book)
    assert open_build(book).snapshot.plan == first


def test_what_is_computed_again_is_kept_with_the_next_entry(plan: Path, tmp_path: Path) -> None:
    book = tmp_path / "wing.book"
    start_book(book, plan, by="JK")
    connection = sqlite3.connect(book)
    (kept,) = connection.execute("SELECT count(*) FROM geometry").fetchone()
    connection.execute("DELETE FROM geometry")
    connection.commit()
    forget(book)
    log_entry(book, "note", {"text": "x"}, by="JK")
    assert connection.execute("SELECT count(*) FROM geometry").fetchone() == (kept,)
    connection.close()


@pytest.mark.parametrize("what", ["file", "folder", "dangling link"])
def test_a_book_is_never_begun_over_something(plan: Path, tmp_path: Path, what: str) -> None:
    book = tmp_path / "wing.book"
    if what == "file":
        book.write_text("mine")
    elif what == "folder":
        book.mkdir()
    else:
        book.symlink_to(tmp_path / "nowhere")
    assert _refused(Refused, book, plan) == ["target-exists"]
    assert not (tmp_path / "nowhere").exists()
    assert what != "file" or book.read_text() == "mine"


def test_a_bad_plan_begins_no_book(plan: Path, tmp_path: Path) -> None:
    (plan / "parts.csv").write_text("part,titel\nX,Y\n")
    book = tmp_path / "wing.book"
    assert _refused(Refused, book, plan)
    assert [path.name for path in tmp_path.iterdir()] == ["plan"]


def test_no_plan_folder_and_no_folder_for_the_book_are_wrong_use(plan: Path, tmp_path: Path) -> None:
    assert _refused(WrongUse, tmp_path / "wing.book", tmp_path / "none")
    assert _refused(WrongUse, tmp_path / "none" / "wing.book", plan) == ["folder-absent"]
    assert [path.name for path in tmp_path.iterdir()] == ["plan"]


def test_a_further_plan_names_the_pieces_that_no_longer_fit(plan: Path, tmp_path: Path) -> None:
    book = tmp_path / "wing.book"
    start_book(book, plan, by="JK", now=NOON)
    log_entry(book, "receive", {"material": "carbon", "quantity": "10 m2", "lot": "C"}, by="JK")
    log_entry(book, "lay", {"piece": "SKIN-L", "step": "1", "lots": "C"}, by="JK")
    log_entry(book, "weigh", {"what": "BOLT", "reading": "12 g"}, by="JK")
    later = _plan(tmp_path / "later", "r2", side=3.0)
    content = book.read_bytes()
    previewed = adopt_plan(book, later, by="JK", preview=True)
    assert book.read_bytes() == content
    assert open_build(book).snapshot.plan.name == "r1"
    adopted = adopt_plan(book, later, by="JK")
    assert (adopted.iteration, adopted.seq) == ("r2", 5)
    assert [(unfit.piece, unfit.state) for unfit in adopted.no_longer_fits] == [("SKIN-L/1", "open")]
    assert previewed.no_longer_fits == adopted.no_longer_fits
    snapshot = open_build(book).snapshot
    assert [iteration.name for iteration in snapshot.iterations] == ["r1", "r2"]
    assert snapshot.pieces["SKIN-L/1"].iteration == "r1"
    withdraw_entry(book, 5, "not yet", by="JK")
    assert open_build(book).snapshot.plan.name == "r1"
    assert adopt_plan(book, later, by="JK").seq == 7
    assert check_book(book).replay_ok


def test_an_iteration_has_a_name_of_its_own(plan: Path, tmp_path: Path) -> None:
    book = tmp_path / "wing.book"
    start_book(book, plan, by="JK")
    with pytest.raises(Refused) as caught:
        adopt_plan(book, plan, by="JK")
    assert [finding.code for finding in caught.value.findings] == ["iteration-taken"]
    assert newest_entry(book)[0] == 1


def test_no_number_is_given_out_that_a_part_of_the_plan_has(tmp_path: Path) -> None:
    parts = "P0,pin,fitting,C,WING,item,,,m,0 0 0,1 g,1\nP0016,plug,fitting,C,WING,item,,,m,0 0 0,2 g,1\n"
    book = tmp_path / "wing.book"
    start_book(book, _plan(tmp_path / "plan", "r1", parts=parts), by="JK")
    logged = log_entry(book, "weigh", {"what": "P0", "reading": "1 g"}, by="JK")
    assert [(one.name, one.number) for one in logged.minted] == [("P0/1", "P0024")]
    assert log_entry(book, "weigh", {"what": "P0016", "reading": "2 g"}, by="JK").says.startswith("P0016/1")


def test_a_part_with_the_number_of_something_in_the_book_is_refused(tmp_path: Path) -> None:
    book = tmp_path / "wing.book"
    start_book(book, _plan(tmp_path / "first", "r1"), by="JK")
    log_entry(book, "receive", {"material": "carbon", "quantity": "5 m2", "lot": "CLOTH"}, by="JK")
    log_entry(book, "weigh", {"what": "SKIN-L", "reading": "900 g"}, by="JK")
    parts = "cloth,bag,fitting,C,WING,item,,,m,0 0 0,1 g,1\nP0016,plug,fitting,C,WING,item,,,m,0 0 0,2 g,1\n"
    with pytest.raises(Refused) as caught:
        adopt_plan(book, _plan(tmp_path / "second", "r1", parts=parts), by="JK")
    assert [(finding.code, str(finding.where)) for finding in caught.value.findings] == [
        ("iteration-taken", "plan.toml:name"),
        ("number-taken", "parts.csv:cloth:part"),
        ("number-taken", "parts.csv:P0016:part"),
    ]
    assert newest_entry(book)[0] == 3


def test_a_part_that_the_new_plan_drops_keeps_its_pieces(tmp_path: Path) -> None:
    extra = "CLIP,clip,fitting,C,WING,item,,,m,0 0 0,1 g,1\n"
    book = tmp_path / "wing.book"
    start_book(book, _plan(tmp_path / "with", "r1", parts=extra), by="JK")
    log_entry(book, "weigh", {"what": "CLIP", "reading": "1 g"}, by="JK")
    adopt_plan(book, _plan(tmp_path / "without", "r2"), by="JK")
    assert log_entry(book, "scrap", {"what": "CLIP", "why": "not needed"}, by="JK").says.startswith("CLIP/1")
    with pytest.raises(Refused):
        log_entry(book, "weigh", {"what": "CLIP", "reading": "1 g"}, by="JK")


@pytest.mark.parametrize("change", ["2.0:2.1", "carbon:carbin", "whole"])
def test_kept_geometry_that_is_not_what_the_files_give_is_named(
    plan: Path, tmp_path: Path, change: str
) -> None:
    book = tmp_path / "wing.book"
    start_book(book, plan, by="JK")
    connection = sqlite3.connect(book)
    for key, value in connection.execute("SELECT key, value FROM geometry").fetchall():
        old, _, new = change.partition(":")
        changed = b"{}" if change == "whole" else value.replace(old.encode(), new.encode())
        connection.execute("UPDATE geometry SET value = ? WHERE key = ?", (changed, key))
    connection.commit()
    connection.close()
    checked = check_book(book)
    assert not checked.replay_ok
    assert "geometry-differs" in {finding.code for finding in checked.findings}
