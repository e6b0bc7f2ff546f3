"""The schema of `loft --json`."""

from __future__ import annotations

from ledger.model.plan import PartClass
from ledger.reports.schema_shapes import (
    COUNT,
    FINDING,
    NUMBER,
    NUMBER_OR_NULL,
    TEXT,
    Schema,
    each,
    one_of,
    record,
)

_VOLUMES = ("box", "skins", "panels", "paste", "solids", "cells", "dry", "apart", "shared")


def lofted() -> Schema:
    """The plan folder in figures; `account` is of one wing's box, all else of both sides."""
    part_class = one_of(*(part_class.value for part_class in PartClass))
    one_class = record(
        **{"class": part_class}, pieces=COUNT, area_m2=NUMBER_OR_NULL, estimated_kg=NUMBER_OR_NULL
    )
    return record(
        iteration=TEXT,
        folder=TEXT,
        parts=COUNT,
        cells=COUNT,
        openings=COUNT,
        classes=each(one_class),
        estimated_kg=NUMBER_OR_NULL,
        gross_m3=NUMBER,
        account=record(**{f"{word}_m3": NUMBER for word in _VOLUMES}),
        findings=each(FINDING),
    )
