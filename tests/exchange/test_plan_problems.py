"""What is told of a plan folder that is wrong, and whether there is a plan all the same."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import pytest

from ledger.errors import Severity, WrongUse
from ledger.exchange.plan_folder import ReadPlan, read_plan

Read = Callable[..., ReadPlan]
Told = Callable[[ReadPlan], list[str]]
Box = Callable[..., str]


def test_an_item_whose_origin_has_no_unit_is_refused(read_with: Read, told: Told) -> None:
    table = "part,class,assembly,form,origin,planned_mass\nPIN,fitting,WING,item,1 2 3,120 g\n"
    assert told(read_with({"parts.csv": table})) == [
        "parts.csv:2:origin  '1 2 3' has no unit; write the unit in the head, origin [m], or in geometry_unit"
    ]


def test_a_folder_that_is_not_there_is_wrong_use(tmp_path: Path) -> None:
    with pytest.raises(WrongUse, match="the plan folder does not exist"):
        read_plan(tmp_path / "none")
    (tmp_path / "file").write_text("x")
    with pytest.raises(WrongUse, match="the plan folder is not a folder"):
        read_plan(tmp_path / "file")


def test_every_problem_of_every_file_is_told_at_once(read_with: Read, told: Told) -> None:
    files = {
        "plan.toml": 'format = "plan-1"\nname = "r 1"\ntitle = "x"\ncolour = "red"\n',
        "materials.csv": "material,kind,density [kg/m3]\nalloy,metal,2700\n",
        "parts.csv": "part,class,assembly,form,origin [m],planned_mass\nPIN,fitting,WING,item,0 0 0,heavy\n",
        "laminates.csv": "laminate,areal_mass [lb],step\nA,1,\n",
        "tanks.toml": 'length_unit = "furlong"\n',
        "loading.toml": "x = \n",
    }
    assert [line.split("  ")[0] for line in told(read_with(files))] == [
        "plan.toml:4:colour",
        "plan.toml:2:name",
        "materials.csv:2:kind",
        "laminates.csv:1:areal_mass",
        "parts.csv:2:planned_mass",
        "tanks.toml:1:length_unit",
        "loading.toml:1",
    ]


def test_an_empty_folder_says_what_is_missing(tmp_path: Path, told: Told) -> None:
    read = read_plan(tmp_path)
    assert read.plan is None
    assert told(read)[0] == "plan.toml  the folder has no plan.toml; write one, with format and name"


def test_a_stop_leaves_no_plan_and_a_look_does(read_with: Read) -> None:
    read = read_with({"parts.csv": None})
    assert [finding.severity for finding in read.findings] == [Severity.LOOK]
    assert read.plan is not None
    assert read.plan.parts == ()


def test_open_part_of_another_file_is_named_with_its_place(read_with: Read, told: Told, box: Box) -> None:
    row = "BLOCK,block,closeout,R,WING,solid,alloy,g/block.obj,m,,,,,1,,"
    (line,) = told(read_with({"g/block.obj": box((0, 0, 0), (1, 1, 1), skip=1)}, parts=[row]))
    assert line.startswith("parts.csv:2:geometry  the mesh is not closed at 4 edges: ")
    assert line.endswith("close the hole there, or remove the triangle that hangs on it, and export again")
