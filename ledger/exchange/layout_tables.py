"""All tables of a layout as records, and the checks across them."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any, TypeVar

from ledger.errors import Where
from ledger.exchange.layout_bays import Bays
from ledger.exchange.layout_checks import (
    Tabled,
    check_betweens,
    check_rows,
    check_scale,
    check_sections,
    take_rib_parts,
)
from ledger.exchange.layout_cover import check_cover
from ledger.exchange.layout_parts import (
    read_blocks,
    read_closeouts,
    read_fills,
    read_items,
    read_joints,
    read_planned,
)
from ledger.exchange.layout_profiles import Profiles
from ledger.exchange.layout_shelf import Shelf
from ledger.exchange.layout_tank_checks import (
    check_fills,
    check_holes,
    check_joints,
    check_names_of_bays,
    check_ports,
    check_tanks,
)
from ledger.exchange.layout_tanks import read_holes, read_layout_feeds, read_layout_tanks, read_ports
from ledger.exchange.layout_values import read_values
from ledger.exchange.layout_walls import (
    read_caps,
    read_ribs,
    read_rows,
    read_sections,
    read_skins,
    read_webs,
)
from ledger.exchange.toml_text import TomlTable
from ledger.loft.layout import (
    Block,
    Cap,
    Closeout,
    Fill,
    Hole,
    Item,
    Joint,
    Layout,
    LayoutFeed,
    Port,
    Rib,
    Row,
    Section,
    SkinZone,
    TankBays,
    Web,
)
from ledger.loft.layout_keys import BOND, PORTS

_R = TypeVar("_R")
_ALL_WALLS = ("section", "web", "row", "rib")
_ALL_PARTS = ("skin", "cap", "joint", "fill", "closeout", "block", "item")
_ALL_PORTS = tuple(keys.word for keys in PORTS)


@dataclass(frozen=True, slots=True, kw_only=True)
class LayoutTables:
    """Each table that could be read, with its record."""

    gap_m: float
    sections: Tabled[Section]
    skins: Tabled[SkinZone]
    webs: Tabled[Web]
    rows: Tabled[Row]
    ribs: Tabled[Rib]
    caps: Tabled[Cap]
    joints: Tabled[Joint]
    tanks: Tabled[TankBays]
    holes: Tabled[Hole]
    ports: Tabled[Port]
    feeds: Tabled[LayoutFeed]
    fills: Tabled[Fill]
    closeouts: Tabled[Closeout]
    blocks: Tabled[Block]
    items: Tabled[Item]

    def complete(self, whole: TomlTable, *words: str) -> bool:
        """Whether every table of these kinds was read, so that what they agree on can be judged."""
        read = {
            "section": self.sections,
            "skin": self.skins,
            "web": self.webs,
            "row": self.rows,
            "rib": self.ribs,
            "cap": self.caps,
            "joint": self.joints,
            "tank": self.tanks,
            "hole": self.holes,
            "fill": self.fills,
            "closeout": self.closeouts,
            "block": self.blocks,
            "item": self.items,
        }
        return all(
            len(read[word]) == len(whole.tables(word)) and isinstance(whole.values.get(word, []), list)
            for word in words
        )

    @property
    def span_m(self) -> tuple[float, float]:
        """Butt lines of the first and the last section."""
        lines = [section.butt_line_m for _, section in self.sections]
        return lines[0], lines[-1]


def read_tables(whole: TomlTable, shelf: Shelf, profiles: Profiles) -> LayoutTables:
    """Every table by itself, its names looked up."""
    gap_m = _gap_m(whole, shelf)
    return LayoutTables(
        gap_m=gap_m or 0.0,
        sections=read_sections(whole, shelf, profiles),
        skins=read_skins(whole, shelf),
        webs=read_webs(whole, shelf),
        rows=read_rows(whole, shelf),
        ribs=read_ribs(whole, shelf),
        caps=read_caps(whole, shelf),
        joints=read_joints(whole, shelf, gap_m),
        tanks=read_layout_tanks(whole, shelf),
        holes=read_holes(whole, shelf),
        ports=read_ports(whole, shelf),
        feeds=read_layout_feeds(whole, shelf),
        fills=read_fills(whole, shelf),
        closeouts=read_closeouts(whole, shelf),
        blocks=read_blocks(whole, shelf),
        items=read_items(whole, shelf),
    )


def _gap_m(whole: TomlTable, shelf: Shelf) -> float | None:
    """The gap of all bonds; 0 where none is said, None where what is said cannot be read."""
    if "bond" not in whole.values:
        return 0.0
    bond = whole.table(BOND.word)
    if bond is None:
        return None
    values = read_values(bond, BOND, shelf.unit)
    return values.get("gap", None if "gap" in bond.values else 0.0)


def _gap_place(whole: TomlTable) -> Where | None:
    bond = whole.table(BOND.word) if "bond" in whole.values else None
    return None if bond is None else bond.where("gap")


def check_tables(whole: TomlTable, read: LayoutTables, shelf: Shelf) -> None:
    """What tables must agree on; only what can be judged from those that were read."""
    before = whole.problems.stops
    check_sections(whole, read.sections)
    if read.complete(whole, "section") and whole.problems.stops == before and read.sections:
        check_betweens(read.span_m, read.skins, read.webs, read.caps)
        check_rows(read.rows, read.webs, records(read.sections))
        if read.complete(whole, "skin"):
            check_cover(whole, records(read.skins), read.span_m)
    if whole.problems.stops == 0:
        check_scale(whole, records(read.sections))
    if read.complete(whole, "row", "rib"):
        take_rib_parts(read.ribs, records(read.rows), shelf)
    if read.complete(whole, "row", "rib", "web"):
        _check_bays(whole, read)


def _check_bays(whole: TomlTable, read: LayoutTables) -> None:
    bays = Bays(
        rows=records(read.rows),
        ribs=records(read.ribs),
        webs=records(read.webs),
        tanks=records(read.tanks),
    )
    check_names_of_bays(read.ribs)
    check_joints(read.joints, bays)
    check_fills(read.fills, bays)
    # An outlet with a mistake in it is an outlet all the same.
    if read.complete(whole, "tank") and check_tanks(read.tanks, _bays_said(whole), bays):
        check_ports(read.ports, bays)
        check_holes(read.holes, bays)


def _bays_said(whole: TomlTable) -> dict[str, tuple[str, ...]]:
    """The bays of each kind of port as they are written."""
    said = {}
    for word in _ALL_PORTS:
        bays = (table.values.get("bay") for table in whole.tables(word))
        said[word] = tuple(bay.strip() for bay in bays if isinstance(bay, str))
    return said


def layout_of(whole: TomlTable, read: LayoutTables, shelf: Shelf, top: Mapping[str, Any]) -> Layout:
    """The layout; to be used only where nothing stopped it."""
    every_part = read.complete(whole, *_ALL_WALLS, *_ALL_PARTS)
    return Layout(
        place=whole.where(),
        sections=records(read.sections),
        skins=records(read.skins),
        webs=records(read.webs),
        rows=records(read.rows),
        ribs=records(read.ribs),
        caps=records(read.caps),
        holes=records(read.holes),
        ports=records(read.ports),
        tanks=records(read.tanks),
        fills=records(read.fills),
        closeouts=records(read.closeouts),
        joints=records(read.joints),
        blocks=records(read.blocks),
        items=records(read.items),
        feeds=records(read.feeds),
        planned_kg=read_planned(whole, shelf, every_part=every_part),
        gap_m=read.gap_m,
        gap_place=_gap_place(whole),
        corners=top.get("corners", 48),
        mirrored=top.get("mirror", True),
    )


def records(tabled: Tabled[_R]) -> tuple[_R, ...]:
    """The records without their tables."""
    return tuple(record for _, record in tabled)
