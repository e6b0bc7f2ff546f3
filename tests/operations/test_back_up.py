"""A backup is the book, to the last digest."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import pytest

from ledger.errors import BookUnusable, Refused, WrongUse
from ledger.operations.back_up import back_up
from ledger.operations.check_book import check_book
from ledger.operations.open_build import newest_entry


def test_a_backup_ends_where_the_book_ends_and_checks_whole(shop: Any, tmp_path: Path) -> None:
    copied = back_up(shop.book, tmp_path / "copy.book")
    assert (copied.entries, copied.last_digest) == newest_entry(shop.book)
    checked = check_book(copied.file, copied.short_code)
    assert (checked.chain_ok, checked.replay_ok) == (True, True)
    assert sorted(path.name for path in tmp_path.iterdir()) == ["copy.book", "wing.book"]


def test_a_backup_replaces_nothing(shop: Any, tmp_path: Path) -> None:
    there = tmp_path / "there"
    there.write_text("mine")
    for target in (there, shop.book):
        with pytest.raises(Refused) as caught:
            back_up(shop.book, target)
        assert caught.value.findings[0].code == "target-exists"
    assert there.read_text() == "mine"


def test_a_backup_wants_a_book_and_a_folder(shop: Any, tmp_path: Path) -> None:
    with pytest.raises(WrongUse):
        back_up(shop.book, tmp_path / "no folder" / "copy")
    with pytest.raises(BookUnusable):
        back_up(tmp_path / "none", tmp_path / "copy")
    assert not (tmp_path / "copy").exists()
