"""parts.csv as rows whose cells are read and checked; their geometry is not opened here."""

from __future__ import annotations

import re

from ledger.exchange.csv_table import TableRow, read_table
from ledger.exchange.materials_table import Named, is_new
from ledger.exchange.part_row import PartRow
from ledger.exchange.part_rules import check_geometry, check_made_of, check_mirror
from ledger.exchange.problems import Problems
from ledger.model.plan import Face, Form, Laminate, Material, PartClass, Side
from ledger.model.vectors import Vector
from ledger.units import Dimension, UnitError, check_unit, read_number

PARTS = "parts.csv"
_COLUMNS: dict[str, tuple[Dimension, ...]] = {
    "part": (),
    "title": (),
    "class": (),
    "side": (),
    "assembly": (),
    "form": (),
    "made_of": (),
    "geometry": (),
    "geometry_unit": (),
    "origin": (Dimension.LENGTH,),
    "across": (),
    "up_axis": (),
    "face": (),
    "quantity": (),
    "planned_mass": (Dimension.MASS,),
    "mirror_of": (),
}
_REQUIRED = ("part", "class", "assembly", "form")
_NAME = re.compile(r"[^\s;,/=\"'#]+")
_ASSEMBLY_STEP = re.compile(r"[^/;,=\"'#]+")


def read_parts(
    content: bytes, materials: Named[Material], laminates: Named[Laminate], problems: Problems
) -> tuple[PartRow, ...]:
    """The rows of parts.csv; a row with a problem is left out, its problem noted."""
    rows = read_table(PARTS, content, _COLUMNS, _REQUIRED, problems)
    if rows is None:
        return ()
    found: dict[str, TableRow] = {}
    parts = [part for row in rows if (part := _part(row, found)) is not None]
    names = {row.cells.get("part", "").casefold() for row in rows}
    by_name = {part.name.casefold(): part for part in parts}
    kept = []
    for part in parts:
        before = problems.count
        check_mirror(part, by_name, names)
        check_geometry(part)
        check_made_of(part, by_name, materials, laminates)
        if problems.count == before:
            kept.append(part)
    return tuple(kept)


def _part(row: TableRow, found: dict[str, TableRow]) -> PartRow | None:
    before = row.problems.count
    name = _name(row, found)
    part_class = row.choice("class", tuple(PartClass))
    form = row.choice("form", tuple(Form))
    side = row.choice("side", tuple(Side)) if row.text("side") is not None else "C"
    assembly = _assembly(row)
    origin, origin_unit = _origin(row)
    unit = _unit(row)
    face = row.choice("face", tuple(Face)) if row.text("face") is not None else "mid"
    across, up_axis = _axis(row, "across"), _axis(row, "up_axis")
    quantity = _quantity(row)
    planned = row.quantity("planned_mass", Dimension.MASS)
    if row.problems.count != before or None in (name, part_class, form, assembly):
        return None
    return PartRow(
        row=row,
        name=str(name),
        title=row.text("title") or str(name),
        part_class=PartClass(str(part_class)),
        side=Side(str(side)),
        assembly=str(assembly),
        form=Form(str(form)),
        made_of=row.text("made_of"),
        geometry=row.text("geometry"),
        geometry_unit=unit,
        origin=origin,
        origin_unit=origin_unit,
        across=across,
        up_axis=up_axis,
        face=Face(str(face)),
        quantity=quantity,
        planned_mass_kg=planned,
        mirror_of=row.text("mirror_of"),
    )


def _name(row: TableRow, found: dict[str, TableRow]) -> str | None:
    name = row.wanted("part", "the part's number")
    if name is None:
        return None
    if _NAME.fullmatch(name) is None:
        row.stop(
            "name-wrong",
            "part",
            f"{name!r} is not a part number",
            "leave out spaces and the marks ; , / = # and quotation marks",
        )
        return None
    return name if is_new(row, "part", name, found) else None


def _assembly(row: TableRow) -> str | None:
    text = row.wanted("assembly", "where the part belongs, for example WING/LEFT/ribs")
    if text is None:
        return None
    steps = [step.strip() for step in text.split("/")]
    if all(_ASSEMBLY_STEP.fullmatch(step) for step in steps):
        return "/".join(steps)
    row.stop(
        "assembly-wrong",
        "assembly",
        f"{text!r} is not a path of assemblies",
        "write names with / between them, for example WING/LEFT/ribs",
    )
    return None


def _unit(row: TableRow) -> str | None:
    text = row.text("geometry_unit")
    if text is None:
        return None
    try:
        return check_unit(text, Dimension.LENGTH)
    except UnitError as error:
        row.stop("unit-unknown", "geometry_unit", error.what, error.do)
        return None


def _quantity(row: TableRow) -> int:
    text = row.text("quantity")
    if text is None:
        return 1
    if re.fullmatch(r"[0-9]{1,6}", text) and int(text) > 0:
        return int(text)
    row.stop(
        "cell-unreadable",
        "quantity",
        f"{text!r} is not a number of pieces",
        "write a whole number, 1 or more",
    )
    return 1


def _origin(row: TableRow) -> tuple[Vector | None, str | None]:
    text = row.text("origin")
    if text is None:
        return None, None
    unit = row.units.get("origin")
    with_unit = re.fullmatch(r"(.*[0-9.])\s*([A-Za-z]+)", text)
    if with_unit is not None:
        try:
            text, unit = with_unit.group(1), check_unit(with_unit.group(2), Dimension.LENGTH)
        except UnitError as error:
            row.stop("unit-unknown", "origin", error.what, error.do)
            return None, None
    return _three(row, "origin", text, "0 1.25 0.1"), unit


def _axis(row: TableRow, column: str) -> Vector | None:
    text = row.text(column)
    if text is None:
        return None
    axis = _three(row, column, text, "1 0 0")
    if axis is not None and not any(axis):
        row.stop("axis-wrong", column, f"{text!r} has no direction", "write for example 1 0 0")
        return None
    return axis


def _three(row: TableRow, column: str, text: str, example: str) -> Vector | None:
    words = text.split()
    if len(words) == 3:
        try:
            x, y, z = (read_number(word) for word in words)
        except UnitError as error:
            row.stop("cell-unreadable", column, error.what, error.do)
            return None
        return (x, y, z)
    row.stop(
        "cell-unreadable",
        column,
        f"{text!r} is not three numbers",
        f"write three numbers with spaces between, for example {example}",
    )
    return None
