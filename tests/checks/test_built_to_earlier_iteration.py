"""A piece begun under an earlier iteration is noticed exactly when its own part has changed."""

from __future__ import annotations

import dataclasses
from datetime import UTC, datetime
from typing import cast

import pytest

from ledger.checks.built_to_earlier_iteration import built_to_earlier_iteration
from ledger.checks.facts import Facts
from ledger.mass.report import WeightReport
from ledger.model.plan import Form, Laminate, Part, PartClass, Plan, Shape, Side, Step
from ledger.model.snapshot import Iteration, Piece, PieceState, Snapshot
from ledger.model.vectors import NO_SPREAD, ZERO
from ledger.units import Display

NOW = datetime(2026, 10, 2, 12, 0, tzinfo=UTC)
RIB = Part(
    name="RIB.07-L",
    title="seventh rib",
    part_class=PartClass.RIB,
    side=Side.LEFT,
    assembly="WING/LEFT/ribs",
    form=Form.PANEL,
    made_of="sandwich",
)
SHAPE = Shape(measure=0.15, centroid_m=ZERO, second_m2=NO_SPREAD, digest="a")
SANDWICH = Laminate(name="sandwich", steps=(Step(number=1, material="carbon", orientation_deg=45.0),))
FIRST = Plan(
    name="r1",
    title="first",
    display=Display.METRIC,
    materials=(),
    laminates=(SANDWICH, Laminate(name="solid", areal_mass_kg_m2=1.2)),
    parts=(RIB,),
    shapes=(SHAPE,),
)
SECOND = dataclasses.replace(FIRST, name="r2")
PIECE = Piece(
    number="P0015",
    name="RIB.07-L/1",
    part="RIB.07-L",
    running=1,
    begun_seq=2,
    iteration="r1",
    state=PieceState.OPEN,
    fitted_into=None,
)


def noticed(*plans: Plan, piece: Piece = PIECE) -> list[str]:
    """What the rule says once these plans were adopted one after the other."""
    iterations = tuple(
        Iteration(name=plan.name, seq=seq, at=NOW, plan=plan) for seq, plan in enumerate(plans, start=1)
    )
    snapshot = Snapshot(
        iterations=iterations,
        logged=(),
        pieces={piece.name: piece},
        lots={},
        sheets={},
        offcuts={},
        batches={},
        scales={},
        held={},
        gone={},
        last_seq=9,
        last_digest="",
        now=NOW,
    )
    found = built_to_earlier_iteration(Facts(snapshot=snapshot, weights=cast(WeightReport, None), fuel=None))
    return [finding.what for finding in found]


def with_shape(plan: Plan, digest: str) -> Plan:
    """The plan with another geometry of the rib."""
    return dataclasses.replace(plan, shapes=(dataclasses.replace(SHAPE, digest=digest),))


def with_laminate(plan: Plan, laminate: Laminate) -> Plan:
    """The plan with another build-up of the sandwich."""
    return dataclasses.replace(plan, laminates=(laminate,))


def test_a_part_that_stays_the_same_is_in_order() -> None:
    assert noticed(FIRST, SECOND) == []


def test_a_changed_geometry_is_noticed() -> None:
    assert noticed(FIRST, with_shape(SECOND, "b")) == ["begun under r1; r2 changes its geometry or its place"]


def test_a_changed_laminate_is_noticed() -> None:
    turned = dataclasses.replace(SANDWICH, steps=(Step(number=1, material="carbon", orientation_deg=0.0),))
    assert noticed(FIRST, with_laminate(SECOND, turned)) == ["begun under r1; r2 changes laminate sandwich"]


def test_another_material_is_noticed() -> None:
    solid = dataclasses.replace(SECOND, parts=(dataclasses.replace(RIB, made_of="solid"),))
    assert noticed(FIRST, solid) == [
        "begun under r1; r2 changes what it is made of (sandwich then, solid now)"
    ]


def test_a_part_left_out_is_noticed() -> None:
    assert noticed(FIRST, dataclasses.replace(SECOND, parts=(), shapes=())) == [
        "begun under r1; r2 has no part RIB.07-L"
    ]


def test_a_geometry_changed_and_changed_back_is_in_order() -> None:
    third = dataclasses.replace(FIRST, name="r3")
    assert noticed(FIRST, with_shape(SECOND, "b"), third) == []


def test_a_piece_of_a_withdrawn_iteration_is_noticed() -> None:
    assert noticed(SECOND) == ["begun under r1; that iteration was withdrawn, r2 is in force"]


def test_a_piece_of_the_current_iteration_is_in_order() -> None:
    changed = with_shape(SECOND, "b")
    assert noticed(FIRST, changed, piece=dataclasses.replace(PIECE, iteration="r2")) == []


@pytest.mark.parametrize("state", [PieceState.OPEN, PieceState.FINISHED])
def test_only_a_scrapped_piece_is_left_alone(state: PieceState) -> None:
    changed = with_shape(SECOND, "b")
    assert len(noticed(FIRST, changed, piece=dataclasses.replace(PIECE, state=state))) == 1
    assert noticed(FIRST, changed, piece=dataclasses.replace(PIECE, state=PieceState.SCRAPPED)) == []
