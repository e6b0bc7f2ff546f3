"""Holes through walls, laid by rule: how far along, how far clear of a skin, and what they join."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from dataclasses import dataclass
from itertools import combinations
from typing import TYPE_CHECKING

import numpy as np

from ledger.errors import Finding
from ledger.loft.bays import Spot, TankBay
from ledger.loft.faults import millimetres, stop
from ledger.loft.layout import Height, Hole, Layout, Walls
from ledger.loft.lofted import Floats, LoftedOpening, RoundHole
from ledger.model.tanks import Circle
from ledger.model.vectors import Vector

if TYPE_CHECKING:
    from shapely.geometry.base import BaseGeometry

_CLOSE_M = 1e-9


@dataclass(frozen=True, kw_only=True, eq=False)
class LaidHole:
    """A hole where its rule puts it, in its panel's own axes."""

    rule: Hole
    spot: Spot
    hole: RoundHole


def lay_holes(
    layout: Layout, spots: tuple[Spot, ...], cells: tuple[TankBay, ...]
) -> tuple[tuple[LaidHole, ...], tuple[Finding, ...]]:
    """Every hole of every rule, or why a wall has no room for it."""
    number = {cell.bay.name: cell for cell in cells}
    ribs = frozenset(spot.label for spot in spots if spot.panel.wall.rib is not None)
    laid: list[LaidHole] = []
    faults: list[Finding] = []
    for rule in layout.holes:
        chosen = [spot for spot in spots if _is_meant(rule, spot, number, ribs)]
        faults.extend(_unknown_walls(rule, spots))
        for spot in chosen:
            hole = _lay(rule, spot)
            if hole is None or not _fits(spot, hole):
                faults.append(_too_large(rule, spot))
            else:
                laid.append(LaidHole(rule=rule, spot=spot, hole=hole))
    faults.extend(_overlapping(laid))
    faults.extend(_open_tanks(laid, number))
    return tuple(laid), tuple(faults)


def _is_meant(rule: Hole, spot: Spot, cells: dict[str, TankBay], ribs: frozenset[str]) -> bool:
    of_web = spot.panel.wall.rib is None
    if not isinstance(rule.walls, Walls):
        named = spot.label in rule.walls and spot.label not in rule.leaving_out
        return named and not (of_web and spot.label in ribs)
    if of_web != (rule.walls is Walls.WEBS) or spot.label in rule.leaving_out:
        return False
    tanks = [cells[bay.name].tank if bay is not None and bay.name in cells else None for bay in spot.bays]
    return tanks[0] is not None and tanks[0] is tanks[1]


def _unknown_walls(rule: Hole, spots: tuple[Spot, ...]) -> Iterator[Finding]:
    known = {spot.label for spot in spots}
    named = (() if isinstance(rule.walls, Walls) else rule.walls) + rule.leaving_out
    for name in named:
        if name not in known:
            yield stop(
                rule.place,
                "wall-unknown",
                f"hole {rule.name!r} names wall {name}, which is not there",
                f"the walls here are {', '.join(sorted(known))}",
            )


def _lay(rule: Hole, spot: Spot) -> RoundHole | None:
    x = rule.along.of(spot.start_m, spot.end_m)
    y = height_in(spot.panel.space, x, 0.5 * rule.diameter_m, rule.height)
    return None if y is None else RoundHole(x_m=x, y_m=y, diameter_m=rule.diameter_m)


def height_in(space: Floats, x: float, radius_m: float, height: Height) -> float | None:
    """The middle of a round hole above `x` in an outline (n, 2), None where there is no room for one.

    Its edge stays clear of the lower or of the upper side, wherever that comes nearest.
    """
    from shapely import LineString, Polygon

    upright = LineString([(x, space[:, 1].min() - 1.0), (x, space[:, 1].max() + 1.0)])
    crossing = Polygon(space).intersection(upright)
    if crossing.is_empty:
        return None
    low, high = crossing.bounds[1], crossing.bounds[3]
    if height.share is not None:
        return float(low + height.share * (high - low))
    upward = height.above_lower_m is not None
    clear = radius_m + float((height.above_lower_m if upward else height.below_upper_m) or 0.0)
    side = _side(space, 0.5 * (low + high), lower=upward)
    start, far = (low, high) if upward else (high, low)
    return _first_clear(side, x, start, far, clear)


def _side(space: Floats, middle: float, *, lower: bool) -> BaseGeometry:
    """The edges of an outline that face down (or up), and upright ones below (or above) the middle."""
    from shapely import MultiLineString

    after = np.roll(space, -1, axis=0)
    along = after - space
    facing = -along[:, 0] if lower else along[:, 0]
    beside = 0.5 * (space[:, 1] + after[:, 1])
    inner = (np.minimum(space[:, 0], after[:, 0]) > space[:, 0].min() + _CLOSE_M) & (
        np.maximum(space[:, 0], after[:, 0]) < space[:, 0].max() - _CLOSE_M
    )
    upright = (np.abs(along[:, 0]) < np.abs(along[:, 1])) & inner
    chosen = (facing < -_CLOSE_M) | (upright & ((beside < middle) == lower))
    return MultiLineString([(tuple(a), tuple(b)) for a, b in zip(space[chosen], after[chosen], strict=True)])


def _first_clear(side: BaseGeometry, x: float, start: float, far: float, clear: float) -> float | None:
    """The height nearest to `start`, on the way to `far`, that is a distance clear of a side."""
    from shapely import Point

    near, beyond = start, far
    if side.distance(Point(x, far)) < clear:
        return None
    for _ in range(60):
        middle = 0.5 * (near + beyond)
        if side.distance(Point(x, middle)) < clear:
            near = middle
        else:
            beyond = middle
    return float(beyond)


def _fits(spot: Spot, hole: RoundHole) -> bool:
    from shapely import Point, Polygon

    middle, outline = Point(hole.x_m, hole.y_m), Polygon(spot.panel.outline)
    radius = 0.5 * hole.diameter_m
    along = spot.start_m <= hole.x_m - radius and hole.x_m + radius <= spot.end_m
    return along and outline.contains(middle) and outline.exterior.distance(middle) >= radius - _CLOSE_M


def _too_large(rule: Hole, spot: Spot) -> Finding:
    return stop(
        rule.place,
        "hole-larger-than-wall",
        f"hole {rule.name!r} of {millimetres(rule.diameter_m)} has no room in wall {spot.label}",
        f"make it smaller, move it, or add leaving_out = [{spot.label!r}]".replace("'", '"'),
    )


def _overlapping(laid: Iterable[LaidHole]) -> Iterator[Finding]:
    for one, other in combinations(laid, 2):
        if one.spot.panel is not other.spot.panel:
            continue
        apart = float(np.hypot(one.hole.x_m - other.hole.x_m, one.hole.y_m - other.hole.y_m))
        if apart < 0.5 * (one.hole.diameter_m + other.hole.diameter_m):
            yield stop(
                other.rule.place,
                "hole-overlaps",
                f"holes {one.rule.name!r} and {other.rule.name!r} meet in wall {other.spot.label}",
                "move one of them",
            )


def _open_tanks(laid: Iterable[LaidHole], cells: dict[str, TankBay]) -> Iterator[Finding]:
    for one in laid:
        tanks = [None if bay is None else cells.get(bay.name) for bay in one.spot.bays]
        wet = [cell for cell in tanks if cell is not None]
        if wet and (len(wet) == 1 or wet[0].tank is not wet[1].tank):
            dry = len(wet) == 1
            code, where = ("hole-opens-tank", "a dry bay") if dry else ("hole-joins-tanks", "another tank")
            yield stop(
                one.rule.place,
                code,
                f"hole {one.rule.name!r} in wall {one.spot.label} opens bay {wet[0].bay.name} to {where}",
                f'add leaving_out = ["{one.spot.label}"]',
            )


def openings_of(laid: tuple[LaidHole, ...], cells: tuple[TankBay, ...]) -> tuple[LoftedOpening, ...]:
    """The holes that join two cells. A hole between dry bays is only a hole in its panel."""
    number = {cell.bay.name: cell.number for cell in cells}
    found = []
    for one in laid:
        joined = tuple(number[bay.name] for bay in one.spot.bays if bay is not None and bay.name in number)
        if len(joined) == 2:
            slab = one.spot.panel.wall.slab
            centre = slab.placed(np.array([[one.hole.x_m, one.hole.y_m]]))[0]
            found.append(
                LoftedOpening(
                    name=one.rule.name,
                    cells=joined,
                    outside=None,
                    rim=Circle(
                        centre_m=_vector(centre),
                        diameter_m=one.hole.diameter_m,
                        normal=_vector(slab.axes[2]),
                    ),
                    depth_m=slab.thickness_m,
                )
            )
    return tuple(found)


def _vector(values: Floats) -> Vector:
    x, y, z = (float(one) for one in values)
    return (x, y, z)
