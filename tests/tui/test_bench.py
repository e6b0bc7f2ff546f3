"""The bench, by hand and by reader, on a small book."""

from __future__ import annotations

from collections.abc import Callable
from contextlib import AbstractAsyncContextManager
from pathlib import Path
from typing import Any

import pytest

from ledger.model.declare import KINDS
from ledger.operations.keep_draft import drafts_of
from ledger.operations.log_entry import log_entry
from ledger.operations.open_build import open_build
from ledger.operations.withdraw_entry import withdraw_entry
from ledger.units import read_quantity

OpenBench = Callable[..., AbstractAsyncContextManager[Any]]


def entries(book: Path) -> tuple[Any, ...]:
    return open_build(book).logged


def last_entry(book: Path) -> Any:
    return entries(book)[-1]


# -- weighing without a slip


async def test_scan_number_enter_is_a_weighing(small_book: Path, open_bench: OpenBench) -> None:
    async with open_bench(small_book) as bench:
        await bench.scan("RIB.01-L")
        assert "312.0 g" in bench.shown
        await bench.type("313.4")
        entry = last_entry(small_book)
        assert entry.kind == "weigh"
        assert entry.act.what == "RIB.01-L/1"
        assert entry.act.reading_kg == (0.3134,)
        assert entry.by == "JK"
        assert any("expected 312.0 g" in line and "off +1.4 g" in line for line in bench.said), bench.said
        assert bench.app.rung[-1] == 1


async def test_a_reading_outside_wants_a_word_and_names_the_opposite_hand(
    small_book: Path, open_bench: OpenBench
) -> None:
    log_entry(small_book, "note", {"text": "ribs cut outside"}, by="MT")
    for side in "LR":
        log_entry(small_book, "cut", {"pieces": f"RIB.01-{side}", "sheet": "SHEET-A"}, by="MT")
    before = len(entries(small_book))
    async with open_bench(small_book) as bench:
        await bench.scan("RIB.01-L")
        await bench.type("900")
        await bench.key("enter", "enter", "enter")
        assert len(entries(small_book)) == before
        assert bench.app.rung[-1] == 2
        assert "type keep, or scan a badge" in bench.said[-1]
        await bench.type("keep")
        assert last_entry(small_book).act.reading_kg == (0.9,)
