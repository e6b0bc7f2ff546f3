"""The design changes in the middle of a build: compare, preview, adopt, and make good, all by commands."""

from __future__ import annotations

import json
import shlex
import shutil
from pathlib import Path
from typing import Any

import jsonschema
import pytest

SCHEMAS = Path(__file__).resolve().parents[2] / "schemas" / "output"
CODE = "built-to-earlier-iteration"
RIB_KG, CLIP_KG = 0.4, 0.02


@pytest.fixture
def later(plan: Path, tmp_path: Path) -> Path:
    """r2: the box 0.1 m wider with its outlet 10 mm up, both clips 100 mm right, the tip weight 50 g less."""
    folder = Path(shutil.copytree(plan, tmp_path / "r2"))
    for file, old, new in (
        ("plan.toml", 'name = "r1"', 'name = "r2"'),
        ("parts.csv", "0 0.2 0,", "0 0.3 0,"),
        ("parts.csv", ",,,,250", ",,,,200"),
        ("tanks.toml", "centre = [0.0, 0.25, 0.0]", "centre = [0.0, 0.25, 0.01]"),
        ("geometry/box.obj", " 0.5 ", " 0.6 "),
    ):
        text = (folder / file).read_text(encoding="utf-8")
        assert old in text, file
        (folder / file).write_text(text.replace(old, new), encoding="utf-8")
    return folder


@pytest.fixture
def half_built(bench: Any) -> Any:
    """The rib and both clips cut, the first clip fitted."""
    bench.enter("cut", pieces="RIB-L; CLIP-L/1; CLIP-L/2", sheet="BIG")
    bench.enter("fit", piece="CLIP-L/1", into="WING/LEFT")
    return bench


def compared(bench: Any, *words: object) -> Any:
    """What `compare --json` prints, held against its schema."""
    return bench.figures("compare", *words)


def asked_about(bench: Any) -> list[str]:
    """The pieces that `check` names as built to an earlier iteration."""
    return [one["where"] for one in bench.figures("check")["findings"] if one["code"] == CODE]


def test_compare_says_what_a_folder_would_change_and_writes_nothing(half_built: Any, later: Path) -> None:
    before = half_built.book.read_bytes()
    read = compared(half_built, "r1", later)
    assert half_built.book.read_bytes() == before
    assert (read["a"], read["b"], read["adopted"]) == ("r1", "r2", False)
    assert read["mass_kg"]["change"] == pytest.approx(-0.05, abs=1e-12)
    assert read["estimated_kg"]["change"] == pytest.approx(-0.05, abs=1e-12)
    assert read["capacity_m3"] == pytest.approx({"a": 0.1, "b": 0.12, "change": 0.02}, abs=1e-9)
    weights = half_built.figures("weights")["total"]
    assert (read["mass_kg"]["a"], read["cg_m"]["a"]) == (weights["best_kg"], weights["cg_m"])
    (tank,) = half_built.figures("fuel")["tanks"]
    assert read["usable_m3"]["a"] == tank["usable_m3"]
    assert read["usable_m3"]["change"] == pytest.approx(read["usable_m3"]["b"] - tank["usable_m3"], abs=1e-15)
    climb = next(one for one in read["attitudes"] if one["attitude"] == "climb")
    assert climb["trapped_m3"]["a"] == next(
        one["trapped_m3"] for one in tank["attitudes"] if one["attitude"] == "climb"
    )
    # 50 g are saved; a litre of the plan's fuel weighs 715 g.
    assert read["saved_as_fuel_m3"] == pytest.approx(0.05 / 715.0, rel=1e-9)
    assert [(one["part"], one["change"], one["why"]) for one in read["parts"]] == [
        ("CLIP-L", "changed", "placed 100.0 mm right"),
        ("TIP-L", "changed", "planned mass 0.200, was 0.250"),
    ]
    assert [(one["a_kg"], one["b_kg"]) for one in read["parts"]] == [
        pytest.approx((2 * CLIP_KG, 2 * CLIP_KG)), pytest.approx((0.25, 0.2)),
    ]  # fmt: skip
    assert [(one["piece"], one["state"]) for one in read["no_longer_fits"]] == [
        ("CLIP-L/1", "finished"), ("CLIP-L/2", "open"),
    ]  # fmt: skip


def test_a_preview_of_adopt_holds_the_same_comparison(half_built: Any, later: Path) -> None:
    before = half_built.book.read_bytes()
    preview = half_built.figures("adopt", later, "--preview")
    assert preview["comparison"] == compared(half_built, "r1", later)
    assert preview["no_longer_fits"] == preview["comparison"]["no_longer_fits"]
    words = half_built.run("adopt", half_built.book, later, "--preview")
    assert half_built.book.read_bytes() == before
    first, caution, third = words.out.splitlines()[:3]
    # Nose up by 5 degrees the outlet in front keeps a wedge: width x (its height + tan 5 / 2), 0.5 m and
    # 0 before, 0.6 m and 0.01 m now; 20 L more go in and 10.38 L more stay.
    assert first == "r2 for r1:  -0.05 kg  CG same  usable +9.6 L   2 BUILT PIECES NO LONGER FIT"
    assert "COMPUTED" in caution
    assert "for planning" in caution
    assert third == "PREVIEW: r2 is not adopted, nothing was written"


def test_each_piece_is_made_good_by_the_commands_that_compare_prints(half_built: Any, later: Path) -> None:
    assert half_built.run("adopt", half_built.book, later).code == 0
    assert asked_about(half_built) == ["CLIP-L/1", "CLIP-L/2"]
    # The first is cut again and written off, the second accepted, each by the lines of its choice.
    for piece, choice in (("CLIP-L/1", "cut again"), ("CLIP-L/2", "accept")):
        out = half_built.run("compare", half_built.book, "r1", "r2").out
        for line in commands_of(out, piece, choice):
            filled = ["BIG" if word == "SHEET" else word for word in shlex.split(line)]
            filled = [word.replace("=SHEET", "=BIG").replace("=WHY", "=measured") for word in filled]
            ran = half_built.run(*filled[1:])
            assert ran.code == 0, ran.err
    assert asked_about(half_built) == []
    read = compared(half_built, "r1", "r2")
    assert (read["no_longer_fits"], read["adopted"]) == ([], True)
    assert read["stays"] == ["RIB-L/1", "CLIP-L/2", "CLIP-L/3"]
    part = half_built.part("CLIP-L")
    assert part["best_kg"] == pytest.approx(2 * CLIP_KG, abs=1e-9)


def commands_of(out: str, piece: str, choice: str) -> list[str]:
    """The commands printed under a piece for one choice."""
    lines = out.splitlines()
    start = next(number for number, line in enumerate(lines) if line.strip().startswith(f"{piece}  "))
    found: list[str] = []
    taking = False
    for line in lines[start + 2 :]:
        if not line.strip():
            break
        words, _, command = line.partition("wingledger ")
        taking = words.strip() == choice if words.strip() else taking
        if taking:
            found.append(f"wingledger {command}")
    assert found
    return found


def test_an_iteration_that_brings_the_old_part_back_keeps_the_first_pieces(
    half_built: Any, plan: Path, later: Path, tmp_path: Path
) -> None:
    half_built.run("adopt", half_built.book, later)
    back = Path(shutil.copytree(plan, tmp_path / "r3"))
    text = (back / "plan.toml").read_text(encoding="utf-8")
    (back / "plan.toml").write_text(text.replace('name = "r1"', 'name = "r3"'), encoding="utf-8")
    adopted = half_built.figures("adopt", back)
    assert (adopted["no_longer_fits"], asked_about(half_built)) == ([], [])
    assert compared(half_built, "r2", "r3")["fits_again"] == ["CLIP-L/1", "CLIP-L/2"]
    same = compared(half_built, "R1", "r3")
    assert (same["parts"], same["mass_kg"]["change"], same["usable_m3"]["change"]) == ([], 0.0, 0.0)


def test_a_name_that_is_no_iteration_is_refused_with_those_there_are(half_built: Any) -> None:
    ran = half_built.run("compare", half_built.book, "r1", "r9")
    assert (ran.code, ran.out) == (1, "")
    assert "r9" in ran.err
    assert "choose one of: r1" in ran.err
    assert half_built.run("compare", half_built.book, "r1").code == 2
    assert half_built.run("compare", half_built.book.with_name("none"), "r1", "r1").code == 3


def test_a_plan_with_errors_is_refused_with_their_places(half_built: Any, later: Path) -> None:
    parts = (later / "parts.csv").read_text(encoding="utf-8")
    (later / "parts.csv").write_text(parts.replace(",,,,200", ",,,,heavy"), encoding="utf-8")
    ran = half_built.run("compare", half_built.book, "r1", later)
    assert (ran.code, ran.out) == (1, "")
    assert "parts.csv:6:planned_mass" in ran.err


def test_without_tanks_the_volumes_are_null_and_mass_is_compared_all_the_same(
    run: Any, plan: Path, tmp_path: Path
) -> None:
    dry = Path(shutil.copytree(plan, tmp_path / "dry"))
    (dry / "tanks.toml").unlink()
    book = tmp_path / "dry.wingledger"
    assert run("start", book, dry).code == 0
    read = run("compare", book, "r1", "r1", "--json").read
    jsonschema.validate(read, json.loads((SCHEMAS / "compare.json").read_text()))
    nothing = {"a": None, "b": None, "change": None}
    assert {read[key]["a"] for key in ("gross_m3", "capacity_m3", "caught_air_m3", "usable_m3")} == {None}
    assert (read["usable_m3"], read["tanks"], read["saved_as_fuel_m3"]) == (nothing, [], 0.0)
    assert read["mass_kg"]["change"] == 0.0
    ran = run("compare", book, "r1", "r1")
    assert ran.out.splitlines()[0] == "r1 for r1:  0.00 kg  CG same"
