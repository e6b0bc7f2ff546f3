"""What ends the finding that a piece was built to an earlier iteration, and what brings it back."""

from __future__ import annotations

import dataclasses
from datetime import UTC, datetime, timedelta
from typing import cast

import pytest

from ledger.checks.built_to_earlier_iteration import CODE, built_to_earlier_iteration
from ledger.checks.facts import Facts
from ledger.mass.report import WeightReport
from ledger.model.acts import Accept, Act, Adopt, Cut, Hold, Release, Scrap
from ledger.model.declare import KINDS
from ledger.model.entry import Logged
from ledger.model.gather import gather
from ledger.model.plan import Form, Part, PartClass, Plan, Shape, Side
from ledger.model.things import Minted, ThingKind
from ledger.model.vectors import NO_SPREAD, ZERO
from ledger.units import Display

START = datetime(2026, 10, 2, 12, 0, tzinfo=UTC)
WORD = {kind.record: word for word, kind in KINDS.items()}


def plan(name: str, digest: str | None, quantity: int = 1) -> Plan:
    """A plan of one rib; without a digest, of none."""
    rib = Part(
        name="RIB.07-L",
        title="seventh rib",
        part_class=PartClass.RIB,
        side=Side.LEFT,
        assembly="WING",
        form=Form.PANEL,
        made_of="sandwich",
        quantity=quantity,
    )
    shape = Shape(measure=0.15, centroid_m=ZERO, second_m2=NO_SPREAD, digest=digest or "")
    there = digest is not None
    return Plan(
        name=name,
        title=name,
        display=Display.METRIC,
        materials=(),
        laminates=(),
        parts=(rib,) if there else (),
        shapes=(shape,) if there else (),
    )


def cut(running: int) -> Cut:
    """A piece cut, with its tag."""
    name = f"RIB.07-L/{running}"
    minted = Minted(kind=ThingKind.PIECE, number=f"P{running}", name=name)
    return Cut(pieces=(name,), sheet="S1", minted=(minted,))


def accept(what: str = "RIB.07-L/1") -> Accept:
    """The finding accepted."""
    return Accept(finding=CODE, what=what, why="measured, fits", facts="as it was said")


def noticed(*steps: Plan | Act) -> list[str]:
    """The pieces the rule names once these plans were adopted and these acts logged, in this order."""
    plans: dict[int, Plan] = {}
    logged = []
    for seq, step in enumerate(steps, start=1):
        act = Adopt(plan=step.name, title=step.name) if isinstance(step, Plan) else step
        if isinstance(step, Plan):
            plans[seq] = step
        at = START + timedelta(minutes=seq)
        logged.append(Logged(seq=seq, at=at, logged_at=at, by="JK", kind=WORD[type(act)], act=act))
    snapshot = gather(logged, lambda entry: plans[entry.seq], now=START + timedelta(days=1))
    found = built_to_earlier_iteration(Facts(snapshot=snapshot, weights=cast(WeightReport, None), fuel=None))
    return [str(finding.where) for finding in found]


OLD, NEW = plan("r1", "a"), plan("r2", "b")


def test_it_stands_until_something_is_done() -> None:
    assert noticed(OLD, cut(1), NEW) == ["RIB.07-L/1"]


def test_another_cut_makes_it_a_spare_and_ends_it() -> None:
    assert noticed(OLD, cut(1), NEW, cut(2)) == []


def test_another_that_fits_no_better_does_not_end_it() -> None:
    assert noticed(OLD, cut(1), cut(2), NEW) == ["RIB.07-L/1"]


def test_scrapped_it_ends_and_returns_for_one_that_was_spare() -> None:
    scrap = Scrap(what="RIB.07-L/2", why="slipped")
    assert noticed(OLD, cut(1), NEW, cut(2), scrap) == ["RIB.07-L/1"]
    assert noticed(OLD, cut(1), NEW, Scrap(what="RIB.07-L/1", why="too short")) == []


@pytest.mark.parametrize("what", ["RIB.07-L/1", "rib.07-l/1", "P1", "p1"])
def test_accepted_by_name_or_tag_it_ends(what: str) -> None:
    assert noticed(OLD, cut(1), NEW, accept(what)) == []


def test_an_acceptance_holds_while_the_part_stays_as_it_was_accepted() -> None:
    third = dataclasses.replace(NEW, name="r3")
    assert noticed(OLD, cut(1), NEW, accept(), third) == []
    assert noticed(OLD, cut(1), NEW, accept(), third, plan("r4", "c")) == ["RIB.07-L/1"]


def test_an_acceptance_before_the_change_covers_nothing() -> None:
    assert noticed(OLD, cut(1), accept(), NEW) == ["RIB.07-L/1"]


def test_a_piece_begun_two_iterations_ago_fits_again_once_its_part_is_changed_back() -> None:
    assert noticed(OLD, cut(1), NEW, plan("r3", "a")) == []
    assert noticed(OLD, cut(1), NEW, cut(2), plan("r3", "a")) == []


def test_a_piece_of_the_iteration_between_is_the_one_that_no_longer_fits() -> None:
    assert noticed(plan("r1", "a", 2), cut(1), plan("r2", "b", 2), cut(2), plan("r3", "a", 2)) == [
        "RIB.07-L/2"
    ]


def test_a_piece_of_a_part_that_is_no_more_is_told_until_it_is_accepted() -> None:
    none = plan("r2", None)
    assert noticed(OLD, cut(1), none) == ["RIB.07-L/1"]
    assert noticed(OLD, cut(1), none, accept()) == []
    assert noticed(OLD, cut(1), none, accept(), plan("r3", None)) == []
    assert noticed(OLD, cut(1), none, accept(), plan("r3", "b")) == ["RIB.07-L/1"]
    assert noticed(OLD, cut(1), none, accept(), plan("r3", "a")) == []


HOLD, RELEASE = (kind(what="RIB.07-L/1", why="kept for stock") for kind in (Hold, Release))


def test_put_on_hold_for_stock_it_ends_until_it_is_released() -> None:
    assert noticed(OLD, cut(1), NEW, HOLD) == []
    assert noticed(OLD, cut(1), NEW, HOLD, plan("r3", "c")) == []
    assert noticed(OLD, cut(1), NEW, HOLD, RELEASE) == ["RIB.07-L/1"]
    none = plan("r2", None)
    assert noticed(OLD, cut(1), none, HOLD) == []


def test_a_hold_from_before_the_change_was_for_another_reason_and_ends_nothing() -> None:
    assert noticed(OLD, cut(1), HOLD, NEW) == ["RIB.07-L/1"]


def test_of_two_that_no_longer_fit_the_one_on_hold_is_kept_and_the_other_still_asked_about() -> None:
    pair = plan("r1", "a", 2), plan("r2", "b", 2)
    assert noticed(pair[0], cut(1), cut(2), pair[1], HOLD, cut(3)) == ["RIB.07-L/2"]
