"""What may stand in the tree, and what must not."""

from __future__ import annotations

import ast
import re
import subprocess
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[2]
ROOT_ENTRIES = {
    "README.md",
    "DEVELOPERS.md",
    "pyproject.toml",
    "ledger",
    "tests",
    "sample_builds",
    "schemas",
}
# Spelt in pieces, so that this file does not contain what it looks for.
FORBIDDEN_WORDS = ("trans" + "cript", "lec" + "ture", "you" + "tube", "vid" + "eo")
UNFINISHED = ("TO" + "DO", "FIX" + "ME", "NotImplemented" + "Error")
BINARY = {".png", ".jpg", ".pdf", ".xlsx", ".3mf", ".stl", ".db", ".wingledger"}


def kept_files() -> list[Path]:
    """Every file that git keeps. What a user makes beside them, such as books, is no concern of these."""
    command = ["git", "ls-files", "--cached", "-z"]
    done = subprocess.run(command, cwd=ROOT, capture_output=True, text=True, check=False)
    if done.returncode != 0:
        pytest.skip("not a git checkout")
    return [ROOT / name for name in done.stdout.split("\0") if name and (ROOT / name).is_file()]


def texts() -> list[tuple[str, str]]:
    """Kept text files, by their path from the root."""
    return [
        (path.relative_to(ROOT).as_posix(), path.read_text(encoding="utf-8", errors="replace"))
        for path in kept_files()
        if path.suffix not in BINARY
    ]


def test_root_entries_are_those_of_the_house() -> None:
    entries = {path.relative_to(ROOT).parts[0] for path in kept_files()}
    assert {entry for entry in entries if not entry.startswith(".")} <= ROOT_ENTRIES


def test_no_forbidden_word_stands_in_any_file() -> None:
    word = re.compile(rf"\b({'|'.join(FORBIDDEN_WORDS)})\b", re.IGNORECASE)
    assert [(path, match.group()) for path, text in texts() for match in word.finditer(text)] == []


def test_no_file_names_a_path_of_this_machine() -> None:
    # A neighbour's path is as wrong as our own; at the top of the disk every path has such a neighbour.
    here = f"{ROOT.parent if ROOT.parent != Path('/') else ROOT}/"
    assert [path for path, text in texts() if here in text] == []


def test_nothing_is_left_unfinished() -> None:
    word = re.compile(rf"\b({'|'.join(UNFINISHED)})\b")
    assert [path for path, text in texts() if path.endswith(".py") and word.search(text)] == []


def swallows_everything(handler: ast.ExceptHandler) -> bool:
    """Whether it catches what should end the program, and does not raise it again."""
    caught = None if handler.type is None else ast.unparse(handler.type)
    raises = any(isinstance(node, ast.Raise) and node.exc is None for node in ast.walk(handler))
    return caught is None or (caught == "BaseException" and not raises)


def test_no_except_of_the_program_swallows_everything() -> None:
    assert [
        f"{path}:{node.lineno}"
        for path, text in texts()
        if path.startswith("ledger/") and path.endswith(".py")
        for node in ast.walk(ast.parse(text))
        if isinstance(node, ast.ExceptHandler) and swallows_everything(node)
    ] == []


def test_every_module_says_what_it_is() -> None:
    silent = [
        path
        for path, text in texts()
        if path.startswith("ledger/") and path.endswith(".py") and text.strip() and '"""' not in text[:400]
    ]
    assert silent == []


def test_packages_import_nothing_on_their_own() -> None:
    loud = [
        path
        for path, text in texts()
        if path.startswith("ledger/")
        and path.endswith("__init__.py")
        and re.search(r"^(import|from) (?!__future__|typing)", text, re.MULTILINE)
    ]
    assert loud == []
