"""Every command with every option of the format: its output, its exit code, and what goes where."""

from __future__ import annotations

import json
import math
import shutil
from datetime import datetime, timedelta
from pathlib import Path
from typing import Any

import jsonschema
import pytest

SCHEMAS = Path(__file__).resolve().parents[2] / "schemas" / "output"
FLOOR_M2, GROSS_M3 = 0.5, 0.1
COMMANDS = (
    "open",
    "demo",
    "loft",
    "start",
    "adopt",
    "enter",
    "withdraw",
    "correct",
    "weights",
    "fuel",
    "trace",
    "compare",
    "check",
    "backup",
    "restore",
    "rescue",
)


def test_these_are_the_commands(run: Any) -> None:
    listed = run("--help").out.split("Commands:\n")[1]
    assert tuple(line.split()[0] for line in listed.splitlines() if line[2:3].strip()) == COMMANDS


def test_start_makes_a_book_and_never_overwrites(run: Any, plan: Path, tmp_path: Path) -> None:
    book = tmp_path / "new.wingledger"
    ran = run("start", book, plan, "--by", "AB", "--json")
    assert (ran.code, ran.read["iteration"], ran.read["seq"]) == (0, "r1", 1)
    jsonschema.validate(ran.read, json.loads((SCHEMAS / "adopt.json").read_text()))
    before = book.read_bytes()
    again = run("start", book, plan)
    assert (again.code, again.out, book.read_bytes()) == (1, "", before)
    assert sorted(path.name for path in tmp_path.iterdir()) == ["new.wingledger"]


def test_adopt_says_what_no_longer_fits_and_a_preview_writes_nothing(
    bench: Any, plan: Path, tmp_path: Path
) -> None:
    bench.enter("cut", pieces="RIB-L; CLIP-L", sheet="BIG")
    second = Path(shutil.copytree(plan, tmp_path / "r2"))
    text = (second / "plan.toml").read_text(encoding="utf-8")
    (second / "plan.toml").write_text(text.replace('name = "r1"', 'name = "r2"'), encoding="utf-8")
    parts = (second / "parts.csv").read_text(encoding="utf-8")
    (second / "parts.csv").write_text(parts.replace("0 0.2 0,", "0 0.3 0,"), encoding="utf-8")
    before = bench.book.read_bytes()
    preview = bench.figures("adopt", second, "--preview")
    assert [one["piece"] for one in preview["no_longer_fits"]] == ["CLIP-L/1"]
    assert (preview["seq"], preview["digest"], bench.book.read_bytes()) == (None, None, before)
    adopted = bench.figures("adopt", second)
    assert adopted["no_longer_fits"] == preview["no_longer_fits"]
    assert (bench.rows()[-1]["kind"], bench.rows()[-1]["digest"]) == ("adopt", adopted["digest"])


def test_enter_prints_its_number_what_it_gave_out_and_the_last_digest(bench: Any) -> None:
    ran = bench.run("enter", bench.book, "receive", "material=twill", "quantity=2 m2", "by=MT")
    lines = ran.out.splitlines()
    assert (ran.code, lines[0].split()[:3], lines[-1].split()[0]) == (0, ["entry", "8", "receive"], "digest")
    assert lines[-1].split()[1] == bench.rows()[-1]["digest"]
    assert bench.rows()[-1]["by"] == "MT"


def test_an_entry_is_read_back_as_it_was_typed_and_as_it_was_understood(bench: Any) -> None:
    words = ("receive", "material=lam resin", "quantity=2 US gal", "lot=R-9")
    assert "R-9 received: 2 US gal (0.00757082 m3) lam resin" in bench.run("enter", bench.book, *words).out
    words = ("instrument", "instrument=W7", "what=scale", "resolution=0.1 oz")
    assert "scale W7 entered, reads to 0.1 oz (2.83495 g)" in bench.run("enter", bench.book, *words).out
    words = ("weigh", "what=TIP-L", "reading=9 oz", "scale=W7")
    assert "TIP-L/1 weighed at 9 oz (255.146 g)" in bench.run("enter", bench.book, *words).out
    words = ("weigh", "what=TIP-L", "reading=+ 250,5 g", "scale=W1")
    assert "TIP-L/1 weighed at 250.5 g" in bench.run("enter", bench.book, *words).out
    words = ("weigh", "what=TIP-L", "reading=250 g; 252 g", "scale=W1")
    assert "TIP-L/1 weighed at 251 g" in bench.run("enter", bench.book, *words).out


def test_an_entry_may_be_five_minutes_ahead_of_this_clock_and_no_more(bench: Any) -> None:
    now = datetime.now().astimezone()
    soon, later = (now + timedelta(minutes=minutes) for minutes in (4, 6))
    assert bench.run("enter", bench.book, "note", "text=a", f"at={soon.isoformat()}").code == 0
    ran = bench.run("enter", bench.book, "note", "text=b", f"at={later.isoformat()}")
    assert (ran.code, ran.out) == (1, "")
    assert "has not come yet" in ran.err
    bench.enter("note", text="no offset given", at="2026-03-02T09:30")
    moment = datetime.fromisoformat(bench.rows()[-1]["at"])
    assert moment.utcoffset() is not None
    assert moment.replace(tzinfo=None) == datetime(2026, 3, 2, 9, 30)


def test_weights_on_paper_and_as_figures_say_the_same(bench: Any) -> None:
    bench.enter("weigh", what="TIP-L", reading="251 g", scale="W1", state="finished")
    read = bench.figures("weights")
    assert set(read) == {"iteration", "total", "parts", "off_plan", "forecast"}
    # skin 0.5 m2 x 6 x 400 g; rib 0.2 m2 and two clips of 0.01 m2 at 2000 g; bead 1 m x 40 g; tip 250 g
    wanted = {"SKIN-L": 1.2, "RIB-L": 0.4, "CLIP-L": 0.04, "JOINT-L": 0.04, "TIP-L": 0.25}
    assert {one["part"]: one["estimated_kg"] for one in read["parts"]} == pytest.approx(wanted, abs=1e-12)
    assert read["total"]["estimated_kg"] == pytest.approx(1.93, abs=1e-12)
    assert read["total"]["best_kg"] == pytest.approx(1.931, abs=1e-12)
    assert read["total"]["actual_kg"] == pytest.approx(0.251, abs=1e-12)
    assert read["total"]["share_actual"] == pytest.approx(0.251 / 1.931, abs=1e-12)
    assert read["forecast"] == {"mass_kg": None, "low_kg": None, "high_kg": None}
    planned = next(one for one in read["parts"] if one["part"] == "SKIN-L")
    assert (planned["calculated_kg"], planned["actual_kg"], planned["state"]) == (None, None, "planned")
    ran = bench.run("weights", bench.book)
    assert ran.code == 0
    assert "now         1.93 kg" in ran.out
    assert "not approved weight and balance" in ran.out


def test_fuel_options_each_do_what_they_say(bench: Any) -> None:
    plain = bench.figures("fuel")["tanks"][0]
    assert [one["attitude"] for one in plain["attitudes"]] == ["ground", "climb"]
    assert plain["gross_m3"] == pytest.approx(GROSS_M3, rel=1e-12)
    table = plain["attitudes"][0]["table"]
    assert (len(table), table[0]["volume_m3"], table[0]["cg_m"]) == (101, 0.0, None)
    assert table[-1]["volume_m3"] == pytest.approx(GROSS_M3, rel=1e-12)
    assert table[50]["surface_m2"] == pytest.approx(FLOOR_M2, rel=1e-9)
    assert table[50]["cg_m"] == pytest.approx([0.5, 0.25, 0.05], abs=1e-9)
    climb = bench.figures("fuel", "--attitude", "climb", "--levels", "7")["tanks"][0]
    assert [(one["attitude"], len(one["table"])) for one in climb["attitudes"]] == [("climb", 8)]
    both = bench.figures("fuel", "--attitude", "climb", "--attitude", "ground")["tanks"][0]
    assert [one["attitude"] for one in both["attitudes"]] == ["ground", "climb"]
    asked = bench.figures("fuel", "--pitch", "-4", "--roll", "3")["tanks"][0]
    last = asked["attitudes"][-1]
    assert (last["attitude"], last["pitch_deg"], last["roll_deg"]) == ("asked", -4.0, 3.0)
    sine, cosine = math.sin(math.radians(-4)), math.cos(math.radians(-4))
    roll = math.radians(3)
    wanted = [-sine, -cosine * math.sin(roll), cosine * math.cos(roll)]
    assert last["up"] == pytest.approx(wanted, abs=1e-12)
    assert asked["usable_m3"] == plain["usable_m3"]
    cold = bench.figures("fuel", "--temperature", "-20 C")["tanks"][0]["attitudes"][1]["drained"]
    warm = bench.figures("fuel", "--temperature", "35 C")["tanks"][0]["attitudes"][1]["drained"]
    assert cold[-1]["mass_kg"] > warm[-1]["mass_kg"]


def test_capacity_is_usable_and_the_worst_trapped(bench: Any) -> None:
    tank = bench.figures("fuel")["tanks"][0]
    trapped = {one["attitude"]: one["trapped_m3"] for one in tank["attitudes"] if one["flight"]}
    assert tank["governing_attitude"] == "climb"
    assert tank["usable_m3"] == pytest.approx(tank["capacity_m3"] - trapped["climb"], abs=1e-12)
    # In a climb of 5 deg a hole at the front edge of the floor leaves a wedge 1 m long, tan 5 deg high.
    assert trapped["climb"] == pytest.approx(0.5 * 0.5 * math.tan(math.radians(5)), abs=1e-6)
    (cell,) = tank["attitudes"][1]["cells"]
    assert (cell["cell"], cell["trapped_by"]) == ("B1", "outlet")


def test_a_plan_without_tanks_prints_an_empty_list(run: Any, plan: Path, tmp_path: Path) -> None:
    dry = Path(shutil.copytree(plan, tmp_path / "dry"))
    (dry / "tanks.toml").unlink()
    book = tmp_path / "dry.wingledger"
    assert run("start", book, dry).code == 0
    assert run("fuel", book, "--json").read == {"tanks": [], "feeds": []}
    assert run("fuel", book).code == 0


def test_trace_follows_a_cup_both_ways_and_says_so_in_plain_words(bench: Any) -> None:
    bench.enter("mix", resin_lot="RESIN", resin="100 g", hardener_lot="HARD", hardener="27 g", batch="CUP")
    assert bench.run("trace", bench.book, "CUP").out.splitlines()[1] == "in no piece yet"
    bench.enter("lay", piece="SKIN-L", step="1", lots="CLOTH", batches="CUP 60 g")
    assert bench.run("trace", bench.book, "CUP").out.splitlines()[1] == "in 1 piece, open"
    bench.enter("build_up", piece="TIP-L", mass="5 g", batch="CUP")
    assert bench.run("trace", bench.book, "cup").out.splitlines()[1] == "in 2 pieces: 2 open"
    bench.enter("fit", piece="TIP-L", into="WING/LEFT")
    read = bench.figures("trace", "CUP")
    assert (read["what"], read["kind"], read["entries"]) == ("CUP", "batch", [8, 9, 10])
    assert {one["what"]: one["mass_kg"] for one in read["made_from"]} == {"RESIN": 0.1, "HARD": 0.027}
    into = {one["what"]: one for one in read["went_into"]}
    assert into["SKIN-L/1"]["mass_kg"] == pytest.approx(0.06)
    assert [one["what"] for one in into["TIP-L/1"]["went_into"]] == ["WING/LEFT"]
    back = bench.figures("trace", "SKIN-L")
    cup = next(one for one in back["made_from"] if one["what"] == "CUP")
    assert {one["what"] for one in cup["made_from"]} == {"RESIN", "HARD"}
    # A piece goes into no piece as a rule, so nothing is said of that.
    assert bench.run("trace", bench.book, "SKIN-L").out.splitlines()[1] == ""


def test_check_of_a_sound_book_ends_with_0_and_a_stop_ends_it_with_1(bench: Any) -> None:
    ran = bench.run("check", bench.book, "--json")
    assert ran.code == 0
    assert (ran.read["chain_ok"], ran.read["replay_ok"], ran.read["entries"]) == (True, True, 7)
    assert bench.run("check", bench.book, "--last", ran.read["short_code"]).code == 0
    assert bench.run("check", bench.book, "--last", ran.read["last_digest"].upper()).code == 0
    bench.enter("mix", resin_lot="RESIN", resin="500 g", hardener_lot="HARD", hardener="250 g", scale="W1")
    ran = bench.run("check", bench.book)
    assert ran.code == 1
    assert "STOP" in ran.err
    assert "STOP  entry" not in ran.out


def test_a_backup_is_restored_and_goes_on(bench: Any, tmp_path: Path) -> None:
    copy, again = tmp_path / "copy.wingledger", tmp_path / "again.wingledger"
    before = bench.book.read_bytes()
    for words in (("backup", bench.book, copy), ("restore", copy, again)):
        ran = bench.run(*words)
        assert (ran.code, ran.err) == (0, "")
        assert bench.rows()[-1]["digest"] in ran.out
    assert bench.run("enter", again, "note", "text=on").code == 0
    assert bench.run("check", again, "--json").read["entries"] == 8
    assert bench.book.read_bytes() == before
    for words in (("backup", bench.book, copy), ("restore", copy, bench.book), ("rescue", copy, again)):
        ran = bench.run(*words)
        assert (ran.code, ran.out) == (1, ""), words
        assert "something stands at this path already" in ran.err
    assert bench.book.read_bytes() == before


def test_what_can_be_proved_of_a_damaged_book_is_rescued(bench: Any, tmp_path: Path) -> None:
    rows = tmp_path / "rows.csv"
    rows.write_text("kind,text\n" + f"note,{'x' * 900}\n" * 60, encoding="utf-8")
    assert bench.run("enter", bench.book, "--from", rows).code == 0
    whole = bench.book.read_bytes()
    bench.book.write_bytes(whole[: len(whole) * 4 // 5])
    damaged = bench.book.read_bytes()
    assert bench.run("weights", bench.book).code == 3
    new = tmp_path / "new.wingledger"
    ran = bench.run("rescue", bench.book, new)
    assert ran.code == 0, ran.err
    read = bench.run("check", new, "--json").read
    assert (read["chain_ok"], read["replay_ok"]) == (True, True)
    assert read["entries"] >= 7
    assert f"entries      {read['entries']}" in ran.out
    assert bench.book.read_bytes() == damaged


def test_the_demo_is_never_written_over_and_its_report_fits_a_terminal(run: Any, tmp_path: Path) -> None:
    ran = run("demo", tmp_path / "try", "--report")
    assert ran.code == 0
    assert len(ran.out.splitlines()) <= 24
    assert max(map(len, ran.out.splitlines())) <= 80
    again = run("demo", tmp_path / "try", "--report")
    assert (again.code, again.out) == (1, "")


# -- how commands end

WRONG_USE: list[tuple[str, ...]] = [
    ("weigh", "BOOK"),
    ("weights",),
    ("weights", "BOOK", "more"),
    ("weights", "BOOK", "--yaml"),
    ("trace", "BOOK"),
    ("enter", "BOOK"),
    ("enter", "BOOK", "scribble", "text=x"),
    ("enter", "BOOK", "adopt", "plan=x", "title=y"),
    ("enter", "BOOK", "note", "colour=red", "text=x"),
    ("enter", "BOOK", "note", "text"),
    ("enter", "BOOK", "note", "text=a", "text=b"),
    ("enter", "BOOK", "note", "text=a", "--from", "rows.csv"),
    ("enter", "BOOK", "--from", "absent.csv"),
    ("enter", "BOOK", "--from", "."),
    ("enter", "BOOK", "--from", "BOOK"),
    ("withdraw", "BOOK", "8"),
    ("withdraw", "BOOK", "last", "--why", "x"),
    ("correct", "BOOK", "2"),
    ("correct", "BOOK", "2", "colour=red"),
    ("fuel", "BOOK", "--levels", "0"),
    ("fuel", "BOOK", "--levels", "1.5"),
    ("fuel", "BOOK", "--pitch", "up"),
    ("fuel", "BOOK", "--pitch", "inf"),
    ("fuel", "BOOK", "--temperature", "20"),
    ("fuel", "BOOK", "--temperature", "-300 C"),
    ("start", "new.wingledger", "absent"),
    ("start", "absent/new.wingledger", "PLAN"),
    ("start", "new.wingledger", "BOOK"),
    ("adopt", "BOOK", "absent"),
    ("backup", "BOOK", "absent/copy.wingledger"),
    ("restore", "BOOK", "absent/copy.wingledger"),
    ("rescue", "BOOK", "absent/copy.wingledger"),
]
REFUSED: list[tuple[str, ...]] = [
    ("trace", "BOOK", "nothing"),
    ("trace", "BOOK", ""),
    ("fuel", "BOOK", "--attitude", "upside down"),
    ("fuel", "BOOK", "--pitch", "91"),
    ("fuel", "BOOK", "--roll", "180"),
    ("check", "BOOK", "--last", "not a code"),
    ("withdraw", "BOOK", "99", "--why", "x"),
    ("withdraw", "BOOK", "1", "--why", "x"),
    ("withdraw", "BOOK", "8", "--why", ""),
    ("correct", "BOOK", "99", "text=b"),
    ("adopt", "BOOK", "PLAN"),
    ("start", "BOOK", "PLAN"),
    ("backup", "BOOK", "BOOK"),
    ("restore", "BOOK", "BOOK"),
    ("rescue", "BOOK", "BOOK"),
    ("enter", "BOOK", "note"),
    ("enter", "BOOK", "note", "text="),
    ("enter", "BOOK", "note", "text=a", "at=2199-01-01T00:00:00Z"),
    ("enter", "BOOK", "note", "text=a", "at=03/04/26"),
    ("enter", "BOOK", "coat", "piece=TIP-L", "cell=B1", "lot=GREY", "mass=1 g"),
    ("enter", "BOOK", "coat", "piece=TIP-L", "lot=GREY"),
]


ENDS = [*((2, words) for words in WRONG_USE), *((1, words) for words in REFUSED)]


@pytest.fixture
def beside(bench: Any, monkeypatch: pytest.MonkeyPatch) -> Path:
    """The folder of the book, as the one that commands run in."""
    monkeypatch.chdir(bench.book.parent)
    return Path(bench.book.parent)


@pytest.mark.parametrize(("code", "words"), ENDS)
def test_a_command_that_is_not_done_says_why_and_writes_nothing(
    bench: Any, plan: Path, beside: Path, code: int, words: tuple[str, ...]
) -> None:
    bench.enter("note", text="begun")
    real = {"BOOK": str(bench.book), "PLAN": str(plan)}
    before = {path: path.read_bytes() for path in beside.iterdir()}
    ran = bench.run(*(real.get(word, word) for word in words))
    assert (ran.code, ran.out) == (code, ""), ran.err
    assert ran.err.strip()
    assert "Traceback" not in ran.err
    if code == 1:
        assert all(line.startswith("STOP  ") and "; " in line for line in ran.err.splitlines()), ran.err
    assert {path: path.read_bytes() for path in beside.iterdir()} == before


ON_A_BOOK: list[tuple[str, ...]] = [
    ("open", "BOOK"),
    ("weights", "BOOK"),
    ("weights", "BOOK", "--json"),
    ("fuel", "BOOK"),
    ("trace", "BOOK", "TIP-L"),
    ("check", "BOOK"),
    ("check", "BOOK", "--json"),
    ("enter", "BOOK", "note", "text=a"),
    ("enter", "BOOK", "--from", "ROWS"),
    ("withdraw", "BOOK", "2", "--why", "x"),
    ("correct", "BOOK", "2", "resolution=2 g"),
    ("adopt", "BOOK", "PLAN"),
    ("adopt", "BOOK", "PLAN", "--preview"),
    ("backup", "BOOK", "COPY"),
    ("restore", "BOOK", "COPY"),
]
SPOILT = (
    *("absent", "empty", "a folder", "text", "another database"),
    *("truncated", "cut in its header", "newer"),
)


def spoil(book: Path, how: str) -> None:
    import contextlib
    import sqlite3

    whole = book.read_bytes()
    book.unlink()
    if how == "a folder":
        book.mkdir()
    elif how == "another database":
        with contextlib.closing(sqlite3.connect(book)) as connection:
            connection.execute("CREATE TABLE entry (seq INTEGER)")
    elif how == "newer":
        book.write_bytes(whole)
        with contextlib.closing(sqlite3.connect(book)) as connection:
            connection.execute("PRAGMA user_version = 99")
            connection.execute("PRAGMA journal_mode = DELETE")
    elif how != "absent":
        kept = {"empty": b"", "text": b"wing " * 999, "truncated": whole[:-4096]}
        book.write_bytes(kept.get(how, whole[:60]))


@pytest.mark.parametrize("how", SPOILT)
def test_a_book_that_is_none_ends_every_command_with_3_and_stays_as_it_is(
    bench: Any, plan: Path, tmp_path: Path, how: str
) -> None:
    rows = tmp_path / "rows.csv"
    rows.write_text("kind,text\nnote,a\n", encoding="utf-8")
    spoil(bench.book, how)
    real = {"BOOK": bench.book, "PLAN": plan, "ROWS": rows, "COPY": tmp_path / "copy.wingledger"}
    before = {path: path.read_bytes() for path in tmp_path.iterdir() if path.is_file()}
    for words in ON_A_BOOK:
        ran = bench.run(*(real.get(word, word) for word in words))
        assert (ran.code, ran.out) == (3, ""), (words, ran.err)
        assert ran.err.startswith(f"STOP  {bench.book}  "), (words, ran.err)
        assert "; " in ran.err
        after = {path: path.read_bytes() for path in tmp_path.iterdir() if path.is_file()}
        assert after == before, words
