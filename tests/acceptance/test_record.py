"""The record from outside: its table as any program reads it, its guards, its digests."""

# ruff: noqa: S608  the statements are written here, for the tables of a book of one's own

from __future__ import annotations

import contextlib
import hashlib
import json
import os
import shutil
import sqlite3
import subprocess
import sys
import time
from pathlib import Path
from typing import Any

import pytest

ROOT = Path(__file__).resolve().parents[2]
NEXT = "SELECT max(seq) + 1 FROM entry"
LAST = "(SELECT digest FROM entry ORDER BY seq DESC LIMIT 1)"
ROW = "'x', '2026-01-01T00:00:00+00:00', '2026-01-01T00:00:00+00:00', 'XX', 'note', '{}'"
FORBIDDEN = {
    "update": "UPDATE entry SET by = 'XX' WHERE seq = 2",
    "update to the same": "UPDATE entry SET by = by",
    "update of its number": "UPDATE entry SET seq = seq + 100",
    "update or replace": "UPDATE OR REPLACE entry SET seq = 2 WHERE seq = 3",
    "delete": "DELETE FROM entry WHERE seq = 2",
    "delete the last": "DELETE FROM entry WHERE seq = (SELECT max(seq) FROM entry)",
    "delete all": "DELETE FROM entry",
    "replace": f"REPLACE INTO entry VALUES (2, {ROW}, {LAST}, 'y')",
    "insert or replace": f"INSERT OR REPLACE INTO entry VALUES (2, {ROW}, {LAST}, 'y')",
    "replace by id": f"REPLACE INTO entry SELECT ({NEXT}), id, at, logged_at, by, kind, body, {LAST}, 'y' "
    "FROM entry WHERE seq = 2",
    "replace by digest": f"REPLACE INTO entry SELECT ({NEXT}), 'x', at, logged_at, by, kind, body, {LAST}, "
    "digest FROM entry WHERE seq = 2",
    "upsert": f"INSERT INTO entry VALUES (2, {ROW}, {LAST}, 'y') ON CONFLICT (seq) DO UPDATE SET by = 'XX'",
    "a row beside the chain": f"INSERT INTO entry VALUES (({NEXT}), {ROW}, '{'0' * 64}', 'y')",
    "a row after a gap": f"INSERT INTO entry VALUES (({NEXT}) + 1, {ROW}, {LAST}, 'y')",
    "a row before the first": f"INSERT INTO entry VALUES (0, {ROW}, {LAST}, 'y')",
}


def digest_from_the_table(row: dict[str, Any], previous: str) -> str:
    """The rule of the format, written again: RFC 8785 by the standard library for what entries hold."""
    told = {key: row[key] for key in ("seq", "id", "at", "logged_at", "by", "kind")}
    whole = {**told, "body": json.loads(row["body"])}
    text = _canonical(whole)
    return hashlib.sha256(previous.encode("ascii") + text.encode("utf-8")).hexdigest()


def _canonical(value: Any) -> str:
    # RFC 8785: keys by UTF-16 units, no white space, numbers as ECMAScript prints them.
    if isinstance(value, dict):
        keys = sorted(value, key=lambda key: key.encode("utf-16-be"))
        return "{" + ",".join(f"{_canonical(key)}:{_canonical(value[key])}" for key in keys) + "}"
    if isinstance(value, list):
        return "[" + ",".join(map(_canonical, value)) + "]"
    if isinstance(value, float):
        return _ecmascript(value)
    return json.dumps(value, ensure_ascii=False)


def _ecmascript(number: float) -> str:
    if number == 0:
        return "0"
    if number.is_integer() and abs(number) < 1e21:
        return str(int(number))
    mantissa, _, exponent = f"{number!r}".partition("e")
    if not exponent:
        return mantissa
    power = int(exponent)
    if -7 < power < 0:
        digits = mantissa.replace(".", "").lstrip("-")
        return ("-" if number < 0 else "") + "0." + "0" * (-power - 1) + digits
    return f"{mantissa.removesuffix('.0')}e{power:+d}"


@pytest.fixture(scope="module")
def busy_book(run: Any, stocked: Path, tmp_path_factory: pytest.TempPathFactory) -> Path:
    """A book with entries of several kinds, a correction and a withdrawal, and letters of other alphabets."""
    book = Path(shutil.copy(stocked, tmp_path_factory.mktemp("busy") / "wing.wingledger"))
    resin, hardener = (
        ("resin_lot=RESIN", "resin=0.1 g; 1e-4 g; 205 g"),
        ("hardener_lot=HARD", "hardener=55.4 g"),
    )
    for words in (
        ("enter", book, "mix", *resin, *hardener),
        ("enter", book, "weigh", "what=TIP-L", "reading=251.3 g", "scale=W1", 'remark=翼 é \\ " 𝛑 \x01 \x7f'),
        ("correct", book, 9, "reading=252.3 g"),
        ("withdraw", book, 8, "--why", "poured away"),
        ("enter", book, "note", "text=\ue000 before 😀", "by=Ünal"),
    ):
        assert run(*words).code == 0
    return book


@pytest.fixture
def busy(bench: Any, busy_book: Path) -> Any:
    """A copy of it of one's own."""
    shutil.copy(busy_book, bench.book)
    return bench


def drop_guards(book: Path) -> None:
    with contextlib.closing(sqlite3.connect(book)) as connection:
        names = [
            row[0] for row in connection.execute("SELECT name FROM sqlite_master WHERE type = 'trigger'")
        ]
        for name in names:
            connection.execute(f'DROP TRIGGER "{name}"')
        connection.commit()


def change(book: Path, *statements: str) -> None:
    with contextlib.closing(sqlite3.connect(book)) as connection:
        for statement in statements:
            connection.execute(statement)
        connection.commit()


def test_the_digests_are_recomputed_from_the_table_alone(busy: Any) -> None:
    rows = busy.rows()
    assert [row["seq"] for row in rows] == list(range(1, len(rows) + 1))
    previous = "0" * 64
    for row in rows:
        assert row["previous"] == previous
        assert row["digest"] == digest_from_the_table(row, previous)
        assert json.loads(row["body"]) is not None
        previous = row["digest"]
    assert busy.figures("check")["last_digest"] == previous


def test_the_columns_of_the_table_are_those_of_the_format(busy: Any) -> None:
    columns = ["seq", "id", "at", "logged_at", "by", "kind", "body", "previous", "digest"]
    assert list(busy.rows()[0]) == columns


@pytest.mark.parametrize("statement", FORBIDDEN.values(), ids=FORBIDDEN.keys())
@pytest.mark.parametrize("migrated", [False, True], ids=["before a migration", "after a migration"])
def test_no_plain_connection_changes_an_entry(busy: Any, statement: str, migrated: bool) -> None:
    if migrated:
        _migrate(busy.book)
    before = busy.rows()
    with contextlib.closing(sqlite3.connect(busy.book)) as connection:
        with pytest.raises(sqlite3.IntegrityError):
            connection.execute(statement)
        connection.commit()
    assert busy.rows() == before


def _migrate(book: Path) -> None:
    """Bring the book to a format that rebuilds the table of entries, which drops its triggers on the way."""
    from ledger.book.migrations import MIGRATIONS, Migration, migrate
    from ledger.book.schema import FORMAT

    step = Migration(format=FORMAT + 1, does=lambda database: database["entry"].transform(types={"seq": int}))
    with contextlib.closing(sqlite3.connect(book, isolation_level=None)) as connection:
        assert migrate(connection, book, (*MIGRATIONS, step)) is not None


@pytest.mark.parametrize(
    ("statement", "seq"),
    [
        ("UPDATE entry SET by = 'XX' WHERE seq = 3", 3),
        ("UPDATE entry SET at = '2020-01-01T00:00:00+00:00' WHERE seq = 5", 5),
        ("UPDATE entry SET body = replace(body, '5', '6') WHERE seq = 4", 4),
        ("UPDATE entry SET body = body || ' ' WHERE seq = 4", 4),
        ("UPDATE entry SET body = 'not json' WHERE seq = 4", 4),
        ("UPDATE entry SET kind = 'hold' WHERE seq = 2", 2),
        ("UPDATE entry SET digest = upper(digest) WHERE seq = 6", 6),
        ("UPDATE entry SET previous = 'x' WHERE seq = 6", 6),
        ("DELETE FROM entry WHERE seq = 4", 5),
        ("UPDATE entry SET id = 'x' WHERE seq = 1", 1),
    ],
)
def test_with_guards_dropped_check_names_the_first_entry_that_does_not_fit(
    busy: Any, statement: str, seq: int
) -> None:
    drop_guards(busy.book)
    change(busy.book, statement)
    ran = busy.run("check", busy.book, "--json")
    read = json.loads(ran.out)
    assert (ran.code, read["chain_ok"]) == (1, False)
    entries = [one["where"] for one in read["findings"] if one["where"].startswith("entry ")]
    assert entries[0].split()[1] == str(seq)
    assert "guard-missing" in {one["code"] for one in read["findings"]}


@pytest.mark.parametrize(
    "words",
    [
        ("weights", "BOOK"),
        ("fuel", "BOOK"),
        ("trace", "BOOK", "TIP-L"),
        ("enter", "BOOK", "note", "text=on"),
        ("enter", "BOOK", "--from", "ROWS"),
        ("withdraw", "BOOK", "13", "--why", "twice"),
        ("correct", "BOOK", "13", "text=on"),
        ("adopt", "BOOK", "PLAN", "--preview"),
        ("backup", "BOOK", "COPY"),
        ("restore", "BOOK", "COPY"),
        ("check", "BOOK"),
    ],
    ids=lambda words: words[0],
)
def test_with_a_broken_chain_every_command_runs_and_warns(
    busy: Any, plan: Path, tmp_path: Path, words: tuple[str, ...]
) -> None:
    from ledger.operations.open_build import forget

    drop_guards(busy.book)
    change(busy.book, "UPDATE entry SET by = 'XX' WHERE seq = 7")
    # This process has read the book before; one command on a shell has not.
    forget(busy.book)
    real = {"BOOK": busy.book, "COPY": tmp_path / "copy.wingledger", "ROWS": tmp_path / "rows.csv"}
    real["PLAN"] = Path(shutil.copytree(plan, tmp_path / "r2"))
    toml = (real["PLAN"] / "plan.toml").read_text(encoding="utf-8")
    (real["PLAN"] / "plan.toml").write_text(toml.replace('name = "r1"', 'name = "r2"'), encoding="utf-8")
    real["ROWS"].write_text("kind,text\nnote,a\nnote,b\n", encoding="utf-8")
    ran = busy.run(*(real.get(word, word) for word in words))
    assert ran.code == (1 if words[0] == "check" else 0), ran.err
    assert "STOP  entry 7" in ran.err
    assert "STOP  entry_unchanged" in ran.err
    assert ran.out


def test_a_book_cut_back_to_an_earlier_state_is_seen_by_its_last_code(busy: Any, tmp_path: Path) -> None:
    earlier = tmp_path / "earlier.wingledger"
    assert busy.run("backup", busy.book, earlier).code == 0
    code = busy.figures("check")["short_code"]
    busy.enter("note", text="one more")
    newer = busy.figures("check")
    assert busy.run("check", busy.book, "--last", code).code == 0
    ran = busy.run("check", earlier, "--last", newer["short_code"])
    assert ran.code == 1
    assert "no entry of this book has the code" in ran.err
    assert busy.run("check", earlier, "--last", newer["last_digest"]).code == 1
    mistyped = ("1" if code[0] == "0" else "0") + code[1:]
    ran = busy.run("check", busy.book, "--last", mistyped)
    assert (ran.code, ran.out) == (1, "")


def test_two_processes_that_enter_at_once_both_land(bench: Any, tmp_path: Path) -> None:
    files = []
    for who in ("AA", "BB"):
        rows = tmp_path / f"{who}.csv"
        rows.write_text("kind,text\n" + "".join(f"note,{who} {n}\n" for n in range(20)), encoding="utf-8")
        files.append((who, rows))
    children = [
        subprocess.Popen(
            [sys.executable, "-m", "ledger", "enter", bench.book, *words, "--by", who],
            stdout=subprocess.PIPE,
            stderr=subprocess.PIPE,
            env={**os.environ, "PYTHONPATH": str(ROOT)},
        )
        for who, rows in files
        for words in (("--from", rows), ("note", f"text={who} alone"))
    ]
    for child in children:
        out, err = child.communicate(timeout=60)
        assert (child.returncode, err) == (0, b""), out
    said = [row["by"] for row in bench.rows()[7:]]
    assert (said.count("AA"), said.count("BB")) == (21, 21)
    read = bench.figures("check")
    assert (read["entries"], read["chain_ok"], read["replay_ok"]) == (49, True, True)
    assert [path.name for path in bench.book.parent.glob("wing.wingledger*")] == ["wing.wingledger"]


def test_a_process_killed_while_it_enters_leaves_all_or_none(bench: Any, tmp_path: Path) -> None:
    rows = tmp_path / "rows.csv"
    rows.write_text("kind,text\n" + f"note,{'x' * 200}\n" * 3000, encoding="utf-8")
    child = subprocess.Popen(
        [sys.executable, "-m", "ledger", "enter", bench.book, "--from", rows],
        stdout=subprocess.PIPE,
        env={**os.environ, "PYTHONPATH": str(ROOT)},
    )
    deadline = time.monotonic() + 30
    while not bench.book.with_name("wing.wingledger-wal").exists() and time.monotonic() < deadline:
        time.sleep(0.001)
    time.sleep(0.1)
    child.kill()
    said = child.communicate()[0]
    read = bench.figures("check")
    assert read["entries"] == (3007 if b"digest" in said else 7)
    assert (read["chain_ok"], read["replay_ok"]) == (True, True)
    bench.enter("note", text="on")
    assert [path.name for path in bench.book.parent.glob("wing.wingledger*")] == ["wing.wingledger"]


def test_the_last_to_close_leaves_one_file(busy: Any) -> None:
    for words in (("weights",), ("fuel",), ("check",), ("trace", "TIP-L")):
        busy.run(words[0], busy.book, *words[1:])
    assert [path.name for path in busy.book.parent.glob("wing.wingledger*")] == ["wing.wingledger"]


def test_numbers_given_out_have_a_letter_a_running_number_and_a_check_character(bench: Any) -> None:
    from stdnum.iso7064 import mod_37_2

    seen = []
    rows = bench.book.with_name("rows.csv")
    rows.write_text("kind,material,quantity\n" + "receive,twill,1 m2\n" * 60, encoding="utf-8")
    for one in bench.figures("enter", "--from", rows)["entries"]:
        number = one["minted"]["lot"]
        assert number[0] == "L"
        assert number[1:4].isdigit()
        assert mod_37_2.is_valid(number)
        assert "*" not in number
        seen.append(number)
    running = [int(number[1:4]) for number in seen]
    assert running == sorted(set(running))
    # A number whose check character would be a star is skipped.
    skipped = sorted(set(range(running[0], running[-1])) - set(running))
    assert skipped
    assert all(mod_37_2.calc_check_digit(f"L{number:03d}") == "*" for number in skipped)


def test_a_number_of_ones_own_with_a_wrong_check_character_is_refused(bench: Any) -> None:
    number = bench.enter("receive", material="twill", quantity="1 m2")["minted"]["lot"]
    mistyped = number[:-1] + ("A" if number[-1] != "A" else "B")
    before = bench.book.read_bytes()
    ran = bench.run("enter", bench.book, "receive", "material=twill", "quantity=1 m2", f"lot={mistyped}")
    assert (ran.code, ran.out) == (1, "")
    assert "last character does not fit" in ran.err
    ran = bench.run("enter", bench.book, "receive", "material=twill", "quantity=1 m2", f"lot={number}")
    assert (ran.code, ran.out) == (1, "")
    assert "already stands for" in ran.err
    assert bench.book.read_bytes() == before


def test_withdrawing_the_last_plan_brings_back_the_one_before(bench: Any, plan: Path, tmp_path: Path) -> None:
    second = Path(shutil.copytree(plan, tmp_path / "r2"))
    text = (second / "plan.toml").read_text(encoding="utf-8")
    (second / "plan.toml").write_text(text.replace('name = "r1"', 'name = "r2"', 1), encoding="utf-8")
    parts = (second / "parts.csv").read_text(encoding="utf-8")
    (second / "parts.csv").write_text(parts.replace(",250\n", ",300\n"), encoding="utf-8")
    assert bench.run("adopt", bench.book, second, "--preview").code == 0
    assert bench.figures("weights")["iteration"] == "r1"
    adopted = bench.figures("adopt", second)
    assert bench.part("TIP-L")["estimated_kg"] == pytest.approx(0.3)
    bench.figures("withdraw", adopted["seq"], "--why", "not yet")
    assert bench.figures("weights")["iteration"] == "r1"
    assert bench.part("TIP-L")["estimated_kg"] == pytest.approx(0.25)
    assert bench.figures("check")["replay_ok"] is True


def test_a_withdrawal_is_never_withdrawn_and_nothing_is_withdrawn_twice(bench: Any) -> None:
    bench.enter("note", text="a")
    bench.figures("withdraw", 8, "--why", "wrong")
    before = bench.book.read_bytes()
    for seq in (8, 9, 99, 0, 1):
        ran = bench.run("withdraw", bench.book, seq, "--why", "again")
        assert (ran.code, ran.out) == (1, ""), seq
        assert ran.err.startswith("STOP  ")
    assert bench.run("correct", bench.book, "8", "text=b").code == 1
    assert bench.run("correct", bench.book, "9", "why=b").code == 2
    assert bench.book.read_bytes() == before


def test_a_correction_is_two_entries_of_one_transaction(bench: Any) -> None:
    bench.enter("weigh", what="TIP-L", reading="351 g", scale="W1", at="2026-03-02T09:30:00+01:00")
    bench.figures("correct", 8, "reading=251 g")
    withdrawn, corrected = bench.rows()[-2:]
    assert [withdrawn["kind"], corrected["kind"]] == ["withdraw", "weigh"]
    assert withdrawn["logged_at"] == corrected["logged_at"]
    assert corrected["at"] == "2026-03-02T09:30:00+01:00"
    body = json.loads(corrected["body"])
    assert (body["reading_kg"], body["scale"], body["corrects"]) == ([0.251], "W1", 8)
    before = bench.book.read_bytes()
    assert bench.run("correct", bench.book, "10", "reading=heavy").code == 1
    assert bench.run("correct", bench.book, "10", "colour=red").code == 2
    assert bench.book.read_bytes() == before


def test_a_withdrawal_that_others_depend_on_is_done_and_the_finding_appears(bench: Any) -> None:
    bench.enter("mix", resin_lot="RESIN", resin="100 g", hardener_lot="HARD", hardener="27 g", batch="CUP")
    bench.enter("lay", piece="SKIN-L", step="1", lots="CLOTH", batches="CUP")
    read = bench.figures("withdraw", 8, "--why", "never mixed")
    assert read["seq"] == 10
    assert "names-something-withdrawn" in {one["code"] for one in read["findings"]}
