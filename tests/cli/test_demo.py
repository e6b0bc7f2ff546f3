"""The demo: a book of one's own from a sample, its last entry two minutes old, and nothing written over."""

from __future__ import annotations

import json
import shutil
import sqlite3
from datetime import UTC, datetime, timedelta, timezone
from pathlib import Path
from typing import Any

import pytest

from ledger.operations.lay_out_demo import free_folder, lay_out_demo, sample_folder, shifted
from ledger.reports.plain import width_of

NOW = datetime(2027, 3, 14, 9, 30, tzinfo=timezone(timedelta(hours=2)))
ROWS = [
    {
        "kind": "receive",
        "at": "2026-10-01T08:00:00+00:00",
        "by": "JK",
        "material": "twill",
        "quantity": "10 m2",
        "lot": "T-1",
        "expiry": "2026-12-31",
    },
    {
        "kind": "instrument",
        "at": "2026-10-01T08:10:00+00:00",
        "by": "JK",
        "instrument": "W1",
        "what": "scale",
        "resolution": "1 g",
    },
    {
        "kind": "weigh",
        "at": "2026-10-02T10:00:00+00:00",
        "by": "AB",
        "what": "RIB-L",
        "reading": "412 g",
        "scale": "W1",
    },
    {
        "kind": "lay",
        "at": "2026-10-02T10:40:00+00:00",
        "by": "AB",
        "piece": "SKIN-L",
        "step": "1",
        "lots": "T-1",
    },
]

ADOPTED = {"kind": "adopt", "at": "2026-10-01T07:50:00+00:00", "by": "JK", "plan": "plans/r1"}
LATER = {"kind": "adopt", "at": "2026-10-02T09:00:00+00:00", "by": "MT", "plan": "plans/r2"}
LOG = [ADOPTED, *ROWS[:2], LATER, *ROWS[2:]]


@pytest.fixture
def sample(plan: Path, tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    """A sample build of two plans and four entries in place of the one that comes with the program."""
    folder = tmp_path / "sample"
    for name in ("r1", "r2"):
        shutil.copytree(plan, folder / "plans" / name)
        head = folder / "plans" / name / "plan.toml"
        text = head.read_text(encoding="utf-8")
        head.write_text(text.replace('name = "r1"', f'name = "{name}"'), encoding="utf-8")
    (folder / "layouts").mkdir()
    (folder / "layouts" / "wing.toml").write_text('format = "layout-1"\n', encoding="utf-8")
    (folder / "log.jsonl").write_text("".join(json.dumps(row) + "\n" for row in LOG), encoding="utf-8")
    monkeypatch.setattr("ledger.operations.lay_out_demo.sample_folder", lambda: folder)
    return folder


def entries(book: Path) -> list[dict[str, Any]]:
    """Every row of the record."""
    with sqlite3.connect(book) as connection:
        connection.row_factory = sqlite3.Row
        return [dict(row) for row in connection.execute("SELECT * FROM entry ORDER BY seq")]


def test_the_last_entry_is_two_minutes_old_and_every_interval_is_kept() -> None:
    moved = [datetime.fromisoformat(row["at"]) for row in shifted(ROWS, NOW)]
    was = [datetime.fromisoformat(row["at"]) for row in ROWS]
    assert moved[-1] == NOW - timedelta(minutes=2)
    assert [moment - moved[0] for moment in moved] == [moment - was[0] for moment in was]


def test_a_date_moves_with_the_log_by_whole_days() -> None:
    # 2026-10-02 10:40 to 2027-03-14 07:28 is 162.87 days: 163 whole ones, so 31 Dec becomes 12 Jun
    assert shifted(ROWS, NOW)[0]["expiry"] == "2027-06-12"


def test_all_else_stays_as_it_was() -> None:
    fixed = [{key: row[key] for key in row if key not in ("at", "expiry")} for row in ROWS]
    moved = shifted(ROWS, NOW)
    assert [{key: row[key] for key in row if key not in ("at", "expiry")} for row in moved] == fixed


@pytest.mark.usefixtures("sample")
def test_each_entry_was_logged_when_it_was_done(tmp_path: Path) -> None:
    logged = entries(lay_out_demo(tmp_path / "try", NOW))
    assert [entry["kind"] for entry in logged] == [row["kind"] for row in LOG]
    assert all(entry["at"] == entry["logged_at"] for entry in logged)
    assert datetime.fromisoformat(logged[-1]["at"]) == NOW - timedelta(minutes=2)
    assert [entry["by"] for entry in logged] == ["JK", "JK", "JK", "MT", "AB", "AB"]
    assert [json.loads(entry["body"]).get("plan") for entry in logged if entry["kind"] == "adopt"] == [
        "r1",
        "r2",
    ]


@pytest.mark.usefixtures("sample")
def test_an_adoption_in_a_file_of_entries_is_refused_all_the_same(run: Any, tmp_path: Path) -> None:
    book = lay_out_demo(tmp_path / "try", NOW)
    rows = tmp_path / "rows.jsonl"
    rows.write_text(json.dumps({"kind": "adopt", "plan": "plans/r2"}), encoding="utf-8")
    before = book.read_bytes()
    ran = run("enter", book, "--from", rows)
    assert (ran.code, ran.out) == (1, "")
    assert "use the command: adopt BOOK PLAN" in ran.err
    assert book.read_bytes() == before


def contents(folder: Path) -> dict[Path, bytes]:
    """Every file below a folder."""
    return {path.relative_to(folder): path.read_bytes() for path in folder.rglob("*") if path.is_file()}


@pytest.mark.parametrize("name", ["layouts", "plans"])
def test_layouts_and_plans_lie_beside_the_book_to_try_changes_on(
    sample: Path, tmp_path: Path, name: str
) -> None:
    book = lay_out_demo(tmp_path / "try", NOW)
    assert contents(book.parent / name) == contents(sample / name) != {}


@pytest.mark.usefixtures("sample")
def test_nothing_is_left_beside_them(tmp_path: Path) -> None:
    lay_out_demo(tmp_path / "try", NOW)
    assert {path.name for path in (tmp_path / "try").iterdir()} == {
        "two_seater.wingledger",
        "layouts",
        "plans",
    }


@pytest.mark.usefixtures("sample")
@pytest.mark.parametrize("name", ["two_seater.wingledger", "layouts", "plans"])
def test_nothing_is_ever_written_over(run: Any, tmp_path: Path, name: str) -> None:
    folder = tmp_path / "try"
    folder.mkdir()
    (folder / name).write_text("mine", encoding="utf-8")
    ran = run("demo", folder, "--report")
    assert (ran.code, ran.out) == (1, "")
    assert "nothing is ever overwritten" in ran.err
    assert [path.name for path in folder.iterdir()] == [name]
    assert (folder / name).read_text(encoding="utf-8") == "mine"


@pytest.mark.usefixtures("sample")
def test_an_existing_folder_keeps_what_is_in_it(run: Any, tmp_path: Path) -> None:
    folder = tmp_path / "try"
    folder.mkdir()
    (folder / "photo.txt").write_text("mine", encoding="utf-8")
    assert run("demo", folder, "--report").code == 0
    assert (folder / "photo.txt").read_text(encoding="utf-8") == "mine"


@pytest.mark.usefixtures("sample")
def test_without_a_folder_a_free_one_is_taken(
    run: Any, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.chdir(tmp_path)
    for number in ("", "-2"):
        assert run("demo", "--report").code == 0
        assert (tmp_path / f"wingledger-demo{number}" / "two_seater.wingledger").is_file()
    assert free_folder(tmp_path).name == "wingledger-demo-3"


@pytest.mark.usefixtures("sample")
def test_the_report_fits_one_small_screen(run: Any, tmp_path: Path) -> None:
    ran = run("demo", tmp_path / "try", "--report")
    lines = ran.out.splitlines()
    assert ran.code == 0
    assert len(lines) <= 24
    assert max(width_of(line) for line in lines) <= 80
    assert lines[0].startswith("STOP ")
    assert any("usable" in line and "COMPUTED" in line for line in lines)
    assert [line for line in lines if line.startswith("r2 for r1:  ")]
    assert "nothing here flies" in ran.err


@pytest.mark.usefixtures("sample")
def test_the_demo_opens_the_screens_where_there_is_a_terminal(
    run: Any, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setattr("ledger.cli.screens.at_a_terminal", lambda: True)
    ran = run("demo", tmp_path / "try")
    assert (ran.code, ran.out) == (0, f"SCREENS {tmp_path / 'try' / 'two_seater.wingledger'}\n")


@pytest.mark.usefixtures("sample")
def test_without_a_terminal_it_says_how_to_open_the_book(run: Any, tmp_path: Path) -> None:
    ran = run("demo", tmp_path / "try")
    assert (ran.code, ran.out) == (0, "")
    assert f"wingledger open {tmp_path / 'try' / 'two_seater.wingledger'}" in ran.err


def test_the_sample_that_comes_with_the_program_is_found_and_whole(run: Any, tmp_path: Path) -> None:
    rows = (sample_folder() / "log.jsonl").read_text(encoding="utf-8").splitlines()
    book = lay_out_demo(tmp_path / "try", datetime.now(UTC))
    read = json.loads(run("check", book, "--json").out)
    assert (read["entries"], read["chain_ok"], read["replay_ok"]) == (len(rows), True, True)
    # The planted faults are what the demo is there to show.
    assert any(finding["severity"] == "stop" for finding in read["findings"])
