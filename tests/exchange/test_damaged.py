"""Damaged plans, each wrong in one named way, and exactly what a person is told.

Each folder of sample_builds/damaged holds only the files that differ from the one-cell box; told.csv
beside them says what reading each of them must say.
"""

from __future__ import annotations

import csv
import filecmp
import shutil
from pathlib import Path

import pytest

from ledger.errors import Severity
from ledger.exchange.plan_folder import read_plan

SAMPLES = Path(__file__).resolve().parents[2] / "sample_builds"
SOUND = SAMPLES / "one_cell_box" / "plan"
DAMAGED = SAMPLES / "damaged"
FOLDERS = {path.name: path for path in DAMAGED.iterdir() if path.is_dir()}


def expected() -> dict[str, list[tuple[str, str]]]:
    """Code and text of each finding, by the damage."""
    told: dict[str, list[tuple[str, str]]] = {}
    with (DAMAGED / "told.csv").open(newline="", encoding="utf-8") as file:
        for row in csv.DictReader(file):
            told.setdefault(row["damage"], []).append((row["code"], row["told"]))
    return told


@pytest.mark.parametrize("name", sorted(FOLDERS))
def test_each_damage_is_told_with_its_place_and_remedy(name: str, tmp_path: Path) -> None:
    folder = tmp_path / "plan"
    shutil.copytree(SOUND, folder)
    shutil.copytree(FOLDERS[name], folder, dirs_exist_ok=True)
    read = read_plan(folder)
    assert [(finding.code, str(finding)) for finding in read.findings] == expected()[name]
    assert read.plan is None
    assert {finding.severity for finding in read.findings} == {Severity.STOP}


def test_the_sound_plan_has_nothing_to_tell() -> None:
    read = read_plan(SOUND)
    assert (read.plan is not None, read.findings) == (True, ())


def test_every_damaged_folder_differs_from_the_sound_plan_and_is_expected() -> None:
    assert set(FOLDERS) == set(expected())
    for name, folder in FOLDERS.items():
        files = [path.relative_to(folder) for path in folder.rglob("*") if path.is_file()]
        assert files, name
        for file in files:
            assert not filecmp.cmp(folder / file, SOUND / file, shallow=False), (name, file)
