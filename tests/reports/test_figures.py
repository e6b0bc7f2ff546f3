"""Figures for programs: exactly the keys of the schema, null for what does not exist."""

from __future__ import annotations

import json
from typing import Any

import jsonschema
import pytest

from ledger.errors import Finding, Severity, Where
from ledger.fuel.report import FuelReport
from ledger.mass.report import WeightReport
from ledger.mass.trace import Trace
from ledger.model.things import Minted, ThingKind
from ledger.reports.figures import (
    check_figures,
    entry_figures,
    fuel_figures,
    trace_figures,
    weight_figures,
)
from ledger.reports.schemas import all_schemas

FINDING = Finding(
    code="sheet-over-cut", severity=Severity.STOP, where=Where(entry=3, thing="S0015"), what="so", do="this"
)


def fits(figures: dict[str, Any], name: str) -> None:
    """The figures, as a program reads them, against the published schema."""
    jsonschema.validate(
        json.loads(json.dumps(figures, allow_nan=False)), all_schemas()[f"output/{name}.json"]
    )


def test_weights_fit_their_schema(weights: WeightReport) -> None:
    fits(weight_figures(weights), "weights")


def test_a_part_nobody_weighed_has_null_and_not_zero(weights: WeightReport) -> None:
    part = weight_figures(weights)["parts"][1]
    assert [part[key] for key in ("estimated_kg", "calculated_kg", "actual_kg", "best_kg", "cg_m")] == [
        None
    ] * 5


def test_weights_keep_the_order_and_value_of_every_part(weights: WeightReport) -> None:
    figures = weight_figures(weights)
    assert [(part["part"], part["class"], part["best_kg"]) for part in figures["parts"]] == [
        ("RIB.03-L", "rib", 0.413),
        ("SKIN.UPR-L", "skin", None),
    ]
    assert figures["total"]["inertia_kg_m2"] == [[1.0, 0.0, 0.0], [0.0, 2.0, 0.0], [0.0, 0.0, 3.0]]


def test_fuel_fits_its_schema(fuel: FuelReport) -> None:
    fits(fuel_figures(fuel), "fuel")


def test_no_tanks_give_an_empty_list() -> None:
    assert fuel_figures(FuelReport(tanks=(), feeds=())) == {"tanks": [], "feeds": []}


def test_the_cg_of_an_empty_tank_is_null(fuel: FuelReport) -> None:
    table = fuel_figures(fuel)["tanks"][0]["attitudes"][0]["table"]
    assert table[0] == {"level_m": -0.01, "volume_m3": 0.0, "surface_m2": 0.0, "cg_m": None}


def test_figures_are_not_rounded(fuel: FuelReport) -> None:
    assert fuel_figures(fuel)["tanks"][0]["usable_m3"] == 0.0592599


def test_a_trace_fits_its_schema_and_is_nested(trace_of_a_cup: Trace) -> None:
    figures = trace_figures(trace_of_a_cup)
    fits(figures, "trace")
    assert figures["went_into"][0]["went_into"][0]["what"] == "WING/LEFT"
    assert figures["made_from"][0]["made_from"][0]["what"] == "EPX"


def test_an_entry_fits_its_schema_and_names_what_it_gave_out() -> None:
    minted = (
        Minted(kind=ThingKind.PIECE, number="P0015", name="RIB.03-L/1"),
        Minted(kind=ThingKind.OFFCUT, number="F0016", name="F0016"),
    )
    figures = entry_figures(7, "a" * 64, minted, (FINDING,))
    fits(figures, "enter")
    assert figures["minted"] == {"RIB.03-L/1": "P0015", "offcut": "F0016"}
    assert figures["findings"][0]["where"] == "entry 3 S0015"


def test_a_check_fits_its_schema() -> None:
    figures = check_figures(
        entries=7,
        last_digest="b" * 64,
        short_code="AB12",
        chain_ok=True,
        replay_ok=False,
        findings=(FINDING,),
    )
    fits(figures, "check")


@pytest.mark.parametrize("name", ["weights", "fuel", "trace", "check", "enter"])
def test_a_key_left_out_or_added_breaks_the_schema(name: str) -> None:
    schema = all_schemas()[f"output/{name}.json"]
    assert schema["additionalProperties"] is False
    assert not jsonschema.Draft202012Validator(schema).is_valid({})
