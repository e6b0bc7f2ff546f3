"""What tanks, holes, ports, joints and fills of a layout must agree on, once all bays are known."""

from __future__ import annotations

from collections import Counter
from collections.abc import Mapping

from ledger.exchange.layout_bays import Bays, WallBetween, rib_line_m
from ledger.exchange.layout_checks import Tabled
from ledger.exchange.toml_text import TomlTable
from ledger.loft.layout import Edge, Fill, Hole, Joint, Port, Rib, TankBays, Walls
from ledger.model.tanks import Outside

_WANTED = {
    Outside.OUTLET: ("bay-without-outlet", "no fuel can leave it"),
    Outside.VENT: ("bay-without-vent", "no air can come in"),
    Outside.FILLER: ("bay-without-filler", "it cannot be filled"),
}


def check_names_of_bays(ribs: Tabled[Rib]) -> None:
    """Note two bays of one name, such as row A with rib 11 and row A1 with rib 1."""
    by_name: dict[str, tuple[str, str]] = {}
    for table, rib in ribs:
        for row in rib.rows:
            name = f"{row}{rib.name}"
            before = by_name.setdefault(name, (row, rib.name))
            if before != (row, rib.name):
                what = f"{name!r} is rib {rib.name} in row {row} and rib {before[1]} in row {before[0]}"
                table.stop("name-twice", "name", what, "give the rib or a row another name")


def check_tanks(tanks: Tabled[TankBays], ports: Mapping[str, tuple[str, ...]], bays: Bays) -> bool:
    """Each tank's ribs stand in its rows in order, its rows lie side by side, its bays are its own.

    `ports` are the bays of each kind of port. Returns whether it is known which bays are tanks.
    """
    sound = True
    claimed: dict[str, str] = {}
    for table, tank in tanks:
        before = table.problems.stops
        _check_ends(table, tank.rows, tank.ribs, bays)
        _check_side_by_side(table, tank, bays)
        for bay in bays.in_tank(tank):
            if bay in claimed:
                what = f"bay {bay} is in tank {claimed[bay]!r} already"
                table.stop("bay-twice", "rows", what, "let tanks share no bay")
                break
        claimed |= {bay: tank.name for bay in bays.in_tank(tank) if bay not in claimed}
        if table.problems.stops == before:
            _check_ways_out(table, tank, ports, bays)
        else:
            sound = False
    return sound


def _check_ends(table: TomlTable, rows: tuple[str, ...], ends: tuple[str, str], bays: Bays) -> None:
    lines = {rib.name: rib_line_m(rib) for rib in bays.ribs}
    for row in rows:
        standing = [rib.name for rib in bays.ribs_in(row)]
        for end in ends:
            if end not in standing:
                do = f"add row {row} to the rib, or name one of {', '.join(standing)}"
                table.stop("rib-not-in-row", "ribs", f"rib {end!r} does not stand in row {row!r}", do)
    if set(ends) <= set(lines) and lines[ends[0]] >= lines[ends[1]]:
        do = f'write the inboard rib first, ribs = ["{ends[1]}", "{ends[0]}"]'
        table.stop("ribs-out-of-order", "ribs", f"rib {ends[1]!r} is not outboard of rib {ends[0]!r}", do)


def _check_side_by_side(table: TomlTable, tank: TankBays, bays: Bays) -> None:
    rows = {row.name: row for row in bays.rows if row.name in tank.rows}
    reached = {tank.rows[0]}
    for _ in rows:
        reached |= {
            row.name
            for row in rows.values()
            for name in reached & set(rows)
            if row.front == rows[name].rear or row.rear == rows[name].front
        }
    apart = [name for name in rows if name not in reached]
    if apart:
        what = f"row {apart[0]!r} shares no web with row {tank.rows[0]!r}"
        table.stop("rows-apart", "rows", what, "make two tanks, or add the row between")


def _check_ways_out(
    table: TomlTable, tank: TankBays, ports: Mapping[str, tuple[str, ...]], bays: Bays
) -> None:
    inside = bays.in_tank(tank)
    for way, (code, why) in _WANTED.items():
        # A port in a bay that is none is told of itself.
        astray = set(ports[way]) - set(bays.tank_of)
        if not set(ports[way]) & set(inside) and not astray:
            example = inside[0] if inside else "A1"
            do = f'add [[{way.value}]] with bay = "{example}" or another of its bays'
            table.stop(code, None, f"tank {tank.name!r} has no {way.value}, so {why}", do)


def check_ports(ports: Tabled[Port], bays: Bays) -> None:
    """Each port is in a bay of a tank."""
    for table, port in ports:
        if port.bay in bays.tank_of:
            continue
        if port.bay in bays.names:
            what, do = f"bay {port.bay!r} is in no tank", "name a bay of a tank, or widen the tank"
            table.stop("bay-not-in-tank", "bay", what, do)
        else:
            do = 'write a row and a rib, for example bay = "A1" for the bay outboard of rib 1'
            table.stop("bay-unknown", "bay", f"there is no bay {port.bay!r}", do)


def check_holes(holes: Tabled[Hole], bays: Bays) -> None:
    """Each hole is in a wall that is there, once, and opens no tank to what is dry."""
    there: set[tuple[str, WallBetween]] = set()
    for table, hole in holes:
        walls = _walls_of(table, hole, bays)
        if walls is None:
            continue
        for wall in walls:
            if (hole.name.casefold(), wall) in there:
                what = f"hole {hole.name!r} is in wall {wall.name} already"
                table.stop("hole-twice", "walls", what, "give one of the holes another name")
            there.add((hole.name.casefold(), wall))
            if isinstance(hole.walls, tuple):
                _check_tightness(table, wall, bays)


def _walls_of(table: TomlTable, hole: Hole, bays: Bays) -> list[WallBetween] | None:
    if isinstance(hole.walls, Walls):
        walls = list(bays.inside_tanks(hole.walls))
        if not walls:
            table.problems.look(
                "hole-in-no-wall",
                table.where("walls"),
                f"none of the {hole.walls.value} parts two bays of one tank, so the hole is nowhere",
                "name its walls, or leave the hole out",
            )
    else:
        walls = _named_walls(table, "walls", hole.walls, None, bays)
        if len(walls) < len(hole.walls):
            return None
    kind = hole.walls if isinstance(hole.walls, Walls) else None
    left = _named_walls(table, "leaving_out", hole.leaving_out, kind, bays)
    for wall in left:
        if wall not in walls:
            what = f"wall {wall.name} would get no such hole anyway"
            table.stop("wall-not-left-out", "leaving_out", what, "name one of the walls of the rule")
    return [wall for wall in walls if wall not in left]


def _named_walls(
    table: TomlTable, key: str, names: tuple[str, ...], kind: Walls | None, bays: Bays
) -> list[WallBetween]:
    found = []
    for name in names:
        wall = bays.wall(name, kind)
        if wall is not None:
            found.append(wall)
            continue
        what = f"there is no wall {name!r}" if kind is None else f"{name!r} is none of the {kind.value}"
        do = 'write a row or a web and its inboard rib, for example "A3"'
        table.stop("wall-unknown", key, what, do)
    return found


def _check_tightness(table: TomlTable, wall: WallBetween, bays: Bays) -> None:
    tanks = bays.tanks_beside(wall)
    if len(tanks) == 1:
        what = f"wall {wall.name} is an end of tank {tanks[0]!r}, and a hole would let fuel out of it"
        table.stop("hole-opens-tank", "walls", what, "leave that wall out")
    elif len(tanks) == 2 and tanks[0] != tanks[1]:
        what = f"wall {wall.name} parts tank {tanks[0]!r} from tank {tanks[1]!r}"
        table.stop("hole-joins-tanks", "walls", what, "leave that wall out, or make one tank of both")


def check_joints(joints: Tabled[Joint], bays: Bays) -> None:
    """Each edge of a wall is bonded by one joint."""
    there: dict[tuple[str, Walls, Edge], str] = {}
    for table, joint in joints:
        if isinstance(joint.walls, Walls):
            kind = bays.rib_walls if joint.walls is Walls.RIBS else bays.web_walls
            walls = list(kind.values())
        else:
            walls = _named_walls(table, "walls", joint.walls, None, bays)
        edges = [(wall.name, wall.kind, edge) for wall in walls for edge in joint.edges]
        taken = next((edge for edge in edges if edge in there), None)
        if taken is not None:
            what = f"the {taken[2].value} edge of {taken[0]} is bonded by {there[taken]} already"
            table.stop("joint-twice", "edges", what, "name each edge of a wall in one joint")
        for edge in edges:
            there.setdefault(edge, joint.part)


def check_fills(fills: Tabled[Fill], bays: Bays) -> None:
    """The ribs of a fill stand in its rows in order, and no bay is filled twice."""
    filled: Counter[str] = Counter()
    for table, fill in fills:
        if fill.ribs is not None:
            _check_ends(table, fill.rows, fill.ribs, bays)
            inside = bays.in_tank(TankBays(place=fill.place, name=fill.part, rows=fill.rows, ribs=fill.ribs))
        else:
            inside = tuple(
                f"{row}{name}"
                for row in fill.rows
                for name in ("0", *(rib.name for rib in bays.ribs_in(row)))
            )
        twice = next((bay for bay in inside if filled[bay]), None)
        if twice is not None:
            table.stop("bay-twice", "rows", f"bay {twice} is filled already", "let fills share no bay")
        filled.update(inside)
