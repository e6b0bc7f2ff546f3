"""tanks.toml of a lofted plan: tanks of each side, their cells, openings and feeds."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterable, Mapping
from dataclasses import dataclass

from ledger.exchange.figure_texts import plain, with_unit
from ledger.exchange.tanks_toml import TANKS
from ledger.exchange.toml_lines import TomlValue, toml_keys, toml_table
from ledger.exchange.write_meshes import mesh_file
from ledger.exchange.write_parts import NewGeometry
from ledger.loft.layout import LayoutFeed, TankBays
from ledger.loft.lofted import Lofted, LoftedCell, LoftedOpening
from ledger.model.plan import Side
from ledger.model.tanks import Circle, Outside, Pipe, Rim
from ledger.model.vectors import Vector
from ledger.units import Dimension

_WORDS = {Side.LEFT: "left", Side.RIGHT: "right"}
# What a layout calls a tank to which it gives no name.
_NO_NAME = ("", "tank")
# Millimetres are written to a millionth: a thousandth of what any drill or mould can hold.
_PLACES = 6
_PERCENT_DIGITS = 9
# A cubic millimetre.
_VOLUME_PLACES = 9

Keys = Mapping[str, TomlValue | None]


@dataclass(frozen=True, slots=True, kw_only=True)
class _Named:
    """An opening of one side under its whole name."""

    name: str
    opening: LoftedOpening
    side: Side


def tanks_file(lofted: Lofted, *, mirrored: bool, geometry: NewGeometry) -> tuple[str, bytes]:
    """The path of the file and the file; the meshes of its cells are added to `geometry`."""
    sides = (Side.LEFT, Side.RIGHT) if mirrored else (Side.RIGHT,)
    openings = [named for side in sides for named in _named(lofted.openings, side)]
    text = [toml_keys({"length_unit": "mm"})]
    text += [toml_table("[[tank]]", keys) for side in sides for keys in _tanks(lofted.cells, side)]
    for side in sides:
        text += [toml_table("[[cell]]", _cell(cell, side, geometry)) for cell in lofted.cells]
        text += [toml_table("[[opening]]", _opening(named)) for named in openings if named.side is side]
    text += [toml_table("[[feed]]", _feed(feed, openings)) for feed in lofted.feeds]
    return TANKS, "".join(text).encode()


def _cell_name(number: int, side: Side) -> str:
    return f"{side.value}{number}"


def _tanks(cells: Iterable[LoftedCell], side: Side) -> list[Keys]:
    bays: dict[str, TankBays] = {}
    names: dict[str, list[str]] = {}
    for cell in cells:
        bays.setdefault(cell.tank.name, cell.tank)
        names.setdefault(cell.tank.name, []).append(_cell_name(cell.number, side))
    return [
        {
            "name": _WORDS[side] if tank in _NO_NAME else f"{_WORDS[side]} {tank}",
            "cells": names[tank],
            "expansion_percent": _percent(bays[tank].expansion),
        }
        for tank in bays
    ]


def _percent(share: float | None) -> float | None:
    # 0.02 times 100 is not always 2 to the last bit.
    return None if share is None else float(plain(share * 100.0, _PERCENT_DIGITS))


def _cell(cell: LoftedCell, side: Side, geometry: NewGeometry) -> Keys:
    name = _cell_name(cell.number, side)
    path = geometry.add(name, ".obj", lambda: mesh_file(cell.mesh, mirrored=side is Side.LEFT))
    thick = cell.tank.sealant_thickness_m
    displaced = round(cell.displaced_m3, _VOLUME_PLACES)
    return {
        "name": name,
        "mesh": path,
        "displaced": with_unit(displaced, "L", Dimension.VOLUME) if displaced else None,
        "sealant": with_unit(thick, "mm", Dimension.LENGTH) if thick else None,
        "sealant_material": cell.tank.sealant_material,
    }


def _named(openings: Iterable[LoftedOpening], side: Side) -> list[_Named]:
    """Each opening under its own name: `drain L1-L3`, `outlet left`; with the cell where two ports agree."""
    openings = tuple(openings)
    ports = Counter(opening.name.casefold() for opening in openings if opening.outside is not None)
    taken: Counter[str] = Counter()
    found = []
    for opening in openings:
        cells = "-".join(_cell_name(number, side) for number in opening.cells)
        name = f"{opening.name} {cells if opening.outside is None else _WORDS[side]}"
        if opening.outside is not None and ports[opening.name.casefold()] > 1:
            name = f"{name} {cells}"
        taken[name.casefold()] += 1
        if taken[name.casefold()] > 1:
            name = f"{name} {taken[name.casefold()]}"
        found.append(_Named(name=name, opening=opening, side=side))
    return found


def _opening(named: _Named) -> Keys:
    opening, side = named.opening, named.side
    between = [_cell_name(number, side) for number in opening.cells]
    if opening.outside is not None:
        between.append(opening.outside.value)
    depth = None if opening.depth_m is None else _mm(opening.depth_m)
    return {"name": named.name, "between": between, **_rim(opening.rim, side), "depth": depth}


def _rim(rim: Rim, side: Side) -> dict[str, TomlValue | None]:
    if isinstance(rim, Circle):
        return {
            "shape": "circle",
            "centre": _point(rim.centre_m, side),
            "diameter": _mm(rim.diameter_m),
            "normal": [_whole(value) for value in _seen(rim.normal, side)],
        }
    points = [_point(point, side) for point in rim.points_m]
    if isinstance(rim, Pipe):
        return {"shape": "pipe", "points": points, "bore": _mm(rim.bore_m)}
    return {"shape": "polygon", "points": points}


def _point(point_m: Vector, side: Side) -> list[float]:
    return [_mm(value) for value in _seen(point_m, side)]


def _seen(vector: Vector, side: Side) -> Vector:
    """As it is on that side: the left one is the right one seen in the plane y = 0."""
    x, y, z = vector
    return (x, -y if side is Side.LEFT else y, z)


def _mm(value_m: float) -> float:
    return round(value_m * 1000.0, _PLACES) + 0.0


def _whole(value: float) -> float | int:
    return int(value) if value == int(value) else value


def _feed(feed: LayoutFeed, openings: Iterable[_Named]) -> Keys:
    outlets = [
        named.name
        for named in openings
        if named.opening.outside is Outside.OUTLET
        and (not feed.outlets or named.opening.name in feed.outlets)
    ]
    return {"name": feed.name, "outlets": outlets, "join": feed.join.value}
