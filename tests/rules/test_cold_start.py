"""Quick commands load nothing heavy, shown by a child process that lists its own modules."""

from __future__ import annotations

import subprocess
import sys

import pytest

HEAVY = {"numpy", "pandas", "trimesh", "scipy", "sqlite_utils", "textual", "openpyxl", "ezdxf"}


def modules_after(code: str) -> set[str]:
    """The top-level modules loaded once `code` has run in a fresh interpreter."""
    listing = f"{code}\nimport sys\nprint('\\n'.join(sys.modules))"
    done = subprocess.run(
        [sys.executable, "-c", listing], capture_output=True, text=True, timeout=60, check=True
    )
    return {name.partition(".")[0] for name in done.stdout.splitlines()}


def test_the_version_needs_not_even_the_reader_of_options() -> None:
    code = "import sys\nsys.argv = ['wingledger', '--version']\nfrom ledger.__main__ import main\nmain()"
    assert modules_after(code) & {*HEAVY, "click", "sqlite3"} == set()


@pytest.mark.parametrize("option", ["--version", "--help"])
def test_version_and_help_load_nothing_heavy(option: str) -> None:
    code = f"from ledger.cli.app import run_command\nassert run_command(['{option}'], lambda book: None) == 0"
    assert modules_after(code) & HEAVY == set()


def test_wrong_use_is_said_before_anything_heavy_is_loaded() -> None:
    code = (
        "from ledger.cli.app import run_command\n"
        "assert run_command(['weigths', 'book'], lambda book: None) == 2"
    )
    assert modules_after(code) & HEAVY == set()


@pytest.mark.parametrize(
    "package",
    ["ledger", "ledger.model", "ledger.geometry", "ledger.book", "ledger.exchange", "ledger.operations"],
)
def test_a_package_itself_imports_nothing_heavy(package: str) -> None:
    assert modules_after(f"import {package}") & HEAVY == set()


def test_the_records_need_no_array_library() -> None:
    code = "import ledger.model.body, ledger.model.gather, ledger.units, ledger.errors, ledger.mass.report"
    assert modules_after(code) & HEAVY == set()
