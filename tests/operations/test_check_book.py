"""What check says about a whole book, a changed one, and a code kept on paper."""

from __future__ import annotations

import sqlite3
from typing import Any

import pytest

from ledger.book.schema import GUARDS
from ledger.errors import Refused, Severity
from ledger.operations.check_book import check_book


def test_a_whole_book_is_whole(shop: Any) -> None:
    checked = check_book(shop.book)
    assert (checked.entries, checked.chain_ok, checked.replay_ok) == (6, True, True)
    assert len(checked.last_digest) == 64
    assert not [finding for finding in checked.findings if finding.severity is Severity.STOP]


def test_the_last_code_is_compared_and_later_entries_are_counted(shop: Any) -> None:
    first = check_book(shop.book)
    for last in (first.short_code, first.short_code.lower(), first.last_digest):
        assert check_book(shop.book, last).findings == first.findings
    shop.log("note", text="x")
    since = [
        finding
        for finding in check_book(shop.book, first.short_code).findings
        if finding.code == "entries-since"
    ]
    assert [(finding.where.entry, finding.severity) for finding in since] == [(6, Severity.NOTE)]


def test_a_mistyped_code_is_refused(shop: Any) -> None:
    code = check_book(shop.book).short_code
    wrong = ("1" if code[0] != "1" else "2") + code[1:]
    for last in (wrong, "", "no code"):
        with pytest.raises(Refused) as caught:
            check_book(shop.book, last)
        assert caught.value.findings[0].code == "code-mistyped"


def test_another_book_does_not_have_the_code(shop: Any, make_shop: Any) -> None:
    other = make_shop("other.book")
    other.log("note", text="x")
    found = check_book(shop.book, check_book(other.book).short_code).findings
    assert ("last-not-in-book", Severity.STOP) in {(finding.code, finding.severity) for finding in found}


def test_a_changed_entry_is_named_and_the_check_goes_on(shop: Any) -> None:
    connection = sqlite3.connect(shop.book)
    connection.execute("DROP TRIGGER entry_unchanged")
    connection.execute("UPDATE entry SET body = replace(body, '20', '30') WHERE seq = 2")
    connection.execute(GUARDS["entry_unchanged"])
    connection.commit()
    connection.close()
    checked = check_book(shop.book)
    assert not checked.chain_ok
    assert ("digest-wrong", 2) in {(finding.code, finding.where.entry) for finding in checked.findings}


@pytest.mark.parametrize("body", ["not json", "[]", '{"x":1}', "{}", '{"quantity":5}', "null"])
def test_a_body_that_cannot_be_read_is_named(shop: Any, body: str) -> None:
    connection = sqlite3.connect(shop.book)
    connection.execute("DROP TRIGGER entry_unchanged")
    connection.execute("UPDATE entry SET body = ? WHERE seq = 2", (body,))
    connection.execute(GUARDS["entry_unchanged"])
    connection.commit()
    connection.close()
    checked = check_book(shop.book)
    assert (checked.chain_ok, checked.replay_ok) == (False, False)
    assert ("entry-unreadable", 2) in {(finding.code, finding.where.entry) for finding in checked.findings}


def test_a_book_whose_plan_cannot_be_read_is_still_checked(shop: Any) -> None:
    connection = sqlite3.connect(shop.book)
    connection.execute("DROP TRIGGER entry_unchanged")
    connection.execute("UPDATE entry SET body = '{}' WHERE seq = 1")
    connection.commit()
    connection.close()
    codes = {finding.code for finding in check_book(shop.book).findings}
    assert {"guard-missing", "digest-wrong", "book-without-plan"} <= codes
