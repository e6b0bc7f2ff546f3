"""What must hold between the cells of a row in parts.csv, and between its rows."""

from __future__ import annotations

from collections.abc import Mapping

from ledger.exchange.materials_table import LAMINATES, MATERIALS, Named
from ledger.exchange.part_row import PartRow, made_of_part
from ledger.model.plan import Form, Laminate, Material, Side
from ledger.model.vectors import Vector

_PLACING = ("across", "up_axis")


def check_mirror(part: PartRow, by_name: Mapping[str, PartRow], names: set[str]) -> None:
    """Note a mirror that is no part, or that cannot be this part's other side."""
    if part.mirror_of is None:
        return
    if part.mirror_of.casefold() not in names:
        part.row.stop(
            "part-unknown",
            "mirror_of",
            f"there is no part {part.mirror_of!r}",
            "name the part on the other side",
        )
        return
    other = by_name.get(part.mirror_of.casefold())
    wrong = None if other is None else _mirror_trouble(part, other)
    if wrong is not None:
        part.row.stop("mirror-wrong", "mirror_of", *wrong)


def _mirror_trouble(part: PartRow, other: PartRow) -> tuple[str, str] | None:
    """Why a part cannot be the other side of another, and what to do."""
    if other is part:
        return "a part cannot mirror itself", "name the part on the other side"
    if other.side is part.side and part.side is not Side.CENTRE:
        return f"{other.name} is on side {other.side.value} too", "correct one of the two sides"
    if other.form is not part.form:
        what = f"{other.name} is {_a(other.form)}, this part {_a(part.form)}"
        return what, "give both the same form"
    if part.takes_mirrored_geometry and other.takes_mirrored_geometry:
        place = "origin" if part.form is Form.ITEM else "geometry"
        return f"{other.name} has no {place} of its own to mirror", f"give one of the two its {place}"
    return None


def check_geometry(part: PartRow) -> None:
    """Note what the part's form needs and does not have, or has and does not use."""
    row = part.row
    if part.takes_mirrored_geometry:
        for column in ("geometry", "origin", *_PLACING, "face"):
            if row.text(column) is not None:
                row.stop(
                    "mirror-wrong",
                    column,
                    f"the part takes its geometry from {part.mirror_of}, so {column} cannot be given",
                    "leave it empty, or give the part a geometry of its own",
                )
    elif part.form is Form.ITEM:
        _check_item(part)
    else:
        _check_placed(part)
    if part.form is Form.ITEM and part.planned_mass_kg is None and row.text("planned_mass") is None:
        row.stop(
            "cell-empty",
            "planned_mass",
            "an item has no planned mass",
            "write what it weighs, for example 120 g",
        )


def _check_item(part: PartRow) -> None:
    if part.origin is None:
        part.row.stop("cell-empty", "origin", "an item has no origin", "write where its centre of gravity is")
    for column in ("geometry", *_PLACING, "face"):
        if part.row.text(column) is not None:
            part.row.stop(
                "cell-not-used",
                column,
                f"an item has no {column}",
                "leave it empty, or give the part another form",
            )


def _check_placed(part: PartRow) -> None:
    row = part.row
    if part.geometry is None:
        row.stop(
            "cell-empty",
            "geometry",
            f"a {part.form.value} has no geometry",
            "write the path of its file, for example geometry/rib.dxf",
        )
    if part.form in (Form.SOLID, Form.RUN) and row.text("face") is not None:
        row.stop("cell-not-used", "face", f"a {part.form.value} has no face", "leave it empty")
    needed = ("origin", *_PLACING)
    given = [column for column in needed if row.text(column) is not None]
    if given != list(needed) and (given or part.form is Form.PANEL):
        for column in needed:
            if column not in given:
                row.stop(
                    "cell-empty",
                    column,
                    f"{column} is empty and the part's place cannot be told",
                    f"write {_PLACE_WORDS[column]}",
                )
    elif part.across is not None and part.up_axis is not None:
        _check_square(part, part.across, part.up_axis)


def _a(form: Form) -> str:
    return f"an {form.value}" if form is Form.ITEM else f"a {form.value}"


_PLACE_WORDS = {
    "origin": "where the outline's origin lies, three numbers",
    "across": "where its X runs, for example 1 0 0",
    "up_axis": "where its Y runs, for example 0 0 1",
}


def _check_square(part: PartRow, across: Vector, up_axis: Vector) -> None:
    from ledger.geometry.placement import SQUARE_WITHIN_DEG, angle_error_deg

    error = angle_error_deg(across, up_axis)
    if error > SQUARE_WITHIN_DEG:
        part.row.stop(
            "axes-not-square",
            "up_axis",
            f"across and up_axis are {error:.2f} degrees from square",
            f"make them square within {SQUARE_WITHIN_DEG} degrees",
        )


def check_made_of(
    part: PartRow,
    by_name: Mapping[str, PartRow],
    materials: Named[Material],
    laminates: Named[Laminate],
) -> None:
    """Note a part made of nothing, of something unknown, or of something whose mass is unknown."""
    made_of = made_of_part(part, by_name)
    row = part.row
    if part.form is Form.ITEM:
        return
    laminated = part.form in (Form.PANEL, Form.SKIN)
    kind, file = ("laminate", LAMINATES) if laminated else ("material", MATERIALS)
    if made_of is None:
        row.stop("cell-empty", "made_of", "made_of is empty", f"write the {kind} the part is made of")
        return
    if not (laminates.may_have(made_of) if laminated else materials.may_have(made_of)):
        row.stop(
            f"{kind}-unknown",
            "made_of",
            f"there is no {kind} {made_of!r} in {file}",
            "add it there or correct the name",
        )
        return
    material = materials.records.get(made_of)
    if laminated or material is None:
        return
    column = "density" if part.form is Form.SOLID else "linear_mass"
    figure = material.density_kg_m3 if part.form is Form.SOLID else material.linear_mass_kg_m
    if figure is None:
        row.stop(
            "material-without-mass",
            "made_of",
            f"{made_of!r} has no {column}, which a {part.form.value} needs",
            f"give it one in {MATERIALS}",
        )
