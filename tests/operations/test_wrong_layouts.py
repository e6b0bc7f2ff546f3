"""Wrong layouts: the small wing with one thing changed, and what a person is told.

sample_builds/small_wing/wrong.csv names the table and its number, the key and what stands behind it;
without a key the table's head is replaced, without a value the line is taken away. What the reader
finds is there to the letter; of what only the loft can find, the place.
"""

from __future__ import annotations

import csv
import shutil
import tomllib
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import jsonschema
import pytest

from ledger.errors import Refused, Severity
from ledger.exchange.layout_toml import read_layout
from ledger.exchange.toml_text import lines_of
from ledger.operations.loft_wing import loft_wing
from ledger.reports.schemas import all_schemas

SAMPLES = Path(__file__).resolve().parents[2] / "sample_builds"
SMALL_WING = SAMPLES / "small_wing"
LAYOUT = (SMALL_WING / "layout.toml").read_text(encoding="utf-8")
LAYOUTS = sorted([SMALL_WING / "layout.toml", *SAMPLES.glob("*/layouts/*.toml")])


@dataclass(frozen=True, slots=True, kw_only=True)
class WrongLayout:
    """One change and every finding it must give, as code and text."""

    name: str
    table: str
    number: int
    key: str
    value: str
    told: tuple[tuple[str, str], ...]

    @property
    def text(self) -> str:
        """The whole file with the change in it."""
        lines = LAYOUT.splitlines()
        at = lines_of(LAYOUT)
        head: tuple[str | int, ...] = () if not self.table else (self.table,)
        if self.number:
            head = (self.table, self.number - 1)
        written = f"{self.key} = {self.value}" if self.key else self.value
        found = at.get((*head, self.key.strip('"'))) if self.key else at[head]
        if found is None:
            after = at[head] if head else 1
            lines.insert(after, written)
        elif self.value:
            lines[found - 1] = written
        else:
            del lines[found - 1]
        return "\n".join(lines) + "\n"


def wrong_layouts(found_by: str) -> list[WrongLayout]:
    """Those that the reader finds, or those that only the loft can."""
    told: dict[str, list[tuple[str, str]]] = {}
    rows: dict[str, dict[str, str]] = {}
    with (SMALL_WING / "wrong.csv").open(newline="", encoding="utf-8") as file:
        for row in csv.DictReader(file):
            if row["found_by"] == found_by:
                rows.setdefault(row["wrong"], row)
                told.setdefault(row["wrong"], []).append((row["code"], row["told"]))
    return [
        WrongLayout(
            name=name,
            table=row["table"],
            number=int(row["number"] or 0),
            key=row["key"],
            value=row["value"],
            told=tuple(told[name]),
        )
        for name, row in rows.items()
    ]


WRONG = wrong_layouts("reader")
SHAPES = wrong_layouts("loft")


def folder_with(text: str, folder: Path) -> Path:
    for name in ("materials.csv", "laminates.csv"):
        shutil.copy(SMALL_WING / name, folder)
    layout = folder / "layout.toml"
    layout.write_text(text, encoding="utf-8")
    return layout


def validator() -> jsonschema.Draft202012Validator:
    return jsonschema.Draft202012Validator(all_schemas()["layout.json"])


@pytest.mark.parametrize("wrong", WRONG, ids=lambda wrong: wrong.name)
def test_each_mistake_is_told_with_its_line_and_remedy(wrong: WrongLayout, tmp_path: Path) -> None:
    read = read_layout(folder_with(wrong.text, tmp_path))
    assert [(finding.code, str(finding)) for finding in read.findings] == list(wrong.told)
    assert read.layout is None
    assert {finding.severity for finding in read.findings} == {Severity.STOP}


def test_each_mistake_changes_the_layout_and_has_its_own_name() -> None:
    assert len(WRONG) > 100
    assert all(wrong.text != LAYOUT for wrong in (*WRONG, *SHAPES))
    with (SMALL_WING / "wrong.csv").open(newline="", encoding="utf-8") as file:
        rows = list(csv.DictReader(file))
    named = {(row["wrong"], row["table"], row["number"], row["key"], row["value"]) for row in rows}
    assert len(named) == len({row["wrong"] for row in rows})
    assert {row["found_by"] for row in rows} == {"reader", "loft"}


@pytest.mark.parametrize("path", LAYOUTS, ids=lambda path: f"{path.parent.name}/{path.stem}")
def test_a_sample_layout_fits_the_schema_and_is_read_without_a_stop(path: Path) -> None:
    content: dict[str, Any] = tomllib.loads(path.read_text(encoding="utf-8"))
    assert [error.message for error in validator().iter_errors(content)] == []
    read = read_layout(path)
    assert [str(one) for one in read.findings if one.severity is Severity.STOP] == []
    assert read.layout is not None


# What a schema cannot know: names in other tables, files, units, and what figures mean to one another.
BEYOND_A_SCHEMA = {
    "attitude-not-upward",
    "bay-not-in-tank",
    "bay-unknown",
    "bay-without-filler",
    "bay-without-outlet",
    "bay-without-vent",
    "between-outside",
    "file-missing",
    "fill-attitude-missing",
    "hole-opens-tank",
    "joint-twice",
    "laminate-unknown",
    "lengths-do-not-match",
    "material-of-wrong-kind",
    "material-unknown",
    "material-without-linear-mass",
    "name-twice",
    "outlet-unknown",
    "part-unknown",
    "path-outside",
    "rib-not-in-row",
    "rib-unknown",
    "ribs-out-of-order",
    "row-out-of-order",
    "row-unknown",
    "rows-overlap",
    "section-out-of-order",
    "section-unknown",
    "skin-missing",
    "skin-not-round-nose",
    "skins-overlap",
    "splice-outside",
    "thickness-unknown",
    "unit-missing",
    "unit-unknown",
    "wall-not-left-out",
    "wall-unknown",
    "web-unknown",
}
# Single findings of other codes that a schema cannot have either.
ALSO_BEYOND = {
    "density_without_a_unit",
    "finish_without_its_part",
    "name_of_two_words",
    "rib_named_0",
    "row_of_one_web",
    "sealant_without_thickness",
    "section_not_finite",
    "skin_backwards",
    "skin_between_backwards",
    "tank_of_three_ribs",
    "web_named_like_an_end",
}


@pytest.mark.parametrize("wrong", WRONG, ids=lambda wrong: wrong.name)
def test_the_schema_refuses_each_mistake_of_form(wrong: WrongLayout) -> None:
    if {code for code, _ in wrong.told} & {"toml-broken"}:
        with pytest.raises(tomllib.TOMLDecodeError):
            tomllib.loads(wrong.text)
        return
    of_form = {code for code, _ in wrong.told} - BEYOND_A_SCHEMA and wrong.name not in ALSO_BEYOND
    assert validator().is_valid(tomllib.loads(wrong.text)) is not bool(of_form)


@pytest.mark.parametrize("wrong", SHAPES, ids=lambda wrong: wrong.name)
def test_each_mistake_is_refused_at_its_line_and_nothing_is_written(
    wrong: WrongLayout, tmp_path: Path
) -> None:
    layout = folder_with(wrong.text, tmp_path)
    with pytest.raises(Refused) as refused:
        loft_wing(layout, tmp_path / "plan")
    stops = [one for one in refused.value.findings if one.severity is Severity.STOP]
    assert [(finding.code, str(finding.where)) for finding in stops] == list(wrong.told)
    assert sorted(path.name for path in tmp_path.iterdir()) == [
        "laminates.csv",
        "layout.toml",
        "materials.csv",
    ]


SECOND_WEB = """[[web]]
name = "R"
chord = [0.45, 0.25]
sheet = "PANEL"

[[row]]
name = "L\""""


@pytest.mark.parametrize(
    ("was", "becomes", "rows"),
    [
        ("butt_line = 310\n", "from = [2000, 310]\nto = [2700, 1000]\n", [99]),
        ('[[row]]\nname = "L"', SECOND_WEB, [82]),
    ],
    ids=["ribs", "webs"],
)
def test_ribs_and_webs_that_cross_are_told_at_the_later_one(
    was: str, becomes: str, rows: list[int], tmp_path: Path
) -> None:
    assert was in LAYOUT
    layout = folder_with(LAYOUT.replace(was, becomes), tmp_path)
    with pytest.raises(Refused) as refused:
        loft_wing(layout, tmp_path / "plan")
    told = [(one.code, one.where.row) for one in refused.value.findings]
    assert told == [("walls-cross", row) for row in rows]


def test_the_small_wing_itself_is_lofted_with_nothing_to_tell(tmp_path: Path) -> None:
    done = loft_wing(folder_with(LAYOUT, tmp_path), tmp_path / "plan")
    assert done.findings == ()
    assert (tmp_path / "plan" / "plan.toml").is_file()


def test_every_mistake_of_shape_that_was_asked_for_is_among_them() -> None:
    assert {code for wrong in SHAPES for code, _ in wrong.told} >= {
        "fill-in-tank",
        "hole-larger-than-wall",
        "hole-overlaps",
        "rib-outside-wing",
        "skin-too-thick",
        "walls-cross",
        "web-outside-section",
    }
