"""The committed sample is made by the generator beside it."""

from __future__ import annotations

import csv
import runpy
import subprocess
import sys
from pathlib import Path

SAMPLE = Path(__file__).resolve().parents[2] / "sample_builds" / "two_seater"


def contents(folder: Path) -> dict[str, bytes]:
    return {str(path.relative_to(folder)): path.read_bytes() for path in folder.rglob("*") if path.is_file()}


def test_plan_folder_is_made_again_byte_for_byte(tmp_path: Path) -> None:
    subprocess.run([sys.executable, str(SAMPLE / "make_plan.py"), str(tmp_path)], check=True)
    made, kept = contents(tmp_path), contents(SAMPLE / "plan")
    assert set(made) == set(kept)
    # A newer DXF writer may add or reorder header lines; what the router cuts may not change.
    assert {name: text for name, text in made.items() if not name.endswith(".dxf")} == {
        name: text for name, text in kept.items() if not name.endswith(".dxf")
    }


def test_log_is_made_again_row_for_row(tmp_path: Path) -> None:
    subprocess.run([sys.executable, str(SAMPLE / "make_log.py"), str(tmp_path)], check=True)
    assert (tmp_path / "log.jsonl").read_text() == (SAMPLE / "log.jsonl").read_text()


def test_sample_has_all_five_forms_and_at_least_sixty_parts() -> None:
    with (SAMPLE / "plan" / "parts.csv").open(newline="") as file:
        rows = list(csv.DictReader(file))
    assert len(rows) >= 60
    assert {row["form"] for row in rows} == {"panel", "skin", "solid", "run", "item"}


def test_neighbouring_strips_of_skin_are_flat() -> None:
    wing = runpy.run_path(str(SAMPLE / "wing.py"))
    corners = [wing["surface"](u, y, -1) for y in (0.55, 1.0) for u in (0.3, 0.35)]
    (ax, ay, az), (bx, by, bz), (cx, cy, cz), (dx, dy, dz) = corners
    u, v, w = (bx - ax, by - ay, bz - az), (cx - ax, cy - ay, cz - az), (dx - ax, dy - ay, dz - az)
    volume = (
        u[0] * (v[1] * w[2] - v[2] * w[1])
        - u[1] * (v[0] * w[2] - v[2] * w[0])
        + u[2] * (v[0] * w[1] - v[1] * w[0])
    )
    assert abs(volume) < 1e-15
