"""Many entries from a file: all or none, every problem with its row and column."""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

import pytest

from ledger.errors import Finding, Refused, WrongUse
from ledger.operations.check_book import check_book
from ledger.operations.log_file import log_file
from ledger.operations.open_build import newest_entry, open_build


def _write(folder: Path, rows: list[dict[str, object]], name: str = "rows.jsonl") -> Path:
    file = folder / name
    file.write_text("".join(json.dumps(row) + "\n" for row in rows))
    return file


def _problems(shop: Any, file: Path) -> tuple[Finding, ...]:
    before = newest_entry(shop.book)
    with pytest.raises(Refused) as caught:
        log_file(shop.book, file, by="JK", now=shop.now)
    assert newest_entry(shop.book) == before
    return caught.value.findings


ROWS: list[dict[str, object]] = [
    {"kind": "receive", "material": "epoxy", "quantity": "1 kg", "lot": "NEW-1"},
    {"kind": "receive", "material": "slow", "quantity": "1 kg", "lot": "NEW-2"},
    {
        "kind": "mix",
        "resin_lot": "NEW-1",
        "resin": "100 g",
        "hardener_lot": "NEW-2",
        "hardener": "27 g",
        "batch": "CUP-1",
    },
    {"kind": "lay", "piece": "SKIN-L", "step": "1", "lots": ["CLOTH"], "batches": "CUP-1 50 g"},
    {"kind": "weigh", "what": "SKIN-L/1", "reading": ["400 g", "402 g"], "by": "AB"},
]


def test_later_rows_use_the_numbers_of_earlier_ones(shop: Any, tmp_path: Path) -> None:
    told: list[tuple[int, int]] = []
    logged = log_file(
        shop.book,
        _write(tmp_path, ROWS),
        by="JK",
        now=shop.now,
        progress=lambda what, done, of: told.append((done, of)),  # noqa: ARG005
    )
    assert [entry.seq for entry in logged] == [7, 8, 9, 10, 11]
    assert [entry.by for entry in logged] == ["JK", "JK", "JK", "JK", "AB"]
    assert told[-1] == (5, 5)
    assert newest_entry(shop.book) == (11, logged[-1].digest)
    checked = check_book(shop.book)
    assert (checked.chain_ok, checked.replay_ok) == (True, True)


def test_a_csv_file_may_carry_units_in_its_heads(shop: Any, tmp_path: Path) -> None:
    file = tmp_path / "rows.csv"
    file.write_text(
        "kind,what,reading [g],pieces,sheet\n"
        "cut,,,CLIP; CLIP,PLATE\nweigh,CLIP/2,12.5,,\nweigh,CLIP/1,13 g,,\n"
    )
    logged = log_file(shop.book, file, by="JK", now=shop.now)
    assert [entry.says for entry in logged] == [
        "CLIP/1 and CLIP/2 cut from PLATE",
        "CLIP/2 weighed at 12.5 g",
        "CLIP/1 weighed at 13 g",
    ]


def test_every_problem_is_told_with_row_and_column_and_nothing_is_written(shop: Any, tmp_path: Path) -> None:
    file = tmp_path / "rows.csv"
    file.write_text(
        "kind,what,reading,scale,text\n"
        "note,,,,fine\n"
        "weigh,NO,12 g,W9,\n"
        "dance,,,,\n"
        "weigh,BOLT,12,,\n"
        "weigh,BOLT,12 g,,\n"
        "weigh,BOLT,,,\n"
    )
    places = [(f.code, f.where.row, f.where.column) for f in _problems(shop, file)]
    assert places == [
        ("name-unknown", 3, "what"),
        ("name-unknown", 3, "scale"),
        ("unknown-kind", 4, "kind"),
        ("field-unreadable", 5, "reading"),
        ("field-missing", 7, "reading"),
    ]


def test_what_only_lacks_a_number_of_a_refused_row_is_no_further_problem(shop: Any, tmp_path: Path) -> None:
    rows = [{**ROWS[0], "quantity": "1"}, *ROWS[1:]]
    places = [(f.code, f.where.row, f.where.column) for f in _problems(shop, _write(tmp_path, rows))]
    assert places == [("field-unreadable", 1, "quantity")]


def test_rows_of_json_that_cannot_be_read_are_told_beside_the_others(shop: Any, tmp_path: Path) -> None:
    file = _write(tmp_path, [{"kind": "note"}])
    file.write_text(file.read_text() + "{broken\n")
    assert [(f.code, f.where.row) for f in _problems(shop, file)] == [
        ("field-missing", 1),
        ("json-broken", 2),
    ]


def test_a_plan_is_not_adopted_by_a_row(shop: Any, tmp_path: Path) -> None:
    rows: list[dict[str, object]] = [{"kind": "adopt", "plan": "x", "title": "y"}]
    assert [f.code for f in _problems(shop, _write(tmp_path, rows))] == ["unknown-kind"]


def test_a_file_may_withdraw_what_it_wrote(shop: Any, tmp_path: Path) -> None:
    rows: list[dict[str, object]] = [
        {"kind": "receive", "material": "slow", "quantity": "1 kg", "lot": "OOPS"},
        {"kind": "withdraw", "seq": "7", "why": "wrong"},
        {"kind": "receive", "material": "epoxy", "quantity": "1 kg", "lot": "OOPS"},
    ]
    log_file(shop.book, _write(tmp_path, rows), by="JK", now=shop.now)
    assert open_build(shop.book).snapshot.lots["OOPS"].receive.material == "epoxy"
    assert check_book(shop.book).replay_ok


def test_a_file_that_is_not_there_is_wrong_use(shop: Any, tmp_path: Path) -> None:
    with pytest.raises(WrongUse):
        log_file(shop.book, tmp_path / "none.csv")


def test_a_file_without_rows_writes_nothing(shop: Any, tmp_path: Path) -> None:
    before = newest_entry(shop.book)
    assert log_file(shop.book, _write(tmp_path, [])) == ()
    assert newest_entry(shop.book) == before
