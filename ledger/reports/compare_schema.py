"""The schema of two iterations compared."""

from __future__ import annotations

from ledger.mass.part_changes import ADDED, CHANGED, REMOVED
from ledger.reports.schema_shapes import (
    COUNT,
    MATRIX_OR_NULL,
    NUMBER_OR_NULL,
    TEXT,
    TEXT_OR_NULL,
    VECTOR_OR_NULL,
    YES_NO,
    Schema,
    each,
    one_of,
    record,
)

PAIR = record(a=NUMBER_OR_NULL, b=NUMBER_OR_NULL, change=NUMBER_OR_NULL)


def compared() -> Schema:
    """What `compare --json` prints."""
    attitude = record(attitude=TEXT, flight=YES_NO, trapped_m3=PAIR, usable_m3=PAIR, remark=TEXT_OR_NULL)
    volumes = {"gross_m3": PAIR, "capacity_m3": PAIR, "caught_air_m3": PAIR, "usable_m3": PAIR}
    part = record(
        part=TEXT,
        change=one_of(REMOVED, ADDED, CHANGED),
        a_kg=NUMBER_OR_NULL,
        b_kg=NUMBER_OR_NULL,
        now_kg=PAIR,
        why=TEXT,
    )
    return record(
        a=TEXT,
        b=TEXT,
        adopted=YES_NO,
        mass_kg=PAIR,
        remade_kg=PAIR,
        estimated_kg=PAIR,
        cg_m=record(a=VECTOR_OR_NULL, b=VECTOR_OR_NULL, change=VECTOR_OR_NULL),
        inertia_kg_m2=record(a=MATRIX_OR_NULL, b=MATRIX_OR_NULL, change=MATRIX_OR_NULL),
        **volumes,
        attitudes=each(attitude),
        tanks=each(record(tank=TEXT, **volumes, attitudes=each(attitude), remark=TEXT_OR_NULL)),
        fuel_density_kg_m3=NUMBER_OR_NULL,
        saved_as_fuel_m3=NUMBER_OR_NULL,
        parts=each(part),
        parts_same=COUNT,
        no_longer_fits=each(unfit_piece()),
        stays=each(TEXT),
        fits_again=each(TEXT),
        on_hold=each(TEXT),
        spare=each(TEXT),
    )


def unfit_piece() -> Schema:
    """A built piece that no longer fits, with what can be done about it."""
    entry = record(kind=TEXT, fields={"type": "object", "additionalProperties": TEXT}, asks=each(TEXT))
    return record(
        piece=TEXT,
        number=TEXT,
        part=TEXT,
        state=TEXT,
        begun_under=TEXT,
        why=TEXT,
        best_kg=NUMBER_OR_NULL,
        fitted_before=YES_NO,
        choices=each(record(choice=TEXT, does=TEXT, entries=each(entry))),
    )
