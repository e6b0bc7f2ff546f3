"""From one format to the next: a verified copy first, all or nothing, guards back on."""

from __future__ import annotations

import contextlib
import sqlite3
from typing import Any

import pytest

from ledger.book.checking import look_through
from ledger.book.migrations import MIGRATIONS, Migration, migrate
from ledger.book.opening import connect_new, open_for_reading
from ledger.book.schema import APPLICATION_ID, FORMAT, GUARDS, objects_of
from ledger.model.acts import Note


def _with_shelf(database: Any) -> None:
    database["shelf"].create({"name": str}, pk="name", strict=True)
    database["entry"].transform(types={"seq": int})


def _half_way(database: Any) -> None:
    database["shelf"].create({"name": str}, pk="name")
    raise KeyError("half way")


LATER = (*MIGRATIONS, Migration(format=FORMAT + 1, does=_with_shelf))


def _rows(connection: sqlite3.Connection) -> list[Any]:
    return connection.execute("SELECT * FROM entry ORDER BY seq").fetchall()


def test_the_steps_end_at_the_format_of_the_program() -> None:
    assert [migration.format for migration in MIGRATIONS] == list(range(1, FORMAT + 1))


def test_a_new_book_says_what_it_is(shop: Any) -> None:
    with open_for_reading(shop.book) as connection:
        assert connection.execute("PRAGMA application_id").fetchone() == (APPLICATION_ID,)
        assert connection.execute("PRAGMA user_version").fetchone() == (FORMAT,)


def test_a_migration_keeps_every_entry_and_leaves_a_whole_copy_of_before(shop: Any) -> None:
    shop.enter("note", Note(text="x"))
    with contextlib.closing(connect_new(shop.book)) as connection:
        before = _rows(connection)
        kept = migrate(connection, shop.book, LATER)
        assert _rows(connection) == before
        assert connection.execute("PRAGMA user_version").fetchone() == (FORMAT + 1,)
        assert set(GUARDS) <= {found.name for found in objects_of(connection)}
    assert kept is not None
    with open_for_reading(kept) as connection:
        assert look_through(connection).findings == ()
        assert _rows(connection) == before
    assert {path.name for path in shop.book.parent.iterdir()} == {shop.book.name, kept.name}


def test_a_book_that_is_there_already_is_left_alone(shop: Any) -> None:
    with contextlib.closing(connect_new(shop.book)) as connection:
        assert migrate(connection, shop.book, MIGRATIONS) is None
    assert [path.name for path in shop.book.parent.iterdir()] == [shop.book.name]


def test_a_step_that_fails_changes_nothing(shop: Any) -> None:
    with contextlib.closing(connect_new(shop.book)) as connection:
        before = objects_of(connection)
        with pytest.raises(KeyError):
            migrate(connection, shop.book, (*MIGRATIONS, Migration(format=FORMAT + 1, does=_half_way)))
        assert objects_of(connection) == before
        assert connection.execute("PRAGMA user_version").fetchone() == (FORMAT,)


def test_a_second_copy_takes_another_name(shop: Any) -> None:
    with contextlib.closing(connect_new(shop.book)) as connection:
        first = migrate(connection, shop.book, LATER)
        connection.execute(f"PRAGMA user_version = {FORMAT}")
        connection.execute("DROP TABLE shelf")
        second = migrate(connection, shop.book, LATER)
    assert first != second
    assert first is not None
    assert first.exists()
