"""A piece cut twice is noticed; one cut again after the first was scrapped is another piece."""

from __future__ import annotations

from pathlib import Path

from ledger.operations.list_findings import list_findings
from ledger.operations.log_entry import log_entry
from ledger.operations.start_book import start_book

PLAN = Path(__file__).resolve().parents[2] / "sample_builds" / "first_rib" / "plan"


def cuts_told(book: Path) -> list[tuple[str, str]]:
    return [
        (str(finding.where), finding.what) for finding in list_findings(book) if finding.code == "cut-twice"
    ]


def test_a_second_cut_of_the_same_piece_is_told_and_a_cut_after_scrapping_is_not(tmp_path: Path) -> None:
    book = tmp_path / "wing.wingledger"
    start_book(book, PLAN, by="JK")
    sheet = {"laminate": "RIBSTOCK", "length": "1200 mm", "width": "800 mm", "sheet": "SHEET-A"}
    log_entry(book, "sheet", sheet, by="JK")
    log_entry(book, "cut", {"pieces": "RIB.01-R", "sheet": "SHEET-A"}, by="JK")
    assert cuts_told(book) == []
    log_entry(book, "cut", {"pieces": "RIB.01-R/1", "sheet": "SHEET-A"}, by="JK")
    assert cuts_told(book) == [("entry 4 RIB.01-R/1", "cut 2 times, in entries 3 and 4")]

    again = tmp_path / "again.wingledger"
    start_book(again, PLAN, by="JK")
    log_entry(again, "sheet", sheet, by="JK")
    log_entry(again, "cut", {"pieces": "RIB.01-R", "sheet": "SHEET-A"}, by="JK")
    log_entry(again, "scrap", {"what": "RIB.01-R/1", "why": "cutter slipped"}, by="JK")
    log_entry(again, "cut", {"pieces": "RIB.01-R", "sheet": "SHEET-A"}, by="JK")
    assert cuts_told(again) == []
