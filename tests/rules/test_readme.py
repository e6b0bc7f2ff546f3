"""README is a test: every `$ wingledger …` block in it is run in order and must print what it shows.

`...` in a line stands for any text, and alone on a line for any number of lines.
"""

from __future__ import annotations

import contextlib
import fnmatch
import io
import json
import os
import re
import shlex
import shutil
from pathlib import Path

import pytest
import trimesh

from ledger.cli.app import run_command, wingledger
from ledger.exchange import materials_table, openings_toml, parts_table, plan_toml, tanks_toml
from ledger.loft import layout_keys
from ledger.loft.keys import TableKeys
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


def test_the_tank_of_two_cells_that_is_shown_can_be_used(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    shown = re.search(r"```toml\n(length_unit.*?)```", README, flags=re.DOTALL)
    assert shown is not None
    plan = tmp_path / "plan"
    shutil.copytree(ROOT / "sample_builds" / "one_cell_box" / "plan", plan)
    (plan / "tanks.toml").write_text(shown.group(1), encoding="utf-8")
    for name, outboard_mm in (("L1", -600.0), ("L2", -1100.0)):
        box = trimesh.creation.box(bounds=[[2000.0, outboard_mm, 0.0], [3000.0, outboard_mm + 500.0, 200.0]])
        box.export(plan / "geometry" / f"{name}.obj")
    monkeypatch.setenv("WINGLEDGER_BY", "JK")
    book = str(tmp_path / "two.wingledger")
    assert run_command(["start", book, str(plan)], lambda _book: None) == 0
    capsys.readouterr()
    assert run_command(["fuel", book, "--json"], lambda _book: None) == 0
    printed = capsys.readouterr()
    (tank,) = json.loads(printed.out)["tanks"]
    assert tank["gross_m3"] == pytest.approx(0.2, rel=1e-9)
    # The filler's ring stands at 195 mm; the vent hole's upper edge is there too, so no air stays under it.
    assert tank["capacity_m3"] == pytest.approx(0.195, rel=1e-9)
    assert tank["caught_air_m3"] == 0.0
    # Level, L1 keeps what lies below the outlet's upper edge at 13 mm, and L2 its like, whose hole is lower.
    level = next(one for one in tank["attitudes"] if one["attitude"] == "level")
    assert level["trapped_m3"] == pytest.approx(0.5 * 0.013 * 2, rel=1e-9)
    assert not any(word in printed.err for word in ("opening-far", "farther", "STOP"))


def _known_words() -> list[str]:
    tables = (parts_table._COLUMNS, materials_table._MATERIAL_COLUMNS, materials_table._LAMINATE_COLUMNS)
    columns = [column for table in tables for column in table]
    shapes = [key for keys in openings_toml._SHAPES.values() for key in keys]
    keys = (
        *plan_toml._KEYS,
        *plan_toml.ATTITUDE_KEYS,
        *openings_toml._KEYS,
        *shapes,
        *tanks_toml._CELL_KEYS,
    )
    return sorted({*columns, *keys, "expansion_percent", "outlets", "join", "length_unit"})


@pytest.mark.parametrize("word", _known_words())
def test_every_column_and_key_of_a_plan_is_explained(word: str) -> None:
    chapter = README[README.index("## The plan, file by file") : README.index("## The layout, table")]
    assert re.search(rf"[`\[ ]{word}[`\]]|`{word} =", chapter)


# Tables of which a plan's own chapter tells the keys; classes of part stand in the list of parts.
OWN_TABLES = [
    table for table in layout_keys.TABLES if table.keys and table.word not in ("tolerance", "growth")
]


@pytest.mark.parametrize("table", OWN_TABLES, ids=lambda table: table.word)
def test_every_key_of_a_table_of_a_layout_is_explained_in_its_row(table: TableKeys) -> None:
    plan, layout, rest = (README.index(f"## {head}") for head in ("The plan,", "The layout,", "Methods"))
    head = f"`[[{table.word}]]`" if table.many else f"`[{table.word}]`"
    rows = (README[layout:rest] + README[plan:layout]).splitlines()
    row = next((row for row in rows if row.startswith("|") and head in row.split("|")[1]), "")
    assert row, f"README has no row for {head}"
    # A port's height is as that of a hole, and a title may stand beside every part.
    shared = {"title", *({"above_lower", "below_upper", "height"} if "`bay`" in row else ())}
    assert [key for key in table.words if key not in shared and not re.search(rf"\b{key}\b", row)] == []
