"""materials.csv and laminates.csv as records."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from itertools import groupby
from typing import Generic, TypeVar

from ledger.exchange.csv_table import TableRow, read_table
from ledger.exchange.problems import Problems
from ledger.model.plan import Laminate, Material, MaterialKind, Step
from ledger.units import Dimension, UnitError, read_ratio

_R = TypeVar("_R")

MATERIALS = "materials.csv"
LAMINATES = "laminates.csv"

_MATERIAL_COLUMNS: dict[str, tuple[Dimension, ...]] = {
    "material": (),
    "kind": (),
    "areal_mass": (Dimension.AREAL_MASS,),
    "density": (Dimension.DENSITY,),
    "thickness": (Dimension.LENGTH,),
    "linear_mass": (Dimension.LINEAR_MASS,),
    "resin_uptake": (Dimension.AREAL_MASS,),
    "fibre_density": (Dimension.DENSITY,),
    "ratio": (),
    "ratio_tolerance": (Dimension.FRACTION,),
    "pot_life": (Dimension.DURATION,),
    "lot_spread": (Dimension.FRACTION,),
}
_LAMINATE_COLUMNS: dict[str, tuple[Dimension, ...]] = {
    "laminate": (),
    "areal_mass": (Dimension.AREAL_MASS,),
    "step": (),
    "material": (),
    "orientation": (Dimension.ANGLE,),
    "coverage": (Dimension.FRACTION,),
    "resin_fraction": (Dimension.FRACTION,),
}
_STEP_COLUMNS = ("material", "orientation", "coverage", "resin_fraction")


@dataclass(frozen=True, slots=True, kw_only=True)
class Named(Generic[_R]):
    """Records by name. `names` are those of rows with a problem too, None where no row could be read."""

    records: Mapping[str, _R]
    names: frozenset[str] | None

    def may_have(self, name: str) -> bool:
        """Whether the name is there, or was in what could not be read: then nothing more is said of it."""
        return self.names is None or name in self.names


def read_materials(content: bytes, problems: Problems, file: str = MATERIALS) -> Named[Material]:
    """The materials of a plan; each problem at its cell."""
    rows = read_table(file, content, _MATERIAL_COLUMNS, ("material", "kind"), problems)
    if rows is None:
        return Named(records={}, names=None)
    found: dict[str, TableRow] = {}
    materials = []
    for row in rows:
        name = row.wanted("material", "the name of the material")
        kind = row.choice("kind", tuple(MaterialKind))
        figures = {
            "areal_mass_kg_m2": row.quantity("areal_mass", Dimension.AREAL_MASS),
            "density_kg_m3": row.quantity("density", Dimension.DENSITY),
            "thickness_m": row.quantity("thickness", Dimension.LENGTH),
            "linear_mass_kg_m": row.quantity("linear_mass", Dimension.LINEAR_MASS),
            "resin_uptake_kg_m2": row.quantity("resin_uptake", Dimension.AREAL_MASS, zero=True),
            "fibre_density_kg_m3": row.quantity("fibre_density", Dimension.DENSITY),
            "ratio": _ratio(row),
            "ratio_tolerance": row.quantity("ratio_tolerance", Dimension.FRACTION, zero=True, most=1.0),
            "pot_life_s": row.quantity("pot_life", Dimension.DURATION),
            "lot_spread": row.quantity("lot_spread", Dimension.FRACTION, zero=True, most=1.0),
        }
        if name is None or not is_new(row, "material", name, found):
            continue
        if kind is not None:
            materials.append(Material(name=name, kind=MaterialKind(kind), **figures))
    names = frozenset(row.cells["material"] for row in rows if "material" in row.cells)
    return Named(records={material.name: material for material in materials}, names=names)


def is_new(row: TableRow, column: str, name: str, found: dict[str, TableRow]) -> bool:
    """Whether a name was not met before, whatever its capitals; a second one is noted."""
    before = found.setdefault(name.casefold(), row)
    if before is row:
        return True
    row.stop("name-twice", column, f"{name!r} is in row {before.number} already", "give each its own name")
    return False


def _ratio(row: TableRow) -> float | None:
    text = row.text("ratio")
    if text is None:
        return None
    try:
        return read_ratio(text)
    except UnitError as error:
        row.stop("cell-unreadable", "ratio", error.what, error.do)
        return None


def read_laminates(
    content: bytes, materials: Named[Material], problems: Problems, file: str = LAMINATES
) -> Named[Laminate]:
    """The laminates of a plan, their steps in order; each problem at its cell."""
    rows = read_table(file, content, _LAMINATE_COLUMNS, ("laminate",), problems)
    if rows is None:
        return Named(records={}, names=None)
    named = [(name, row) for row in rows if (name := row.wanted("laminate", "the name of the laminate"))]
    by_name: dict[str, list[TableRow]] = {}
    spelt: dict[str, str] = {}
    for name, row in named:
        first = spelt.setdefault(name.casefold(), name)
        if first != name:
            row.stop("name-twice", "laminate", f"{name!r} is spelt {first!r} above", f"write {first}")
        by_name.setdefault(first, []).append(row)
    _refuse_split(named)
    records = {name: _laminate(name, each, materials) for name, each in by_name.items()}
    return Named(records=records, names=frozenset(by_name))


def _refuse_split(named: list[tuple[str, TableRow]]) -> None:
    seen: set[str] = set()
    for name, group in groupby(named, key=lambda pair: pair[0]):
        first = next(group)[1]
        if name in seen:
            first.stop(
                "name-twice",
                "laminate",
                f"{name!r} is above already, with other laminates between",
                "put its rows together, or give it its own name",
            )
        seen.add(name)


def _laminate(name: str, rows: list[TableRow], materials: Named[Material]) -> Laminate:
    plain = [row for row in rows if row.text("areal_mass") is not None]
    if plain:
        return _plain_laminate(name, rows, plain[0])
    steps = [step for row in rows if (step := _step(row, materials)) is not None]
    numbers: dict[int, TableRow] = {}
    for row in rows:
        number = _whole(row.text("step"))
        if number is None:
            continue
        before = numbers.setdefault(number, row)
        if before is not row:
            row.stop(
                "step-twice",
                "step",
                f"step {number} is in row {before.number} already",
                "number the steps anew",
            )
    return Laminate(name=name, steps=tuple(sorted(steps, key=lambda step: step.number)))


def _plain_laminate(name: str, rows: list[TableRow], plain: TableRow) -> Laminate:
    areal_mass = plain.quantity("areal_mass", Dimension.AREAL_MASS)
    if len(rows) > 1:
        plain.stop(
            "laminate-both-ways",
            "areal_mass",
            f"{name!r} has other rows as well",
            "give it either an areal mass on one row, or steps",
        )
    else:
        for column in ("step", *_STEP_COLUMNS):
            if plain.text(column) is not None:
                plain.stop(
                    "laminate-both-ways",
                    column,
                    f"{name!r} has an areal mass and a {column}",
                    "leave one of them empty",
                )
    return Laminate(name=name, areal_mass_kg_m2=areal_mass)


def _step(row: TableRow, materials: Named[Material]) -> Step | None:
    before = row.problems.count
    text = row.wanted("step", "the number of the step, or an areal_mass for the whole laminate")
    number = _whole(text)
    if text is not None and number is None:
        row.stop("cell-unreadable", "step", f"{text!r} is not a whole number", "write for example 2")
    name = row.wanted("material", "the material of the step")
    material = None if name is None else materials.records.get(name)
    if name is not None and not materials.may_have(name):
        row.stop(
            "material-unknown",
            "material",
            f"there is no material {name!r} in {MATERIALS}",
            "add it there or correct the name",
        )
    orientation = _orientation(row)
    coverage = _share(row, "coverage", most=1.0)
    resin = _share(row, "resin_fraction", most=None)
    if resin is not None and resin >= 1.0:
        row.stop(
            "cell-out-of-range",
            "resin_fraction",
            f"{row.text('resin_fraction')!r} leaves no fibre",
            "write the share of resin in the whole ply, below 100 %",
        )
    if material is not None:
        _check_step(row, material, resin)
    if row.problems.count != before or number is None or name is None:
        return None
    return Step(
        number=number,
        material=name,
        orientation_deg=orientation,
        coverage=1.0 if coverage is None else coverage,
        resin_fraction=resin,
    )


def _check_step(row: TableRow, material: Material, resin: float | None) -> None:
    """Note a figure without which the areal mass of the step cannot be told."""
    wants_areal = (MaterialKind.FABRIC, MaterialKind.PREPREG)
    by_thickness = material.density_kg_m3 is not None and material.thickness_m is not None
    if material.kind is MaterialKind.PROCESS:
        return
    if material.kind is MaterialKind.FABRIC and resin is None and row.text("resin_fraction") is None:
        row.stop(
            "resin-fraction-missing",
            "resin_fraction",
            f"fabric {material.name!r} is laid without a resin fraction",
            "write the share of resin in the whole ply, for example 42 with [%] in the head",
        )
    if material.kind in wants_areal and material.areal_mass_kg_m2 is None:
        what, do = "areal_mass", f"give it one in {MATERIALS}"
    elif material.areal_mass_kg_m2 is None and not by_thickness:
        what, do = (
            "areal_mass, and not both density and thickness",
            f"give it one or the other in {MATERIALS}",
        )
    else:
        return
    row.stop("material-without-mass", "material", f"{material.name!r} has no {what}", do)


def _orientation(row: TableRow) -> float | None:
    text = row.text("orientation")
    if text is None:
        return None
    return row.quantity("orientation", Dimension.ANGLE, negative=True)


def _share(row: TableRow, column: str, most: float | None) -> float | None:
    return row.quantity(column, Dimension.FRACTION, zero=column == "resin_fraction", most=most)


def _whole(text: str | None) -> int | None:
    return int(text) if text is not None and text.isascii() and text.isdigit() and int(text) > 0 else None
