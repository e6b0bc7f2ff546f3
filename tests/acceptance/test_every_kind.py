"""Every kind of entry, typed alone, as a row of CSV and as a line of JSON, is the same entry."""

from __future__ import annotations

import csv
import io
import json
import shutil
from datetime import datetime, timedelta
from pathlib import Path
from typing import Any

import jsonschema
import pytest

from ledger.model import acts  # noqa: F401  the kinds are declared when this is imported
from ledger.model.declare import KINDS

SCHEMAS = Path(__file__).resolve().parents[2] / "schemas" / "entry"
# In an order in which each can be done; every field of every kind is used at least once.
ENTRIES: dict[str, dict[str, str]] = {
    "instrument": {
        "instrument": "W2",
        "what": "scale",
        "resolution": "0.1 g",
        "accuracy": "0.2 g",
        "capacity": "6 kg",
        "calibrated": "2026-01-05",
        "due": "2096-01-05",
    },
    "receive": {
        "material": "lam resin",
        "quantity": "5 kg",
        "lot": "R-77",
        "maker_code": "A7/3",
        "expiry": "2096-12-31",
        "opened": "2026-02-01",
        "certificate": "C-9",
        "density": "1160 kg/m3",
        "ratio": "100:27",
        "pot_life": "25 min",
        "limits": "dry and below 25 C",
    },
    "sheet": {
        "laminate": "SHEET",
        "length": "1200 mm",
        "width": "600 mm",
        "sheet": "P-1",
        "mass": "1450 g",
        "lots": "CLOTH",
    },
    "mix": {
        "resin_lot": "R-77",
        "resin": "600 g; 400 g",
        "hardener_lot": "HARD",
        "hardener": "270 g",
        "batch": "CUP",
        "method": "scale",
        "scale": "W2",
        "residue": "12 g",
        "bled": "3 g",
        "temperature": "21 C",
        "humidity": "45 %",
    },
    "cut": {
        "pieces": "RIB-L; CLIP-L",
        "sheet": "BIG",
        "revision": "B",
        "angle": "0 deg",
        "kerf": "3 mm",
        "offcut": "800 mm x 400 mm",
    },
    "lay": {
        "piece": "SKIN-L",
        "step": "1",
        "lots": "CLOTH 101 g",
        "batches": "CUP 99 g",
        "orientation": "0 deg",
        "area": "0.5 m2",
        "seen_by": "MT",
    },
    "bond": {
        "pieces": "JOINT-L; RIB-L",
        "batches": "CUP 41 g",
        "length": "1 m",
        "surface": "abraded, wiped",
        "peel_ply_removed": "yes",
    },
    "coat": {"piece": "SKIN-L", "lot": "GREY", "mass": "35 g"},
    "build_up": {"piece": "RIB-L", "mass": "6 g", "batch": "CUP", "why": "doubler"},
    "trim": {"piece": "RIB-L", "mass": "2.5 g", "why": "edge trim"},
    "weigh": {
        "what": "RIB-L",
        "reading": "412 g; 414 g",
        "scale": "W1",
        "tare": "3 g",
        "state": "after trim",
        "present": "bag 5 g",
    },
    "fit": {"piece": "RIB-L", "into": "WING/LEFT"},
    "hold": {"what": "CUP", "why": "smells odd"},
    "release": {"what": "CUP", "why": "test cup cured"},
    "scrap": {"what": "P-1", "why": "dropped"},
    "note": {"text": "fog, wet floor", "file": "ab" * 32, "about": "SKIN-L"},
    "withdraw": {"seq": "6", "why": "entered twice"},
    "accept": {"finding": "ply-of-other-material", "what": "entry 1", "why": "seen"},
}
# Each needs another, or another form of the same field, to be used at all.
OTHERS: list[tuple[str, dict[str, str]]] = [
    ("bond", {"pieces": "CLIP-L/1", "batches": "CUP", "mass": "8 g"}),
    ("coat", {"cell": "B1", "batch": "CUP", "areal_mass": "30 g/m2"}),
    ("trim", {"piece": "RIB-L", "area": "0.01 m2", "why": "window"}),
    ("build_up", {"piece": "RIB-L", "mass": "6 g", "lot": "GREY"}),
    ("weigh", {"what": "WING/LEFT", "reading": "2 kg", "missing": "RIB-L"}),
    ("fit", {"piece": "RIB-L", "out_of": "WING/LEFT"}),
    ("receive", {"material": "twill", "quantity": "5 m2", "areal_mass": "205 g/m2"}),
]
COMMON = {"by": "AB", "with": "CD; EF", "at": "2026-03-02T09:30:00+01:00", "remark": "in gloves"}
ORDERED: list[tuple[str, dict[str, str]]] = [
    *((kind, fields) for kind, fields in ENTRIES.items() if kind not in ("withdraw", "accept")),
    *OTHERS,
    ("withdraw", ENTRIES["withdraw"]),
]
_APART = {"seq", "id", "logged_at", "previous", "digest"}


def whole() -> list[tuple[str, dict[str, str]]]:
    return [(kind, {**fields, **COMMON}) for kind, fields in ORDERED]


def told(bench: Any) -> list[dict[str, Any]]:
    """The entries after the stock, less what the book alone decides."""
    return [{key: row[key] for key in row if key not in _APART} for row in bench.rows()[7:]]


@pytest.fixture(scope="module")
def filled(run: Any, stocked: Path, tmp_path_factory: pytest.TempPathFactory) -> Path:
    """A book with every kind in it, each typed alone."""
    book = Path(shutil.copy(stocked, tmp_path_factory.mktemp("filled") / "wing.wingledger"))
    for kind, fields in whole():
        ran = run("enter", book, kind, *(f"{word}={text}" for word, text in fields.items()))
        assert ran.code == 0, ran.err
    return book


@pytest.fixture
def one_by_one(bench: Any, filled: Path, stocked: Path) -> list[dict[str, Any]]:
    """What those entries say; the book itself is as the stock left it."""
    shutil.copy(filled, bench.book)
    entries = told(bench)
    shutil.copy(stocked, bench.book)
    return entries


def test_every_kind_and_every_field_is_tried() -> None:
    tried: dict[str, set[str]] = {}
    for kind, fields in [*ENTRIES.items(), *OTHERS]:
        tried.setdefault(kind, set()).update(fields)
    declared = {
        word: {field.word for field in kind.fields} for word, kind in KINDS.items() if word != "adopt"
    }
    assert tried == declared


def test_every_kind_has_its_published_schema_and_its_own_fields_fit_it() -> None:
    assert {path.stem for path in SCHEMAS.iterdir()} == set(KINDS) - {"adopt"}
    for kind, fields in [*ENTRIES.items(), *OTHERS]:
        schema = json.loads((SCHEMAS / f"{kind}.json").read_text())
        jsonschema.validate({"kind": kind, **fields, **COMMON}, schema)
        with pytest.raises(jsonschema.ValidationError):
            jsonschema.validate({"kind": kind, **fields, "colour": "red"}, schema)


def test_a_row_of_csv_is_the_same_entry(bench: Any, one_by_one: list[dict[str, Any]], tmp_path: Path) -> None:
    heads = list(dict.fromkeys(word for _, fields in whole() for word in fields))
    text = io.StringIO()
    writer = csv.DictWriter(text, ["kind", *heads])
    writer.writeheader()
    writer.writerows({"kind": kind, **fields} for kind, fields in whole())
    rows = tmp_path / "rows.csv"
    rows.write_text(text.getvalue(), encoding="utf-8-sig")
    bench.figures("enter", "--from", rows)
    assert told(bench) == one_by_one


def test_a_line_of_json_is_the_same_entry(
    bench: Any, one_by_one: list[dict[str, Any]], tmp_path: Path
) -> None:
    rows = tmp_path / "rows.jsonl"
    lines = [json.dumps({"kind": kind, **fields}) for kind, fields in whole()]
    rows.write_text("\n".join([*lines, ""]), encoding="utf-8")
    bench.figures("enter", "--from", rows)
    assert told(bench) == one_by_one


def test_the_text_as_typed_is_kept_beside_the_si_value(one_by_one: list[dict[str, Any]]) -> None:
    weigh = json.loads(next(row["body"] for row in one_by_one if row["kind"] == "weigh"))
    assert weigh["reading_kg"] == [0.412, 0.414]
    assert weigh["typed"]["reading"] == "412 g; 414 g"
    assert (one_by_one[0]["at"], one_by_one[0]["by"]) == ("2026-03-02T09:30:00+01:00", "AB")


def test_when_it_was_logged_is_not_when_it_was_done(bench: Any) -> None:
    bench.enter("note", text="late", at="2026-03-02T09:30:00+01:00")
    assert bench.rows()[-1]["at"] == "2026-03-02T09:30:00+01:00"
    logged = datetime.fromisoformat(bench.rows()[-1]["logged_at"])
    assert abs(datetime.now().astimezone() - logged) < timedelta(minutes=5)


def test_a_book_with_every_kind_in_it_is_whole(
    bench: Any, one_by_one: list[dict[str, Any]], filled: Path
) -> None:
    shutil.copy(filled, bench.book)
    read = bench.figures("check")
    assert (read["chain_ok"], read["replay_ok"]) == (True, True)
    assert read["entries"] == 7 + len(one_by_one)


def test_units_may_stand_in_the_head_of_a_column(bench: Any, tmp_path: Path) -> None:
    rows = tmp_path / "rows.csv"
    rows.write_text("kind,what,reading [g],state\nweigh,TIP-L,251,finished\n", encoding="utf-8")
    bench.figures("enter", "--from", rows)
    assert bench.part("TIP-L")["actual_kg"] == pytest.approx(0.251, abs=1e-12)


def test_a_finding_is_accepted_by_its_code_and_lapses_with_its_facts(bench: Any) -> None:
    bench.enter("lay", piece="SKIN-L", step="1", lots="GREY")
    found = [one for one in bench.figures("check")["findings"] if one["code"] == "ply-of-other-material"]
    assert len(found) == 1
    thing = found[0]["where"].split()[-1]
    bench.enter("accept", finding="ply-of-other-material", what=thing, why="trial piece")
    codes = {one["code"] for one in bench.figures("check")["findings"]}
    assert "ply-of-other-material" not in codes
    bench.enter("lay", piece="SKIN-L", step="2", lots="GREY")
    codes = {one["code"] for one in bench.figures("check")["findings"]}
    assert "ply-of-other-material" in codes


def test_later_rows_of_a_file_use_what_earlier_rows_made(bench: Any, tmp_path: Path) -> None:
    rows = tmp_path / "rows.csv"
    rows.write_text(
        "kind,resin_lot,resin,hardener_lot,hardener,batch,piece,step,lots,batches\n"
        "mix,RESIN,100 g,HARD,27 g,CUP,,,,\n"
        "lay,,,,,,SKIN-L,1,CLOTH,CUP 90 g\n"
        "lay,,,,,,SKIN-L,2,CLOTH,CUP 30 g\n",
        encoding="utf-8",
    )
    read = bench.figures("enter", "--from", rows)
    assert [one["seq"] for one in read["entries"]] == [8, 9, 10]
    assert read["minted"]["batch"] == "CUP"
    assert bench.figures("trace", "CUP")["entries"] == [8, 9, 10]


@pytest.mark.parametrize("ending", ["csv", "jsonl"])
def test_one_bad_row_keeps_all_out_and_every_bad_row_is_named(
    bench: Any, tmp_path: Path, ending: str
) -> None:
    good = {"kind": "note", "text": "fine"}
    bad = [
        {"kind": "weigh", "what": "RIB.99", "reading": "4 g"},
        {"kind": "weigh", "what": "TIP-L", "reading": "heavy"},
        {"kind": "receive", "material": "kevlar", "quantity": "5 kg"},
        {"kind": "cut", "pieces": "RIB-L", "sheet": "S999"},
        {"kind": "scribble", "text": "x"},
    ]
    rows = [good, *bad, good]
    file = tmp_path / f"rows.{ending}"
    if ending == "csv":
        text = io.StringIO()
        writer = csv.DictWriter(text, list(dict.fromkeys(word for row in rows for word in row)))
        writer.writeheader()
        writer.writerows(rows)
        file.write_text(text.getvalue(), encoding="utf-8")
        first = 3
    else:
        file.write_text("\n".join(map(json.dumps, rows)), encoding="utf-8")
        first = 2
    before = bench.book.read_bytes()
    ran = bench.run("enter", bench.book, "--from", file)
    assert (ran.code, ran.out) == (1, "")
    places = [line.split()[1] for line in ran.err.splitlines()]
    columns = ("what", "reading", "material", "sheet", "kind")
    assert places == [f"{file.name}:{first + at}:{column}" for at, column in enumerate(columns)]
    assert bench.book.read_bytes() == before
