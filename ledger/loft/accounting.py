"""The account of the box: that skins, panels, paste, solids, cells and dry space are all of it, once each."""

from __future__ import annotations

from ledger.loft.bays import TankBay
from ledger.loft.bodies import Body, body_of, united
from ledger.loft.division import Division
from ledger.loft.layout import Fill
from ledger.loft.lofted import Account
from ledger.loft.panels import FlatPanel
from ledger.loft.shell import Shell, skin_solids, tail_solids

# Faces that lie in one another to the last bits are what a solid library is least sure of, so the union
# is taken in several attitudes: what truly overlaps does so in all of them.
_ATTITUDES_DEG = ((0.0, 0.0, 0.0), (17.0, 31.0, 43.0), (71.0, -29.0, 13.0))
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
    pastes = [wall.solid - united(_plates_of(wall.part, panels)) for wall in (*division.ribs, *division.webs)]
    everything = [*skins, *tails, *plates, *pastes, *solids, *spaces, dry]
    total = sum(figures.values())
    return Account(
        box_m3=box.volume(),
        apart_m3=box.volume() - total,
        shared_m3=_least_shared(everything, NEXT_TO_NOTHING * box.volume()),
        **figures,
    )


def _plates_of(part: str, panels: tuple[FlatPanel, ...]) -> list[Body]:
    return [panel.solid for panel in panels if panel.wall.part == part]


def _least_shared(bodies: list[Body], enough_m3: float) -> float:
    least = float("inf")
    for turn in _ATTITUDES_DEG:
        least = min(least, _shared(bodies, turn), key=abs)
        if abs(least) <= enough_m3:
            break
    return least


def _shared(bodies: list[Body], turn_deg: tuple[float, float, float]) -> float:
    turned = [body.rotate(turn_deg) for body in bodies]
    return _volume(turned) - float(united(turned).volume())


def _volume(bodies: list[Body]) -> float:
    return float(sum(body.volume() for body in bodies))


def is_proved(found: Account) -> bool:
    """Whether the parts are disjoint and together the box, to one part in a million."""
    least = NEXT_TO_NOTHING * found.box_m3
    return abs(found.apart_m3) <= least and abs(found.shared_m3) <= least
