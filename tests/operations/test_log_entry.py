"""One entry logged: what it says, what it gives out, what it refuses, and that a refusal writes nothing."""

from __future__ import annotations

import multiprocessing
import sqlite3
from datetime import UTC, datetime, timedelta
from pathlib import Path
from typing import Any

import pytest

from ledger.errors import BookUnusable, FindingsError, Refused, WrongUse
from ledger.operations.log_entry import log_entry
from ledger.operations.open_build import newest_entry, open_build


def _refused(shop: Any, error: type[FindingsError], kind: str, **fields: str) -> list[tuple[str, str | None]]:
    before = newest_entry(shop.book)
    with pytest.raises(error) as caught:
        shop.log(kind, **fields)
    assert newest_entry(shop.book) == before
    assert all(finding.do for finding in caught.value.findings)
    return [(finding.code, finding.where.column) for finding in caught.value.findings]


def test_an_entry_says_who_when_and_what(shop: Any) -> None:
    logged = shop.log("cut", pieces="RIB.01-L; RIB.01-R", sheet="PLATE")
    assert (logged.seq, logged.kind, logged.by, logged.at) == (7, "cut", "JK", shop.now)
    assert logged.says == "RIB.01-L/1 and RIB.01-R/1 cut from PLATE"
    assert [minted.name for minted in logged.minted] == ["RIB.01-L/1", "RIB.01-R/1"]
    assert newest_entry(shop.book) == (7, logged.digest)


@pytest.mark.parametrize(
    ("kind", "fields", "says"),
    [
        ("receive", {"material": "slow", "quantity": "500 g", "lot": "X"}, "X received: 500 g slow"),
        ("weigh", {"what": "LEFT/ribs", "reading": "1 kg; 2 kg"}, "WING/LEFT/ribs weighed at 1500 g"),
        ("fit", {"piece": "BOLT", "into": "skins"}, "BOLT/1 fitted into WING/LEFT/skins"),
        ("hold", {"what": "cloth", "why": "wet"}, "CLOTH on hold: wet"),
        ("note", {"text": "hello", "about": "plate"}, "about PLATE: hello"),
        ("trim", {"piece": "BOLT", "mass": "5 g", "why": "sanded"}, "BOLT/1 trimmed by 5 g: sanded"),
        ("withdraw", {"seq": "2", "why": "twice"}, "entry 2 withdrawn: twice"),
        ("coat", {"piece": "BOLT", "lot": "RESIN", "mass": "5 g"}, "BOLT/1 coated with 5 g of RESIN"),
        (
            "lay",
            {"piece": "SKIN-L", "step": "1", "lots": "CLOTH 100 g"},
            "SKIN-L/1 step 1 laid from CLOTH 100 g",
        ),
    ],
)
def test_each_kind_says_one_plain_sentence(shop: Any, kind: str, fields: dict[str, str], says: str) -> None:
    assert shop.log(kind, **fields).says == says


def test_who_logs_is_given_or_in_the_environment_or_the_login(
    shop: Any, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setenv("WINGLEDGER_BY", "MT")
    fields = {"text": "x"}
    assert log_entry(shop.book, "note", fields).by == "MT"
    assert log_entry(shop.book, "note", fields, by="AB").by == "AB"
    assert log_entry(shop.book, "note", {**fields, "by": "CD"}, by="AB").by == "CD"
    monkeypatch.delenv("WINGLEDGER_BY")
    monkeypatch.setenv("LOGNAME", "builder")
    assert log_entry(shop.book, "note", fields).by == "builder"


def test_an_entry_may_be_of_earlier_but_not_of_more_than_five_minutes_ahead(shop: Any) -> None:
    soon = shop.now + timedelta(minutes=1)
    earlier = shop.log("note", text="x", at="2026-03-01T08:30+01:00")
    assert earlier.at == datetime(2026, 3, 1, 7, 30, tzinfo=UTC)
    shop.log("note", text="x", at=(soon + timedelta(minutes=6)).isoformat())
    ahead = (shop.now + timedelta(minutes=6, seconds=1)).isoformat()
    assert _refused(shop, Refused, "note", text="x", at=ahead) == [("at-ahead", "at")]


@pytest.mark.parametrize(
    ("kind", "fields", "expected"),
    [
        ("dance", {}, [("unknown-kind", "kind")]),
        ("weigh", {"what": "BOLT", "reading": "5 g", "colour": "red"}, [("unknown-field", "colour")]),
        ("adopt", {"plan": "x", "title": "y"}, [("unknown-kind", None)]),
    ],
)
def test_an_unknown_kind_or_field_is_wrong_use(
    shop: Any, kind: str, fields: dict[str, str], expected: list[tuple[str, str | None]]
) -> None:
    assert _refused(shop, WrongUse, kind, **fields) == expected


@pytest.mark.parametrize(
    ("kind", "fields", "expected"),
    [
        ("weigh", {"what": "BOLT"}, [("field-missing", "reading")]),
        ("weigh", {"what": "BOLT", "reading": "12.5"}, [("field-unreadable", "reading")]),
        ("weigh", {"what": "BOLT", "reading": "0 g"}, [("out-of-range", "reading")]),
        ("weigh", {"what": "BOLT", "reading": "-5 g"}, [("field-unreadable", "reading")]),
        (
            "weigh",
            {"what": "NO", "reading": "5 g", "scale": "W9"},
            [("name-unknown", "what"), ("name-unknown", "scale")],
        ),
        ("coat", {"piece": "BOLT", "lot": "RESIN"}, [("field-missing", "mass")]),
        ("fit", {"piece": "BOLT"}, [("field-missing", "into")]),
        ("lay", {"piece": "SKIN-L", "step": "7", "lots": "CLOTH"}, [("no-such-step", "step")]),
        ("withdraw", {"seq": "99", "why": "x"}, [("no-such-entry", "seq")]),
        ("note", {"text": "half \ud800"}, [("not-text", "text")]),
        (
            "receive",
            {"material": "epoxy", "quantity": "5 kg", "expiry": "03/04/26"},
            [("field-unreadable", "expiry")],
        ),
    ],
)
def test_what_cannot_be_read_or_found_is_refused_and_nothing_written(
    shop: Any, kind: str, fields: dict[str, str], expected: list[tuple[str, str | None]]
) -> None:
    assert _refused(shop, Refused, kind, **fields) == expected


def test_a_shop_rule_is_never_a_refusal(shop: Any) -> None:
    shop.log("scrap", what="CLOTH", why="burnt")
    logged = shop.log("lay", piece="SKIN-L", step="1", lots="CLOTH")
    assert "scrapped-used" in {finding.code for finding in logged.findings}
    again = shop.log("note", text="nothing new")
    assert "scrapped-used" not in {finding.code for finding in again.findings}


def test_a_preview_tells_all_and_writes_nothing(shop: Any) -> None:
    shop.log("scrap", what="CLOTH", why="burnt")
    before = newest_entry(shop.book)
    content = shop.book.read_bytes()
    fields = {"piece": "SKIN-L", "step": "1", "lots": "CLOTH"}
    previewed = log_entry(shop.book, "lay", fields, by="JK", now=shop.now, preview=True)
    assert newest_entry(shop.book) == before
    assert shop.book.read_bytes() == content
    logged = log_entry(shop.book, "lay", fields, by="JK", now=shop.now)
    assert (previewed.seq, previewed.minted, previewed.says) == (logged.seq, logged.minted, logged.says)
    assert previewed.findings == logged.findings


def test_a_finding_is_accepted_while_its_facts_stand(shop: Any) -> None:
    shop.log("scrap", what="CLOTH", why="burnt")
    found = next(
        f
        for f in shop.log("lay", piece="SKIN-L", step="1", lots="CLOTH").findings
        if f.code == "scrapped-used"
    )
    what = found.where.thing or str(found.where.entry)
    assert _refused(shop, Refused, "accept", finding="no-such", what=what, why="x") == [
        ("finding-not-open", "finding")
    ]
    assert _refused(shop, Refused, "accept", finding=found.code, what="BOLT", why="x") == [
        ("finding-not-open", "what")
    ]
    accepted = shop.log("accept", finding=found.code, what=what, why="only singed")
    assert accepted.says == f"scrapped-used accepted for {what}: only singed"
    assert (
        _refused(shop, Refused, "accept", finding=found.code, what=what, why="again")[0][0]
        == "finding-not-open"
    )


def test_a_book_that_is_not_there_is_not_made(tmp_path: Path) -> None:
    with pytest.raises(BookUnusable):
        log_entry(tmp_path / "no.book", "note", {"text": "x"})
    assert list(tmp_path.iterdir()) == []


def test_the_quick_path_loads_no_heavy_library(shop: Any) -> None:
    import subprocess
    import sys

    script = (
        "import sys; from pathlib import Path; from ledger.operations.log_entry import log_entry;"
        f"log_entry(Path({str(shop.book)!r}), 'note', {{'text': 'x'}});"
        "print([name for name in ('sqlite_utils', 'pandas', 'trimesh', 'ezdxf', 'openpyxl', 'textual')"
        " if name in sys.modules])"
    )
    root = Path(__file__).resolve().parents[2]
    done = subprocess.run(
        [sys.executable, "-c", script], capture_output=True, text=True, cwd=root, check=True, timeout=60
    )
    assert done.stdout.strip() == "[]"


def test_a_book_with_a_dropped_guard_still_works_and_warns(shop: Any) -> None:
    assert open_build(shop.book).warnings == ()
    connection = sqlite3.connect(shop.book)
    connection.execute("DROP TRIGGER entry_stays")
    connection.close()
    shop.log("note", text="x")
    assert [finding.where.thing for finding in open_build(shop.book).warnings] == ["entry_stays"]


def _receive(book: Path, count: int) -> None:
    for _ in range(count):
        log_entry(book, "receive", {"material": "epoxy", "quantity": "1 kg"}, by="JK")


def test_four_programs_that_log_at_once_give_out_each_number_once(shop: Any) -> None:
    context = multiprocessing.get_context("fork")
    writers = [context.Process(target=_receive, args=(shop.book, 8)) for _ in range(4)]
    for writer in writers:
        writer.start()
    for writer in writers:
        writer.join(120)
    assert [writer.exitcode for writer in writers] == [0] * 4
    snapshot = open_build(shop.book).snapshot
    assert snapshot.last_seq == 6 + 32
    assert len(snapshot.lots) == 3 + 32
    assert [path.name for path in shop.book.parent.iterdir()] == [shop.book.name]
