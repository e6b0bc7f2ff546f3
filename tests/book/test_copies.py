"""Copies are whole, verified, and never take the place of something."""

from __future__ import annotations

import contextlib
import sqlite3
from pathlib import Path
from typing import Any

import pytest

from ledger.book.checking import look_through
from ledger.book.copies import CopyDiffers, copy_book
from ledger.book.opening import open_for_reading, open_for_writing
from ledger.model.acts import Note


def test_a_copy_reads_like_the_book_and_leaves_one_file(shop: Any, tmp_path: Path) -> None:
    shop.enter("note", Note(text="x"))
    copied = tmp_path / "copies" / "wing.copy"
    copied.parent.mkdir()
    with open_for_reading(shop.book) as connection:
        last = copy_book(connection, copied)
        state = look_through(connection)
    assert [path.name for path in copied.parent.iterdir()] == ["wing.copy"]
    with open_for_reading(copied) as connection:
        assert look_through(connection) == state
    assert last == (2, state.last_digest)
    with open_for_writing(copied) as connection:
        assert connection.execute("PRAGMA journal_mode").fetchone() == ("wal",)


def test_a_copy_never_replaces_a_file(shop: Any, tmp_path: Path) -> None:
    target = tmp_path / "there"
    target.write_text("mine")
    with open_for_reading(shop.book) as connection, pytest.raises(FileExistsError):
        copy_book(connection, target)
    assert target.read_text() == "mine"
    assert sorted(path.name for path in tmp_path.iterdir()) == ["there", "wing.book"]


def test_a_copy_taken_while_another_writes_is_of_one_moment(shop: Any, tmp_path: Path) -> None:
    with open_for_reading(shop.book) as connection:
        shop.enter("note", Note(text="meanwhile"))
        assert copy_book(connection, tmp_path / "then")[0] == 1
    with open_for_reading(tmp_path / "then") as connection:
        assert look_through(connection).findings == ()


def test_a_damaged_book_gives_no_copy_that_looks_whole(shop: Any, tmp_path: Path) -> None:
    with contextlib.closing(sqlite3.connect(shop.book)) as connection:
        (size,) = connection.execute("PRAGMA page_size").fetchone()
        (root,) = connection.execute(
            "SELECT rootpage FROM sqlite_master WHERE name = 'idx_entry_digest'"
        ).fetchone()
    content = bytearray(shop.book.read_bytes())
    content[(root - 1) * size + 100 : root * size] = bytes(size - 100)
    shop.book.write_bytes(bytes(content))
    with open_for_reading(shop.book) as connection, pytest.raises((CopyDiffers, sqlite3.DatabaseError)):
        copy_book(connection, tmp_path / "copy")
    assert not (tmp_path / "copy").exists()
