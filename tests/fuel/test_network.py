"""The searches over the network, against a search over all simple ways and against a step-by-step simulation.

Cells here are upright boxes of one square metre; rims, floors and tops are whole metres, so that a
simulation in steps of one cubic metre ends exactly where fuel of any fineness would.
"""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import dataclass
from itertools import count

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from ledger.fuel.draining import NO_AIR, NO_WAY_OUT, drain, dry_cells
from ledger.fuel.filling import fill
from ledger.fuel.ways import Network, Way
from ledger.model.tanks import Outside

FIXED = settings(
    max_examples=400, derandomize=True, deadline=None, suppress_health_check=[HealthCheck.too_slow]
)


@dataclass(frozen=True)
class Case:
    floor: dict[str, int]
    top: dict[str, int]
    ways: tuple[Way, ...]
    tee: bool

    @property
    def network(self) -> Network:
        return Network(self.floor, self.ways)

    def kind(self, outside: Outside) -> list[Way]:
        return [way for way in self.ways if way.outside is outside]

    @property
    def pulls(self) -> tuple[tuple[str, ...], ...]:
        names = tuple(way.name for way in self.kind(Outside.OUTLET))
        return (names,) if self.tee else tuple((name,) for name in names)

    def volume(self, cell: str, level: float) -> float:
        return max(0.0, min(level, self.top[cell]) - self.floor[cell])


def way(
    name: str, cells: tuple[str, ...], outside: Outside | None, low: int, high: int, **more: object
) -> Way:
    one_way = more.get("one_way")
    return Way(
        name=name,
        cells=cells,
        outside=outside,
        low_m=low,
        high_m=high,
        one_way=one_way if isinstance(one_way, str) else None,
        air_both=bool(more.get("air_both")),
    )


@st.composite
def cases(draw: st.DrawFn, *, one_way: bool) -> Case:
    names = "ABCD"[: draw(st.integers(1, 4))]
    floor = {name: draw(st.integers(0, 3)) for name in names}
    top = {name: floor[name] + draw(st.integers(2, 6)) for name in names}
    numbers = count(1)
    ways: list[Way] = []

    def rim(cells: tuple[str, ...], *, lift: bool) -> tuple[int, int] | None:
        least, most = max(floor[cell] for cell in cells), min(top[cell] for cell in cells)
        if least > most:
            return None
        low = draw(st.integers(least, most))
        high = draw(st.integers(low, most))
        # A dam, or a pipe that rises and falls, asks fuel to stand higher than air must stay below.
        return low + (draw(st.sampled_from([0, 0, 0, 1, 2])) if lift else 0), high

    for _ in range(draw(st.integers(0, 7)) if len(names) > 1 else 0):
        pair = draw(st.permutations(names))[:2]
        heights = rim(tuple(pair), lift=True)
        if heights is None:
            continue
        flap = draw(st.sampled_from([None, None, pair[0]])) if one_way else None
        both = draw(st.booleans()) if flap else False
        ways.append(way(f"o{next(numbers)}", tuple(pair), None, *heights, one_way=flap, air_both=both))
    for outside, least, most in ((Outside.OUTLET, 1, 2), (Outside.FILLER, 1, 2), (Outside.VENT, 0, 2)):
        for _ in range(draw(st.integers(least, most))):
            cell = draw(st.sampled_from(names))
            heights = rim((cell,), lift=outside is not Outside.FILLER)
            assert heights is not None
            ways.append(way(f"{outside.value}{next(numbers)}", (cell,), outside, *heights))
    return Case(floor=floor, top=top, ways=tuple(ways), tee=draw(st.booleans()))


# --- every simple way, one by one -------------------------------------------------------------------


def simple_ways(case: Case, start: str, among: set[str]) -> Iterator[list[tuple[str, Way]]]:
    """All ways out of a cell that enter no cell twice, as (cell entered, opening) steps."""

    def onward(at: str, seen: set[str], steps: list[tuple[str, Way]]) -> Iterator[list[tuple[str, Way]]]:
        yield steps
        for one in case.ways:
            if one.outside is None and at in one.cells:
                other = one.cells[0] if one.cells[1] == at else one.cells[1]
                if other in among and other not in seen:
                    yield from onward(other, seen | {other}, [*steps, (other, one)])

    yield from onward(start, {start}, [])


def may(one: Way, into: str | None, *, air: bool) -> bool:
    return one.one_way in (None, into) or (air and one.air_both)


def searched_levels(case: Case, among: set[str]) -> dict[str, float]:
    levels = {}
    outlets = case.kind(Outside.OUTLET)
    for cell in among:
        best = math.inf
        for steps in simple_ways(case, cell, among):
            if not all(may(one, into, air=False) for into, one in steps):
                continue
            end = steps[-1][0] if steps else cell
            for outlet in outlets:
                if outlet.cells[0] == end:
                    drawn = outlets if case.tee else [outlet]
                    crests = [one.low_m for _, one in steps] + [outlet.low_m] + [one.high_m for one in drawn]
                    best = min(best, max(crests))
        levels[cell] = best
    return levels


def searched_aired(case: Case, cell: str, among: set[str], levels: dict[str, float], dry: set[str]) -> bool:
    for steps in simple_ways(case, cell, among | dry):
        end = steps[-1][0] if steps else cell
        if not any(vent.cells[0] == end for vent in case.kind(Outside.VENT)):
            continue
        # Air comes the other way: out of each cell entered, into the one before it.
        before = [cell, *(into for into, _ in steps[:-1])]
        if all(
            may(one, into, air=True) and one.high_m > (-math.inf if side in dry else levels[side])
            for into, (side, one) in zip(before, steps, strict=False)
        ):
            return True
    return False


def searched_drain(case: Case, dry: set[str]) -> dict[str, float]:
    among = set(case.floor) - dry
    kept = dict.fromkeys(case.floor, math.inf) | dict.fromkeys(dry, -math.inf)
    while True:
        levels = searched_levels(case, among)
        shut = {
            cell
            for cell in among
            if levels[cell] < math.inf and not searched_aired(case, cell, among, levels, dry)
        }
        if not shut:
            return kept | levels
        among -= shut


def searched_fill(case: Case, filler: Way) -> dict[str, float]:
    every = set(case.floor)
    vents = case.kind(Outside.VENT)
    stop = min([filler.low_m, *(vent.low_m for vent in vents)])
    level = {}
    for cell in every:
        air = -math.inf
        for steps in simple_ways(case, cell, every):
            if all(may(one, into, air=True) for into, one in steps):
                end = steps[-1][0] if steps else cell
                for last in (*vents, filler):
                    if last.cells[0] == end:
                        air = max(air, min([one.high_m for _, one in steps] + [last.high_m]))
        level[cell] = min(stop, air)
    reached = set()
    for cell in every:
        for steps in simple_ways(case, filler.cells[0], every):
            end = steps[-1][0] if steps else filler.cells[0]
            sides = [filler.cells[0], *(into for into, _ in steps[:-1])]
            if end == cell and all(
                may(one, into, air=False) and one.low_m <= level[side]
                for side, (into, one) in zip(sides, steps, strict=False)
            ):
                reached.add(cell)
    return {cell: level[cell] if cell in reached else -math.inf for cell in every}


def searched_vented(case: Case, stop: float, reached: set[str]) -> set[str]:
    """Reached cells whose space above the fuel stays open to a vent; an open filler is none."""
    clear = {one.name for one in case.ways if one.high_m >= stop}
    vented = set()
    for cell in reached:
        for steps in simple_ways(case, cell, set(case.floor)):
            end = steps[-1][0] if steps else cell
            breathes = all(may(one, into, air=True) and one.name in clear for into, one in steps)
            vents = (one for one in case.kind(Outside.VENT) if one.cells[0] == end)
            if breathes and any(one.name in clear for one in vents):
                vented.add(cell)
    return vented


def searched_dry(case: Case) -> set[str]:
    wet = {one.cells[0] for one in case.kind(Outside.FILLER)}
    tee = {one.cells[0] for one in case.kind(Outside.OUTLET)} if case.tee else set()
    for _ in case.floor:
        for one in case.ways:
            if one.outside is None:
                for here, into in (one.cells, one.cells[::-1]):
                    if here in wet and may(one, into, air=False):
                        wet.add(into)
        if wet & tee:
            wet |= tee
    return set(case.floor) - wet


@FIXED
@given(cases(one_way=True))
def test_draining_is_what_a_search_over_all_simple_ways_finds(case: Case) -> None:
    dry = searched_dry(case)
    assert dry_cells(case.network, case.pulls) == dry
    kept = drain(case.network, case.pulls, dry)
    assert {cell: one.level_m for cell, one in kept.items()} == searched_drain(case, dry)


@FIXED
@given(cases(one_way=True))
def test_filling_is_what_a_search_over_all_simple_ways_finds(case: Case) -> None:
    for filler in case.kind(Outside.FILLER):
        filling = fill(case.network, filler)
        assert {cell: filling.level_of(cell) for cell in case.floor} == searched_fill(case, filler)
        assert filling.vented == searched_vented(case, filling.level_m, set(filling.reached))


@FIXED
@given(cases(one_way=True))
def test_the_opening_named_is_the_one_that_must_move(case: Case) -> None:
    dry = searched_dry(case)
    for one in drain(case.network, case.pulls, dry).values():
        if one.opening is not None:
            named = next(way for way in case.ways if way.name == one.opening)
            assert one.level_m in (named.low_m, named.high_m)
            assert one.by == ("outlet" if named.outside is Outside.OUTLET else named.name)


# --- fuel and air in small steps, without the network -------------------------------------------------


class Pour:
    """One filler open, one cubic metre at a time into the lowest cell that takes it."""

    def __init__(self, case: Case, filler: Way) -> None:
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
                    if into not in wet and may(one, into, air=False) and self.level[here] >= one.low_m:
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
                    if into not in seen and may(one, into, air=True):
                        seen.add(into)
                        left.append(into)
        return False


class Drain:
    """All wet cells full; one cubic metre at a time from the highest cell that can give it.

    A cell gives only where air comes in. A full cell that air cannot enter passes fuel on like a
    pipe. Fuel passes a lip lower than the level it comes from; it is never sucked over one.
    """

    def __init__(self, case: Case, dry: set[str]) -> None:
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
                    if into not in reached and may(one, into, air=True):
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
                and may(one, one.cells[0] if one.cells[1] == here else one.cells[1], air=False)
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
@given(cases(one_way=False))
def test_pouring_step_by_step_never_holds_less_than_reckoned(case: Case) -> None:
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
@given(cases(one_way=True))
def test_draining_step_by_step_never_leaves_more_than_reckoned(case: Case) -> None:
    dry = searched_dry(case)
    kept = drain(case.network, case.pulls, dry)
    left = {cell: level - case.floor[cell] for cell, level in Drain(case, dry).level.items()}
    reckoned = {cell: case.volume(cell, kept[cell].level_m) for cell in case.floor}
    assert sum(left.values()) <= sum(reckoned.values())
    if not any(one.by == NO_AIR for one in kept.values()):
        assert left == reckoned


def test_the_simulations_do_meet_cells_cut_off_from_air() -> None:
    flap = Case(
        floor={"A": 0, "B": 0},
        top={"A": 6, "B": 6},
        ways=(
            way("low", ("A", "B"), None, 0, 1),
            way("out", ("A",), Outside.OUTLET, 1, 2),
            way("fill", ("A",), Outside.FILLER, 5, 5),
            way("vent", ("A",), Outside.VENT, 6, 6),
        ),
        tee=False,
    )
    assert drain(flap.network, flap.pulls, set())["B"].by == NO_AIR
    assert Drain(flap, set()).level == {"A": 2, "B": 6}
    assert Pour(flap, flap.kind(Outside.FILLER)[0]).level == {"A": 5, "B": 1}


def test_what_is_not_joined_to_an_outlet_has_no_way_out() -> None:
    case = Case(
        floor={"A": 0, "B": 0},
        top={"A": 4, "B": 4},
        ways=(
            way("out", ("A",), Outside.OUTLET, 0, 1),
            way("f1", ("A",), Outside.FILLER, 4, 4),
            way("f2", ("B",), Outside.FILLER, 4, 4),
            way("vent", ("A",), Outside.VENT, 4, 4),
        ),
        tee=False,
    )
    assert drain(case.network, case.pulls, set())["B"].by == NO_WAY_OUT
    assert drain(case.network, case.pulls, set())["B"].level_m == math.inf


@pytest.mark.parametrize("tee", [True, False])
def test_two_outlets_stop_at_the_higher_limit_on_a_tee_and_each_at_its_own_on_a_selector(tee: bool) -> None:
    case = Case(
        floor={"A": 0, "B": 0},
        top={"A": 6, "B": 6},
        ways=(
            way("outA", ("A",), Outside.OUTLET, 0, 1),
            way("outB", ("B",), Outside.OUTLET, 2, 3),
            way("low", ("A", "B"), None, 2, 4),
            way("fill", ("A",), Outside.FILLER, 6, 6),
            way("vent", ("A",), Outside.VENT, 6, 6),
        ),
        tee=tee,
    )
    levels = {cell: one.level_m for cell, one in drain(case.network, case.pulls, set()).items()}
    assert levels == ({"A": 3, "B": 3} if tee else {"A": 1, "B": 2})


def test_air_comes_through_a_dry_cell_over_a_hole_that_would_be_covered_in_a_wet_one() -> None:
    case = Case(
        floor={"A": 0, "B": 0},
        top={"A": 4, "B": 4},
        ways=(
            way("out", ("A",), Outside.OUTLET, 0, 0),
            # Only air and fuel from the dry cell B pass into A, at B's floor.
            way("flap", ("A", "B"), None, 0, 0, one_way="A"),
            way("fill", ("A",), Outside.FILLER, 4, 4),
            way("vent", ("B",), Outside.VENT, 4, 4),
        ),
        tee=False,
    )
    dry = dry_cells(case.network, case.pulls)
    assert dry == {"B"}
    kept = drain(case.network, case.pulls, dry)
    assert (kept["A"].level_m, kept["A"].by) == (0, "outlet")
    assert (kept["B"].level_m, kept["B"].by) == (-math.inf, "dry")
