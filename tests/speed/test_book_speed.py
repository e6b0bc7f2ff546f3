"""How the work on a book grows with its entries."""

from __future__ import annotations

import json
import tracemalloc
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import pytest

from ledger.operations.check_book import check_book
from ledger.operations.log_file import log_file
from ledger.operations.open_build import forget
from ledger.operations.start_book import start_book
from ledger.operations.weigh_up_build import weigh_up_build

PLAN = 'format = "plan-1"\nname = "many"\n[[attitude]]\nname = "level"\nfill = true\n'


# In proportion, and half as much again for what the machine does beside; a square would be four times.
GROWTH = 1.5


@dataclass(frozen=True, slots=True, kw_only=True)
class Book:
    path: Path
    entries: int


def written(folder: Path, parts: int, entries: int) -> Book:
    """Items in 50 assemblies, each weighed again and again."""
    folder.mkdir()
    (folder / "plan").mkdir()
    (folder / "plan" / "plan.toml").write_text(PLAN)
    rows = [f"RIB.{n},rib,L,W/A{n % 50},item,{n % 7} {n % 11} 0,{100 + n % 900}" for n in range(parts)]
    head = "part,class,side,assembly,form,origin [m],planned_mass [g]"
    (folder / "plan" / "parts.csv").write_text("\n".join([head, *rows]) + "\n")
    with (folder / "log.jsonl").open("w") as log:
        for n in range(entries):
            part = n % parts
            row = {"kind": "weigh", "by": "JK", "what": f"RIB.{part}", "reading": f"{100 + part % 900} g"}
            log.write(json.dumps(row) + "\n")
    path = folder / "many.wingledger"
    start_book(path, folder / "plan", by="JK")
    log_file(path, folder / "log.jsonl", by="JK")
    return Book(path=path, entries=entries + 1)


@pytest.fixture(scope="module")
def small(tmp_path_factory: pytest.TempPathFactory) -> Book:
    return written(tmp_path_factory.mktemp("small") / "b", 125, 2_500)


@pytest.fixture(scope="module")
def large(tmp_path_factory: pytest.TempPathFactory) -> Book:
    return written(tmp_path_factory.mktemp("large") / "b", 500, 10_000)


def peak_mb(book: Book) -> float:
    """The most memory that a first look at the weights holds at once."""
    forget(book.path)
    tracemalloc.start()
    weigh_up_build(book.path)
    peak = tracemalloc.get_traced_memory()[1] / 1e6
    tracemalloc.stop()
    return peak


def test_time_and_memory_grow_in_proportion(race: Any, say: Any, small: Book, large: Book) -> None:
    size = large.entries / small.entries
    words = (("--version",), ("weights", small.path), ("weights", large.path))
    bare, *weights = race.processor_bests(*(race.child("-m", "ledger", *each) for each in words))
    checks = race.processor_bests(lambda: check_book(small.path), lambda: check_book(large.path))
    memory = [peak_mb(book) for book in (small, large)]
    say(
        [
            (f"weights over {large.entries} entries: s", weights[1], 2.0),
            (
                f"  over those of {small.entries}, {size:.1f} times as many",
                weights[1] / weights[0],
                GROWTH * size,
            ),
            ("check: entries a second", large.entries / checks[1], None),
            ("  over that of the small book", checks[1] / checks[0], GROWTH * size),
            ("peak memory of weights: MB", memory[1], None),
            ("  over that of the small book", memory[1] / memory[0], GROWTH * size),
        ]
    )
    assert bare < weights[0] < weights[1] < 2.0
    assert weights[1] < GROWTH * size * weights[0]
    assert checks[1] < GROWTH * size * checks[0]
    assert memory[1] < GROWTH * size * memory[0]
