"""materials.csv of a lofted plan: that of the layout, and a row for each cross-section of paste."""

from __future__ import annotations

import csv
import io
import math
from collections.abc import Iterable, Mapping
from dataclasses import dataclass, replace

from ledger.errors import Where
from ledger.exchange.figure_texts import figure, plain
from ledger.exchange.materials_table import MATERIALS, read_materials
from ledger.exchange.problems import Problems
from ledger.exchange.texts import read_csv_rows, read_text
from ledger.loft.bonds import fillet_area
from ledger.loft.layout import FilletShape, Joint, Layout
from ledger.loft.lofted import BondRun
from ledger.model.plan import Material
from ledger.units import Dimension, to_si, unit_in_head

# A paste and the cross-section of it: bonds that agree in both are made of one material.
Bead = tuple[str, str]

# What a bond has of its paste: it is mixed, and judged, as the paste itself.
_OF_THE_PASTE = ("kind", "density", "ratio", "ratio_tolerance", "pot_life", "lot_spread")
_LINEAR = "linear_mass"
_LINEAR_UNIT = "g/m"
_DIGITS = 6
_SAME = 1e-5
_MARK = b"\xef\xbb\xbf"


@dataclass(frozen=True, slots=True, kw_only=True)
class WithBeads:
    """The table as it is written, and the material of each bead."""

    content: bytes
    names: Mapping[Bead, str]


@dataclass(frozen=True, slots=True, kw_only=True)
class _Table:
    """The table as text: its heads without units, the cells of each material, and how its lines end."""

    text: str
    words: tuple[str, ...]
    units: Mapping[str, str | None]
    cells: Mapping[str, Mapping[str, str]]
    end: str


def bead_of(bond: BondRun) -> Bead:
    """What tells the material of a bond from that of others."""
    return bond.paste, plain(bond.section_m2)


def add_beads(content: bytes, layout: Layout, bonds: Iterable[BondRun], problems: Problems) -> WithBeads:
    """The table with a row for each bead: its mass per length, and all else as the paste's own row says.

    What the table holds stays as it is; a column for the mass per length is added where there is none.
    """
    firsts = {bead_of(bond): bond for bond in reversed(tuple(bonds))}
    text = read_text(MATERIALS, content, problems)
    if text is None or not firsts:
        return WithBeads(content=content, names={})
    known = read_materials(content, Problems()).records
    table = _with_linear_column(_table(text))
    joints = {joint.part: joint for joint in layout.joints}
    names: dict[Bead, str] = {}
    new = []
    for bead, bond in reversed(firsts.items()):
        linear = _linear_mass(bond, known, problems)
        if linear is None:
            continue
        name = _name(bond, joints.get(bond.part), layout.gap_m)
        there = known.get(name)
        if name in names.values() or (there is not None and not _agrees(there, linear)):
            name = f"{name}, {_linear_text(linear, _LINEAR_UNIT)} {_LINEAR_UNIT}"
            there = known.get(name)
        names[bead] = name
        if there is None:
            new.append(_row(table, bond.paste, name, linear))
    mark = _MARK if content.startswith(_MARK) else b""
    return WithBeads(content=mark + (table.text + _csv(new, table.end)).encode(), names=names)


def _name(bond: BondRun, joint: Joint | None, gap_m: float) -> str:
    """Such as `bond base, 10.6 x 0.5 gap, fillet 4`, in millimetres."""
    words = [bond.paste]
    filled = 0.0 if joint is None else 2.0 * fillet_area(joint.fillet_m, joint.fillet_shape)
    if joint is None or (gap_m == 0.0 and filled == 0.0):
        words.append(f"{plain(bond.section_m2 * 1e6, _DIGITS)} mm2")
        return ", ".join(words)
    if gap_m > 0.0:
        wide = plain((bond.section_m2 - filled) / gap_m * 1000.0, 4)
        words.append(f"{wide} x {figure(gap_m, 'mm', Dimension.LENGTH)} gap")
    if filled > 0.0:
        flat = "flat " if joint.fillet_shape is FilletShape.FLAT else ""
        words.append(f"{flat}fillet {figure(joint.fillet_m, 'mm', Dimension.LENGTH)}")
    return ", ".join(words)


def _linear_mass(bond: BondRun, known: Mapping[str, Material], problems: Problems) -> float | None:
    """kg/m; None with a finding where the paste's density is not known."""
    paste = known.get(bond.paste)
    if paste is not None and paste.density_kg_m3 is not None:
        return paste.density_kg_m3 * bond.section_m2
    problems.stop(
        "paste-without-density",
        Where(file=MATERIALS, thing=bond.paste, column="density"),
        f"joint {bond.part} is made with {bond.paste!r}, whose density is not known",
        f"give it one in {MATERIALS}",
    )
    return None


def _agrees(material: Material, linear_kg_m: float) -> bool:
    said = material.linear_mass_kg_m
    return said is not None and math.isclose(said, linear_kg_m, rel_tol=_SAME)


def _linear_text(linear_kg_m: float, unit: str) -> str:
    return plain(linear_kg_m / to_si(1.0, unit, Dimension.LINEAR_MASS), _DIGITS)


def _table(text: str) -> _Table:
    rows = [cells for _, cells in read_csv_rows(MATERIALS, text, Problems())]
    heads = [unit_in_head(head) for head in rows[0]]
    words = tuple(word for word, _ in heads)
    cells = [dict(zip(words, (cell.strip() for cell in row), strict=False)) for row in rows[1:]]
    end = "\r\n" if "\r\n" in text else "\n"
    return _Table(
        text=text if text.endswith(("\n", "\r")) else text + end,
        words=words,
        units=dict(heads),
        cells={row["material"]: row for row in cells if "material" in row},
        end=end,
    )


def _with_linear_column(table: _Table) -> _Table:
    if _LINEAR in table.words:
        return table
    wide = len(table.words)
    rows = [cells for _, cells in read_csv_rows(MATERIALS, table.text, Problems())]
    longer = [[*row[:wide], *[""] * (wide - len(row)), ""] for row in rows]
    longer[0][-1] = f"{_LINEAR} [{_LINEAR_UNIT}]"
    return replace(
        table,
        text=_csv(longer, table.end),
        words=(*table.words, _LINEAR),
        units={**table.units, _LINEAR: _LINEAR_UNIT},
    )


def _row(table: _Table, paste: str, name: str, linear_kg_m: float) -> list[str]:
    unit = table.units[_LINEAR]
    linear = _linear_text(linear_kg_m, unit or _LINEAR_UNIT)
    cells = {word: table.cells[paste].get(word, "") for word in _OF_THE_PASTE}
    cells |= {"material": name, _LINEAR: linear if unit is not None else f"{linear} {_LINEAR_UNIT}"}
    return [cells.get(word, "") for word in table.words]


def _csv(rows: Iterable[Iterable[str]], end: str) -> str:
    written = io.StringIO()
    csv.writer(written, lineterminator=end).writerows(rows)
    return written.getvalue()
