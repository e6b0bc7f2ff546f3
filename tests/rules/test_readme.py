"""README is a test: every `$ wingledger …` block in it is run in order and must print what it shows.

`...` in a line stands for any text, and alone on a line for any number of lines.
"""

from __future__ import annotations

import contextlib
import fnmatch
import io
import os
import re
import shlex
from pathlib import Path

import pytest

from ledger.cli.app import run_command, wingledger
from ledger.model.acts import Adopt
from ledger.model.declare import KINDS
from ledger.tui.tour import ACTS, Act

ROOT = Path(__file__).resolve().parents[2]
README = (ROOT / "README.md").read_text(encoding="utf-8")


def shown_commands() -> list[tuple[str, list[str]]]:
    """Each command of the console blocks, with the lines shown below it."""
    commands: list[tuple[str, list[str]]] = []
    for block in re.findall(r"```console\n(.*?)```", README, flags=re.DOTALL):
        for line in block.splitlines():
            if line.startswith("$ "):
                commands.append((line.removeprefix("$ "), []))
            else:
                commands[-1][1].append(line.rstrip())
    return commands


def as_pattern(line: str) -> str:
    """A shown line as a pattern in which only `...` is special."""
    return "".join(
        "*" if part == "..." else f"[{part}]" if part in ("*", "?", "[") else part
        for part in re.split(r"(\.\.\.|[*?\[])", line)
    )


def fits(shown: list[str], printed: list[str]) -> bool:
    """Whether printed lines are what is shown, `...` alone taking any number of them."""
    if not shown:
        return not printed
    if shown[0].strip() == "...":
        return any(fits(shown[1:], printed[start:]) for start in range(len(printed) + 1))
    return (
        bool(printed)
        and fnmatch.fnmatchcase(printed[0], as_pattern(shown[0]))
        and fits(shown[1:], printed[1:])
    )


def test_every_console_block_prints_what_it_shows(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(tmp_path)
    monkeypatch.setenv("WINGLEDGER_BY", "JK")
    (tmp_path / "sample_builds").symlink_to(ROOT / "sample_builds")
    os.environ.pop("WINGLEDGER_DEBUG", None)
    opened: list[Path] = []
    commands = shown_commands()
    assert len(commands) >= 12
    for command, shown in commands:
        words = shlex.split(command)
        assert words[0] == "wingledger", command
        said = io.StringIO()
        with contextlib.redirect_stdout(said), contextlib.redirect_stderr(said):
            run_command(words[1:], open_screens=opened.append)
        printed = [line.rstrip() for line in said.getvalue().rstrip("\n").split("\n")]
        assert fits(shown, printed), (
            f"$ {command}\nshown:\n" + "\n".join(shown) + "\nprinted:\n" + "\n".join(printed)
        )


@pytest.mark.parametrize("word", sorted(KINDS))
def test_readme_names_every_kind_and_each_of_its_fields(word: str) -> None:
    row = next((line for line in README.splitlines() if line.startswith(f"| `{word}` |")), "")
    assert row, f"README has no row for {word}"
    missing = [field.word for field in KINDS[word].fields if not re.search(rf"\b{field.word}\b", row)]
    assert missing == [] or KINDS[word].record is Adopt


def test_readme_names_every_command() -> None:
    missing = [name for name in wingledger.list_commands(None) if f"`{name}" not in README]  # type: ignore[arg-type]
    assert missing == []


def test_readme_opens_with_the_job_in_one_paragraph() -> None:
    title, blank, job, after = README.split("\n")[:4]
    assert title.startswith("# ")
    assert blank == after == ""
    assert {"sheet", "ply", "masses", "fuel"} <= set(re.findall(r"\w+", job))


@pytest.mark.parametrize("name", ["plan.toml", "materials.csv", "laminates.csv", "parts.csv"])
def test_the_smallest_plan_shown_is_the_one_that_is_run(name: str) -> None:
    shown = re.search(rf"^`{re.escape(name)}`\n```\w+\n(.*?)```", README, flags=re.DOTALL | re.MULTILINE)
    assert shown is not None
    kept = ROOT / "sample_builds" / "first_rib" / "plan" / name
    assert shown.group(1) == kept.read_text(encoding="utf-8")


@pytest.mark.parametrize("act", ACTS, ids=lambda act: str(act.number))
def test_each_act_of_the_demo_says_what_to_type_and_the_figure_to_look_for(act: Act) -> None:
    row = next(line for line in README.splitlines() if line.startswith(f"| {act.number} "))
    assert f"`{act.figure}`" in row
    typed = re.findall(r"`([^`]+)`", row.split("|")[2])
    assert typed
    assert all(word in act.says for word in typed)
