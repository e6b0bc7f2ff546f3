"""The committed sample is made by the generators beside it: plans lofted from layouts, and the log.

Another machine's sine differs in its last bits, and the order of a solid's corners may follow them, so
lofted geometry is held to what it is and not to its bytes: to 1e-6 mm, or one in the last place shown.
"""

from __future__ import annotations

import csv
import io
import re
import subprocess
import sys
from datetime import UTC, datetime
from pathlib import Path

import ezdxf
import numpy as np
import pytest
import trimesh
from shapely import Point, Polygon

from ledger.errors import Severity
from ledger.model.fitting import pieces_that_no_longer_fit
from ledger.model.snapshot import Snapshot
from ledger.operations.lay_out_demo import lay_out_demo
from ledger.operations.list_findings import list_findings
from ledger.operations.open_build import open_build

SAMPLE = Path(__file__).resolve().parents[2] / "sample_builds" / "two_seater"
PLANS = SAMPLE / "plans"
NAMES = sorted(path.relative_to(PLANS).as_posix() for path in PLANS.rglob("*") if path.is_file())
LAST_MM = 1.01e-6
_FIGURE = re.compile(r"-?\d+(?:\.\d+)?(?:e-?\d+)?")


@pytest.fixture(scope="module")
def made(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """The three plans lofted anew, in a process of their own."""
    folder = tmp_path_factory.mktemp("plans")
    subprocess.run([sys.executable, str(SAMPLE / "make_plans.py"), str(folder)], check=True)
    return folder


def named(ending: str) -> list[str]:
    found = [name for name in NAMES if name.endswith(ending)]
    assert found
    return found


def test_each_layout_makes_the_files_of_its_plan(made: Path) -> None:
    assert sorted(path.relative_to(made).as_posix() for path in made.rglob("*") if path.is_file()) == NAMES


@pytest.mark.parametrize("name", [name for name in NAMES if name.endswith((".toml", ".csv"))])
def test_a_text_is_made_again_but_for_the_last_place_of_its_figures(made: Path, name: str) -> None:
    # Places of parts are in metres, all other lengths in millimetres.
    last = 1e-3 * LAST_MM if name.endswith("parts.csv") else LAST_MM
    texts = [(folder / name).read_text(encoding="utf-8") for folder in (made, PLANS)]
    words, kept_words = (_FIGURE.sub("0", text) for text in texts)
    assert words == kept_words
    figures, kept = (np.array([float(one) for one in _FIGURE.findall(text)]) for text in texts)
    assert np.abs(figures - kept) == pytest.approx(0.0, abs=last)


def test_each_mesh_has_the_volume_the_area_and_the_box_it_had(made: Path) -> None:
    for name in named(".obj"):
        new, kept = (read_obj(folder / name) for folder in (made, PLANS))
        assert np.abs(new.box - kept.box).max() <= LAST_MM, name
        assert new.lengths == pytest.approx(kept.lengths, abs=LAST_MM * (1 + 2 * new.lines)), name
        # Corners moved by e move the volume by at most e times the area, the area by e times its edges.
        assert abs(new.volume - kept.volume) <= LAST_MM * kept.area, name
        assert abs(new.area - kept.area) <= LAST_MM * kept.edges, name


def test_each_drawing_cuts_the_same_outline_and_the_same_holes(made: Path) -> None:
    for name in named(".dxf"):
        (outline, holes), (kept, kept_holes) = (read_dxf(folder / name) for folder in (made, PLANS))
        assert outline.symmetric_difference(kept).area <= LAST_MM * kept.length, name
        assert abs(outline.area - kept.area) <= LAST_MM * kept.length, name
        assert holes.shape == kept_holes.shape, name
        assert np.abs(holes - kept_holes).max(initial=0.0) <= LAST_MM, name
        assert all(kept.contains(Point(x, y)) for x, y, _ in kept_holes), name


class Mesh:
    """What a mesh or a run of lines is, in millimetres, whatever the order of its corners."""

    def __init__(self, corners: np.ndarray, faces: list[list[int]], runs: list[list[int]]) -> None:
        self.box = np.array([corners.min(axis=0), corners.max(axis=0)])
        self.lines = sum(len(run) - 1 for run in runs)
        self.lengths = sum(float(np.linalg.norm(np.diff(corners[run], axis=0), axis=1).sum()) for run in runs)
        self.volume = self.area = self.edges = 0.0
        if faces:
            mesh = trimesh.Trimesh(corners, faces, process=False)
            self.area, self.edges = float(mesh.area), float(mesh.edges_unique_length.sum())
            self.volume = float(mesh.volume) if mesh.is_watertight else 0.0


def read_obj(path: Path) -> Mesh:
    """Read with nothing of ours."""
    rows = [line.split() for line in path.read_text(encoding="utf-8").splitlines() if line]
    corners = np.array([[float(one) for one in row[1:]] for row in rows if row[0] == "v"])
    faces, runs = ([[int(one) - 1 for one in row[1:]] for row in rows if row[0] == word] for word in "fl")
    return Mesh(corners, faces, runs)


def read_dxf(path: Path) -> tuple[Polygon, np.ndarray]:
    """The outline, and the middles and diameters of the holes in a fixed order."""
    space = ezdxf.readfile(path).modelspace()
    (outline,) = space.query("LWPOLYLINE")
    holes = [(*circle.dxf.center.vec2, 2.0 * circle.dxf.radius) for circle in space.query("CIRCLE")]
    return Polygon(outline.get_points("xy")), np.array(sorted(holes)).reshape(-1, 3)


def test_the_second_web_is_moved_by_one_figure_of_the_layout() -> None:
    grid, moved = (
        (SAMPLE / "layouts" / name).read_text(encoding="utf-8").splitlines()
        for name in ("grid.toml", "grid_web_aft.toml")
    )
    assert len(grid) == len(moved)
    differ = [(old, new) for old, new in zip(grid, moved, strict=True) if old != new]
    assert [old.split("=")[0].strip() for old, _ in differ if not old.startswith("#")] == [
        "name", "title", "from", "to",
    ]  # fmt: skip
    assert differ[-2:] == [
        ("from = [2820, 540]", "from = [2860, 540]"),
        ("to = [2820, 4360]", "to = [2860, 4360]"),
    ]


def test_log_is_made_again_row_for_row(tmp_path: Path) -> None:
    subprocess.run([sys.executable, str(SAMPLE / "make_log.py"), str(tmp_path)], check=True)
    assert (tmp_path / "log.jsonl").read_text() == (SAMPLE / "log.jsonl").read_text()


def test_sample_has_all_five_forms_and_at_least_sixty_parts() -> None:
    rows = list(csv.DictReader(io.StringIO((PLANS / "r2" / "parts.csv").read_text(encoding="utf-8"))))
    assert len(rows) >= 60
    assert {row["form"] for row in rows} == {"panel", "skin", "solid", "run", "item"}


@pytest.fixture(scope="module")
def book(tmp_path_factory: pytest.TempPathFactory) -> Path:
    return lay_out_demo(tmp_path_factory.mktemp("demo") / "demo", datetime(2027, 3, 14, 9, 30, tzinfo=UTC))


@pytest.fixture(scope="module")
def snapshot(book: Path) -> Snapshot:
    return open_build(book).snapshot


def test_the_build_goes_from_one_spar_to_a_grid_before_anything_is_cut_and_to_a_web_moved_in_its_middle(
    snapshot: Snapshot,
) -> None:
    assert [iteration.name for iteration in snapshot.iterations] == ["r0", "r1", "r2"]
    begun = {piece.name: piece.iteration for piece in snapshot.pieces.values()}
    assert {name for name, iteration in begun.items() if iteration == "r1"} == {
        "RIB.F8-R/1", "RIB.F9-R/1", "WEB.M.OUT-R/1",
    }  # fmt: skip
    assert set(begun.values()) == {"r1", "r2"}


def test_of_three_pieces_cut_too_early_one_was_cut_again_and_two_wait_for_a_choice(
    snapshot: Snapshot,
) -> None:
    assert [piece.name for piece, _ in pieces_that_no_longer_fit(snapshot)] == [
        "RIB.F9-R/1",
        "WEB.M.OUT-R/1",
    ]
    assert "RIB.F8-R/1" in snapshot.held
    assert "RIB.F8-R/2" in snapshot.pieces


def test_the_planted_faults_are_found_and_nothing_else(book: Path) -> None:
    found = {
        (finding.severity, finding.code, finding.where.thing)
        for finding in list_findings(book)
        if finding.severity is not Severity.NOTE
    }
    assert found == {
        (Severity.STOP, "mix-ratio-out", "B014Z"),
        (Severity.STOP, "mix-ratio-out-used", "SKIN.LWR-L/1"),
        (Severity.LOOK, "built-to-earlier-iteration", "RIB.F9-R/1"),
        (Severity.LOOK, "built-to-earlier-iteration", "WEB.M.OUT-R/1"),
        (Severity.LOOK, "mass-off-plan", "SKIN.LWR-L"),
        (Severity.LOOK, "mix-ratio-unprovable", "B009T"),
        (Severity.LOOK, "peel-ply-not-said", "SKIN.LWR-R/1"),
    }
