"""A damaged book is saved as far as it can be proved, and stays as it is; a backup is put back."""

from __future__ import annotations

import hashlib
import sqlite3
from pathlib import Path
from typing import Any

import pytest

from ledger.errors import BookUnusable, Refused, WrongUse
from ledger.operations.back_up import back_up
from ledger.operations.check_book import check_book
from ledger.operations.open_build import newest_entry, open_build
from ledger.operations.rescue_book import rescue_book
from ledger.operations.restore_book import restore_book


def _hash(path: Path) -> str:
    return hashlib.sha256(path.read_bytes()).hexdigest()


def test_a_whole_book_is_rescued_whole(shop: Any, tmp_path: Path) -> None:
    rescued = rescue_book(shop.book, tmp_path / "new.book")
    assert (rescued.entries, rescued.last_digest) == newest_entry(shop.book)
    assert rescued.left_out == ()
    checked = check_book(rescued.file)
    assert (checked.chain_ok, checked.replay_ok) == (True, True)
    assert open_build(rescued.file).snapshot.plan == open_build(shop.book).snapshot.plan


def test_entries_past_a_break_are_named_and_left_out(shop: Any, tmp_path: Path) -> None:
    connection = sqlite3.connect(shop.book)
    connection.execute("DROP TRIGGER entry_unchanged")
    connection.execute("UPDATE entry SET by = 'XX' WHERE seq = 4")
    connection.commit()
    connection.close()
    before = _hash(shop.book)
    rescued = rescue_book(shop.book, tmp_path / "new.book")
    assert (rescued.entries, rescued.left_out) == (3, (4, 5, 6))
    assert [finding.where.entry for finding in rescued.findings] == [4, 5, 6]
    assert check_book(rescued.file).chain_ok
    assert _hash(shop.book) == before


def test_a_book_with_its_end_cut_off_gives_its_first_entries(shop: Any, tmp_path: Path) -> None:
    for number in range(60):
        shop.log("note", text=f"{number} " + "x" * 900)
    whole = shop.book.read_bytes()
    shop.book.write_bytes(whole[: len(whole) * 8 // 10])
    with pytest.raises(BookUnusable):
        open_build(shop.book)
    try:
        rescued = rescue_book(shop.book, tmp_path / "new.book")
    except BookUnusable as error:
        pytest.fail(f"nothing was rescued: {error}")
    assert 6 <= rescued.entries <= 66
    checked = check_book(rescued.file)
    assert (checked.chain_ok, checked.replay_ok, checked.entries) == (True, True, rescued.entries)


def test_rescue_replaces_nothing_and_wants_something(shop: Any, tmp_path: Path) -> None:
    with pytest.raises(Refused):
        rescue_book(shop.book, shop.book)
    with pytest.raises(BookUnusable):
        rescue_book(tmp_path / "none", tmp_path / "new.book")
    with pytest.raises(WrongUse):
        rescue_book(shop.book, tmp_path / "no folder" / "new.book")
    junk = tmp_path / "junk"
    junk.write_bytes(b"no database at all" * 100)
    with pytest.raises(BookUnusable):
        rescue_book(junk, tmp_path / "new.book")
    assert not (tmp_path / "new.book").exists()


def test_a_restored_backup_goes_on_where_it_ended(shop: Any, tmp_path: Path) -> None:
    copied = back_up(shop.book, tmp_path / "copy")
    shop.book.unlink()
    restored = restore_book(copied.file, shop.book)
    assert restored.last_digest == copied.last_digest
    assert shop.log("note", text="on").seq == copied.entries + 1
    with pytest.raises(Refused):
        restore_book(copied.file, shop.book)


@pytest.mark.parametrize("ending", ["-wal", "-shm", "-journal"])
def test_no_book_is_put_beside_what_is_left_of_another(shop: Any, tmp_path: Path, ending: str) -> None:
    # SQLite would fold the left-over into the book put there, as if it were that book's own.
    place = tmp_path / "new.book"
    left = tmp_path / f"new.book{ending}"
    left.write_bytes(b"left over")
    for put in (restore_book, rescue_book):
        with pytest.raises(Refused) as refused:
            put(shop.book, place)
        assert refused.value.findings[0].where.file == str(left)
    assert not place.exists()
