"""The open wing box, for every layer that is held against it.

The data lies beside the repository and is no part of it: without it the tests that need it are
skipped, and say so.
"""

from __future__ import annotations

import csv
from pathlib import Path

import pytest

WING_BOX = Path(__file__).resolve().parents[1].parent / "shared" / "data" / "transonic_wing_box"


@pytest.fixture(scope="session")
def wing_box() -> Path:
    """The folder of the open wing box: panels.obj, cells/ and reference.csv."""
    if not WING_BOX.is_dir():
        pytest.skip("the open wing box lies beside the repository, and is not there")
    return WING_BOX


@pytest.fixture(scope="session")
def wing_box_figures(wing_box: Path) -> dict[str, float]:
    """Published masses (kg) and the volumes its authors computed (m3), by name."""
    with (wing_box / "reference.csv").open(newline="", encoding="utf-8") as lines:
        return {row["quantity"]: float(row["value"]) for row in csv.DictReader(lines)}
