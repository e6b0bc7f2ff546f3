"""What every table of a layout leans on: the unit, materials, laminates, and the names that are given."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Mapping
from dataclasses import dataclass, field
from difflib import get_close_matches
from typing import Any, TypeVar

from ledger.exchange.layout_examples import in_own_names
from ledger.exchange.layout_thickness import Thicknesses
from ledger.exchange.layout_values import read_values
from ledger.exchange.materials_table import Named
from ledger.exchange.problems import listed
from ledger.exchange.toml_text import TomlTable
from ledger.loft.keys import TableKeys
from ledger.loft.layout import NOSE, TAIL
from ledger.model.plan import Laminate, Material, MaterialKind

_R = TypeVar("_R")
Values = Mapping[str, Any]

SOLID_KINDS = (MaterialKind.SOLID, MaterialKind.CORE)
PASTE_KINDS = (MaterialKind.PASTE,)
SEALANT_KINDS = (MaterialKind.SEALANT, MaterialKind.PASTE)


@dataclass(frozen=True, slots=True, kw_only=True)
class Shelf:
    """`webs`, `rows` and `ribs` are the names as written, also of tables with another problem.

    `parts` gathers every part number by its small letters, with the table and key that gave it first.
    """

    unit: str | None
    materials: Named[Material]
    laminates: Named[Laminate]
    thicknesses: Thicknesses
    webs: tuple[str, ...]
    rows: tuple[str, ...]
    ribs: tuple[str, ...]
    parts: dict[str, str] = field(default_factory=dict)

    def take_part(self, table: TomlTable, key: str, part: str | None) -> None:
        """Note a part number that another part has already."""
        if part is None:
            return
        if part.casefold() in self.parts:
            table.stop("name-twice", key, f"part {part!r} is there twice", "give each its own number")
        self.parts.setdefault(part.casefold(), part)

    def check_row(self, table: TomlTable, key: str, names: Iterable[str]) -> None:
        """Note names that are no row."""
        check_names(table, key, names, self.rows, "row")

    def check_rib(self, table: TomlTable, key: str, names: Iterable[str]) -> None:
        """Note names that are no rib."""
        check_names(table, key, names, self.ribs, "rib")

    def check_web(self, table: TomlTable, key: str, names: Iterable[str], *, ends: bool = False) -> None:
        """Note names that are no web; `ends` lets the nose and the tail stand for one."""
        check_names(table, key, names, (*self.webs, *((NOSE, TAIL) if ends else ())), "web")

    def check_laminate(self, table: TomlTable, key: str, name: str | None) -> None:
        """Note a name that is no laminate."""
        if name is not None and not self.laminates.may_have(name):
            table.stop(
                "laminate-unknown",
                key,
                f"there is no laminate {name!r} in the laminates",
                _instead(name, self.laminates.records) or "add it there or correct the name",
            )

    def thickness_m(self, table: TomlTable, key: str, name: str | None) -> float | None:
        """How thick a laminate is; None with a finding."""
        self.check_laminate(table, key, name)
        if name is None or name not in self.laminates.records:
            return None
        return self.thicknesses.of(table, key, self.laminates.records[name])

    def check_material(
        self,
        table: TomlTable,
        key: str,
        name: str | None,
        kinds: tuple[MaterialKind, ...],
        *,
        by_length: bool = False,
    ) -> None:
        """Note a name that is no material, is of another kind, or lacks the figure it is weighed by."""
        if name is None:
            return
        if not self.materials.may_have(name):
            do = _instead(name, self.materials.records) or "add it there or correct the name"
            table.stop("material-unknown", key, f"there is no material {name!r} in the materials", do)
        material = self.materials.records.get(name)
        if material is None:
            return
        if material.kind not in kinds:
            wanted = listed(kind.value for kind in kinds)
            what = f"{name!r} is a {material.kind.value}, not a {wanted}"
            table.stop("material-of-wrong-kind", key, what, f"name a {wanted}")
        elif by_length and material.linear_mass_kg_m is None:
            what = f"{name!r} has no linear mass, so a strip of it has no mass"
            table.stop("material-without-linear-mass", key, what, "give it one in the materials")
        elif not by_length and material.density_kg_m3 is None:
            what = f"{name!r} has no density, so what is made of it has no mass"
            table.stop("material-without-density", key, what, "give it one in the materials")


def _instead(name: str, names: Iterable[str]) -> str | None:
    close = get_close_matches(name, tuple(names), n=1, cutoff=0.75)
    return f"write {close[0]}" if close else None


def check_names(table: TomlTable, key: str, names: Iterable[str], known: tuple[str, ...], kind: str) -> None:
    """Note each name that stands for no table of its kind."""
    known = tuple(dict.fromkeys(known))
    for name in names:
        if name not in known:
            are = f"write one of {', '.join(known)}" if known else f"add a [[{kind}]]"
            table.stop(f"{kind}-unknown", key, f"there is no {kind} {name!r}", _instead(name, known) or are)


def names_said(whole: TomlTable, word: str) -> tuple[str, ...]:
    """Names of the tables of a kind as they are written."""
    said = (table.values.get("name") for table in whole.tables(word))
    return tuple(dict.fromkeys(name.strip() for name in said if isinstance(name, str)))


def read_records(
    whole: TomlTable,
    keys: TableKeys,
    shelf: Shelf,
    check: Callable[[TomlTable, Values], None],
    make: Callable[[TomlTable, Values], _R],
) -> tuple[tuple[TomlTable, _R], ...]:
    """Each table of a kind with its record; one with a problem is left out, its problem noted.

    `check` sees the values that could be read, `make` only a table without a problem.
    """
    found: list[tuple[TomlTable, _R]] = []
    keys = in_own_names(whole, keys, shelf)
    for table in whole.tables(keys.word):
        before = table.problems.stops
        values = read_values(table, keys, shelf.unit)
        check(table, values)
        if table.problems.stops == before:
            found.append((table, make(table, values)))
    return tuple(found)


def check_new_names(whole: TomlTable, *words: str) -> None:
    """Note a name that two tables of these kinds share, whatever its capitals."""
    taken: dict[str, str] = {}
    for word in words:
        for table in whole.tables(word):
            name = table.values.get("name")
            if not isinstance(name, str):
                continue
            if name.strip().casefold() in taken:
                table.stop("name-twice", "name", f"{word} {name!r} is there twice", "give each its own name")
            taken[name.strip().casefold()] = word
