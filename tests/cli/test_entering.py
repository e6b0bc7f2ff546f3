"""Entries from the command line: what is printed, what is kept, and what comes back undone."""

from __future__ import annotations

import json
import shutil
import sqlite3
from pathlib import Path
from typing import Any

import jsonschema
import pytest

from ledger.reports.schemas import all_schemas


def last_entry(book: Path) -> dict[str, Any]:
    """The last row of the record, as any program reads it."""
    with sqlite3.connect(book) as connection:
        connection.row_factory = sqlite3.Row
        return dict(connection.execute("SELECT * FROM entry ORDER BY seq DESC LIMIT 1").fetchone())


def test_enter_prints_its_seq_the_numbers_given_out_and_the_last_digest(run: Any, book: Path) -> None:
    ran = run("enter", book, "receive", "material=twill", "quantity=10 m2")
    entry = last_entry(book)
    assert ran.code == 0
    lines = ran.out.splitlines()
    assert lines[0].startswith("entry 2  receive")
    assert lines[-1] == f"digest {entry['digest']}"
    assert any(line.strip().startswith("lot L0") for line in lines[1:-1])


def test_who_logs_comes_from_the_option_before_the_environment(run: Any, book: Path) -> None:
    run("enter", book, "note", "text=a")
    assert last_entry(book)["by"] == "JK"
    run("enter", book, "note", "text=b", "--by", "MT")
    assert last_entry(book)["by"] == "MT"


def test_a_finding_is_a_warning_and_the_entry_stands(run: Any, book: Path) -> None:
    run("enter", book, "receive", "material=twill", "quantity=10 m2", "lot=OLD-1", "expiry=2020-01-31")
    ran = run("enter", book, "lay", "piece=SKIN-L", "step=1", "lots=OLD-1")
    assert ran.code == 0
    assert "STOP" in ran.err or "LOOK" in ran.err
    assert last_entry(book)["kind"] == "lay"
    assert "OLD-1" not in ran.out or "STOP" not in ran.out


def test_rows_of_a_file_are_all_entered(run: Any, book: Path, tmp_path: Path) -> None:
    rows = tmp_path / "rows.jsonl"
    texts = [{"kind": "note", "text": f"note {number}", "by": "AB"} for number in range(3)]
    rows.write_text("\n".join(json.dumps(row) for row in texts), encoding="utf-8")
    ran = run("enter", book, "--from", rows, "--json")
    read = json.loads(ran.out)
    assert ran.code == 0
    jsonschema.validate(read, all_schemas()["output/enter.json"])
    assert (read["seq"], [entry["seq"] for entry in read["entries"]]) == (4, [2, 3, 4])
    assert read["digest"] == last_entry(book)["digest"]


def test_one_bad_row_keeps_every_row_out_and_every_problem_is_named(
    run: Any, book: Path, tmp_path: Path
) -> None:
    rows = tmp_path / "rows.csv"
    rows.write_text(
        "kind,what,reading,text\nnote,,,good\nweigh,RIB-L,heavy,\nweigh,RIB-L,412.3,\n", encoding="utf-8"
    )
    before = book.read_bytes()
    ran = run("enter", book, "--from", rows)
    assert (ran.code, ran.out) == (1, "")
    assert "rows.csv:3" in ran.err
    assert "rows.csv:4" in ran.err
    assert "412.3 g" in ran.err
    assert book.read_bytes() == before


def test_a_withdrawn_entry_counts_no_more_and_stays_in_the_record(run: Any, book: Path) -> None:
    run("enter", book, "weigh", "what=RIB-L", "reading=412 g")
    ran = run("withdraw", book, "2", "--why", "wrong rib")
    assert ran.code == 0
    assert ran.out.startswith("entry 3  withdraw")
    read = json.loads(run("weights", book, "--json").out)
    assert read["total"]["actual_kg"] is None
    assert json.loads(run("check", book, "--json").out)["entries"] == 3


def test_a_correction_withdraws_and_enters_in_one_go(run: Any, book: Path) -> None:
    run("enter", book, "weigh", "what=RIB-L", "reading=512 g", "state=finished")
    ran = run("correct", book, "2", "reading=412 g", "--json")
    assert json.loads(ran.out)["seq"] == 4
    read = json.loads(run("weights", book, "--json").out)
    assert read["total"]["actual_kg"] == pytest.approx(0.412, abs=1e-12)


def test_an_escape_code_in_a_text_reaches_no_terminal(run: Any, book: Path) -> None:
    ran = run("enter", book, "note", "text=\x1b[2Jgone", "--by", "J\x07K")
    assert "\x1b" not in ran.out + ran.err
    assert "\x07" not in ran.out + ran.err


def test_a_backup_is_a_whole_book(run: Any, book: Path, tmp_path: Path) -> None:
    run("enter", book, "note", "text=a")
    copy = tmp_path / "copy.wingledger"
    ran = run("backup", book, copy)
    assert ran.code == 0
    assert last_entry(copy) == last_entry(book)
    assert last_entry(book)["digest"] in ran.out
    assert json.loads(run("check", copy, "--json").out)["chain_ok"] is True


def test_a_changed_entry_is_named_by_check_and_the_figures_still_come(run: Any, book: Path) -> None:
    run("enter", book, "note", "text=a")
    run("enter", book, "note", "text=b")
    with sqlite3.connect(book) as connection:
        for (name,) in connection.execute(
            "SELECT name FROM sqlite_master WHERE type = 'trigger' AND tbl_name = 'entry'"
        ).fetchall():
            connection.execute(f'DROP TRIGGER "{name}"')
        connection.execute("UPDATE entry SET by = 'XX' WHERE seq = 2")
    ran = run("check", book, "--json")
    read = json.loads(ran.out)
    assert (ran.code, read["chain_ok"]) == (1, False)
    assert any(finding["where"].startswith("entry 2") for finding in read["findings"])
    weights = run("weights", book, "--json")
    assert weights.code == 0
    assert json.loads(weights.out)["total"]["estimated_kg"] == pytest.approx(1.05)
    assert "STOP" in weights.err


def test_start_and_adopt_say_the_iteration_and_its_digest(run: Any, plan: Path, tmp_path: Path) -> None:
    book = tmp_path / "new.wingledger"
    ran = run("start", book, plan, "--json")
    read = json.loads(ran.out)
    jsonschema.validate(read, all_schemas()["output/adopt.json"])
    assert (ran.code, read["iteration"], read["seq"]) == (0, "r1", 1)
    assert last_entry(book)["digest"] == read["digest"]


def test_a_preview_of_a_plan_writes_nothing_and_names_what_no_longer_fits(
    run: Any, plan: Path, book: Path, tmp_path: Path
) -> None:
    for piece in ("RIB-L", "SKIN-L"):
        run("enter", book, "weigh", f"what={piece}", "reading=412 g")
    second = Path(shutil.copytree(plan, tmp_path / "r2"))
    text = (second / "plan.toml").read_text(encoding="utf-8").replace('name = "r1"', 'name = "r2"', 1)
    (second / "plan.toml").write_text(text, encoding="utf-8")
    skin = (second / "geometry" / "skin.obj").read_text(encoding="utf-8")
    (second / "geometry" / "skin.obj").write_text(skin.replace("v 1 0 0.2", "v 1.2 0 0.2"), encoding="utf-8")
    before = last_entry(book)
    ran = run("adopt", book, second, "--preview", "--json")
    read = json.loads(ran.out)
    jsonschema.validate(read, all_schemas()["output/adopt.json"])
    assert (ran.code, read["iteration"], read["seq"], read["digest"]) == (0, "r2", None, None)
    assert [one["piece"] for one in read["no_longer_fits"]] == ["SKIN-L/1"]
    assert last_entry(book) == before
    assert run("adopt", book, second).code == 0
    assert last_entry(book)["kind"] == "adopt"


def test_a_bad_plan_is_refused_with_every_problem_by_its_place(run: Any, plan: Path, tmp_path: Path) -> None:
    bad = Path(shutil.copytree(plan, tmp_path / "bad"))
    parts = (bad / "parts.csv").read_text(encoding="utf-8")
    parts = parts.replace("250 g", "heavy").replace(",fitting,", ",ornament,")
    (bad / "parts.csv").write_text(parts, encoding="utf-8")
    book = tmp_path / "new.wingledger"
    ran = run("start", book, bad)
    assert (ran.code, ran.out) == (1, "")
    assert "parts.csv:4:planned_mass" in ran.err
    assert "parts.csv:4:class" in ran.err
    assert not book.exists()
