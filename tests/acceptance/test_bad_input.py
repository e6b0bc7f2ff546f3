"""Bad input through the commands: its place, what is so, a remedy, exit 1, and nothing written."""

from __future__ import annotations

import json
import re
import shutil
from pathlib import Path
from typing import Any

import pytest

# kind, field at fault, fields, what is said of it
BAD_FIELDS: list[tuple[str, str, dict[str, str], str]] = [
    ("weigh", "what", {"what": "RIB.99", "reading": "4 g"}, "RIB.99"),
    (
        "weigh",
        "what",
        {"what": "RIB-L/2", "reading": "4 g"},
        "no piece 'RIB-L/2'|no piece of RIB-L has begun",
    ),
    ("lay", "piece", {"piece": "SKIN-X", "step": "1", "lots": "CLOTH"}, "SKIN-X"),
    ("lay", "lots", {"piece": "SKIN-L", "step": "1", "lots": "L999X"}, "L999X"),
    ("lay", "lots", {"piece": "SKIN-L", "step": "1", "lots": "BIG"}, "BIG"),
    ("lay", "batches", {"piece": "SKIN-L", "step": "1", "lots": "CLOTH", "batches": "B999X"}, "B999X"),
    ("cut", "sheet", {"pieces": "RIB-L", "sheet": "S999X"}, "S999X"),
    ("cut", "sheet", {"pieces": "RIB-L", "sheet": "CLOTH"}, "CLOTH"),
    ("receive", "material", {"material": "kevlar", "quantity": "5 kg"}, "kevlar"),
    ("sheet", "laminate", {"laminate": "PLY", "length": "1 m", "width": "1 m"}, "PLY"),
    ("coat", "cell", {"cell": "B9", "lot": "GREY", "mass": "3 g"}, "B9"),
    ("fit", "into", {"piece": "TIP-L", "into": "TAIL"}, "TAIL"),
    ("weigh", "scale", {"what": "TIP-L", "reading": "4 g", "scale": "W9"}, "W9"),
    ("weigh", "reading", {"what": "TIP-L", "reading": "412.3"}, "has no unit; write 412.3 g or 412.3 lb"),
    (
        "weigh",
        "reading",
        {"what": "TIP-L", "reading": "1,250 g"},
        "1250 or as 1.250; write 1250 g or 1.250 g",
    ),
    ("weigh", "reading", {"what": "TIP-L", "reading": "1.250,5 g"}, "thousands marks"),
    ("weigh", "reading", {"what": "TIP-L", "reading": "heavy"}, "'heavy' is not a number"),
    ("weigh", "reading", {"what": "TIP-L", "reading": "4 mm"}, "'mm' is not a unit of mass"),
    ("weigh", "reading", {"what": "TIP-L", "reading": "nan g"}, "is not a number"),
    ("weigh", "reading", {"what": "TIP-L", "reading": "inf g"}, "is not a number"),
    ("weigh", "reading", {"what": "TIP-L", "reading": "1e999 g"}, "is not a finite number"),
    ("weigh", "reading", {"what": "TIP-L", "reading": "1e300 kg"}, "too large to be measured"),
    ("weigh", "reading", {"what": "TIP-L", "reading": "1e-300 kg"}, "too small to be measured"),
    ("weigh", "reading", {"what": "TIP-L", "reading": "-412 g"}, "is below zero"),
    ("weigh", "reading", {"what": "TIP-L", "reading": "412 g; -1 g"}, "is below zero"),
    ("sheet", "length", {"laminate": "SHEET", "length": "0 m", "width": "1 m"}, "is zero"),
    ("receive", "quantity", {"material": "lam resin", "quantity": "5"}, "has no unit"),
    (
        "receive",
        "quantity",
        {"material": "lam resin", "quantity": "5 gal"},
        "US gal or imp gal|US or imperial",
    ),
    ("receive", "expiry", {"material": "lam resin", "quantity": "5 kg", "expiry": "03/04/26"}, "2026-03-04"),
    ("receive", "ratio", {"material": "lam resin", "quantity": "5 kg", "ratio": "27"}, "is not a mix ratio"),
    ("lay", "step", {"piece": "SKIN-L", "step": "one", "lots": "CLOTH"}, "is not a whole number"),
    (
        "mix",
        "humidity",
        {
            **dict.fromkeys(("resin_lot", "hardener_lot"), "RESIN"),
            "resin": "1 g",
            "hardener": "1 g",
            "humidity": "140 %",
        },
        "more than the whole",
    ),
    ("note", "at", {"text": "a", "at": "2199-01-01T00:00:00Z"}, "has not come yet"),
    ("note", "at", {"text": "a", "at": "yesterday"}, "is not a date"),
    ("note", "text", {"text": "half \udcff"}, "is not text"),
]


def contents(folder: Path) -> dict[str, bytes]:
    return {path.name: path.read_bytes() for path in folder.iterdir() if path.is_file()}


@pytest.mark.parametrize("bad", BAD_FIELDS, ids=lambda bad: f"{bad[0]} {bad[1]}")
def test_a_bad_field_is_refused_wherever_it_comes_from(
    bench: Any, tmp_path: Path, bad: tuple[str, str, dict[str, str], str]
) -> None:
    kind, column, fields, said = bad
    rows = tmp_path / "rows.jsonl"
    good = json.dumps({"kind": "note", "text": "fine"})
    rows.write_text(f"{good}\n{json.dumps({'kind': kind, **fields})}\n", encoding="utf-8")
    before = contents(tmp_path)
    alone = bench.run("enter", bench.book, kind, *(f"{word}={text}" for word, text in fields.items()))
    among = bench.run("enter", bench.book, "--from", rows)
    for ran, place in ((alone, column), (among, f"rows.jsonl:2:{column}")):
        assert (ran.code, ran.out) == (1, ""), ran.err
        (line,) = ran.err.splitlines()
        assert re.fullmatch(rf"STOP  {re.escape(place)}  .*({said}).*", line), line
        assert re.search(r"; [a-z]", line), line
    assert contents(tmp_path) == before


# file, old text, new text, place, what is said of it
BAD_PLANS: dict[str, tuple[str, str, str, str, str]] = {
    "drawing unit that contradicts": (
        "parts.csv",
        "geometry/rib.dxf,m,",
        "geometry/rib.dxf,mm,",
        "parts.csv:3:geometry_unit",
        "says its unit is m and the plan says mm",
    ),
    "unknown laminate": ("parts.csv", "skin,SIX,", "skin,SEVEN,", "parts.csv:2:made_of", "SEVEN"),
    "unknown material": (
        "laminates.csv",
        "SIX,,3,twill",
        "SIX,,3,kevlar",
        "laminates.csv:5:material",
        "kevlar",
    ),
    "unknown column": (
        "materials.csv",
        "pot_life [min]",
        "pot_live [min]",
        "materials.csv:1:pot_live",
        "write pot_life",
    ),
    "unknown key": (
        "tanks.toml",
        "diameter = 0.05",
        "diametre = 0.05",
        "tanks.toml:20:diametre",
        "write diameter",
    ),
    "bare number": (
        "tanks.toml",
        'length_unit = "m"\n',
        "",
        "tanks.toml:length_unit",
        'write length_unit = "mm"',
    ),
    "bare mass": (
        "parts.csv",
        "planned_mass [g]",
        "planned_mass",
        "parts.csv:6:planned_mass",
        "has no unit; write 250 g",
    ),
    "thousands comma": (
        "parts.csv",
        ",250\n",
        ',"1,250 g"\n',
        "parts.csv:6:planned_mass",
        "1250 or as 1.250; write 1250 g or 1.250 g",
    ),
    "not a number": ("parts.csv", ",250\n", ",nan\n", "parts.csv:6:planned_mass", "'nan' is not a mass"),
    "not finite": ("parts.csv", ",250\n", ",1e999\n", "parts.csv:6:planned_mass", "is not a finite number"),
    "negative": ("parts.csv", ",250\n", ",-250\n", "parts.csv:6:planned_mass", "is below zero"),
    "negative density": ("materials.csv", ",1150,", ",-1150,", "materials.csv:3:density", "is below zero"),
    "axes not square": (
        "parts.csv",
        "0 0 0,1 0 0,0 0 1",
        "0 0 0,1 0 0,0.1 0 1",
        "parts.csv:3:up_axis",
        "degrees from square",
    ),
    "axis without direction": (
        "parts.csv",
        "0 0 0,1 0 0,0 0 1",
        "0 0 0,0 0 0,0 0 1",
        "parts.csv:3:across",
        ".",
    ),
    "path that leaves the folder": (
        "parts.csv",
        "geometry/rib.dxf",
        "../plan/geometry/rib.dxf",
        "parts.csv:3:geometry",
        "folder",
    ),
    "path from the root": (
        "tanks.toml",
        '"geometry/box.obj"',
        '"/etc/hostname"',
        "tanks.toml:7:mesh",
        "folder",
    ),
    "up not upward": (
        "plan.toml",
        "pitch_deg = 5.0",
        "pitch_deg = 175.0",
        "plan.toml:11",
        "does not point to the upper side",
    ),
    "up taken away by an acceleration": (
        "plan.toml",
        "pitch_deg = 5.0",
        "az_g = -1.0",
        "plan.toml:11",
        "does not point to the upper side",
    ),
    "opening to nowhere": ("tanks.toml", '["B1", "vent"]', '["B1", "sky"]', "tanks.toml:24:between", "sky"),
    "a table for a name": (
        "tanks.toml",
        'name = "outlet"',
        "name = {a = 1}",
        "tanks.toml:9:name",
        "is not text",
    ),
    "a number for two cells": (
        "tanks.toml",
        '["B1", "vent"]',
        "7",
        "tanks.toml:24:between",
        "is not two names",
    ),
    "an opening beyond the sky": (
        "tanks.toml",
        "[0.5, 0.25, 0.2]",
        "[1e308, 0.25, 0.2]",
        "tanks.toml:19:centre",
        "too large to be measured",
    ),
    "a mesh beyond the sky": (
        "geometry/box.obj",
        "v 1 0.5 0.2",
        "v 1e200 0.5 0.2",
        "tanks.toml:7:mesh",
        "from the datum",
    ),
}


@pytest.mark.parametrize("damage", BAD_PLANS)
def test_a_bad_plan_is_refused_at_its_place_by_start_and_adopt(
    bench: Any, plan: Path, tmp_path: Path, damage: str
) -> None:
    file, old, new, place, said = BAD_PLANS[damage]
    spoilt = Path(shutil.copytree(plan, tmp_path / "spoilt"))
    text = (spoilt / file).read_text(encoding="utf-8")
    assert old in text
    (spoilt / file).write_text(text.replace(old, new, 1), encoding="utf-8")
    if file != "plan.toml":
        toml = (spoilt / "plan.toml").read_text(encoding="utf-8")
        (spoilt / "plan.toml").write_text(toml.replace('name = "r1"', 'name = "r2"', 1), encoding="utf-8")
    before = contents(tmp_path)
    for words in (
        ("start", tmp_path / "new.wingledger", spoilt),
        ("adopt", bench.book, spoilt),
        ("adopt", bench.book, spoilt, "--preview"),
    ):
        ran = bench.run(*words)
        assert (ran.code, ran.out) == (1, ""), ran.err
        first = ran.err.splitlines()[0]
        assert re.match(rf"STOP  {re.escape(place)}\b.*({said})", first), ran.err
        assert re.search(r"; \w", first), first
        assert "Traceback" not in ran.err
    assert contents(tmp_path) == before


def test_a_mirror_of_no_part_is_refused(run: Any, plan: Path, tmp_path: Path) -> None:
    spoilt = Path(shutil.copytree(plan, tmp_path / "spoilt"))
    parts = (spoilt / "parts.csv").read_text(encoding="utf-8").splitlines()
    rows = [f"{parts[0]},mirror_of", *(f"{row}," for row in parts[1:])]
    rows.append("SKIN-R,skin,skin,R,WING/RIGHT,skin,SIX,,,,,,,,SKIN-Q")
    (spoilt / "parts.csv").write_text("\n".join(rows) + "\n", encoding="utf-8")
    ran = run("start", tmp_path / "new.wingledger", spoilt)
    assert (ran.code, ran.out) == (1, "")
    assert ran.err.splitlines() == [
        "STOP  parts.csv:7:mirror_of  there is no part 'SKIN-Q'; name the part on the other side"
    ]
    assert not (tmp_path / "new.wingledger").exists()


def test_every_problem_of_a_plan_is_told_at_once_each_with_its_place(
    run: Any, plan: Path, tmp_path: Path
) -> None:
    spoilt = Path(shutil.copytree(plan, tmp_path / "spoilt"))
    several = (
        "unknown material",
        "negative density",
        "thousands comma",
        "axes not square",
        "up not upward",
        "opening to nowhere",
        "drawing unit that contradicts",
    )
    places = []
    for damage in several:
        file, old, new, place, _ = BAD_PLANS[damage]
        text = (spoilt / file).read_text(encoding="utf-8")
        (spoilt / file).write_text(text.replace(old, new, 1), encoding="utf-8")
        places.append(place)
    ran = run("start", tmp_path / "new.wingledger", spoilt)
    assert (ran.code, ran.out) == (1, "")
    told = [line.split()[1] for line in ran.err.splitlines()]
    # A row whose axes are wrong is not opened, so its drawing's unit is told once they are right.
    missing = [place for place in places if not any(one.startswith(place) for one in told)]
    assert missing in ([], ["parts.csv:3:geometry_unit"])
    assert not (tmp_path / "new.wingledger").exists()


@pytest.mark.parametrize(
    ("text", "place"),
    [
        ("text\nx\n", "rows.csv:1"),
        ("kind,colour\nnote,red\n", "rows.csv:1:colour"),
        ("kind,text,text\nnote,a,b\n", "rows.csv:1:text"),
        ("kind;text\nnote;a\n", "rows.csv:1"),
        ('kind,text\nnote,"open\n', "rows.csv:2"),
        ("kind,text\nnote,a,b,c\n", "rows.csv:2"),
        ("kind,text\n,a\n", "rows.csv:2:kind"),
        ("kind,text\nnote,a\x00\n", "rows.csv:2"),
        ("kind,reading [mm]\nweigh,4\n", "rows.csv:2:reading"),
    ],
)
def test_a_file_of_entries_that_cannot_be_read_is_told_by_its_place(
    bench: Any, tmp_path: Path, text: str, place: str
) -> None:
    rows = tmp_path / "rows.csv"
    rows.write_text(text, encoding="utf-8")
    before = contents(tmp_path)
    ran = bench.run("enter", bench.book, "--from", rows)
    assert (ran.code, ran.out) == (1, ""), ran.err
    assert ran.err.startswith(f"STOP  {place}"), ran.err
    assert contents(tmp_path) == before


@pytest.mark.parametrize(
    "line",
    [
        "{",
        "[]",
        '"note"',
        '{"text": "a"}',
        '{"kind": 7, "text": "a"}',
        '{"kind": "note", "text": "a", "text": "b"}',
        '{"kind": "weigh", "what": "TIP-L", "reading": 412}',
        '{"kind": "weigh", "what": "TIP-L", "reading": NaN}',
        '{"kind": "note", "text": {"a": 1}}',
        '{"kind": "note", "text": "\\ud800"}',
        '{"kind": "lay", "piece": ["SKIN-L", "RIB-L"], "step": 1, "lots": "CLOTH"}',
        "[" * 5000,
    ],
)
def test_a_line_of_json_that_cannot_be_read_is_told_by_its_place(
    bench: Any, tmp_path: Path, line: str
) -> None:
    rows = tmp_path / "rows.jsonl"
    rows.write_text(f'{{"kind": "note", "text": "fine"}}\n{line}\n', encoding="utf-8")
    before = contents(tmp_path)
    ran = bench.run("enter", bench.book, "--from", rows)
    assert (ran.code, ran.out) == (1, ""), ran.err
    assert ran.err.startswith("STOP  rows.jsonl:2"), ran.err
    assert contents(tmp_path) == before
