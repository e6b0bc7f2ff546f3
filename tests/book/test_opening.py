"""Opening: what is no book is named and left alone; several programs write at once; a kill loses nothing."""

from __future__ import annotations

import hashlib
import multiprocessing
import os
import signal
import sqlite3
import subprocess
import sys
import textwrap
import time
from pathlib import Path
from typing import Any

import pytest

from ledger.book.checking import look_through
from ledger.book.opening import look_at_header, open_for_reading, open_for_writing
from ledger.book.reading import read_entries
from ledger.book.schema import FORMAT
from ledger.errors import BookUnusable
from ledger.model.acts import Note


def _code(error: pytest.ExceptionInfo[BookUnusable]) -> str:
    (finding,) = error.value.findings
    assert finding.do
    assert error.value.exit_code == 3
    return finding.code


def _open(book: Path) -> None:
    with open_for_reading(book):
        pass
    with open_for_writing(book):
        pass


def _state(folder: Path) -> dict[str, tuple[str, int]]:
    return {
        path.name: (hashlib.sha256(path.read_bytes()).hexdigest(), path.stat().st_mtime_ns)
        for path in folder.iterdir()
        if path.is_file()
    }


def test_an_absent_book_is_named_and_not_made(tmp_path: Path) -> None:
    for opening in (open_for_reading, open_for_writing):
        with pytest.raises(BookUnusable) as error, opening(tmp_path / "no.book"):
            pass
        assert _code(error) == "book-absent"
    assert list(tmp_path.iterdir()) == []


@pytest.mark.parametrize(
    ("content", "code"),
    [
        (b"", "book-empty"),
        (b"just some text, and more of it than a header is long" * 9, "book-not-a-book"),
        (b"short", "book-not-a-book"),
        (b"SQLite format 3\x00" + b"\x10\x00", "book-truncated"),
    ],
)
def test_a_file_that_is_no_book_is_named_and_left_alone(tmp_path: Path, content: bytes, code: str) -> None:
    book = tmp_path / "some.book"
    book.write_bytes(content)
    before = _state(tmp_path)
    for opening in (open_for_reading, open_for_writing):
        with pytest.raises(BookUnusable) as error, opening(book):
            pass
        assert _code(error) == code
    assert _state(tmp_path) == before


def test_a_folder_is_no_book(tmp_path: Path) -> None:
    with pytest.raises(BookUnusable) as error:
        _open(tmp_path)
    assert _code(error) == "book-not-a-file"


def test_another_database_is_no_book(tmp_path: Path) -> None:
    book = tmp_path / "other.db"
    connection = sqlite3.connect(book)
    connection.execute("CREATE TABLE entry (seq INTEGER PRIMARY KEY)")
    connection.close()
    before = _state(tmp_path)
    with pytest.raises(BookUnusable) as error:
        _open(book)
    assert _code(error) == "book-not-a-book"
    assert _state(tmp_path) == before


def test_a_newer_book_is_refused_unharmed(shop: Any) -> None:
    connection = sqlite3.connect(shop.book)
    connection.execute(f"PRAGMA user_version = {FORMAT + 1}")
    connection.close()
    before = _state(shop.book.parent)
    for opening in (open_for_reading, open_for_writing):
        with pytest.raises(BookUnusable) as error, opening(shop.book):
            pass
        assert _code(error) == "book-newer"
    assert _state(shop.book.parent) == before


@pytest.mark.parametrize("kept", [0.3, 0.6, 0.95])
def test_a_truncated_book_is_refused_and_left_alone(shop: Any, kept: float) -> None:
    whole = shop.book.read_bytes()
    shop.book.write_bytes(whole[: int(len(whole) * kept)])
    before = _state(shop.book.parent)
    with pytest.raises(BookUnusable) as error:
        _open(shop.book)
    assert _code(error) == "book-truncated"
    assert _state(shop.book.parent) == before


def test_reading_changes_nothing_and_leaves_no_side_files(shop: Any) -> None:
    before = _state(shop.book.parent)
    with open_for_reading(shop.book) as connection:
        assert len(list(read_entries(connection))) == 1
        with pytest.raises(sqlite3.OperationalError, match="readonly"):
            connection.execute("INSERT INTO geometry VALUES ('k', x'00')")
    assert _state(shop.book.parent) == before


def test_a_book_on_a_read_only_disk_is_read(shop: Any) -> None:
    folder = shop.book.parent
    shop.book.chmod(0o400)
    folder.chmod(0o500)
    try:
        with open_for_reading(shop.book) as connection:
            assert len(list(read_entries(connection))) == 1
    finally:
        folder.chmod(0o700)
        shop.book.chmod(0o600)


def test_an_error_inside_undoes_everything(shop: Any) -> None:
    before = _state(shop.book.parent)

    def write_and_fail() -> None:
        with open_for_writing(shop.book) as connection:
            connection.execute("INSERT INTO geometry VALUES ('k', x'00')")
            raise KeyError

    with pytest.raises(KeyError):
        write_and_fail()
    with open_for_reading(shop.book) as connection:
        assert connection.execute("SELECT count(*) FROM geometry").fetchone() == (0,)
    assert set(_state(shop.book.parent)) == set(before)


def test_what_is_written_is_synced_in_full(shop: Any) -> None:
    with open_for_writing(shop.book) as connection:
        assert connection.execute("PRAGMA synchronous").fetchone() == (2,)
        assert connection.execute("PRAGMA foreign_keys").fetchone() == (1,)
        assert connection.execute("PRAGMA journal_mode").fetchone() == ("wal",)


def test_a_reader_keeps_its_moment_while_another_writes(shop: Any) -> None:
    with open_for_reading(shop.book) as connection:
        shop.enter("note", Note(text="meanwhile"))
        assert len(list(read_entries(connection))) == 1
    with open_for_reading(shop.book) as connection:
        assert len(list(read_entries(connection))) == 2
    assert [path.name for path in shop.book.parent.iterdir()] == [shop.book.name]


def _write_many(shop: Any, who: str, count: int) -> None:
    for number in range(count):
        shop.enter("note", Note(text=f"{who} {number}"))


def test_four_programs_write_at_once_and_none_loses_an_entry(shop: Any) -> None:
    context = multiprocessing.get_context("fork")
    writers = [context.Process(target=_write_many, args=(shop, f"W{n}", 25)) for n in range(4)]
    for writer in writers:
        writer.start()
    for writer in writers:
        writer.join(60)
    assert [writer.exitcode for writer in writers] == [0, 0, 0, 0]
    with open_for_reading(shop.book) as connection:
        state = look_through(connection)
    assert state.findings == ()
    assert state.entries == 101
    texts = [entry.act.text for entry in state.logged[1:] if isinstance(entry.act, Note)]
    for n in range(4):
        assert [text for text in texts if text.startswith(f"W{n}")] == [f"W{n} {i}" for i in range(25)]
    assert [path.name for path in shop.book.parent.iterdir()] == [shop.book.name]


KILLED = """
    import sys
    from datetime import UTC, datetime
    from pathlib import Path
    from ledger.book.appending import append_entry
    from ledger.book.opening import open_for_writing
    from ledger.model.acts import Note
    NOON = datetime(2026, 3, 4, 12, tzinfo=UTC)
    number = 0
    while True:
        with open_for_writing(Path(sys.argv[1])) as connection:
            entry = append_entry(connection, "note", Note(text="x" * 2000), by="K", at=NOON, logged_at=NOON)
        print(entry.seq, entry.digest, flush=True)
"""


def test_a_kill_loses_no_acknowledged_entry_and_leaves_none_half_written(shop: Any) -> None:
    process = subprocess.Popen(
        [sys.executable, "-c", textwrap.dedent(KILLED), str(shop.book)],
        stdout=subprocess.PIPE,
        text=True,
        env={**os.environ, "PYTHONPATH": str(Path(__file__).resolve().parents[2])},
    )
    assert process.stdout is not None
    said = [process.stdout.readline() for _ in range(5)]
    time.sleep(0.013)
    process.send_signal(signal.SIGKILL)
    said += process.stdout.readlines()
    process.wait(10)
    acknowledged = [line.split() for line in said if line.endswith("\n") and len(line.split()) == 2]
    with open_for_reading(shop.book) as connection:
        state = look_through(connection)
        digests = {entry.seq: entry.digest for entry in read_entries(connection)}
    assert state.findings == ()
    for seq, digest in acknowledged:
        assert digests[int(seq)] == digest
    assert len(acknowledged) >= 5
    shop.enter("note", Note(text="after"))
    assert [path.name for path in shop.book.parent.iterdir()] == [shop.book.name]


def test_a_header_is_read_without_opening_the_database(shop: Any) -> None:
    header = look_at_header(shop.book)
    assert header.format == FORMAT
    assert header.promised_bytes == shop.book.stat().st_size
