"""The account of the box: that skins, panels, paste, solids, cells and dry space are all of it, once each."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from functools import partial

from ledger.loft.bays import TankBay
from ledger.loft.bodies import Body, body_of, united
from ledger.loft.division import Division
from ledger.loft.faults import Tick
from ledger.loft.layout import Fill
from ledger.loft.lofted import Account
from ledger.loft.panels import FlatPanel
from ledger.loft.shell import Shell, skin_solids, tail_solids

# Faces that lie in one another to the last bits are what a solid library is least sure of, so what does
# not come out even is reckoned again in another attitude: what truly overlaps does so in all of them.
Attitude = tuple[float, float, float]
_ATTITUDES_DEG: tuple[Attitude, ...] = ((0.0, 0.0, 0.0), (17.0, 31.0, 43.0), (71.0, -29.0, 13.0))
NEXT_TO_NOTHING = 1e-6
_AT_ONCE = 120


@dataclass(frozen=True, kw_only=True, eq=False)
class _Contents:
    """What is in the box; `free` is what skins, caps and walls leave."""

    box_m3: float
    skins: tuple[Body, ...]
    tails: tuple[Body, ...]
    caps: tuple[Body, ...]
    walls: tuple[Body, ...]
    fills: tuple[Body, ...]
    cells: tuple[Body, ...]
    free: Body
    panels_m3: float
    beyond_walls_m3: float


def account(
    shell: Shell,
    division: Division,
    panels: tuple[FlatPanel, ...],
    cells: tuple[TankBay, ...],
    fills: tuple[tuple[Fill, Body], ...],
    *,
    tick: Tick,
) -> Account:
    """Volumes of everything in the lofted box, m3, and what is left over or claimed twice.

    Skins come from the rings, panels from their cut outlines, cells from the faces of their walls; the
    dry space is what the walls leave and no cell or fill takes. Nothing is set to close the sum.
    """
    box_m3 = float(body_of(shell.box()).volume())
    plates = [(panel.wall.part, panel.solid) for panel in panels]
    contents = _Contents(
        box_m3=box_m3,
        skins=tuple(body_of(mesh) for mesh in skin_solids(shell)),
        tails=tuple(body_of(mesh) for mesh in tail_solids(shell)),
        caps=tuple(cap.solid for cap in division.caps),
        walls=tuple(wall.solid for wall in (*division.ribs, *division.webs)),
        fills=tuple(body for _, body in fills),
        cells=tuple(cell.space for cell in cells),
        free=division.free,
        panels_m3=_volume([plate for _, plate in plates]),
        beyond_walls_m3=_beyond_walls(division, plates, NEXT_TO_NOTHING * box_m3, tick),
    )
    found = _reckoned(contents, _ATTITUDES_DEG[0], tick)
    for turn in _ATTITUDES_DEG[1:]:
        if is_proved(found):
            break
        found = _reckoned(contents, turn, tick)
    return found


def _reckoned(contents: _Contents, turn: Attitude, tick: Tick) -> Account:
    """The account in one attitude."""
    tick()
    taken = [body.rotate(turn) for body in (*contents.fills, *contents.cells)]
    dry = contents.free.rotate(turn) - united(taken)
    others = (*contents.skins, *contents.tails, *contents.caps, *contents.walls)
    everything = [*(body.rotate(turn) for body in others), *taken, dry]
    figures = {
        "skins_m3": _volume(contents.skins),
        "panels_m3": contents.panels_m3,
        "paste_m3": _volume(contents.walls) - contents.panels_m3 + _volume(contents.tails),
        "solids_m3": _volume((*contents.caps, *contents.fills)),
        "cells_m3": _volume(contents.cells),
        "dry_m3": float(dry.volume()),
    }
    return Account(
        box_m3=contents.box_m3,
        apart_m3=contents.box_m3 - sum(figures.values()),
        shared_m3=_volume(everything)
        - float(_united_by_parts(everything, tick).volume())
        + contents.beyond_walls_m3,
        **figures,
    )


def _united_by_parts(bodies: Sequence[Body], tick: Tick) -> Body:
    """One solid of many, put together a few at a time so that it can be stopped between."""
    whole = united(())
    for first in range(0, len(bodies), _AT_ONCE):
        tick()
        whole = united([whole, *bodies[first : first + _AT_ONCE]])
        # The library puts work off until a figure is asked for.
        whole.volume()
    return whole


def _beyond_walls(division: Division, plates: list[tuple[str, Body]], enough_m3: float, tick: Tick) -> float:
    """What panels claim outside the room of their own wall, or twice within it.

    A wall less its panels is no part of the union: a plate whose faces lie in those of the wall to all
    but the last bits is what a difference is least sure of.
    """
    walls = (*division.ribs, *division.webs)
    beyond = 0.0
    for wall in walls:
        tick()
        own = [plate for part, plate in plates if part == wall.part]
        beyond += _least(partial(_beyond, wall.solid, own), enough_m3 / len(walls))
        if len(own) > 1:
            beyond += _least(partial(_twice, own), enough_m3 / len(walls))
    return beyond


def _beyond(wall: Body, plates: Sequence[Body], turn: Attitude) -> float:
    return _together([wall, *plates], turn) - float(wall.volume())


def _twice(plates: Sequence[Body], turn: Attitude) -> float:
    return _volume(plates) - _together(plates, turn)


def _least(measured: Callable[[Attitude], float], enough_m3: float) -> float:
    """The least of what is measured in several attitudes, as soon as it is little enough."""
    least = float("inf")
    for turn in _ATTITUDES_DEG:
        least = min(least, measured(turn), key=abs)
        if abs(least) <= enough_m3:
            break
    return least


def _together(bodies: Sequence[Body], turn: Attitude) -> float:
    return float(united(body.rotate(turn) for body in bodies).volume())


def _volume(bodies: Sequence[Body]) -> float:
    return float(sum(body.volume() for body in bodies))


def is_proved(found: Account) -> bool:
    """Whether the parts are disjoint and together the box, to one part in a million."""
    least = NEXT_TO_NOTHING * found.box_m3
    return abs(found.apart_m3) <= least and abs(found.shared_m3) <= least
