"""`pytest` is the one command: style and types are tests like any other."""

from __future__ import annotations

import subprocess
import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[2]


@pytest.mark.parametrize(
    "command",
    [
        pytest.param(["ruff", "check", "."], id="no lint"),
        pytest.param(["ruff", "format", "--check", "."], id="formatted"),
        pytest.param(["mypy"], id="strictly typed"),
    ],
)
def test_the_whole_tree_is_clean(command: list[str]) -> None:
    result = subprocess.run(
        [sys.executable, "-m", *command], cwd=ROOT, capture_output=True, text=True, check=False
    )
    assert result.returncode == 0, result.stdout + result.stderr
