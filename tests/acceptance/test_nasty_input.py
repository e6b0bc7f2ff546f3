"""Whatever is typed, every command ends as the format says: never a traceback, never half a book."""

from __future__ import annotations

import csv
import io
import re
import shutil
import sqlite3
from pathlib import Path
from typing import Any

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from ledger.model import acts  # noqa: F401  the kinds are declared when this is imported
from ledger.model.declare import KINDS

NAMES = [
    *["CLOTH", "RESIN", "HARD", "GREY", "BIG", "W1"],
    *["TIP-L", "RIB-L", "SKIN-L", "CLIP-L/1", "B1", "WING/LEFT"],
]
NUMBERS = [
    *["0", "-1", "1e308", "1e999", "-1e308", "1e-320", "nan", "inf", "99999999999999999999"],
    *["1,250", "1.250,5", "412,3", "+4.3", "0x10", "1_000", "１２", "½", "--5", "5.", ".5", "1e"],
]
UNITS = [
    *["", "g", "kg", "mm", "m", "m2", "g/m2", "kg/m3", "%", "deg", "C", "min"],
    *["gal", "US gal", "g g", "furlong"],
]
WORDS = [
    *["", " ", "\t", "\x00", "\x1b[2J", "\u202e", "\udcff", "\ufeff", "翼", "𛑃", "a" * 3000],
    *["1 0 0", "0 0 0", "1 0", "nan 0 0", "1e200 0 0", "600 mm x 400 mm", "split unknown"],
    *["100:27", "0:1", "1:0", "2026-04-03", "03/04/26", "25:00", "now"],
    *["0001-01-01T00:00", "9999-12-31T23:59:59-14:00"],
    *["../x", "/etc/passwd", "geometry", "geometry/", "geometry/skin.obj#", "geometry/box.obj#x", "#"],
    *["heavy", "yes", "x", ";", ",", '"', "'", "{}", "[]", "=1+1", "skin", "solid", "run", "item", "panel"],
    "'); DROP TABLE entry; --",
]
AMOUNTS = st.builds(
    lambda number, unit: f"{number} {unit}".strip(), st.sampled_from(NUMBERS), st.sampled_from(UNITS)
)
TEXTS = st.one_of(
    st.sampled_from(WORDS),
    AMOUNTS,
    st.sampled_from(NAMES),
    st.builds(lambda name, amount: f"{name} {amount}", st.sampled_from(NAMES), AMOUNTS),
    st.lists(st.sampled_from([*NAMES, *WORDS[:8], "4 g"]), min_size=2, max_size=3).map("; ".join),
    st.text(max_size=12),
)
FILES = ["parts.csv", "materials.csv", "laminates.csv", "plan.toml", "tanks.toml"]
VALUES = [
    *["{a=1}", "[[1]]", "true", "1979-05-27", "nan", "-inf", "[]", "0", "-5", "1e400", "''", "]]"],
    *["[nan,0,0]", "[0,0,0]", "[1e308,1e308,1e308]", "['B1','B1']", "99999999999999999999"],
]
HEADS = ["", "[x]", "[[x]]", "[fuel]", "[[attitude]]", "[[cell]]", "[[feed]]"]
TRIED = settings(
    max_examples=70,
    deadline=None,
    derandomize=True,
    database=None,
    suppress_health_check=[HealthCheck.function_scoped_fixture, HealthCheck.too_slow],
)


def count_and_digest(book: Path) -> tuple[int, str]:
    connection = sqlite3.connect(book)
    try:
        seq, digest = connection.execute("SELECT seq, digest FROM entry ORDER BY seq DESC LIMIT 1").fetchone()
        return int(seq), str(digest)
    finally:
        connection.close()


def assert_ended_well(ran: Any, *codes: int) -> None:
    assert ran.code in codes, (ran.code, ran.err)
    assert "Traceback" not in ran.err
    assert "Warning" not in ran.err
    assert not re.search(r"[\x00-\x08\x0b-\x1f\x7f\u202e\ud800-\udfff]", ran.out + ran.err)
    if ran.code != 0:
        assert ran.out == ""
        assert ran.err.strip()
    if ran.code == 1:
        assert all(re.match(r"(STOP|LOOK|note)  .*; .", line) for line in ran.err.splitlines()), ran.err


@st.composite
def entries(draw: st.DrawFn) -> tuple[str, dict[str, str]]:
    kind = KINDS[draw(st.sampled_from([word for word in KINDS if word != "adopt"]))]
    words = [field.word for field in kind.fields if field.required] + [group[0] for group in kind.one_of]
    optional = [field.word for field in kind.fields if field.word not in words]
    more = st.sampled_from([*optional, "at", "by", "with", "remark"])
    words += draw(st.lists(more, max_size=3, unique=True))
    return kind.word, {word: draw(TEXTS) for word in words}


@pytest.fixture(scope="module")
def tried_on(stocked: Path, tmp_path_factory: pytest.TempPathFactory) -> Path:
    """One book that all of the nasty entries are tried on, one after another."""
    return Path(shutil.copy(stocked, tmp_path_factory.mktemp("nasty") / "wing.wingledger"))


@TRIED
@given(entry=entries())
def test_no_text_in_any_field_of_an_entry_ends_otherwise(
    run: Any, tried_on: Path, entry: tuple[str, dict[str, str]]
) -> None:
    kind, fields = entry
    before = count_and_digest(tried_on)
    ran = run("enter", tried_on, kind, *(f"{word}={text}" for word, text in fields.items()))
    assert_ended_well(ran, 0, 1)
    after = count_and_digest(tried_on)
    assert after[0] == before[0] + (ran.code == 0)
    assert (after == before) == (ran.code != 0)


def test_the_book_they_were_tried_on_is_whole_and_has_its_figures(run: Any, tried_on: Path) -> None:
    # Runs after the test above; alone, it looks at the stock.
    for words in (("weights", tried_on), ("fuel", tried_on), ("trace", tried_on, "CLOTH")):
        assert_ended_well(run(*words), 0)
    checked = run("check", tried_on)
    assert checked.code in (0, 1)
    assert "record       whole" in checked.out
    assert "figures      as the record says" in checked.out


@pytest.fixture(scope="module")
def spoilt(plan: Path, tmp_path_factory: pytest.TempPathFactory) -> Path:
    """A plan of which one cell is changed at a time."""
    return Path(shutil.copytree(plan, tmp_path_factory.mktemp("spoilt") / "plan"))


@TRIED
@given(data=st.data())
def test_no_text_in_any_cell_of_a_plan_ends_otherwise(
    run: Any, spoilt: Path, plan: Path, data: st.DataObject
) -> None:
    file = data.draw(st.sampled_from(FILES))
    text = (plan / file).read_text(encoding="utf-8")
    (spoilt / file).write_bytes(_changed(file, text, data).encode("utf-8", "surrogatepass"))
    book = spoilt.parent / "new.wingledger"
    try:
        ran = run("start", book, spoilt)
        assert_ended_well(ran, 0, 1)
        assert book.exists() == (ran.code == 0)
        if ran.code == 0:
            for words in (("weights", book, "--json"), ("fuel", book, "--json")):
                assert_ended_well(run(*words), 0)
    finally:
        (spoilt / file).write_text(text, encoding="utf-8")
        book.unlink(missing_ok=True)


def _changed(file: str, text: str, data: st.DataObject) -> str:
    if file.endswith(".csv"):
        rows = list(csv.reader(io.StringIO(text)))
        row = data.draw(st.sampled_from(rows))
        row[data.draw(st.integers(0, len(row) - 1))] = data.draw(TEXTS)
        written = io.StringIO()
        csv.writer(written).writerows(rows)
        return written.getvalue()
    lines = text.splitlines()
    at = data.draw(st.integers(0, len(lines) - 1))
    key, equals, _ = lines[at].partition("=")
    if equals:
        value = data.draw(st.one_of(st.sampled_from(VALUES), TEXTS.map(lambda text: f'"{text}"')))
        lines[at] = f"{key}= {value}"
    else:
        lines[at] = data.draw(st.sampled_from(HEADS))
    return "\n".join(lines)
