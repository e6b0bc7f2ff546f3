"""The searches over the network, against a step-by-step simulation and against networks made by hand.

Floors and tops are whole metres, and so are rims: a simulation in steps of one cubic metre ends exactly
where fuel of any fineness would.
"""

from __future__ import annotations

import math
from typing import Any

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from ledger.fuel.draining import NO_AIR, NO_WAY_OUT, drain, dry_cells
from ledger.fuel.filling import fill
from ledger.fuel.ways import Way
from ledger.model.tanks import Outside

FIXED = settings(
    max_examples=400, derandomize=True, deadline=None, suppress_health_check=[HealthCheck.too_slow]
)


class Pour:
    """One filler open, one cubic metre at a time into the lowest cell that takes it."""

    def __init__(self, case: Any, filler: Way) -> None:
        self.case, self.filler = case, filler
        self.level = dict(case.floor)
        while (cell := self.next_cell()) is not None:
            self.level[cell] += 1

    def next_cell(self) -> str | None:
        spilling = [
            one.low_m for one in self.case.kind(Outside.VENT) if self.level[one.cells[0]] >= one.low_m
        ]
        stop = min([self.filler.low_m, *spilling])
        takes = [
            cell
            for cell in self.comes_to()
            if self.level[cell] + 1 <= min(stop, self.case.top[cell]) and self.air_leaves(cell)
        ]
        return min(takes, key=lambda cell: (self.level[cell], cell)) if takes else None

    def comes_to(self) -> set[str]:
        """Cells a little more fuel runs to: it runs over a lip that fuel already stands at."""
        wet, left = {self.filler.cells[0]}, [self.filler.cells[0]]
        while left:
            here = left.pop()
            for one in self.case.ways:
                if one.outside is None and here in one.cells:
                    into = one.cells[0] if one.cells[1] == here else one.cells[1]
                    if (
                        into not in wet
                        and self.case.may(one, into, air=False)
                        and self.level[here] >= one.low_m
                    ):
                        wet.add(into)
                        left.append(into)
        return wet

    def air_leaves(self, cell: str) -> bool:
        """Out of the cell itself the hole must be clear of fuel; farther on, air leaves at the brink."""
        seen, left = {cell}, [cell]
        while left:
            here = left.pop()
            slack = 1 if here == cell else 0
            for one in self.case.ways:
                if here not in one.cells or self.level[here] + slack > one.high_m:
                    continue
                if one.outside is Outside.VENT or one is self.filler:
                    return True
                if one.outside is None:
                    into = one.cells[0] if one.cells[1] == here else one.cells[1]
                    if into not in seen and self.case.may(one, into, air=True):
                        seen.add(into)
                        left.append(into)
        return False


class Drain:
    """All wet cells full; one cubic metre at a time from the highest cell that can give it.

    A cell gives only where air comes in. A full cell that air cannot enter passes fuel on like a
    pipe. Fuel passes a lip lower than the level it comes from; it is never sucked over one.
    """

    def __init__(self, case: Any, dry: set[str]) -> None:
        self.case, self.dry = case, dry
        self.level = {cell: case.floor[cell] if cell in dry else case.top[cell] for cell in case.floor}
        moved = True
        while moved:
            moved = sum(self.feed(pull) for pull in case.pulls) > 0

    def feed(self, pull: tuple[str, ...]) -> bool:
        outlets = [one for one in self.case.kind(Outside.OUTLET) if one.name in pull]
        moved = False
        while True:
            while self.settle(outlets):
                moved = True
            giver = self.giver(outlets)
            if giver is None:
                return moved
            self.level[giver] -= 1
            moved = True

    def aired(self) -> set[str]:
        reached = {one.cells[0] for one in self.case.kind(Outside.VENT)}
        left = list(reached)
        while left:
            here = left.pop()
            for one in self.case.ways:
                clear = here in self.dry or one.high_m > self.level[here]
                if one.outside is None and here in one.cells and clear:
                    into = one.cells[0] if one.cells[1] == here else one.cells[1]
                    if into not in reached and self.case.may(one, into, air=True):
                        reached.add(into)
                        left.append(into)
        return reached

    def runs_to(self, start: str, outlets: list[Way], aired: set[str]) -> tuple[set[str], set[str]]:
        """Where fuel runs from the level in a cell: outlets' names, and cells that stand lower."""
        head = self.level[start]
        seen, left = {start}, [start]
        out: set[str] = set()
        lower: set[str] = set()
        while left:
            here = left.pop()
            onward = [
                (one.cells[0] if one.cells[1] == here else one.cells[1])
                for one in self.case.ways
                if one.outside is None
                and here in one.cells
                and head > one.low_m
                and self.case.may(one, one.cells[0] if one.cells[1] == here else one.cells[1], air=False)
            ]
            drawn = [one for one in outlets if one.cells[0] == here and head > one.low_m]
            out |= {one.name for one in drawn}
            if drawn and len(outlets) > 1:
                onward += [one.cells[0] for one in outlets if head > one.low_m]
            for into in onward:
                if into in seen:
                    continue
                seen.add(into)
                if into in aired and self.level[into] < min(head - 1, self.case.top[into]):
                    lower.add(into)
                elif into not in aired or self.level[into] <= head:
                    left.append(into)
        return out, lower

    def givers(self, aired: set[str]) -> list[str]:
        full = [cell for cell in aired if self.level[cell] > self.case.floor[cell]]
        return sorted(full, key=lambda cell: (-self.level[cell], cell))

    def settle(self, outlets: list[Way]) -> bool:
        """Let a cubic metre run down into a lower cell, if any can."""
        aired = self.aired()
        for cell in self.givers(aired):
            _, lower = self.runs_to(cell, outlets if self.case.tee else [], aired)
            if lower:
                self.level[cell] -= 1
                self.level[min(lower, key=lambda name: (self.level[name], name))] += 1
                return True
        return False

    def giver(self, outlets: list[Way]) -> str | None:
        """The cell that gives to the feed, as long as its level covers every outlet that draws."""
        aired = self.aired()
        for cell in self.givers(aired):
            out, _ = self.runs_to(cell, outlets, aired)
            if out and self.level[cell] > max(one.high_m for one in outlets):
                return cell
        return None


@FIXED
@given(data=st.data())
def test_pouring_step_by_step_never_holds_less_than_reckoned(networks: Any, data: st.DataObject) -> None:
    case = data.draw(networks.drawn(one_way=False))
    for filler in case.kind(Outside.FILLER):
        filling = fill(case.network, filler)
        reckoned = {cell: case.volume(cell, filling.level_of(cell)) for cell in case.floor}
        poured = {cell: level - case.floor[cell] for cell, level in Pour(case, filler).level.items()}
        assert sum(poured.values()) >= sum(reckoned.values())
        aired = all(filling.air_m[cell].level_m >= filling.level_m for cell in filling.reached)
        vents_wet = all(one.cells[0] in filling.reached for one in case.kind(Outside.VENT))
        if aired and vents_wet:
            assert poured == reckoned


@FIXED
@given(data=st.data())
def test_draining_step_by_step_never_leaves_more_than_reckoned(networks: Any, data: st.DataObject) -> None:
    case = data.draw(networks.drawn(one_way=True))
    dry = case.dry
    kept = drain(case.network, case.pulls, dry)
    left = {cell: level - case.floor[cell] for cell, level in Drain(case, dry).level.items()}
    reckoned = {cell: case.volume(cell, kept[cell].level_m) for cell in case.floor}
    assert sum(left.values()) <= sum(reckoned.values())
    if not any(one.by == NO_AIR for one in kept.values()):
        assert left == reckoned


def test_the_simulations_do_meet_cells_cut_off_from_air(networks: Any) -> None:
    flap = networks(
        floor={"A": 0, "B": 0},
        top={"A": 6, "B": 6},
        ways=(
            networks.way("low", ("A", "B"), None, 0, 1),
            networks.way("out", ("A",), Outside.OUTLET, 1, 2),
            networks.way("fill", ("A",), Outside.FILLER, 5, 5),
            networks.way("vent", ("A",), Outside.VENT, 6, 6),
        ),
        tee=False,
    )
    assert drain(flap.network, flap.pulls, set())["B"].by == NO_AIR
    assert Drain(flap, set()).level == {"A": 2, "B": 6}
    assert Pour(flap, flap.kind(Outside.FILLER)[0]).level == {"A": 5, "B": 1}


def test_what_is_not_joined_to_an_outlet_has_no_way_out(networks: Any) -> None:
    case = networks(
        floor={"A": 0, "B": 0},
        top={"A": 4, "B": 4},
        ways=(
            networks.way("out", ("A",), Outside.OUTLET, 0, 1),
            networks.way("f1", ("A",), Outside.FILLER, 4, 4),
            networks.way("f2", ("B",), Outside.FILLER, 4, 4),
            networks.way("vent", ("A",), Outside.VENT, 4, 4),
        ),
        tee=False,
    )
    assert drain(case.network, case.pulls, set())["B"].by == NO_WAY_OUT
    assert drain(case.network, case.pulls, set())["B"].level_m == math.inf


@pytest.mark.parametrize("tee", [True, False])
def test_two_outlets_stop_at_the_higher_limit_on_a_tee_and_each_at_its_own_on_a_selector(
    networks: Any, tee: bool
) -> None:
    case = networks(
        floor={"A": 0, "B": 0},
        top={"A": 6, "B": 6},
        ways=(
            networks.way("outA", ("A",), Outside.OUTLET, 0, 1),
            networks.way("outB", ("B",), Outside.OUTLET, 2, 3),
            networks.way("low", ("A", "B"), None, 2, 4),
            networks.way("fill", ("A",), Outside.FILLER, 6, 6),
            networks.way("vent", ("A",), Outside.VENT, 6, 6),
        ),
        tee=tee,
    )
    levels = {cell: one.level_m for cell, one in drain(case.network, case.pulls, set()).items()}
    assert levels == ({"A": 3, "B": 3} if tee else {"A": 1, "B": 2})


def test_air_comes_through_a_dry_cell_over_a_hole_that_would_be_covered_in_a_wet_one(networks: Any) -> None:
    case = networks(
        floor={"A": 0, "B": 0},
        top={"A": 4, "B": 4},
        ways=(
            networks.way("out", ("A",), Outside.OUTLET, 0, 0),
            # Only air and fuel from the dry cell B pass into A, at B's floor.
            networks.way("flap", ("A", "B"), None, 0, 0, one_way="A"),
            networks.way("fill", ("A",), Outside.FILLER, 4, 4),
            networks.way("vent", ("B",), Outside.VENT, 4, 4),
        ),
        tee=False,
    )
    dry = dry_cells(case.network, case.pulls)
    assert dry == {"B"}
    kept = drain(case.network, case.pulls, dry)
    assert (kept["A"].level_m, kept["A"].by) == (0, "outlet")
    assert (kept["B"].level_m, kept["B"].by) == (-math.inf, "dry")
