"""Check names the first entry that does not fit, and every table or guard that is gone."""

from __future__ import annotations

import hashlib
import json
import sqlite3
from typing import Any

import pytest
import rfc8785

from ledger.book.chain import short_code
from ledger.book.checking import BookState, find_code, look_through
from ledger.book.opening import open_for_reading
from ledger.book.schema import GUARDS, PROJECTIONS
from ledger.model.acts import Note, Receive, Withdraw
from ledger.model.things import Measure


@pytest.fixture
def long_shop(shop: Any) -> Any:
    """A book of six entries, one of them withdrawn."""
    for lot in ("A-1", "A-2"):
        shop.enter("receive", Receive(material="epoxy", quantity=Measure(value=5.0, unit="kg"), lot=lot))
    shop.enter("note", Note(text="four"))
    shop.enter("withdraw", Withdraw(seq=3, why="twice"))
    shop.enter("note", Note(text="six"))
    return shop


def _look(shop: Any) -> BookState:
    with open_for_reading(shop.book) as connection:
        return look_through(connection)


def _tamper(shop: Any, *statements: str) -> None:
    """Drop the guards of `entry`, change, and put the very same guards back."""
    connection = sqlite3.connect(shop.book, isolation_level=None)
    for name in GUARDS:
        if name.startswith("entry"):
            connection.execute(f"DROP TRIGGER {name}")
    for statement in statements:
        connection.execute(statement)
    for name, sql in GUARDS.items():
        if name.startswith("entry"):
            connection.execute(sql)
    connection.close()


def test_a_whole_book_has_nothing_to_say(long_shop: Any) -> None:
    state = _look(long_shop)
    assert (state.entries, state.chain_ok, state.replay_ok, state.findings) == (6, True, True, ())


COPY = (
    "INSERT INTO entry SELECT {seq}, 'new id', at, logged_at, by, kind, body, previous, 'other digest' "
    "FROM entry WHERE seq = 4"
)


@pytest.mark.parametrize(
    ("statements", "seq", "code"),
    [
        (["UPDATE entry SET by = 'XX' WHERE seq = 4"], 4, "digest-wrong"),
        (["UPDATE entry SET at = logged_at || ' ' WHERE seq = 2"], 2, "digest-wrong"),
        (["UPDATE entry SET body = '{\"text\": \"four\"}' WHERE seq = 4"], 4, "body-not-canonical"),
        (["UPDATE entry SET body = 'no json' WHERE seq = 4"], 4, "body-unreadable"),
        (["UPDATE entry SET digest = 'd' WHERE seq = 4"], 4, "digest-wrong"),
        (["UPDATE entry SET previous = 'p' WHERE seq = 4"], 4, "chain-broken"),
        (["DELETE FROM entry WHERE seq = 4"], 5, "entry-missing"),
        (["DELETE FROM entry WHERE seq = 1"], 2, "entry-missing"),
        (
            ["DELETE FROM entry WHERE seq = 4", "UPDATE entry SET seq = seq - 1 WHERE seq > 4"],
            4,
            "chain-broken",
        ),
        (
            [
                "UPDATE entry SET seq = 99 WHERE seq = 3",
                "UPDATE entry SET seq = 3 WHERE seq = 4",
                "UPDATE entry SET seq = 4 WHERE seq = 99",
            ],
            3,
            "chain-broken",
        ),
        (["UPDATE entry SET seq = seq + 100 WHERE seq > 3", COPY.replace("= 4", "= 104").format(seq=4),
          "UPDATE entry SET seq = seq - 99 WHERE seq > 100"], 4, "digest-wrong"),
        ([COPY.format(seq=7)], 7, "chain-broken"),
        (["UPDATE entry SET by = CAST(x'ff' AS TEXT) WHERE seq = 4"], 4, "digest-wrong"),
    ],
)  # fmt: skip
def test_the_first_entry_that_does_not_fit_is_named(
    long_shop: Any, statements: list[str], seq: int, code: str
) -> None:
    _tamper(long_shop, *statements)
    with open_for_reading(long_shop.book) as connection:
        connection.text_factory = lambda stored: stored.decode("utf-8", "surrogateescape")
        state = look_through(connection)
    assert not state.chain_ok
    first = next(finding for finding in state.findings if finding.code == code)
    assert first.where.entry == seq


def test_an_entry_changed_with_its_digest_breaks_the_next(long_shop: Any) -> None:
    connection = sqlite3.connect(long_shop.book)
    row = connection.execute(
        "SELECT seq, id, at, logged_at, by, kind, body, previous FROM entry WHERE seq = 4"
    ).fetchone()
    connection.close()
    whole = dict(zip(("seq", "id", "at", "logged_at", "by", "kind"), row[:6], strict=True))
    body = {**json.loads(row[6]), "text": "forged"}
    digest = hashlib.sha256(row[7].encode() + rfc8785.dumps({**whole, "body": body})).hexdigest()
    text = rfc8785.dumps(body).decode()
    _tamper(long_shop, f"UPDATE entry SET body = '{text}', digest = '{digest}' WHERE seq = 4")  # noqa: S608
    state = _look(long_shop)
    assert [(finding.code, finding.where.entry) for finding in state.findings] == [("chain-broken", 5)]


def test_a_cut_end_is_only_seen_against_a_code_kept_elsewhere(long_shop: Any) -> None:
    before = _look(long_shop)
    code = short_code(before.last_digest)
    with open_for_reading(long_shop.book) as connection:
        assert find_code(connection, code) == 6
        assert find_code(connection, before.last_digest) == 6
    _tamper(long_shop, "DELETE FROM entry WHERE seq = 6", "DELETE FROM mention WHERE seq = 6")
    after = _look(long_shop)
    assert (after.chain_ok, after.findings) == (True, ())
    with open_for_reading(long_shop.book) as connection:
        assert find_code(connection, code) is None


@pytest.mark.parametrize("name", list(GUARDS))
def test_a_dropped_guard_is_named(long_shop: Any, name: str) -> None:
    connection = sqlite3.connect(long_shop.book)
    connection.execute(f"DROP TRIGGER {name}")
    connection.close()
    findings = _look(long_shop).findings
    assert [(finding.code, finding.where.thing) for finding in findings] == [("guard-missing", name)]


@pytest.mark.parametrize("name", list(GUARDS))
def test_a_guard_replaced_by_one_that_does_nothing_is_named(long_shop: Any, name: str) -> None:
    connection = sqlite3.connect(long_shop.book)
    connection.execute(f"DROP TRIGGER {name}")
    connection.execute(f"CREATE TRIGGER {name} BEFORE DELETE ON entry BEGIN SELECT 1; END")
    connection.close()
    findings = _look(long_shop).findings
    assert [(finding.code, finding.where.thing) for finding in findings] == [("guard-changed", name)]


@pytest.mark.parametrize("name", ["entry", "content", "geometry", "meta", *PROJECTIONS])
def test_a_dropped_table_is_named(long_shop: Any, name: str) -> None:
    connection = sqlite3.connect(long_shop.book)
    connection.execute(f"DROP TABLE {name}")
    connection.close()
    named = {(finding.code, finding.where.thing) for finding in _look(long_shop).findings}
    assert ("table-missing", name) in named
    assert ("entry" in name) == (("guard-missing", "entry_stays") in named)


def test_a_foreign_trigger_is_named(long_shop: Any) -> None:
    connection = sqlite3.connect(long_shop.book)
    connection.execute("CREATE TRIGGER sly AFTER INSERT ON entry BEGIN DELETE FROM held; END")
    connection.close()
    findings = _look(long_shop).findings
    assert [(finding.code, finding.where.thing) for finding in findings] == [("guard-foreign", "sly")]


@pytest.mark.parametrize(
    ("statement", "table"),
    [
        ("DELETE FROM thing WHERE number = 'A-1'", "thing"),
        ("UPDATE thing SET kind = 'batch' WHERE number = 'A-1'", "thing"),
        ("DELETE FROM withdrawn", "withdrawn"),
        ("INSERT INTO held VALUES ('A-1', 2)", "held"),
        ("DELETE FROM iteration", "iteration"),
        ("DELETE FROM minted", "minted"),
        ("DELETE FROM mention", "mention"),
    ],
)
def test_a_look_up_table_that_differs_from_a_replay_is_named(
    long_shop: Any, statement: str, table: str
) -> None:
    connection = sqlite3.connect(long_shop.book)
    connection.execute(statement)
    connection.commit()
    connection.close()
    state = _look(long_shop)
    assert state.chain_ok
    assert not state.replay_ok
    assert [(finding.code, finding.where.thing) for finding in state.findings] == [("replay-differs", table)]


def test_a_damaged_page_is_named(long_shop: Any) -> None:
    connection = sqlite3.connect(long_shop.book)
    (page_size,) = connection.execute("PRAGMA page_size").fetchone()
    (root,) = connection.execute(
        "SELECT rootpage FROM sqlite_master WHERE name = 'idx_entry_digest'"
    ).fetchone()
    connection.close()
    content = bytearray(long_shop.book.read_bytes())
    content[(root - 1) * page_size + 100 : root * page_size] = bytes(page_size - 100)
    long_shop.book.write_bytes(bytes(content))
    codes = {finding.code for finding in _look(long_shop).findings}
    assert "file-damaged" in codes
