"""The published JSON Schemas: each output with `--json`, each kind of entry, and the layout file.

`python -m ledger.reports.schemas` writes them to the folder `schemas`; a test says they are current.
"""

from __future__ import annotations

import json
import sys
from pathlib import Path

from ledger.mass.report import CAUSES
from ledger.model import acts  # noqa: F401  the kinds are declared when this is imported
from ledger.model.declare import KINDS, Field, Kind, Takes
from ledger.model.plan import PartClass
from ledger.reports.compare_schema import compared, unfit_piece
from ledger.reports.layout_schema import layout_schema
from ledger.reports.loft_schema import lofted
from ledger.reports.schema_shapes import (
    COUNT,
    FINDING,
    MATRIX_OR_NULL,
    MINTED,
    NUMBER,
    NUMBER_OR_NULL,
    SHA256,
    TEXT,
    TEXT_OR_NULL,
    VECTOR,
    VECTOR_OR_NULL,
    YES_NO,
    Schema,
    each,
    one_of,
    record,
)
from ledger.units import SI_UNIT

_DIALECT = "https://json-schema.org/draft/2020-12/schema"


def _weights() -> Schema:
    part_class = one_of(*(part_class.value for part_class in PartClass))
    masses = {
        "estimated_kg": NUMBER_OR_NULL,
        "calculated_kg": NUMBER_OR_NULL,
        "actual_kg": NUMBER_OR_NULL,
        "best_kg": NUMBER_OR_NULL,
        "best_u_kg": NUMBER_OR_NULL,
    }
    total = record(
        **masses,
        built_kg=NUMBER,
        share_actual={"type": "number", "minimum": 0, "maximum": 1},
        cg_m=VECTOR_OR_NULL,
        inertia_kg_m2=MATRIX_OR_NULL,
    )
    part = record(
        part=TEXT,
        **{"class": part_class},
        **masses,
        state=TEXT,
        cg_m=VECTOR_OR_NULL,
        area_m2=NUMBER_OR_NULL,
    )
    return record(
        iteration=TEXT,
        total=total,
        parts=each(part),
        off_plan=each(record(cause=one_of(*CAUSES), mass_kg=NUMBER)),
        forecast=record(mass_kg=NUMBER_OR_NULL, low_kg=NUMBER_OR_NULL, high_kg=NUMBER_OR_NULL),
    )


def _fuel() -> Schema:
    attitude = record(
        attitude=TEXT,
        pitch_deg=NUMBER,
        roll_deg=NUMBER,
        up=VECTOR,
        flight=YES_NO,
        trapped_m3=NUMBER_OR_NULL,
        lost_m3=NUMBER_OR_NULL,
        cells=each(
            record(cell=TEXT, trapped_m3=NUMBER_OR_NULL, level_m=NUMBER_OR_NULL, trapped_by=TEXT_OR_NULL)
        ),
        table=each(record(level_m=NUMBER, volume_m3=NUMBER, surface_m2=NUMBER, cg_m=VECTOR_OR_NULL)),
        drained=each(
            record(quantity_m3=NUMBER, usable_m3=NUMBER_OR_NULL, mass_kg=NUMBER_OR_NULL, cg_m=VECTOR_OR_NULL)
        ),
    )
    tank = record(
        tank=TEXT,
        gross_m3=NUMBER,
        capacity_m3=NUMBER_OR_NULL,
        capacity_limit=one_of("filler", "vent", "expansion", or_null=True),
        caught_air_m3=NUMBER_OR_NULL,
        usable_m3=NUMBER_OR_NULL,
        usable_u_m3=NUMBER_OR_NULL,
        governing_attitude=TEXT_OR_NULL,
        cells=each(record(cell=TEXT, gross_m3=NUMBER, filled_m3=NUMBER_OR_NULL, air_caught_by=TEXT_OR_NULL)),
        attitudes=each(attitude),
    )
    feed = record(
        feed=TEXT, join=one_of("tee", "select"), usable_m3=NUMBER_OR_NULL, governing_attitude=TEXT_OR_NULL
    )
    return record(tanks=each(tank), feeds=each(feed))


def _trace() -> Schema:
    def link(way: str) -> Schema:
        return record(
            what=TEXT,
            kind=TEXT,
            mass_kg=NUMBER_OR_NULL,
            how=TEXT,
            state=TEXT,
            **{way: each({"$ref": f"#/$defs/{way}"})},
        )

    return {
        **record(
            what=TEXT,
            kind=TEXT,
            state=TEXT,
            made_from=each({"$ref": "#/$defs/made_from"}),
            went_into=each({"$ref": "#/$defs/went_into"}),
            entries=each({"type": "integer", "minimum": 1}),
        ),
        "$defs": {"made_from": link("made_from"), "went_into": link("went_into")},
    }


def _entered() -> Schema:
    keys: dict[str, Schema] = {
        "seq": COUNT,
        "digest": SHA256,
        "minted": MINTED,
        "findings": each(FINDING),
    }
    whole = record(**keys)
    # With --from: the last seq and digest, everything minted and found, and each entry by itself.
    whole["properties"] = {**keys, "entries": each(record(**keys))}
    return whole


def _adopted() -> Schema:
    return record(
        iteration=TEXT,
        seq={"type": ["integer", "null"]},
        digest={"anyOf": [SHA256, {"type": "null"}]},
        no_longer_fits=each(unfit_piece()),
        comparison={"anyOf": [compared(), {"type": "null"}]},
        findings=each(FINDING),
    )


def _checked() -> Schema:
    return record(
        entries=COUNT,
        last_digest=SHA256,
        short_code=TEXT,
        chain_ok=YES_NO,
        replay_ok=YES_NO,
        findings=each(FINDING),
    )


def entry_schema(kind: Kind) -> Schema:
    """A row of JSON Lines of this kind. A number with a unit is text, so that the unit is never guessed."""
    fields = {field.word: _field(field) for field in kind.fields}
    names = {"anyOf": [TEXT, each(TEXT)]}
    schema: Schema = {
        "description": kind.tip,
        "type": "object",
        "properties": {
            "kind": {"const": kind.word},
            **fields,
            "by": {**TEXT, "description": "initials of who logs"},
            "with": {**names, "description": "initials of others present"},
            "at": {**TEXT, "description": "when it was done, year-month-day hour:minute; now where empty"},
            "remark": TEXT,
        },
        "required": ["kind", *(field.word for field in kind.fields if field.required)],
        "additionalProperties": False,
    }
    groups = [_exactly_one(group) for group in kind.one_of]
    return {**schema, "allOf": groups} if groups else schema


def _exactly_one(words: tuple[str, ...]) -> Schema:
    return {"oneOf": [{"required": [word]} for word in words]}


def _field(field: Field) -> Schema:
    shape = _one(field)
    if field.many:
        shape = {"anyOf": [shape, each(shape)]}
    return {**shape, "description": _tip(field)}


def _tip(field: Field) -> str:
    units = ", ".join(f"{dimension.value} (kept in {SI_UNIT[dimension]})" for dimension in field.dimensions)
    return f"{field.tip}; {units}" if units else field.tip


def _one(field: Field) -> Schema:
    match field.takes:
        case Takes.CHOICE:
            return {"enum": list(field.choices)}
        case Takes.DATE:
            return {"type": "string", "format": "date"}
        case Takes.YES_NO:
            return {"anyOf": [YES_NO, {"enum": ["yes", "no"]}]}
        case Takes.WHOLE:
            return {"anyOf": [{"type": "integer"}, {"type": "string", "pattern": r"^\s*[0-9]+\s*$"}]}
        case Takes.RATIO:
            return {"type": "string", "pattern": ":"}
        case Takes.QUANTITY | Takes.MEASURE:
            return {"type": "string", "pattern": "[0-9]"}
        case _:
            return TEXT


_OUTPUTS = {
    "weights": _weights,
    "fuel": _fuel,
    "trace": _trace,
    "enter": _entered,
    "adopt": _adopted,
    "check": _checked,
    "compare": compared,
    "loft": lofted,
}


def all_schemas() -> dict[str, Schema]:
    """Every schema under the path of its file in the folder."""
    schemas = {
        f"output/{name}.json": _titled(f"wingledger {name} --json", make()) for name, make in _OUTPUTS.items()
    }
    schemas["layout.json"] = _titled("a layout file of wingledger loft", layout_schema())
    for kind in KINDS.values():
        # A plan is adopted by the command of that name, never by a row.
        if kind.word != "adopt":
            schemas[f"entry/{kind.word}.json"] = _titled(f"an entry of kind {kind.word}", entry_schema(kind))
    return schemas


def schema_text(schema: Schema) -> str:
    """The file's content."""
    return json.dumps(schema, indent=2) + "\n"


def write_schemas(folder: Path) -> None:
    """Write every schema, and take away files of schemas that are no more."""
    schemas = all_schemas()
    for path, schema in schemas.items():
        target = folder / path
        target.parent.mkdir(parents=True, exist_ok=True)
        target.write_text(schema_text(schema), encoding="utf-8")
    for target in folder.rglob("*.json"):
        if target.relative_to(folder).as_posix() not in schemas:
            target.unlink()


def _titled(title: str, schema: Schema) -> Schema:
    return {"$schema": _DIALECT, "title": title, **schema}


if __name__ == "__main__":
    write_schemas(Path(sys.argv[1]) if len(sys.argv) > 1 else Path("schemas"))
