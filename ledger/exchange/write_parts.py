"""parts.csv of a lofted plan, and the drawings and meshes that its parts point to."""

from __future__ import annotations

import csv
import io
import re
from collections.abc import Callable, Iterator, Mapping
from dataclasses import dataclass, field, replace

from ledger.exchange.figure_texts import figure, plain
from ledger.exchange.parts_table import PARTS
from ledger.exchange.problems import Problems
from ledger.exchange.write_dxf import LAYER, panel_drawing
from ledger.exchange.write_materials import Bead, bead_of
from ledger.exchange.write_meshes import mesh_file, run_file
from ledger.loft.layout import Item, Layout
from ledger.loft.lofted import BondRun, Lofted, LoftedSkin, Panel, Solid, Strip
from ledger.model.plan import Face, Form, PartClass, Placement, Side
from ledger.model.vectors import Vector
from ledger.units import Dimension

HEAD = (
    "part",
    "title",
    "class",
    "side",
    "assembly",
    "form",
    "made_of",
    "geometry",
    "geometry_unit",
    "origin [m]",
    "across",
    "up_axis",
    "face",
    "quantity",
    "planned_mass [g]",
    "mirror_of",
)
_OF_THE_SHAPE = ("geometry", "geometry_unit", "origin [m]", "across", "up_axis", "face")
_WING = {Side.LEFT: "WING/LEFT", Side.RIGHT: "WING/RIGHT"}
_ASSEMBLY = {
    PartClass.RIB: "ribs",
    PartClass.WEB: "webs",
    PartClass.SKIN: "skins",
    PartClass.CAP: "caps",
    PartClass.CLOSEOUT: "closeouts",
    PartClass.JOINT: "joints",
    PartClass.FITTING: "fittings",
    PartClass.FINISH: "finish",
}
# A nanometre; and a panel of 10 m turned by the last digit of its axes moves by less than that.
_ORIGIN_PLACES = 9
_AXIS_PLACES = 12

Row = dict[str, str]
Written = Callable[[], bytes]


@dataclass(slots=True)
class NewGeometry:
    """The geometry of a plan by path, each file written when its turn comes."""

    files: dict[str, Written] = field(default_factory=dict)

    def add(self, name: str, ending: str, written: Written) -> str:
        """The path of a new file, named after what it shows."""
        # Marks that some system forbids in the name of a file; and capitals are all one to some.
        plain_name = re.sub(r"[^A-Za-z0-9._-]", "_", name)
        path, count = f"geometry/{plain_name}{ending}", 1
        taken = {known.casefold() for known in self.files}
        while path.casefold() in taken:
            count += 1
            path = f"geometry/{plain_name}_{count}{ending}"
        self.files[path] = written
        return path


def parts_table(
    layout: Layout, lofted: Lofted, beads: Mapping[Bead, str], geometry: NewGeometry, problems: Problems
) -> tuple[str, bytes]:
    """The path of the table and the table; the files it points to are added to `geometry`."""
    planned = dict(layout.planned_kg)
    written = io.StringIO()
    table = csv.DictWriter(written, HEAD, lineterminator="\n", restval="")
    table.writeheader()
    for row in _rows(lofted, beads, geometry):
        mass_kg = planned.pop(row["part"], None)
        if mass_kg is not None:
            row["planned_mass [g]"] = figure(mass_kg, "g", Dimension.MASS)
        table.writerows(_both_sides(row) if layout.mirrored else [_right(row)])
    for part in planned:
        problems.stop(
            "planned-of-no-part",
            replace(layout.place, thing=part, column="planned"),
            f"a mass is planned for {part}, and the lofted wing has no such part",
            "correct its number, or leave it out",
        )
    return PARTS, written.getvalue().encode()


def _rows(lofted: Lofted, beads: Mapping[Bead, str], geometry: NewGeometry) -> Iterator[Row]:
    for panel in lofted.panels:
        yield _panel(panel, geometry)
    for skin in lofted.skins:
        yield from _skin(skin, geometry)
    for bond in lofted.bonds:
        # A bond without a material has a finding already.
        if bead_of(bond) in beads:
            yield _bond(bond, beads[bead_of(bond)], geometry)
    for strip in lofted.strips:
        yield _strip(strip, geometry)
    for solid in lofted.solids:
        yield _solid(solid, geometry)
    for item in lofted.items:
        yield _item(item)


def _row(part: str, title: str, part_class: PartClass, form: Form, made_of: str, **cells: str) -> Row:
    return {
        "part": part,
        "title": title,
        "class": part_class.value,
        "assembly": _ASSEMBLY[part_class],
        "form": form.value,
        "made_of": made_of,
        **cells,
    }


def _panel(panel: Panel, geometry: NewGeometry) -> Row:
    path = geometry.add(panel.part, ".dxf", lambda: panel_drawing(panel.outline_m, panel.holes))
    row = _row(panel.part, panel.title, panel.part_class, Form.PANEL, panel.laminate)
    return row | _on_file(f"{path}#{LAYER}") | _placed(panel.placement)


def _skin(skin: LoftedSkin, geometry: NewGeometry) -> Iterator[Row]:
    # Plies are laid from the mould's face in, and a plan counts its steps along the normal.
    path = geometry.add(skin.part, ".obj", lambda: mesh_file(skin.surface, turned_over=True))
    row = _row(skin.part, skin.title, PartClass.SKIN, Form.SKIN, skin.laminate)
    yield row | _on_file(path) | {"face": Face.MINUS.value}
    if skin.finish is not None and skin.finish_part is not None:
        title = f"{skin.finish} on {skin.title}"
        finish = _row(skin.finish_part, title, PartClass.FINISH, Form.SKIN, skin.finish)
        yield finish | _on_file(path)


def _strip(strip: Strip, geometry: NewGeometry) -> Row:
    path = geometry.add(strip.part, ".obj", lambda: run_file((strip.line_m,)))
    return _row(strip.part, strip.title, PartClass.CAP, Form.RUN, strip.material) | _on_file(path)


def _bond(bond: BondRun, material: str, geometry: NewGeometry) -> Row:
    path = geometry.add(bond.part, ".obj", lambda: run_file(bond.lines_m))
    return _row(bond.part, bond.title, PartClass.JOINT, Form.RUN, material) | _on_file(path)


def _solid(solid: Solid, geometry: NewGeometry) -> Row:
    path = geometry.add(solid.part, ".obj", lambda: mesh_file(solid.mesh))
    return _row(solid.part, solid.title, solid.part_class, Form.SOLID, solid.material) | _on_file(path)


def _item(item: Item) -> Row:
    row = _row(item.part, item.title, item.part_class, Form.ITEM, "")
    row["origin [m]"] = _origin(item.at_m)
    row["quantity"] = str(item.quantity)
    row["planned_mass [g]"] = figure(item.mass_kg, "g", Dimension.MASS)
    return row


def _on_file(geometry: str) -> Row:
    return {"geometry": geometry, "geometry_unit": "mm"}


def _placed(placement: Placement) -> Row:
    return {
        "origin [m]": _origin(placement.origin_m),
        "across": _three(placement.across),
        "up_axis": _three(placement.up_axis),
    }


def _origin(point_m: Vector) -> str:
    return " ".join(figure(round(value, _ORIGIN_PLACES), "m", Dimension.LENGTH) for value in point_m)


def _three(direction: Vector) -> str:
    return " ".join(plain(round(value, _AXIS_PLACES)) for value in direction)


def _right(row: Row) -> Row:
    return _on_side(row, Side.RIGHT)


def _both_sides(row: Row) -> list[Row]:
    right = _right(row)
    left = {column: cell for column, cell in row.items() if column not in _OF_THE_SHAPE}
    return [_on_side(left, Side.LEFT) | {"mirror_of": right["part"]}, right]


def _on_side(row: Row, side: Side) -> Row:
    return row | {
        "part": f"{row['part']}-{side.value}",
        "side": side.value,
        "assembly": f"{_WING[side]}/{row['assembly']}",
    }
