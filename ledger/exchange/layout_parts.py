"""The rest of a layout's parts as records: joints, fills, closeouts, blocks, items and planned masses."""

from __future__ import annotations

from difflib import get_close_matches

from ledger.exchange.layout_shelf import PASTE_KINDS, SOLID_KINDS, Shelf, Values, read_records
from ledger.exchange.layout_tanks import check_two_ribs
from ledger.exchange.layout_values import read_each
from ledger.exchange.toml_text import TomlTable
from ledger.loft.layout import Block, Closeout, Edge, Fill, FilletShape, Item, Joint
from ledger.loft.layout_keys import BLOCK, CLOSEOUT, FILL, ITEM, JOINT, PLANNED
from ledger.model.plan import PartClass


def read_joints(whole: TomlTable, shelf: Shelf, gap_m: float | None) -> tuple[tuple[TomlTable, Joint], ...]:
    """Joints; one without a gap and without a fillet would hold no paste."""

    def check(table: TomlTable, values: Values) -> None:
        shelf.take_part(table, "part", values.get("part"))
        shelf.check_material(table, "paste", values.get("paste"), PASTE_KINDS)
        if gap_m == 0.0 and not values.get("fillet") and not set(table.values) - set(values):
            what = "the joint has neither a gap nor a fillet, so no paste is in it"
            table.stop("joint-without-paste", "fillet", what, "write fillet = 4, or gap = 0.5 under [bond]")

    def make(table: TomlTable, values: Values) -> Joint:
        return Joint(
            place=table.where(),
            part=values["part"],
            title=values.get("title", values["part"]),
            walls=values["walls"],
            edges=tuple(Edge(edge) for edge in values["edges"]),
            paste=values["paste"],
            fillet_m=values.get("fillet", 0.0),
            fillet_shape=FilletShape(values.get("fillet_shape", FilletShape.CONCAVE)),
        )

    return read_records(whole, JOINT, shelf, check, make)


def _check_solid(table: TomlTable, values: Values, shelf: Shelf) -> None:
    shelf.take_part(table, "part", values.get("part"))
    shelf.check_material(table, "material", values.get("material"), SOLID_KINDS)


def read_fills(whole: TomlTable, shelf: Shelf) -> tuple[tuple[TomlTable, Fill], ...]:
    """Fills of rows that are there."""

    def check(table: TomlTable, values: Values) -> None:
        _check_solid(table, values, shelf)
        shelf.check_row(table, "rows", values.get("rows", ()))
        check_two_ribs(table, values, shelf)

    def make(table: TomlTable, values: Values) -> Fill:
        return Fill(
            place=table.where(),
            part=values["part"],
            title=values.get("title", values["part"]),
            part_class=PartClass(values["class"]),
            material=values["material"],
            rows=values["rows"],
            ribs=values.get("ribs"),
        )

    return read_records(whole, FILL, shelf, check, make)


def read_closeouts(whole: TomlTable, shelf: Shelf) -> tuple[tuple[TomlTable, Closeout], ...]:
    """Closeouts, one at an end."""
    ends: set[str] = set()

    def check(table: TomlTable, values: Values) -> None:
        _check_solid(table, values, shelf)
        end = values.get("at")
        if end is not None and end in ends:
            what, do = f"there is a closeout at the {end} already", "write one closeout at each end"
            table.stop("closeout-twice", "at", what, do)
        if end is not None:
            ends.add(end)

    def make(table: TomlTable, values: Values) -> Closeout:
        return Closeout(
            place=table.where(),
            part=values["part"],
            title=values.get("title", values["part"]),
            at_tip=values["at"] == "tip",
            length_m=values["length"],
            material=values["material"],
        )

    return read_records(whole, CLOSEOUT, shelf, check, make)


def read_blocks(whole: TomlTable, shelf: Shelf) -> tuple[tuple[TomlTable, Block], ...]:
    """Solid boxes."""

    def make(table: TomlTable, values: Values) -> Block:
        return Block(
            place=table.where(),
            part=values["part"],
            title=values.get("title", values["part"]),
            part_class=PartClass(values["class"]),
            material=values["material"],
            corner_m=values["corner"],
            size_m=values["size"],
        )

    return read_records(whole, BLOCK, shelf, lambda table, values: _check_solid(table, values, shelf), make)


def read_items(whole: TomlTable, shelf: Shelf) -> tuple[tuple[TomlTable, Item], ...]:
    """Bought things."""

    def make(table: TomlTable, values: Values) -> Item:
        return Item(
            place=table.where(),
            part=values["part"],
            title=values.get("title", values["part"]),
            part_class=PartClass(values["class"]),
            mass_kg=values["mass"],
            at_m=values["at"],
            quantity=values.get("quantity", 1),
        )

    return read_records(
        whole,
        ITEM,
        shelf,
        lambda table, values: shelf.take_part(table, "part", values.get("part")),
        make,
    )


def read_planned(whole: TomlTable, shelf: Shelf, *, every_part: bool) -> tuple[tuple[str, float], ...]:
    """Planned masses in kg by part number; `every_part` says that all parts the layout makes are known."""
    table = whole.table(PLANNED.word)
    if table is None or PLANNED.each is None:
        return ()
    found = []
    for name, mass_kg in read_each(table, PLANNED.each, shelf.unit).items():
        part = shelf.parts.get(name.casefold()) or _stretch(name, shelf)
        if part is None and every_part:
            close = get_close_matches(name, tuple(shelf.parts.values()), n=1, cutoff=0.75)
            do = f"write {close[0]}" if close else "name a part that the layout makes, without its side"
            table.stop("part-unknown", name, f"the layout makes no part {name!r}", do)
        elif part is not None:
            found.append((part, mass_kg))
    return tuple(found)


def _stretch(name: str, shelf: Shelf) -> str | None:
    """A web that ribs run through is so many panels, numbered inboard first: `WEB.M.1`."""
    whole, _, number = name.rpartition(".")
    known = shelf.parts.get(whole.casefold(), "")
    return name if number.isdigit() and known.startswith("WEB.") else None
