"""The fuel of a layout as records: tanks, holes, ports and feeds."""

from __future__ import annotations

from ledger.exchange.layout_shelf import SEALANT_KINDS, Shelf, Values, check_new_names, read_records
from ledger.exchange.layout_values import says
from ledger.exchange.toml_text import TomlTable
from ledger.loft.layout import Along, Axis, Height, Hole, LayoutFeed, Port, TankBays
from ledger.loft.layout_keys import FEED, HOLE, PORTS, TANK
from ledger.model.tanks import Join, Outside


def read_layout_tanks(whole: TomlTable, shelf: Shelf) -> tuple[tuple[TomlTable, TankBays], ...]:
    """Tanks, each of rows and two ribs that are there."""
    check_new_names(whole, "tank")

    def check(table: TomlTable, values: Values) -> None:
        shelf.check_row(table, "rows", values.get("rows", ()))
        check_two_ribs(table, values, shelf)
        shelf.check_material(table, "sealant_material", values.get("sealant_material"), SEALANT_KINDS)
        if "sealant_material" in values and not says(table, "sealant"):
            what, do = "sealant is missing beside sealant_material", "write its thickness, sealant = 0.4"
            table.stop("key-missing", "sealant", what, do)

    def make(table: TomlTable, values: Values) -> TankBays:
        return TankBays(
            place=table.where(),
            name=values.get("name", "tank"),
            rows=values["rows"],
            ribs=values["ribs"],
            expansion=values.get("expansion_percent"),
            sealant_thickness_m=values.get("sealant"),
            sealant_material=values.get("sealant_material"),
        )

    found = read_records(whole, TANK, shelf, check, make)
    for number, (table, tank) in enumerate(found):
        if not says(table, "name") and any(tank.name == other.name for _, other in found[:number]):
            what = "two tanks have no name"
            table.stop("name-twice", "name", what, 'give each its own, for example name = "main"')
    return found


def check_two_ribs(table: TomlTable, values: Values, shelf: Shelf) -> None:
    """Note ribs that are not there, or not two."""
    ribs = values.get("ribs", ())
    shelf.check_rib(table, "ribs", ribs)
    if ribs and len(ribs) != 2:
        table.stop(
            "value-wrong", "ribs", f"{len(ribs)} named where two belong", 'write both ends, ribs = ["1", "7"]'
        )


def _height(values: Values) -> Height:
    return Height(
        above_lower_m=values.get("above_lower"),
        below_upper_m=values.get("below_upper"),
        share=values.get("height"),
    )


def read_holes(whole: TomlTable, shelf: Shelf) -> tuple[tuple[TomlTable, Hole], ...]:
    """Rules for holes; whether their walls are there is checked when all bays are known."""

    def make(table: TomlTable, values: Values) -> Hole:
        return Hole(
            place=table.where(),
            name=values["name"],
            walls=values["walls"],
            diameter_m=values["diameter"],
            along=Along(
                share=values.get("along"),
                from_start_m=values.get("from_start"),
                from_end_m=values.get("from_end"),
            ),
            height=_height(values),
            leaving_out=values.get("leaving_out", ()),
        )

    return read_records(whole, HOLE, shelf, _nothing_more, make)


def read_ports(whole: TomlTable, shelf: Shelf) -> tuple[tuple[TomlTable, Port], ...]:
    """Outlets, drains, fillers and vents, in the order of the file within each."""
    check_new_names(whole, *(keys.word for keys in PORTS))
    found: list[tuple[TomlTable, Port]] = []
    for keys in PORTS:
        outside = Outside(keys.word)

        def make(table: TomlTable, values: Values, outside: Outside = outside) -> Port:
            return Port(
                place=table.where(),
                name=values["name"],
                outside=outside,
                bay=values["bay"],
                diameter_m=values["diameter"],
                along_chord=values["chord"],
                along_span=values["span"],
                height=_height(values),
                axis=Axis(values.get("axis", Axis.UP)),
                pipe_m=values.get("pipe", ()),
            )

        found.extend(read_records(whole, keys, shelf, _nothing_more, make))
    return tuple(found)


def read_layout_feeds(whole: TomlTable, shelf: Shelf) -> tuple[tuple[TomlTable, LayoutFeed], ...]:
    """Feeds; an outlet that they name is one by its name as written."""
    check_new_names(whole, "feed")
    said = (table.values.get("name") for table in whole.tables("outlet"))
    outlets = [name.strip() for name in said if isinstance(name, str)]

    def check(table: TomlTable, values: Values) -> None:
        for outlet in values.get("outlets", ()):
            if outlet not in outlets:
                do = f"write one of {', '.join(outlets)}" if outlets else "add an [[outlet]]"
                table.stop("outlet-unknown", "outlets", f"there is no outlet {outlet!r}", do)

    def make(table: TomlTable, values: Values) -> LayoutFeed:
        return LayoutFeed(
            place=table.where(),
            name=values["name"],
            join=Join(values["join"]),
            outlets=values.get("outlets", ()),
        )

    return read_records(whole, FEED, shelf, check, make)


def _nothing_more(table: TomlTable, values: Values) -> None:
    """Nothing can be checked before all tables are read."""
