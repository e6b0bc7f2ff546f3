"""The searches over the network, against a search over all simple ways, one by one."""

from __future__ import annotations

import math
from collections.abc import Iterator
from typing import Any

from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from ledger.fuel.draining import drain, dry_cells
from ledger.fuel.filling import fill
from ledger.fuel.ways import Way
from ledger.model.tanks import Outside

FIXED = settings(
    max_examples=400, derandomize=True, deadline=None, suppress_health_check=[HealthCheck.too_slow]
)


def simple_ways(case: Any, start: str, among: set[str]) -> Iterator[list[tuple[str, Way]]]:
    """All ways out of a cell that enter no cell twice, as (cell entered, opening) steps."""

    def onward(at: str, seen: set[str], steps: list[tuple[str, Way]]) -> Iterator[list[tuple[str, Way]]]:
        yield steps
        for one in case.ways:
            if one.outside is None and at in one.cells:
                other = one.cells[0] if one.cells[1] == at else one.cells[1]
                if other in among and other not in seen:
                    yield from onward(other, seen | {other}, [*steps, (other, one)])

    yield from onward(start, {start}, [])


def searched_levels(case: Any, among: set[str]) -> dict[str, float]:
    levels = {}
    outlets = case.kind(Outside.OUTLET)
    for cell in among:
        best = math.inf
        for steps in simple_ways(case, cell, among):
            if not all(case.may(one, into, air=False) for into, one in steps):
                continue
            end = steps[-1][0] if steps else cell
            for outlet in outlets:
                if outlet.cells[0] == end:
                    drawn = outlets if case.tee else [outlet]
                    crests = [one.low_m for _, one in steps] + [outlet.low_m] + [one.high_m for one in drawn]
                    best = min(best, max(crests))
        levels[cell] = best
    return levels


def searched_aired(case: Any, cell: str, among: set[str], levels: dict[str, float], dry: set[str]) -> bool:
    for steps in simple_ways(case, cell, among | dry):
        end = steps[-1][0] if steps else cell
        if not any(vent.cells[0] == end for vent in case.kind(Outside.VENT)):
            continue
        # Air comes the other way: out of each cell entered, into the one before it.
        before = [cell, *(into for into, _ in steps[:-1])]
        if all(
            case.may(one, into, air=True) and one.high_m > (-math.inf if side in dry else levels[side])
            for into, (side, one) in zip(before, steps, strict=False)
        ):
            return True
    return False


def searched_drain(case: Any, dry: set[str]) -> dict[str, float]:
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


def searched_fill(case: Any, filler: Way) -> dict[str, float]:
    every = set(case.floor)
    vents = case.kind(Outside.VENT)
    stop = min([filler.low_m, *(vent.low_m for vent in vents)])
    level = {}
    for cell in every:
        air = -math.inf
        for steps in simple_ways(case, cell, every):
            if all(case.may(one, into, air=True) for into, one in steps):
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
                case.may(one, into, air=False) and one.low_m <= level[side]
                for side, (into, one) in zip(sides, steps, strict=False)
            ):
                reached.add(cell)
    return {cell: level[cell] if cell in reached else -math.inf for cell in every}


def searched_vented(case: Any, stop: float, reached: set[str]) -> set[str]:
    """Reached cells whose space above the fuel stays open to a vent; an open filler is none."""
    clear = {one.name for one in case.ways if one.high_m >= stop}
    vented = set()
    for cell in reached:
        for steps in simple_ways(case, cell, set(case.floor)):
            end = steps[-1][0] if steps else cell
            breathes = all(case.may(one, into, air=True) and one.name in clear for into, one in steps)
            vents = (one for one in case.kind(Outside.VENT) if one.cells[0] == end)
            if breathes and any(one.name in clear for one in vents):
                vented.add(cell)
    return vented


@FIXED
@given(data=st.data())
def test_draining_is_what_a_search_over_all_simple_ways_finds(networks: Any, data: st.DataObject) -> None:
    case = data.draw(networks.drawn(one_way=True))
    dry = case.dry
    assert dry_cells(case.network, case.pulls) == dry
    kept = drain(case.network, case.pulls, dry)
    assert {cell: one.level_m for cell, one in kept.items()} == searched_drain(case, dry)


@FIXED
@given(data=st.data())
def test_filling_is_what_a_search_over_all_simple_ways_finds(networks: Any, data: st.DataObject) -> None:
    case = data.draw(networks.drawn(one_way=True))
    for filler in case.kind(Outside.FILLER):
        filling = fill(case.network, filler)
        assert {cell: filling.level_of(cell) for cell in case.floor} == searched_fill(case, filler)
        assert filling.vented == searched_vented(case, filling.level_m, set(filling.reached))


@FIXED
@given(data=st.data())
def test_the_opening_named_is_the_one_that_must_move(networks: Any, data: st.DataObject) -> None:
    case = data.draw(networks.drawn(one_way=True))
    dry = case.dry
    for one in drain(case.network, case.pulls, dry).values():
        if one.opening is not None:
            named = next(way for way in case.ways if way.name == one.opening)
            assert one.level_m in (named.low_m, named.high_m)
            assert one.by == ("outlet" if named.outside is Outside.OUTLET else named.name)
