"""tanks.toml: tanks, cells and feeds, and whether every name in it stands for something."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from ledger.exchange.materials_table import Named
from ledger.exchange.openings_toml import read_opening
from ledger.exchange.problems import Problems
from ledger.exchange.toml_text import TomlTable, read_toml
from ledger.model.plan import Material
from ledger.model.tanks import Cell, Feed, Join, Opening, Outside, Tank, Tanks
from ledger.units import Dimension, UnitError, check_unit

TANKS = "tanks.toml"
_CELL_KEYS = (
    "name",
    "mesh",
    "mesh_unit",
    "displaced",
    "displaced_mesh",
    "sealant",
    "sealant_fillet",
    "sealant_material",
)


@dataclass(frozen=True, slots=True, kw_only=True)
class ReadTanks:
    """The tanks with the tables their cells stand in, so that a mesh's trouble has a place."""

    tanks: Tanks
    cell_tables: tuple[TomlTable, ...]


def read_tanks(content: bytes, materials: Named[Material], problems: Problems) -> ReadTanks | None:
    """The whole of tanks.toml but for the meshes; None where it is no TOML."""
    whole = read_toml(TANKS, content, problems)
    if whole is None:
        return None
    whole.refuse_others(("length_unit", "tank", "cell", "opening", "feed"))
    unit = length_unit(whole)
    cells = _cells(whole, unit, materials)
    names = [table.values.get("name") for table in whole.tables("cell")]
    known = {name for name in names if isinstance(name, str)}
    tanks = _tanks(whole, known)
    tank_of = {cell: tank.name for tank in tanks for cell in tank.cells}
    for table, cell in cells:
        if cell.name not in tank_of:
            table.stop(
                "cell-without-tank",
                "name",
                f"cell {cell.name!r} is in no tank",
                "name it in the cells of a tank",
            )
    openings = _openings(whole, unit, known, tank_of)
    feeds = _feeds(whole, openings)
    found = Tanks(tanks=tanks, cells=tuple(cell for _, cell in cells), openings=openings, feeds=feeds)
    return ReadTanks(tanks=found, cell_tables=tuple(table for table, _ in cells))


def length_unit(whole: TomlTable) -> str | None:
    """The unit of bare lengths, None where the file says none."""
    text = whole.text("length_unit")
    # After one wrong unit at the top, every length below would be told to have none.
    return None if text is None else _unit(whole, "length_unit", text) or "m"


def _unit(table: TomlTable, key: str, text: str) -> str | None:
    try:
        return check_unit(text, Dimension.LENGTH)
    except UnitError as error:
        table.stop("unit-unknown", key, error.what, error.do)
        return None


def new_name(table: TomlTable, kind: str, found: dict[str, str]) -> str | None:
    """The table's name, if no other of its kind has it."""
    name = table.text("name", wanted=f'"…", the name of the {kind}')
    if name is None:
        return None
    if name.casefold() in found:
        table.stop("name-twice", "name", f"{kind} {name!r} is there twice", "give each its own name")
        return None
    found[name.casefold()] = name
    return name


def _cells(
    whole: TomlTable, unit: str | None, materials: Named[Material]
) -> tuple[tuple[TomlTable, Cell], ...]:
    found: dict[str, str] = {}
    read = [(table, _cell(table, unit, materials, found)) for table in whole.tables("cell")]
    return tuple((table, cell) for table, cell in read if cell is not None)


def _cell(
    table: TomlTable, unit: str | None, materials: Named[Material], found: dict[str, str]
) -> Cell | None:
    before = table.problems.count
    table.refuse_others(_CELL_KEYS)
    name = new_name(table, "cell", found)
    if name is not None and name in tuple(Outside):
        table.stop("name-wrong", "name", f"{name!r} is a way out of a cell", "give the cell another name")
    mesh = table.text("mesh", wanted='"geometry/L1.obj"')
    said = table.text("mesh_unit")
    mesh_unit = unit if said is None else _unit(table, "mesh_unit", said)
    displaced, displaced_mesh = _displaced(table)
    thickness = table.quantity("sealant", Dimension.LENGTH, bare_unit=unit)
    fillet = table.quantity("sealant_fillet", Dimension.LENGTH, bare_unit=unit)
    material = _sealant_material(table, materials)
    if table.problems.count != before or name is None or mesh is None:
        return None
    return Cell(
        name=name,
        mesh=mesh,
        mesh_unit=mesh_unit,
        displaced_m3=displaced,
        displaced_mesh=displaced_mesh,
        sealant_thickness_m=thickness,
        sealant_fillet_m=fillet,
        sealant_material=material,
    )


def _displaced(table: TomlTable) -> tuple[float | None, str | None]:
    volume = table.quantity("displaced", Dimension.VOLUME, zero=True)
    mesh = table.text("displaced_mesh")
    if volume is not None and mesh is not None:
        what = "displaced is given as a volume and as a mesh"
        table.stop("displaced-twice", "displaced_mesh", what, "give one of them")
    return volume, mesh


def _sealant_material(table: TomlTable, materials: Named[Material]) -> str | None:
    material = table.text("sealant_material")
    if material is not None and not materials.may_have(material):
        table.stop(
            "material-unknown",
            "sealant_material",
            f"there is no material {material!r} in materials.csv",
            "add it there or correct the name",
        )
    return material


def names_in(table: TomlTable, key: str, example: str) -> tuple[str, ...] | None:
    """A list of names."""
    value = table.values.get(key)
    if value is None:
        table.stop("key-missing", key, f"{key} is missing", f"write {key} = {example}")
        return None
    if not isinstance(value, list) or not value or not all(isinstance(one, str) for one in value):
        table.stop("value-wrong", key, f"{value} is not a list of names", f"write {key} = {example}")
        return None
    return tuple(one.strip() for one in value)


def _tanks(whole: TomlTable, cells: set[str]) -> tuple[Tank, ...]:
    found: dict[str, str] = {}
    taken: dict[str, str] = {}
    tanks = []
    for table in whole.tables("tank"):
        table.refuse_others(("name", "cells", "expansion_percent"))
        name = new_name(table, "tank", found)
        inside = names_in(table, "cells", '["L1", "L2"]')
        for cell in inside or ():
            if cell not in cells:
                table.stop(
                    "cell-unknown",
                    "cells",
                    f"there is no cell {cell!r}",
                    "add a [[cell]] or correct the name",
                )
            elif cell in taken:
                where = "twice here" if taken[cell] == name else f"in tank {taken[cell]!r} already"
                table.stop("cell-twice", "cells", f"cell {cell!r} is {where}", "name it once")
            taken.setdefault(cell, str(name))
        expansion = _expansion(table)
        if name is not None and inside is not None:
            tanks.append(Tank(name=name, cells=tuple(dict.fromkeys(inside)), expansion=expansion))
    return tuple(tanks)


def _expansion(table: TomlTable) -> float | None:
    key = "expansion_percent"
    if isinstance(table.values.get(key), str):
        share = table.quantity(key, Dimension.FRACTION, zero=True)
    else:
        percent = table.number(key)
        share = None if percent is None else percent / 100.0
    if share is not None and not 0.0 <= share < 1.0:
        table.stop(
            "value-out-of-range",
            key,
            f"{table.values[key]} is not a share of the tank",
            f"write percent from 0 to below 100, for example {key} = 2.0",
        )
        return None
    return share


def _openings(
    whole: TomlTable, unit: str | None, cells: set[str], tank_of: Mapping[str, str]
) -> tuple[Opening, ...]:
    found: dict[str, str] = {}
    openings = []
    for table in whole.tables("opening"):
        before = table.problems.count
        name = new_name(table, "opening", found)
        opening = read_opening(table, name or "", unit, cells, tank_of)
        if opening is not None and table.problems.count == before:
            openings.append(opening)
    return tuple(openings)


def _feeds(whole: TomlTable, openings: tuple[Opening, ...]) -> tuple[Feed, ...]:
    found: dict[str, str] = {}
    outlets = {opening.name for opening in openings if opening.outside is Outside.OUTLET}
    # An outlet that has another problem is named all the same, so a feed that names it is not at fault.
    listed = [table.values.get("name") for table in whole.tables("opening") if _is_outlet(table)]
    feeds = []
    for table in whole.tables("feed"):
        table.refuse_others(("name", "outlets", "join"))
        name = new_name(table, "feed", found)
        named = names_in(table, "outlets", '["outlet left", "outlet right"]')
        join = table.choice("join", tuple(Join))
        for outlet in named or ():
            if outlet not in outlets and outlet not in listed:
                table.stop(
                    "outlet-unknown",
                    "outlets",
                    f"there is no outlet {outlet!r}",
                    "name an opening between a cell and outlet",
                )
        if named is not None and len(set(named)) < len(named):
            table.stop("outlet-twice", "outlets", "an outlet is named twice", "name each once")
        if name is not None and named is not None:
            feeds.append(Feed(name=name, outlets=named, join=Join(join) if join is not None else Join.TEE))
    return tuple(feeds)


def _is_outlet(table: TomlTable) -> bool:
    between = table.values.get("between")
    return isinstance(between, list) and Outside.OUTLET.value in between
