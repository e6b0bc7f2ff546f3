"""The published schemas are those of the program, and say what they should."""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

import jsonschema
import pytest

from ledger.model.declare import KINDS
from ledger.reports.schemas import all_schemas, schema_text, write_schemas

SCHEMAS = Path(__file__).resolve().parents[2] / "schemas"


def test_the_folder_holds_exactly_the_schemas_of_the_program() -> None:
    kept = {
        path.relative_to(SCHEMAS).as_posix(): path.read_text(encoding="utf-8")
        for path in SCHEMAS.rglob("*")
        if path.is_file()
    }
    made = {path: schema_text(schema) for path, schema in all_schemas().items()}
    assert kept == made, "run: python -m ledger.reports.schemas"


@pytest.mark.parametrize("path", sorted(all_schemas()))
def test_each_schema_is_itself_valid(path: str) -> None:
    jsonschema.Draft202012Validator.check_schema(all_schemas()[path])


def test_every_kind_but_adopt_has_a_schema() -> None:
    kinds = {path.removeprefix("entry/").removesuffix(".json") for path in all_schemas() if "entry/" in path}
    assert kinds == set(KINDS) - {"adopt"}


def test_writing_takes_away_a_schema_that_is_no_more(tmp_path: Path) -> None:
    (tmp_path / "entry").mkdir()
    (tmp_path / "entry" / "sweep.json").write_text("{}", encoding="utf-8")
    write_schemas(tmp_path)
    assert {path.relative_to(tmp_path).as_posix() for path in tmp_path.rglob("*.json")} == set(all_schemas())


def sample_rows() -> list[dict[str, Any]]:
    """Every row of every log that comes with the program."""
    logs = sorted((SCHEMAS.parent / "sample_builds").glob("*/log.jsonl"))
    return [json.loads(line) for log in logs for line in log.read_text(encoding="utf-8").splitlines()]


def test_every_row_of_the_sample_logs_fits_the_schema_of_its_kind() -> None:
    validators = {
        path.removeprefix("entry/").removesuffix(".json"): jsonschema.Draft202012Validator(schema)
        for path, schema in all_schemas().items()
        if path.startswith("entry/")
    }
    # No schema has an adoption: to enter one there is a command, and a log only says when which plan was.
    rows = [row for row in sample_rows() if row["kind"] != "adopt"]
    assert len(rows) > 100
    misfits = [
        (row["kind"], error.message) for row in rows for error in validators[row["kind"]].iter_errors(row)
    ]
    assert misfits == []


def test_each_adoption_in_a_sample_log_names_a_plan_that_comes_with_it() -> None:
    adopted = [
        (log.parent, json.loads(line))
        for log in (SCHEMAS.parent / "sample_builds").glob("*/log.jsonl")
        for line in log.read_text(encoding="utf-8").splitlines()
        if json.loads(line)["kind"] == "adopt"
    ]
    assert len(adopted) >= 3
    assert all(set(row) == {"kind", "at", "by", "plan"} for _, row in adopted)
    assert all((folder / row["plan"] / "plan.toml").is_file() for folder, row in adopted)


WEIGH = {"kind": "weigh", "what": "RIB.03-L", "reading": ["412.3 g", "412.5 g"], "by": "JK"}


@pytest.mark.parametrize(
    ("row", "fits"),
    [
        (WEIGH, True),
        ({**WEIGH, "reading": "412.3 g"}, True),
        ({**WEIGH, "state": "finished", "scale": "W2", "at": "2026-10-02 09:14"}, True),
        ({**WEIGH, "reading": 412.3}, False),
        ({**WEIGH, "state": "done"}, False),
        ({**WEIGH, "colour": "red"}, False),
        ({"kind": "weigh", "what": "RIB.03-L"}, False),
        ({**WEIGH, "kind": "cut"}, False),
    ],
)
def test_a_row_of_a_weighing_fits_its_schema_or_not(row: dict[str, Any], fits: bool) -> None:
    assert jsonschema.Draft202012Validator(all_schemas()["entry/weigh.json"]).is_valid(row) is fits


@pytest.mark.parametrize(
    ("given", "fits"),
    [
        ({"piece": "SKIN-L", "batch": "B001K", "mass": "20 g"}, True),
        ({"cell": "L1", "lot": "L001K", "areal_mass": "80 g/m2"}, True),
        ({"piece": "SKIN-L", "cell": "L1", "batch": "B001K", "mass": "20 g"}, False),
        ({"piece": "SKIN-L", "mass": "20 g"}, False),
    ],
)
def test_a_coat_names_one_place_one_source_and_one_amount(given: dict[str, str], fits: bool) -> None:
    schema = all_schemas()["entry/coat.json"]
    assert jsonschema.Draft202012Validator(schema).is_valid({"kind": "coat", **given}) is fits
