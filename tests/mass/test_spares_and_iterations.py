"""Of the pieces of a part, the one that the current plan changed is spare before any that fits it."""

from __future__ import annotations

from dataclasses import replace
from typing import Any

import pytest

from ledger.checks.facts import Facts
from ledger.checks.mass_off_plan import mass_off_plan
from ledger.mass.running import RunningWeights
from ledger.mass.weigh_up import weigh_up
from ledger.model.acts import Accept, Cut, Fit, Hold, Release, Scrap, Weigh
from ledger.model.fitting import BUILT_TO_EARLIER
from ledger.model.plan import PartClass

RIBS = "WING/LEFT/ribs"


def states(report: Any, part: str = "RIB.1") -> dict[str, str]:
    """The state of each piece of a part."""
    found = next(one for one in report.parts if one.part == part)
    return {piece.piece: piece.state for piece in found.pieces}


def best_kg(report: Any, part: str = "RIB.1") -> float:
    """The best mass of a part."""
    return float(next(one.best_kg for one in report.parts if one.part == part))


@pytest.fixture
def built(make: Any) -> Any:
    """A rib of 0.31 kg built in under r1, and r2 adopted, whose rib is larger."""
    shop = make.shop(make.plan(*make.standard_parts()))
    shop.scale("W1", 0.001, 0.002)
    shop.sheet("S1", "bought", 2.0, 1.0, mass_kg=3.0)
    shop.log(Cut(pieces=("RIB.1/1",), sheet="S1"))
    shop.log(Weigh(what="RIB.1/1", reading_kg=(0.31,), scale="W1", state="finished"))
    shop.log(Fit(piece="RIB.1/1", into=RIBS))
    shop.adopt(larger(make, "r2"))
    return shop


def larger(make: Any, name: str, measure: float = 0.25, quantity: int = 1) -> Any:
    """The standard plan with another first rib."""
    parts = [
        (replace(part, quantity=quantity), replace(shape, measure=measure, digest=f"{measure}"))
        if part.name == "RIB.1"
        else (part, shape)
        for part, shape in make.standard_parts()
    ]
    return make.plan(*parts, name=name)


def both_ways(shop: Any, *acts: Any) -> tuple[Any, Any]:
    """The weights after further acts: taken in one by one, and of the whole build at once."""
    running = RunningWeights(shop.snapshot())
    for act in acts:
        shop.log(act)
        running.take(shop.snapshot())
    return running.report, weigh_up(shop.snapshot())


def test_until_another_is_made_the_piece_that_no_longer_fits_counts(built: Any) -> None:
    report = built.weights()
    assert states(report) == {"RIB.1/1": "finished"}
    assert best_kg(report) == pytest.approx(0.31, abs=1e-12)


def test_another_takes_the_place_of_the_piece_that_no_longer_fits_even_if_that_is_built_in(
    built: Any,
) -> None:
    before = built.weights().total.best_kg
    for report in both_ways(built, Cut(pieces=("RIB.1/2",), sheet="S1")):
        assert states(report) == {"RIB.1/1": "spare", "RIB.1/2": "open"}
        # The sheet weighs 1.5 kg/m2, and the new rib has 0.25 m2.
        assert best_kg(report) == pytest.approx(0.375, abs=1e-9)
        assert report.total.best_kg == pytest.approx(before - 0.31 + 0.375, abs=1e-9)


def test_once_accepted_the_built_in_piece_counts_again_and_the_other_is_spare(built: Any) -> None:
    accept = Accept(finding=BUILT_TO_EARLIER, what="rib.1/1", why="packed out", facts="begun under r1")
    for report in both_ways(built, Cut(pieces=("RIB.1/2",), sheet="S1"), accept):
        assert states(report) == {"RIB.1/1": "finished", "RIB.1/2": "spare"}
        assert best_kg(report) == pytest.approx(0.31, abs=1e-12)


@pytest.mark.parametrize(
    ("finding", "facts"), [("cut-twice", "begun under r1"), (BUILT_TO_EARLIER, None)], ids=["other", "blank"]
)
def test_an_acceptance_of_something_else_leaves_it_spare(built: Any, finding: str, facts: str | None) -> None:
    accept = Accept(finding=finding, what="RIB.1/1", why="fine", facts=facts)
    for report in both_ways(built, Cut(pieces=("RIB.1/2",), sheet="S1"), accept):
        assert states(report) == {"RIB.1/1": "spare", "RIB.1/2": "open"}


def test_a_part_changed_back_takes_its_first_piece_again(built: Any, make: Any) -> None:
    built.log(Cut(pieces=("RIB.1/2",), sheet="S1"))
    built.adopt(make.plan(*make.standard_parts(), name="r3"))
    report = built.weights()
    assert states(report) == {"RIB.1/1": "finished", "RIB.1/2": "spare"}


def test_of_four_that_no_longer_fit_only_as_many_are_spare_as_were_made_again(make: Any) -> None:
    shop = make.shop(larger(make, "r1", 0.2, quantity=4))
    shop.sheet("S1", "bought", 4.0, 1.0, mass_kg=6.0)
    shop.log(Cut(pieces=tuple(f"RIB.1/{number}" for number in (1, 2, 3, 4)), sheet="S1"))
    shop.adopt(larger(make, "r2", 0.25, quantity=4))
    for report in both_ways(shop, Cut(pieces=("RIB.1/5",), sheet="S1")):
        assert [name for name, state in states(report).items() if state == "spare"] == ["RIB.1/4"]
        assert best_kg(report) == pytest.approx(1.5 * (3 * 0.2 + 0.25), abs=1e-9)


def test_scrapped_it_counts_nothing_and_the_part_is_planned_again(built: Any) -> None:
    for report in both_ways(built, Scrap(what="RIB.1/1", why="too short")):
        assert sorted(states(report).values()) == ["planned", "scrapped"]
        assert best_kg(report) == pytest.approx(1.5 * 0.25, abs=1e-9)


def test_pieces_of_a_part_that_the_plan_dropped_count_nothing_in_the_wing(built: Any, make: Any) -> None:
    rest = [pair for pair in make.standard_parts() if pair[0].name != "RIB.1"]
    built.adopt(make.plan(*rest, name="r3"))
    report = built.weights()
    assert "RIB.1" not in {part.part for part in report.parts}
    assert report.total.best_kg == pytest.approx(sum(part.best_kg for part in report.parts), abs=1e-9)


def test_kept_for_stock_it_counts_nothing_and_the_part_is_planned_again_until_it_is_released(
    built: Any,
) -> None:
    hold = Hold(what="RIB.1/1", why="kept for stock")
    for report in both_ways(built, hold):
        assert states(report) == {"RIB.1/1": "spare", "RIB.1": "planned"}
        assert best_kg(report) == pytest.approx(1.5 * 0.25, abs=1e-9)
    for report in both_ways(built, Release(what="RIB.1/1", why="used after all")):
        assert states(report) == {"RIB.1/1": "finished"}


def test_on_hold_for_another_reason_a_piece_that_fits_counts_as_before(make: Any) -> None:
    shop = make.shop(make.plan(*make.standard_parts()))
    shop.sheet("S1", "bought", 2.0, 1.0, mass_kg=3.0)
    shop.log(Cut(pieces=("RIB.1/1",), sheet="S1"))
    for report in both_ways(shop, Hold(what="RIB.1/1", why="cloudy resin")):
        assert states(report) == {"RIB.1/1": "open"}


def off_plan(shop: Any) -> list[str | None]:
    """The parts that the rule about masses off plan names."""
    facts = Facts(snapshot=shop.snapshot(), weights=shop.weights(), fuel=None)
    return [finding.where.thing for finding in mass_off_plan(facts)]


def test_a_mass_off_plan_because_its_part_was_changed_is_told_of_as_a_piece_that_does_not_fit(
    make: Any,
) -> None:
    tolerances = ((PartClass.RIB, 0.05),)
    shop = make.shop(make.plan(*make.standard_parts(), tolerances=tolerances))
    shop.sheet("S1", "bought", 2.0, 1.0, mass_kg=3.0)
    shop.log(Cut(pieces=("RIB.1/1",), sheet="S1"))
    assert off_plan(shop) == []
    shop.adopt(replace(larger(make, "r2", measure=0.5), tolerances=tolerances))
    assert off_plan(shop) == []
    shop.log(Accept(finding=BUILT_TO_EARLIER, what="RIB.1/1", why="measured", facts="as it was said"))
    assert off_plan(shop) == ["RIB.1"]
