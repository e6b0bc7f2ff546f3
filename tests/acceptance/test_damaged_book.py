"""A book with bytes gone wrong anywhere: every command ends as the format says, and none of them harms it."""

from __future__ import annotations

import json
import random
from collections.abc import Callable
from pathlib import Path
from typing import Any

import pytest

PAGE = 4096
READING = (("weights",), ("fuel",), ("trace", "TIP-L"), ("check",))
WRITING = (("enter", "note", "text=on"), ("correct", "2", "remark=on"))


def one_byte(book: bytearray, draw: random.Random) -> None:
    book[draw.randrange(len(book))] = draw.randrange(256)


def many_bytes(book: bytearray, draw: random.Random) -> None:
    at = draw.randrange(len(book) - 400)
    book[at : at + 400] = draw.randbytes(400)


def page_of_zeros(book: bytearray, draw: random.Random) -> None:
    at = draw.randrange(len(book)) // PAGE * PAGE
    book[at : at + PAGE] = bytes(PAGE)


def pages_swapped(book: bytearray, draw: random.Random) -> None:
    one, other = (draw.randrange(len(book)) // PAGE * PAGE for _ in range(2))
    book[one : one + PAGE], book[other : other + PAGE] = book[other : other + PAGE], book[one : one + PAGE]


def cut_short(book: bytearray, draw: random.Random) -> None:
    del book[draw.randrange(len(book)) :]


@pytest.mark.parametrize("seed", range(4))
@pytest.mark.parametrize("damage", [one_byte, many_bytes, page_of_zeros, pages_swapped, cut_short])
def test_a_damaged_book_ends_no_command_otherwise(
    bench: Any, tmp_path: Path, damage: Callable[[bytearray, random.Random], None], seed: int
) -> None:
    whole = bytearray(bench.book.read_bytes())
    damage(whole, random.Random(f"{damage.__name__} {seed}"))
    book = tmp_path / "damaged.wingledger"
    book.write_bytes(whole)
    for command, *words in READING:
        ran = bench.run(command, book, *words)
        assert ran.code in (0, 1, 3), (command, ran.err)
        assert ran.code == 0 or ran.err.startswith(("STOP  ", "LOOK  ")), (command, ran.err)
        assert book.read_bytes() == whole, command
    new = tmp_path / "rescued.wingledger"
    ran = bench.run("rescue", book, new)
    assert ran.code in (0, 3), ran.err
    assert book.read_bytes() == whole
    if ran.code == 0:
        read = json.loads(bench.run("check", new, "--json").out)
        assert (read["chain_ok"], read["replay_ok"]) == (True, True), read["findings"]
    for command, *words in WRITING:
        ran = bench.run(command, book, *words)
        assert ran.code in (0, 1, 3), (command, ran.err)


@pytest.mark.parametrize(
    "statement",
    [
        "UPDATE entry SET body = CAST(x'7bff7d' AS TEXT) WHERE seq = 4",
        "UPDATE entry SET digest = 'no digest' WHERE seq = (SELECT max(seq) FROM entry)",
        "UPDATE entry SET at = 'yesterday' WHERE seq = 4",
        "UPDATE entry SET kind = 'scribble' WHERE seq = 4",
        "DELETE FROM thing",
        "DELETE FROM content",
        "DELETE FROM geometry",
        "DROP TABLE piece",
        "DROP TABLE geometry",
        "DROP TABLE entry",
        "ALTER TABLE entry RENAME COLUMN body TO words",
    ],
)
def test_a_table_tampered_with_ends_no_command_otherwise(bench: Any, statement: str) -> None:
    import contextlib
    import sqlite3

    from ledger.operations.open_build import forget

    with contextlib.closing(sqlite3.connect(bench.book)) as connection:
        for (name,) in connection.execute("SELECT name FROM sqlite_master WHERE type = 'trigger'").fetchall():
            connection.execute(f"DROP TRIGGER {name}")
        connection.execute(statement)
        connection.commit()
    for command, *words in (*READING, *WRITING):
        forget(bench.book)
        ran = bench.run(command, bench.book, *words)
        assert ran.code in (0, 1, 3), (command, ran.err)
        assert "STOP  " in ran.err, command
    assert bench.run("check", bench.book).code in (1, 3)
