"""The walls of a layout as records: sections, skins, webs, rows, ribs and caps."""

from __future__ import annotations

from ledger.exchange.layout_profiles import Profiles
from ledger.exchange.layout_shelf import SOLID_KINDS, Shelf, Values, check_new_names, read_records
from ledger.exchange.layout_values import says
from ledger.exchange.toml_text import TomlTable
from ledger.loft.layout import NOSE, TAIL, Cap, Rib, Row, Section, SkinZone, Surface, Web
from ledger.loft.layout_keys import CAP, RIB, ROW, SECTION, SKIN, WEB
from ledger.loft.part_names import web_part


def read_sections(
    whole: TomlTable, shelf: Shelf, profiles: Profiles
) -> tuple[tuple[TomlTable, Section], ...]:
    """Sections with their profile checked, and its coordinates read where it is a file."""

    def check(table: TomlTable, values: Values) -> None:
        if "naca" in values:
            profiles.check_number(table, values["naca"])
        if "coordinates" in values:
            profiles.outline(table, values["coordinates"])

    def make(table: TomlTable, values: Values) -> Section:
        file = values.get("coordinates")
        return Section(
            place=table.where(),
            butt_line_m=values["butt_line"],
            leading_edge_m=values["leading_edge"],
            water_line_m=values["water_line"],
            chord_m=values["chord"],
            twist_deg=values.get("twist_deg", 0.0),
            profile=values["naca"] if file is None else file,
            coordinates=() if file is None else profiles.outline(table, file),
        )

    return read_records(whole, SECTION, shelf, check, make)


def read_skins(whole: TomlTable, shelf: Shelf) -> tuple[tuple[TomlTable, SkinZone], ...]:
    """Skins; that they cover each surface is checked when all are read."""

    def check(table: TomlTable, values: Values) -> None:
        shelf.take_part(table, "part", values.get("part"))
        shelf.take_part(table, "finish_part", values.get("finish_part"))
        shelf.thickness_m(table, "laminate", values.get("laminate"))
        shelf.check_laminate(table, "finish", values.get("finish"))
        for key, other in (("finish", "finish_part"), ("finish_part", "finish")):
            if key in values and not says(table, other):
                what = f"{other} is missing beside {key}"
                table.stop("key-missing", other, what, "write both finish and finish_part, or none")
        _check_chord(table, values)

    def make(table: TomlTable, values: Values) -> SkinZone:
        return SkinZone(
            place=table.where(),
            part=values["part"],
            title=values.get("title", values["part"]),
            surface=Surface(values["surface"]),
            from_chord=values["chord"][0],
            to_chord=values["chord"][1],
            laminate=values["laminate"],
            thickness_m=shelf.thickness_m(table, "laminate", values["laminate"]) or 0.0,
            between_m=values.get("between"),
            finish=values.get("finish"),
            finish_part=values.get("finish_part"),
        )

    return read_records(whole, SKIN, shelf, check, make)


def _check_chord(table: TomlTable, values: Values) -> None:
    chord = values.get("chord")
    if chord is None:
        return
    if chord[0] >= chord[1]:
        table.stop(
            "value-out-of-range", "chord", f"{list(chord)} does not rise", "write the forward share first"
        )
    elif values.get("surface") == Surface.BOTH and chord[0] > 0.0:
        table.stop(
            "skin-not-round-nose",
            "chord",
            f"it begins at {chord[0]:g} of the chord, and a skin of both surfaces runs round the nose",
            f"write chord = [0.0, {chord[1]:g}], or one skin for each surface",
        )


def read_webs(whole: TomlTable, shelf: Shelf) -> tuple[tuple[TomlTable, Web], ...]:
    """Webs; the names of their lengths make part numbers."""
    check_new_names(whole, "web")

    def check(table: TomlTable, values: Values) -> None:
        name = values.get("name")
        if name in (NOSE, TAIL):
            table.stop("name-wrong", "name", f"{name!r} is an end of the wing", "give the web another name")
        shelf.thickness_m(table, "sheet", values.get("sheet"))
        _check_plan_line(table, values)
        lengths, splices = values.get("lengths", ()), values.get("splices", ())
        if len(splices) + 1 != len(lengths or ("",)) and not {"lengths", "splices"} & _unread(table, values):
            table.stop(
                "lengths-do-not-match",
                "lengths",
                f"lengths named: {len(lengths)}; the splices make {len(splices) + 1}",
                "name each length, inboard first",
            )
        if name is not None:
            key = "lengths" if lengths else "name"
            for length in lengths or (None,):
                shelf.take_part(table, key, web_part(name, length))

    def make(table: TomlTable, values: Values) -> Web:
        return Web(
            place=table.where(),
            name=values["name"],
            title=values.get("title", values["name"]),
            laminate=values["sheet"],
            thickness_m=shelf.thickness_m(table, "sheet", values["sheet"]) or 0.0,
            chord_shares=values.get("chord"),
            points_m=_plan_line(values),
            between_m=values.get("between"),
            splices_m=values.get("splices", ()),
            lengths=values.get("lengths", ()),
        )

    return read_records(whole, WEB, shelf, check, make)


def _unread(table: TomlTable, values: Values) -> set[str]:
    return set(table.values) - set(values)


def _check_plan_line(table: TomlTable, values: Values) -> None:
    if values.get("from") is not None and values.get("from") == values.get("to"):
        table.stop("value-wrong", "to", "from and to are one point", "write both ends of the line")


def _plan_line(values: Values) -> tuple[tuple[float, float], tuple[float, float]] | None:
    return (values["from"], values["to"]) if "from" in values else None


def read_rows(whole: TomlTable, shelf: Shelf) -> tuple[tuple[TomlTable, Row], ...]:
    """Rows of bays, each between two webs that are there."""
    check_new_names(whole, "row")

    def check(table: TomlTable, values: Values) -> None:
        webs = values.get("webs", ())
        shelf.check_web(table, "webs", webs, ends=True)
        if webs and len(webs) != 2:
            table.stop(
                "value-wrong", "webs", f"{len(webs)} named where two belong", 'write webs = ["F", "M"]'
            )
        elif webs and (webs[0] == TAIL or webs[1] == NOSE):
            _stop_order(table, *webs)

    def make(table: TomlTable, values: Values) -> Row:
        return Row(
            place=table.where(),
            name=values["name"],
            title=values.get("title", values["name"]),
            front=values["webs"][0],
            rear=values["webs"][1],
        )

    return read_records(whole, ROW, shelf, check, make)


def _stop_order(table: TomlTable, front: str, rear: str) -> None:
    table.stop(
        "row-out-of-order",
        "webs",
        f"{rear!r} does not lie behind {front!r}",
        f'write the front web first, for example webs = ["{rear}", "{front}"]',
    )


def read_ribs(whole: TomlTable, shelf: Shelf) -> tuple[tuple[TomlTable, Rib], ...]:
    """Ribs, each in rows that are there."""
    check_new_names(whole, "rib")

    def check(table: TomlTable, values: Values) -> None:
        shelf.thickness_m(table, "sheet", values.get("sheet"))
        shelf.check_row(table, "rows", values.get("rows", ()))
        shelf.check_web(table, "through", values.get("through", ()))
        _check_plan_line(table, values)

    def make(table: TomlTable, values: Values) -> Rib:
        return Rib(
            place=table.where(),
            name=values["name"],
            laminate=values["sheet"],
            thickness_m=shelf.thickness_m(table, "sheet", values["sheet"]) or 0.0,
            rows=values["rows"],
            butt_line_m=values.get("butt_line"),
            points_m=_plan_line(values),
            lean_deg=values.get("lean_deg", 0.0),
            through=values.get("through", ()),
        )

    return read_records(whole, RIB, shelf, check, make)


def read_caps(whole: TomlTable, shelf: Shelf) -> tuple[tuple[TomlTable, Cap], ...]:
    """Caps along webs that are there."""

    def check(table: TomlTable, values: Values) -> None:
        shelf.take_part(table, "part", values.get("part"))
        shelf.check_web(table, "web", (values["web"],) if "web" in values else ())
        by_length = values.get("let_in", False)
        shelf.check_material(table, "material", values.get("material"), SOLID_KINDS, by_length=by_length)

    def make(table: TomlTable, values: Values) -> Cap:
        return Cap(
            place=table.where(),
            part=values["part"],
            title=values.get("title", values["part"]),
            web=values["web"],
            surface=Surface(values["surface"]),
            width_m=values["width"],
            thickness_m=values["thickness"],
            material=values["material"],
            between_m=values.get("between"),
            let_in=values.get("let_in", False),
        )

    return read_records(whole, CAP, shelf, check, make)
