"""The account of the box: that skins, panels, paste, solids, cells and dry space are all of it, once each."""

from __future__ import annotations

from collections.abc import Callable, Sequence

from ledger.loft.bays import TankBay
from ledger.loft.bodies import Body, body_of, united
from ledger.loft.division import Division
from ledger.loft.layout import Fill
from ledger.loft.lofted import Account
from ledger.loft.panels import FlatPanel
from ledger.loft.shell import Shell, skin_solids, tail_solids

# Faces that lie in one another to the last bits are what a solid library is least sure of, so the union
# is taken in several attitudes: what truly overlaps does so in all of them.
Attitude = tuple[float, float, float]
_ATTITUDES_DEG: tuple[Attitude, ...] = ((0.0, 0.0, 0.0), (17.0, 31.0, 43.0), (71.0, -29.0, 13.0))
NEXT_TO_NOTHING = 1e-6


def account(
    shell: Shell,
    division: Division,
    panels: tuple[FlatPanel, ...],
    cells: tuple[TankBay, ...],
    fills: tuple[tuple[Fill, Body], ...],
) -> Account:
    """Volumes of everything in the lofted box, m3, and what is left over or claimed twice.

    Skins come from the rings, panels from their cut outlines, cells from the faces of their walls; the
    dry space is what the walls leave and no cell or fill takes. Nothing is set to close the sum.
    """
    box = body_of(shell.box())
    skins = [body_of(mesh) for mesh in skin_solids(shell)]
    tails = [body_of(mesh) for mesh in tail_solids(shell)]
    plates = [panel.solid for panel in panels]
    walls = [wall.solid for wall in (*division.ribs, *division.webs)]
    solids = [cap.solid for cap in division.caps] + [body for _, body in fills]
    spaces = [cell.space for cell in cells]
    dry = division.free - united([*spaces, *(body for _, body in fills)])
    panels_m3, walls_m3 = _volume(plates), _volume(walls)
    figures = {
        "skins_m3": _volume(skins),
        "panels_m3": panels_m3,
        "paste_m3": walls_m3 - panels_m3 + _volume(tails),
        "solids_m3": _volume(solids),
        "cells_m3": _volume(spaces),
        "dry_m3": dry.volume(),
    }
    everything = [*skins, *tails, *walls, *solids, *spaces, dry]
    total = sum(figures.values())
    enough = NEXT_TO_NOTHING * box.volume()
    return Account(
        box_m3=box.volume(),
        apart_m3=box.volume() - total,
        shared_m3=_least(lambda turn: _shared(everything, turn), enough)
        + _beyond_walls(division, panels, enough),
        **figures,
    )


def _beyond_walls(division: Division, panels: tuple[FlatPanel, ...], enough_m3: float) -> float:
    """What panels claim outside the room of their own wall, or twice within it.

    A wall less its panels is no part of the union: a plate whose faces lie in those of the wall to all
    but the last bits is what a difference is least sure of.
    """
    walls = (*division.ribs, *division.webs)
    beyond = 0.0
    for wall in walls:
        plates = [panel.solid for panel in panels if panel.wall is wall]
        inside = wall.solid.volume()
        beyond += _least(
            lambda turn, bodies=(wall.solid, *plates), inside=inside: _together(bodies, turn) - inside,
            enough_m3 / len(walls),
        )
        if len(plates) > 1:
            beyond += _least(lambda turn, plates=plates: _shared(plates, turn), enough_m3 / len(walls))
    return beyond


def _least(measured: Callable[[Attitude], float], enough_m3: float) -> float:
    """The least of what is measured in several attitudes, as soon as it is little enough."""
    least = float("inf")
    for turn in _ATTITUDES_DEG:
        least = min(least, measured(turn), key=abs)
        if abs(least) <= enough_m3:
            break
    return least


def _shared(bodies: Sequence[Body], turn_deg: Attitude) -> float:
    return _volume(bodies) - _together(bodies, turn_deg)


def _together(bodies: Sequence[Body], turn_deg: Attitude) -> float:
    return float(united(body.rotate(turn_deg) for body in bodies).volume())


def _volume(bodies: Sequence[Body]) -> float:
    return float(sum(body.volume() for body in bodies))


def is_proved(found: Account) -> bool:
    """Whether the parts are disjoint and together the box, to one part in a million."""
    least = NEXT_TO_NOTHING * found.box_m3
    return abs(found.apart_m3) <= least and abs(found.shared_m3) <= least
