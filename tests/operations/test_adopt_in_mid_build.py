"""A further iteration adopted in the middle of a build: what stays, what is asked about, and until when."""

from __future__ import annotations

import csv
import io
from datetime import timedelta
from pathlib import Path
from typing import Any

import pytest

from ledger.operations.adopt_plan import Adopted, adopt_plan
from ledger.operations.check_book import check_book
from ledger.operations.list_findings import list_findings
from ledger.operations.open_build import open_build
from ledger.operations.weigh_up_build import weigh_up_build
from ledger.operations.withdraw_entry import withdraw_entry

CODE = "built-to-earlier-iteration"


class Build:
    """The usual book, half built, and plans that change what they are told to."""

    def __init__(self, shop: Any, folder: Path) -> None:
        self.shop = shop
        self.folder = folder
        shop.log("cut", pieces="RIB.01-L; RIB.01-R; CLIP/1; CLIP/2", sheet="PLATE")
        shop.log("lay", piece="SKIN-L", step="1", lots="CLOTH")
        shop.log("weigh", what="BOLT", reading="13 g", scale="W2", state="finished")

    def plan(self, name: str, **changes: str) -> Path:
        """The plan in the book with some cells of `parts.csv` changed: `RIB.01-L="origin=1 0 0"`."""
        folder = self.folder / f"plan {name}"
        files = dict(open_build(self.shop.book).files)
        if not hasattr(self, "first"):
            self.first = files
        files = dict(self.first)
        head = files["plan.toml"].decode().replace('name = "r1"', f'name = "{name}"')
        files["plan.toml"] = head.encode()
        files["parts.csv"] = _changed(files["parts.csv"].decode(), changes).encode()
        if "PLIES" in changes:
            files["laminates.csv"] = files["laminates.csv"].replace(b"-45", changes["PLIES"].encode())
        for path, content in files.items():
            file = folder / path
            file.parent.mkdir(parents=True, exist_ok=True)
            file.write_bytes(content)
        return folder

    def adopt(self, name: str, *, preview: bool = False, **changes: str) -> Adopted:
        """Adopt the changed plan."""
        self.shop.now += timedelta(minutes=1)
        folder = self.plan(name, **changes)
        return adopt_plan(self.shop.book, folder, by="JK", now=self.shop.now, preview=preview)

    @property
    def asked_about(self) -> list[str]:
        """The pieces the rule names."""
        return [str(one.where) for one in list_findings(self.shop.book) if one.code == CODE]

    def state(self, piece: str) -> str:
        """How the weights count a piece."""
        parts = weigh_up_build(self.shop.book).report.parts
        return next(one.state for part in parts for one in part.pieces if one.piece == piece)


def _changed(text: str, changes: dict[str, str]) -> str:
    rows = list(csv.DictReader(io.StringIO(text)))
    for row in rows:
        for cell in filter(None, changes.get(row["part"].replace(".", "").replace("-", ""), "").split(";")):
            column, _, value = cell.partition("=")
            row[column] = value
    out = io.StringIO()
    writer = csv.DictWriter(out, rows[0].keys(), lineterminator="\n")
    writer.writeheader()
    writer.writerows(row for row in rows if row["title"] != "gone")
    return out.getvalue()


@pytest.fixture
def build(shop: Any, tmp_path: Path) -> Build:
    """The build."""
    return Build(shop, tmp_path)


def names(adopted: Adopted) -> list[str]:
    """The pieces that no longer fit."""
    return [one.piece for one in adopted.no_longer_fits]


def test_a_plan_that_changes_nothing_built_keeps_every_piece(build: Build) -> None:
    adopted = build.adopt("r2", BOLT="title=stainless bolt", CLIP="quantity=5")
    assert (names(adopted), build.asked_about) == ([], [])
    assert build.shop.log("weigh", what="SKIN-L", reading="80 g").says.startswith("SKIN-L/1")


def test_only_pieces_whose_geometry_place_make_or_laminate_changed_are_asked_about(build: Build) -> None:
    adopted = build.adopt("r2", RIB01L="made_of=PLIES", CLIP="geometry=geometry/skin.obj", PLIES="30")
    assert names(adopted) == ["RIB.01-L/1", "CLIP/1", "CLIP/2", "SKIN-L/1"]
    assert build.asked_about == names(adopted)
    assert [one.why for one in adopted.no_longer_fits] == [
        "r2: of PLIES, was SANDWICH",
        *["r2: area +525.0 %; middle 50.0 mm aft, 500.0 mm right, 100.0 mm down"] * 2,
        "r2: laminate PLIES: step 3 carbon 200 at 30 deg 40 % resin, was carbon 200 at -45 deg 40 % resin",
    ]


def test_a_preview_says_what_adopting_then_does_and_leaves_every_byte(build: Build) -> None:
    content = build.shop.book.read_bytes()
    previewed = build.adopt("r2", preview=True, RIB01L="made_of=PLIES", BOLT="planned_mass=20 g")
    assert build.shop.book.read_bytes() == content
    assert sorted(path.name for path in build.folder.iterdir()) == ["plan r2", "wing.book"]
    before = weigh_up_build(build.shop.book).report.total
    adopted = build.adopt("r2", RIB01L="made_of=PLIES", BOLT="planned_mass=20 g")
    assert adopted.no_longer_fits == previewed.no_longer_fits
    assert (adopted.comparison, adopted.before) == (None, "r1")
    after = weigh_up_build(build.shop.book).report.total
    assert previewed.comparison is not None
    mass = previewed.comparison.mass
    assert (mass.now_kg.a, mass.now_kg.b) == (before.best_kg, after.best_kg)
    assert (mass.estimated_kg.a, mass.estimated_kg.b) == (before.estimated_kg, after.estimated_kg)
    assert (mass.cg_m.a, mass.cg_m.b) == (before.cg_m, after.cg_m)
    assert previewed.comparison.stays == ("RIB.01-R/1", "CLIP/1", "CLIP/2", "SKIN-L/1", "BOLT/1")


def test_a_piece_is_asked_about_until_another_is_made(build: Build) -> None:
    build.adopt("r2", RIB01L="origin=1 0 0;across=1 0 0;up_axis=0 1 0")
    assert build.asked_about == ["RIB.01-L/1"]
    build.shop.log("cut", pieces="RIB.01-L/2", sheet="PLATE")
    assert build.asked_about == []
    assert (build.state("RIB.01-L/1"), build.state("RIB.01-L/2")) == ("spare", "open")


def test_a_piece_is_asked_about_until_it_is_accepted_and_again_when_its_part_changes_again(
    build: Build,
) -> None:
    build.adopt("r2", RIB01L="made_of=PLIES")
    build.shop.log("accept", finding=CODE, what="RIB.01-L/1", why="stiff enough")
    assert build.asked_about == []
    build.adopt("r3", RIB01L="made_of=PLIES", BOLT="planned_mass=20 g")
    assert build.asked_about == []
    adopted = build.adopt("r4", RIB01L="made_of=PLIES;geometry=geometry/skin.obj")
    assert names(adopted) == build.asked_about == ["RIB.01-L/1"]


def test_a_piece_is_asked_about_until_it_is_scrapped_or_kept_for_stock(build: Build) -> None:
    build.adopt("r2", RIB01L="made_of=PLIES", RIB01R="made_of=PLIES")
    build.shop.log("scrap", what="RIB.01-L/1", why="of no use")
    build.shop.log("hold", what="RIB.01-R/1", why="kept for stock")
    assert build.asked_about == []
    assert build.state("RIB.01-R/1") == "spare"
    build.shop.log("release", what="RIB.01-R/1", why="used after all")
    assert build.asked_about == ["RIB.01-R/1"]


def test_pieces_begun_two_iterations_ago_fit_again_once_their_part_is_changed_back(build: Build) -> None:
    assert names(build.adopt("r2", RIB01L="made_of=PLIES")) == ["RIB.01-L/1"]
    build.shop.log("lay", piece="RIB.01-L/2", step="1", lots="CLOTH")
    assert names(build.adopt("r3")) == []
    assert (build.state("RIB.01-L/1"), build.state("RIB.01-L/2")) == ("open", "spare")
    # And to the second plan again: now the second piece is the one that fits.
    assert names(build.adopt("r4", RIB01L="made_of=PLIES")) == []
    assert (build.state("RIB.01-L/1"), build.state("RIB.01-L/2")) == ("spare", "open")


def test_pieces_of_a_part_the_plan_has_no_longer_are_told_and_count_nothing(build: Build) -> None:
    adopted = build.adopt("r2", BOLT="title=gone")
    assert [(one.piece, one.why) for one in adopted.no_longer_fits] == [("BOLT/1", "r2 has no part BOLT")]
    report = weigh_up_build(build.shop.book).report
    assert "BOLT" not in {part.part for part in report.parts}
    assert report.total.best_kg == pytest.approx(sum(part.best_kg or 0.0 for part in report.parts), abs=1e-12)
    build.shop.log("hold", what="BOLT/1", why="kept for stock")
    assert build.asked_about == []


def test_a_piece_begun_under_an_iteration_since_withdrawn_is_asked_about_until_accepted(build: Build) -> None:
    adopted = build.adopt("r2", RIB01L="geometry=geometry/skin.obj")
    build.shop.log("cut", pieces="RIB.01-L/2; CLIP/3", sheet="PLATE")
    build.shop.now += timedelta(minutes=1)
    withdraw_entry(build.shop.book, adopted.seq, "not yet", by="JK", now=build.shop.now)
    build.shop.log("cut", pieces="CLIP/4", sheet="PLATE")
    # The first rib fits r1 again, so the second is a spare; a clip of r2 was not proved to be one of r1.
    assert build.asked_about == ["CLIP/3"]
    assert open_build(build.shop.book).snapshot.pieces["RIB.01-L/2"].iteration == "r2 (withdrawn)"
    assert build.state("RIB.01-L/2") == "spare"
    build.shop.log("accept", finding=CODE, what="CLIP/3", why="measured")
    assert build.asked_about == []
    # Another plan of the withdrawn name is another plan.
    build.adopt("r2", CLIP="geometry=geometry/skin.obj")
    assert build.asked_about == ["CLIP/1", "CLIP/2", "CLIP/3", "CLIP/4"]


def test_the_book_replays_to_the_same_records_after_all_of_it(build: Build) -> None:
    build.adopt("r2", RIB01L="made_of=PLIES", CLIP="made_of=PLIES")
    build.shop.log("accept", finding=CODE, what="CLIP/1", why="fits")
    build.shop.log("hold", what="CLIP/2", why="kept for stock")
    build.shop.log("lay", piece="RIB.01-L/2", step="1", lots="CLOTH")
    before = open_build(build.shop.book).snapshot
    checked = check_book(build.shop.book)
    assert (checked.chain_ok, checked.replay_ok) == (True, True)
    from ledger.operations.open_build import forget

    forget(build.shop.book)
    assert open_build(build.shop.book, now=before.now).snapshot == before
