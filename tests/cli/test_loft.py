"""`wingledger loft`: what it prints where, and how it ends."""

from __future__ import annotations

import json
import shutil
from pathlib import Path
from typing import Any

import jsonschema
import pytest

from ledger.reports.schemas import all_schemas

STRAIGHT = Path(__file__).resolve().parents[1] / "loft" / "straight_wing"
LAYOUT = STRAIGHT / "wing.toml"


def test_it_says_what_was_made_and_what_comes_next(run: Any, tmp_path: Path) -> None:
    out = tmp_path / "my plan"
    ran = run("loft", LAYOUT, out)
    assert ran.code == 0, ran.err
    lines = ran.out.splitlines()
    assert lines[:2] == [
        "LOFTED  s1  a straight wing",
        "computed from the layout: check every drawing before cutting",
    ]
    assert f"folder  {out}" in lines
    assert "parts   18" in lines
    assert any(line.startswith("tanks   4 cells, 10 openings, gross ") for line in lines)
    assert [
        line.split()[:2]
        for line in lines
        if line.startswith(("rib ", "web ", "skin ", "joint ", "fitting ", "in all"))
    ] == [
        ["rib", "6"],
        ["web", "4"],
        ["skin", "4"],
        ["joint", "2"],
        ["fitting", "6"],
        ["in", "all"],
    ]
    assert lines[-2].startswith("one wing's box 82.2 L = skins ")
    assert lines[-1].startswith("adds up within ")
    assert f"next: wingledger start BOOK '{out}'" in ran.err
    assert f"wingledger adopt BOOK '{out}' --preview" in ran.err
    assert run("start", tmp_path / "wing.book", out).code == 0


def test_its_json_is_that_of_the_schema_and_adds_up(run: Any, tmp_path: Path) -> None:
    ran = run("loft", LAYOUT, tmp_path / "s1", "--json")
    assert ran.code == 0
    assert ran.err == ""
    read: dict[str, Any] = json.loads(ran.out)
    jsonschema.validate(read, all_schemas()["output/loft.json"])
    assert read["estimated_kg"] == pytest.approx(
        sum(each["estimated_kg"] for each in read["classes"]), rel=1e-12
    )
    account = read["account"]
    inside = sum(account[f"{word}_m3"] for word in ("skins", "panels", "paste", "solids", "cells", "dry"))
    assert account["box_m3"] == pytest.approx(inside, rel=1e-6)
    assert read["findings"] == []


def test_a_layout_that_is_not_there_is_wrong_use(run: Any, tmp_path: Path) -> None:
    ran = run("loft", tmp_path / "no.toml", tmp_path / "out")
    assert (ran.code, ran.out) == (2, "")
    assert "no.toml" in ran.err


def test_a_wrong_layout_is_told_by_file_line_and_key(run: Any, tmp_path: Path) -> None:
    folder = tmp_path / "given"
    shutil.copytree(STRAIGHT, folder)
    layout = folder / "wing.toml"
    text = layout.read_text().replace("diameter = 16", 'diameter = "wide"')
    text = text.replace('paste = "bond base"', 'paste = "glue"')
    layout.write_text(text)
    rows = {line: row for row, line in enumerate(text.splitlines(), start=1)}
    ran = run("loft", layout, tmp_path / "plan")
    assert (ran.code, ran.out) == (1, "")
    wide, paste = rows['diameter = "wide"'], rows['paste = "glue"']
    assert f"wing.toml:{wide}:diameter" in ran.err
    assert f"wing.toml:{paste}:paste" in ran.err
    assert sorted(path.name for path in tmp_path.iterdir()) == ["given"]


def test_a_folder_that_is_not_empty_is_refused(run: Any, tmp_path: Path) -> None:
    (tmp_path / "notes.txt").write_text("mine")
    ran = run("loft", LAYOUT, tmp_path)
    assert (ran.code, ran.out) == (1, "")
    assert "the folder is not empty" in ran.err
    assert [path.name for path in tmp_path.iterdir()] == ["notes.txt"]
