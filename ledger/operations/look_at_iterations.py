"""Everything the Iterations screen shows, frozen: two iterations compared, and all of them over time."""

from __future__ import annotations

import math
from collections import OrderedDict
from collections.abc import Iterator
from dataclasses import dataclass
from datetime import datetime
from itertools import takewhile
from pathlib import Path
from typing import TypeVar

from ledger.mass.weigh_up import weigh_up
from ledger.model.acts import Adopt
from ledger.model.comparison import Comparison
from ledger.model.entry import Logged
from ledger.model.gather import Gathering, tags_of
from ledger.model.progress import Progress, unwatched
from ledger.model.snapshot import Iteration, Snapshot
from ledger.operations.compare_iterations import Side, build_under, compare_sides, side_of_folder
from ledger.operations.open_build import Build
from ledger.operations.outline_plan import FromAbove, outline_plan
from ledger.operations.plan_to_adopt import PlanToAdopt, read_plan_to_adopt
from ledger.operations.reckon_fuel import reckon_build
from ledger.operations.stored_plan import plan_key
from ledger.units import Display

_Value = TypeVar("_Value")

_MOST_KEPT = 32
_LEVELS = 1


@dataclass(frozen=True, slots=True, kw_only=True)
class Moment:
    """One iteration over the time it was the current one.

    `best_kg` is what the wing was known to weigh when the next one was adopted, and weighs now under
    the last. `forecast_kg` is None until forecasts are kept. One withdrawn has no figures.
    """

    seq: int
    name: str
    title: str
    by: str
    at: datetime
    withdrawn: bool
    estimated_kg: float | None = None
    best_kg: float | None = None
    forecast_kg: float | None = None
    usable_m3: float | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Wanted:
    """What is to be compared: two iterations by name, the newer one maybe the folder of a plan not adopted.

    `drawn` asks for both plans from above as well.
    """

    a: str
    b: str | None
    folder: Path | None = None
    drawn: bool = False


@dataclass(frozen=True, slots=True, kw_only=True)
class IterationsView:
    """The two compared, None where there is only one; all of them in order; both plans from above.

    `name_taken` is for a folder: whether an iteration of the name in its plan.toml is in the book.
    """

    display: Display
    comparison: Comparison | None
    history: tuple[Moment, ...]
    plans: tuple[FromAbove, FromAbove] | None = None
    name_taken: bool = False


def names_of(snapshot: Snapshot) -> tuple[str, ...]:
    """The iterations that count, oldest first."""
    return tuple(iteration.name for iteration in snapshot.iterations)


def look_at_iterations(build: Build, wanted: Wanted, progress: Progress = unwatched) -> IterationsView:
    """Compare, and tell the history.

    Raises
        Refused: the plan in the folder has errors.
        WrongUse: there is no such folder.
        KeyError: an iteration that the book does not have.
        Stopped: `progress` was told to end the work.
    """
    previewed = None
    if wanted.folder is not None:
        previewed = read_plan_to_adopt(wanted.folder, build.cache, progress=progress)
    sides = _sides(build, wanted, previewed)
    comparison = None if sides is None else compare_sides(*sides, progress=progress)
    if sides is not None and comparison is not None and comparison.fuel is not None:
        _keep(sides, comparison)
    plans = None
    if sides is not None and wanted.drawn:
        plans = (_drawn(sides[0].build, progress), _drawn(sides[1].build, progress))
    return IterationsView(
        display=build.snapshot.plan.display,
        comparison=comparison,
        history=look_back(build, progress),
        plans=plans,
        name_taken=previewed is not None and _has(build.snapshot, previewed.plan.name),
    )


def look_back(build: Build, progress: Progress = unwatched) -> tuple[Moment, ...]:
    """Every plan ever adopted, in order, those withdrawn without figures."""
    counting = {iteration.seq: iteration for iteration in build.snapshot.iterations}
    adopted = [entry for entry in build.logged if isinstance(entry.act, Adopt)]
    last = {before.seq: after for before, after in _following(build.snapshot.iterations)}
    moments = []
    for done, entry in enumerate(adopted):
        progress(f"history, {_act(entry).plan}", done, len(adopted))
        iteration = counting.get(entry.seq)
        if iteration is None:
            moments.append(_moment(entry, None, build, None, progress))
        else:
            moments.append(_moment(entry, iteration, build, last[entry.seq], progress))
    return tuple(moments)


def _following(iterations: tuple[Iteration, ...]) -> Iterator[tuple[Iteration, Iteration | None]]:
    yield from zip(iterations, (*iterations[1:], None), strict=True)


def _moment(
    entry: Logged, iteration: Iteration | None, build: Build, after: Iteration | None, progress: Progress
) -> Moment:
    act = _act(entry)
    if iteration is None:
        return Moment(seq=entry.seq, name=act.plan, title=act.title, by=entry.by, at=entry.at, withdrawn=True)
    weights = weigh_up(_as_then(build, after), build_under(build, iteration).cell_places())
    return Moment(
        seq=entry.seq,
        name=act.plan,
        title=act.title,
        by=entry.by,
        at=entry.at,
        withdrawn=False,
        estimated_kg=weights.total.estimated_kg,
        best_kg=weights.total.best_kg,
        usable_m3=_usable(build_under(build, iteration), progress),
    )


def _as_then(build: Build, after: Iteration | None) -> Snapshot:
    """The book as it stood before the next plan was adopted, by what counts of it now."""
    snapshot = build.snapshot
    if after is None:
        return snapshot
    plans = {one.seq: one.plan for one in snapshot.iterations}
    # Of what counts now: an entry withdrawn or put right later was wrong then too.
    until = tuple(takewhile(lambda one: one.seq != after.seq, snapshot.logged))
    gathering = Gathering(tags=tags_of(build.logged), plan_of=lambda adopted: plans[adopted.seq])
    for entry in until:
        gathering.add(entry)
    return gathering.snapshot(last_seq=until[-1].seq, last_digest="", now=after.at)


def _act(entry: Logged) -> Adopt:
    if not isinstance(entry.act, Adopt):
        raise TypeError(f"entry {entry.seq} adopts no plan")
    return entry.act


def _has(snapshot: Snapshot, name: str) -> bool:
    return name.casefold() in {other.casefold() for other in names_of(snapshot)}


def _sides(build: Build, wanted: Wanted, previewed: PlanToAdopt | None) -> tuple[Side, Side] | None:
    by_name = {iteration.name: iteration for iteration in build.snapshot.iterations}
    first = by_name[wanted.a]
    a = Side(build=build_under(build, first), name=first.name, adopted=True)
    if previewed is not None:
        return a, side_of_folder(build, previewed, str(wanted.folder))
    if wanted.b is None or wanted.b == wanted.a:
        return None
    second = by_name[wanted.b]
    return a, Side(build=build_under(build, second), name=second.name, adopted=True)


# What depends on a plan alone, by its files: usable fuel, and the plan from above.
_usable_kept: OrderedDict[str, float | None] = OrderedDict()
_drawn_kept: OrderedDict[str, FromAbove] = OrderedDict()


def forget_plans() -> None:
    """Reckon everything again next time."""
    _usable_kept.clear()
    _drawn_kept.clear()


def _usable(build: Build, progress: Progress) -> float | None:
    if not build.snapshot.plan.tanks.tanks:
        return None
    key = _plan_key(build)
    if key not in _usable_kept:
        report = reckon_build(build, levels=_LEVELS, progress=progress)
        known = [tank.usable_m3 for tank in report.tanks if tank.usable_m3 is not None]
        whole = len(known) == len(report.tanks)
        _remember(_usable_kept, key, math.fsum(known) if whole else None)
    return _usable_kept[key]


def _keep(sides: tuple[Side, Side], comparison: Comparison) -> None:
    if comparison.fuel is None:
        return
    usable = comparison.fuel.whole.usable_m3
    for side, value in zip(sides, (usable.a, usable.b), strict=True):
        if side.adopted:
            _remember(_usable_kept, _plan_key(side.build), value)


def _drawn(build: Build, progress: Progress) -> FromAbove:
    key = _plan_key(build)
    if key not in _drawn_kept:
        _remember(_drawn_kept, key, outline_plan(build, progress))
    return _drawn_kept[key]


def _plan_key(build: Build) -> str:
    seq = build.snapshot.iterations[-1].seq
    return plan_key(next(_act(entry) for entry in build.snapshot.logged if entry.seq == seq))


def _remember(kept: OrderedDict[str, _Value], key: str, value: _Value) -> None:
    kept[key] = value
    while len(kept) > _MOST_KEPT:
        kept.popitem(last=False)
