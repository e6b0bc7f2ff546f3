"""One opening of tanks.toml: what it joins, its rim, and how fuel and air pass."""

from __future__ import annotations

import math
from collections.abc import Mapping
from itertools import pairwise

from ledger.exchange.problems import listed
from ledger.exchange.toml_text import TomlTable
from ledger.model.tanks import Circle, Opening, Outside, Pipe, Polygon, Rim
from ledger.model.vectors import Vector
from ledger.units import Dimension

_SHAPES = {
    "circle": ("centre", "diameter", "normal"),
    "polygon": ("points",),
    "pipe": ("points", "bore"),
}
_KEYS = (
    "name",
    "between",
    "shape",
    "depth",
    "dam",
    "one_way",
    "air",
    "opens_at",
    "fill_here",
    "crossfeed",
)
_FLAT_SHARE = 1e-3


def read_opening(
    table: TomlTable, name: str, unit: str | None, cells: set[str], tank_of: Mapping[str, str]
) -> Opening | None:
    """One opening, or None with findings at its keys."""
    before = table.problems.count
    shape = table.choice("shape", tuple(_SHAPES), required=True)
    others = {key for keys in _SHAPES.values() for key in keys}
    table.refuse_others(_KEYS + (_SHAPES[shape] if shape is not None else tuple(sorted(others))))
    joined, outside = _between(table, cells)
    rim = None if shape is None else _rim(table, shape, unit)
    one_way = _one_way(table, joined)
    air = table.choice("air", ("both",))
    if air is not None and one_way is None:
        table.stop("key-not-used", "air", "air is given without one_way", "leave it out, or say one_way")
    fill_here = table.flag("fill_here", False)
    if fill_here and outside is not None and outside is not Outside.FILLER:
        table.stop("key-not-used", "fill_here", f"{outside.value} is no filler", "leave fill_here out")
    crossfeed = table.flag("crossfeed", False)
    _check_tanks(table, joined, tank_of, crossfeed)
    depth = table.quantity("depth", Dimension.LENGTH, bare_unit=unit, zero=True)
    dam = table.quantity("dam", Dimension.LENGTH, bare_unit=unit, zero=True)
    opens_at = table.quantity("opens_at", Dimension.LENGTH, bare_unit=unit, zero=True)
    if table.problems.count != before or rim is None:
        return None
    return Opening(
        name=name,
        cells=joined,
        outside=outside,
        rim=rim,
        depth_m=depth,
        dam_m=dam or 0.0,
        one_way=one_way,
        air_both=air == "both",
        opens_at_m=opens_at or 0.0,
        fill_here=fill_here,
        crossfeed=crossfeed,
    )


def _between(table: TomlTable, cells: set[str]) -> tuple[tuple[str, ...], Outside | None]:
    value = table.values.get("between")
    do = 'write between = ["L1", "L2"], or a cell and one of outlet, filler, vent, drain'
    if not isinstance(value, list) or len(value) != 2 or not all(isinstance(one, str) for one in value):
        table.stop(
            "key-missing" if value is None else "value-wrong",
            "between",
            "between is missing" if value is None else f"{value} is not two names",
            do,
        )
        return (), None
    names = [one.strip() for one in value]
    ways = [name for name in names if name in tuple(Outside)]
    joined = tuple(name for name in names if name not in tuple(Outside))
    unknown = [name for name in joined if name not in cells]
    for name in unknown:
        table.stop(
            "cell-unknown",
            "between",
            f"there is no cell {name!r}",
            "add a [[cell]], or write outlet, filler, vent or drain for what is outside",
        )
    if len(ways) == 2:
        table.stop("value-wrong", "between", f"{listed(ways)} are both outside", do)
    elif len(joined) == 2 and joined[0] == joined[1]:
        table.stop("value-wrong", "between", f"it joins {joined[0]!r} with itself", do)
    return joined, Outside(ways[0]) if len(ways) == 1 else None


def _one_way(table: TomlTable, joined: tuple[str, ...]) -> str | None:
    cell = table.text("one_way")
    if cell is not None and joined and cell not in joined:
        table.stop(
            "one-way-unknown",
            "one_way",
            f"the opening does not join {cell!r}",
            f"name the cell it lets into, {listed(joined)}",
        )
    return cell


def _check_tanks(
    table: TomlTable, joined: tuple[str, ...], tank_of: Mapping[str, str], crossfeed: bool
) -> None:
    tanks = [tank_of[cell] for cell in joined if cell in tank_of]
    if len(tanks) == 2 and tanks[0] != tanks[1] and not crossfeed:
        table.stop(
            "crossfeed-missing",
            "between",
            f"it joins tanks {tanks[0]!r} and {tanks[1]!r}",
            "write crossfeed = true if they are one network",
        )
    elif crossfeed and (len(joined) == 1 or (len(tanks) == 2 and tanks[0] == tanks[1])):
        table.stop("key-not-used", "crossfeed", "it joins no two tanks", "leave crossfeed out")


def _rim(table: TomlTable, shape: str, unit: str | None) -> Rim | None:
    for key in _SHAPES[shape]:
        if key not in table.values:
            table.stop("key-missing", key, f"a {shape} needs {key}", f"write {key} = {_EXAMPLES[key]}")
    if shape == "circle":
        centre = table.point("centre", table.values["centre"], unit) if "centre" in table.values else None
        diameter = table.quantity("diameter", Dimension.LENGTH, bare_unit=unit)
        normal = _normal(table)
        if centre is None or diameter is None or normal is None:
            return None
        return Circle(centre_m=centre, diameter_m=diameter, normal=normal)
    points = _points(table, 3 if shape == "polygon" else 2, unit)
    if shape == "polygon":
        return None if points is None or not _is_flat(table, points) else Polygon(points_m=points)
    bore = table.quantity("bore", Dimension.LENGTH, bare_unit=unit)
    return None if points is None or bore is None else Pipe(points_m=points, bore_m=bore)


_EXAMPLES = {
    "centre": "[1210.0, 650.0, 12.0]",
    "diameter": "20.0",
    "normal": "[0, 1, 0]",
    "points": "[[0, 0, 0], [10, 0, 0], [10, 0, 10]]",
    "bore": "6.0",
}


def _normal(table: TomlTable) -> Vector | None:
    value = table.values.get("normal")
    if value is None:
        return None
    good = isinstance(value, list) and len(value) == 3
    if not good or any(isinstance(one, bool) or not isinstance(one, (int, float)) for one in value):
        table.stop("value-wrong", "normal", f"{value} is not a direction", "write three numbers, [0, 1, 0]")
        return None
    length = math.hypot(*value)
    if not math.isfinite(length) or length == 0.0:
        table.stop("value-wrong", "normal", f"{value} has no direction", "write for example [0, 1, 0]")
        return None
    return (value[0] / length, value[1] / length, value[2] / length)


def _points(table: TomlTable, least: int, unit: str | None) -> tuple[Vector, ...] | None:
    value = table.values.get("points")
    if value is None:
        return None
    if not isinstance(value, list) or len(value) < least:
        table.stop(
            "value-wrong", "points", f"points are fewer than {least}", f"write points = {_EXAMPLES['points']}"
        )
        return None
    points = []
    for one in value:
        point = table.point("points", one, unit)
        if point is None:
            return None
        points.append(point)
    if any(a == b for a, b in pairwise(points)):
        table.stop("value-wrong", "points", "a point is there twice in a row", "leave it out once")
        return None
    return tuple(points)


def _is_flat(table: TomlTable, points: tuple[Vector, ...]) -> bool:
    """Whether a polygon lies in one plane, within a thousandth of its size, and encloses an area."""
    normal = _area_vector(points)
    length = math.hypot(*normal)
    size = max(math.dist(points[0], point) for point in points)
    if length <= 1e-9 * size * size:
        table.stop("value-wrong", "points", "the points enclose no area", "give the corners in order")
        return False
    unit = [value / length for value in normal]
    middle = [sum(point[i] for point in points) / len(points) for i in range(3)]
    off = max(abs(sum((point[i] - middle[i]) * unit[i] for i in range(3))) for point in points)
    if off > _FLAT_SHARE * size:
        table.stop(
            "opening-not-flat",
            "points",
            f"a corner lies {off * 1000:.3g} mm out of the plane of the others",
            "give corners in one plane",
        )
        return False
    return True


def _area_vector(points: tuple[Vector, ...]) -> Vector:
    x = y = z = 0.0
    ox, oy, oz = points[0]
    for (ax, ay, az), (bx, by, bz) in zip(points, (*points[1:], points[0]), strict=True):
        px, py, pz, qx, qy, qz = ax - ox, ay - oy, az - oz, bx - ox, by - oy, bz - oz
        x += py * qz - pz * qy
        y += pz * qx - px * qz
        z += px * qy - py * qx
    return (x / 2.0, y / 2.0, z / 2.0)
