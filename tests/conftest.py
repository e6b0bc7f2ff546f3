"""What every folder of tests shares: how hard the properties are tried, and the open wing box.

Usually each property is tried on the same examples in every run, so that a failure comes back. With
`-m long` only properties run, for hours, on new examples each time.

The wing box lies beside the repository and is no part of it: without it the tests that need it are
skipped, and say so.
"""

from __future__ import annotations

import csv
import shutil
from collections.abc import Callable
from pathlib import Path

import pytest
from hypothesis import is_hypothesis_test, settings

settings.register_profile("short", derandomize=True, deadline=None)
settings.register_profile("long", max_examples=20_000, deadline=None)
settings.load_profile("short")

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


def pytest_configure(config: pytest.Config) -> None:
    if config.option.markexpr == "long":
        settings.load_profile("long")


@pytest.hookimpl(tryfirst=True)
def pytest_collection_modifyitems(config: pytest.Config, items: list[pytest.Item]) -> None:
    if config.option.markexpr == "long":
        for item in items:
            if is_hypothesis_test(getattr(item, "obj", None)):
                item.add_marker("long")


@pytest.fixture
def box_plan(tmp_path: Path) -> Callable[..., Path]:
    """Makes plan folders of the one-cell box: `box_plan("r2", {"laminates.csv": ("5600", "5000")})`."""
    sample = Path(__file__).resolve().parents[1] / "sample_builds" / "one_cell_box" / "plan"

    def make(name: str, changes: dict[str, tuple[str, str]] | None = None) -> Path:
        folder = tmp_path / f"plan {name}"
        shutil.copytree(sample, folder)
        for file, (old, new) in {"plan.toml": ('"box"', f'"{name}"'), **(changes or {})}.items():
            text = (folder / file).read_text(encoding="utf-8")
            assert old in text, (file, old)
            (folder / file).write_text(text.replace(old, new), encoding="utf-8")
        return folder

    return make
