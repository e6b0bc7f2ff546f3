"""A build opened again reads only what is new, and says what a fresh reading says."""

from __future__ import annotations

import dataclasses
import multiprocessing
from collections.abc import Callable
from typing import Any

import pytest

from ledger.model.snapshot import Snapshot
from ledger.operations.correct_entry import correct_entry
from ledger.operations.open_build import forget, newest_entry, open_build
from ledger.operations.withdraw_entry import withdraw_entry


def _same(one: Snapshot, other: Snapshot) -> bool:
    names = [field.name for field in dataclasses.fields(Snapshot) if field.name != "now"]
    return all(getattr(one, name) == getattr(other, name) for name in names)


def _fresh(shop: Any) -> Snapshot:
    forget(shop.book)
    return open_build(shop.book).snapshot


def test_reading_on_gives_what_a_fresh_reading_gives(shop: Any) -> None:
    steps: list[Callable[[], object]] = [
        lambda: shop.log("cut", pieces="RIB.01-L; CLIP", sheet="PLATE", offcut="600 mm x 400 mm"),
        lambda: shop.log("lay", piece="SKIN-L", step="1", lots="CLOTH"),
        lambda: correct_entry(shop.book, 2, {"quantity": "9 m2"}, now=shop.now),
        lambda: shop.log("fit", piece="RIB.01-L", into="LEFT/ribs"),
        lambda: withdraw_entry(shop.book, 7, "x", now=shop.now),
        lambda: shop.adopt("r2"),
        lambda: shop.log("scrap", what="RIB.01-L", why="x"),
    ]
    for step in steps:
        step()
        read_on = open_build(shop.book).snapshot
        assert _same(read_on, _fresh(shop))


def test_a_snapshot_does_not_change_when_the_book_goes_on(shop: Any) -> None:
    before = open_build(shop.book).snapshot
    kept = dict(before.lots), before.logged, before.last_seq
    shop.log("receive", material="epoxy", quantity="1 kg")
    open_build(shop.book)
    assert (dict(before.lots), before.logged, before.last_seq) == kept


def test_a_foreign_entry_is_seen(shop: Any) -> None:
    before = newest_entry(shop.book)
    process = multiprocessing.get_context("fork").Process(
        target=shop.log, args=("note",), kwargs={"text": "x"}
    )
    process.start()
    process.join(30)
    assert newest_entry(shop.book)[0] == before[0] + 1
    assert open_build(shop.book).snapshot.last_seq == before[0] + 1


def test_another_book_at_the_same_path_is_read_anew(shop: Any, make_shop: Any) -> None:
    open_build(shop.book)
    other = make_shop("other.book")
    other.log("note", text="another")
    other.book.replace(shop.book)
    snapshot = open_build(shop.book).snapshot
    assert (snapshot.last_seq, snapshot.lots) == (2, {})


def test_the_plan_and_its_files_are_at_hand(shop: Any) -> None:
    build = open_build(shop.book)
    assert [part.name for part in build.snapshot.plan.parts][:2] == ["RIB.01-L", "RIB.01-R"]
    assert build.files["plan.toml"].startswith(b'format = "plan-1"')
    assert "nothing" not in build.files
    with pytest.raises(KeyError):
        build.files["nothing"]
