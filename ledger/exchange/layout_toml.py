"""A layout file with its materials, laminates and profiles: read whole, every problem told with its line."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from ledger.errors import Finding, Severity, Where, WrongUse
from ledger.exchange.layout_profiles import Profiles, read_beside
from ledger.exchange.layout_shelf import Shelf, names_said
from ledger.exchange.layout_tables import check_tables, layout_of, read_tables
from ledger.exchange.layout_thickness import Thicknesses
from ledger.exchange.layout_values import read_each, read_some
from ledger.exchange.materials_table import LAMINATES, MATERIALS, Named, read_laminates, read_materials
from ledger.exchange.plan_files import FileRefused, FolderFiles
from ledger.exchange.plan_toml import PlanHead, check_filling, check_format, read_head
from ledger.exchange.problems import Problems
from ledger.exchange.tanks_toml import length_unit
from ledger.exchange.toml_text import TomlTable, read_toml
from ledger.loft.layout import Layout
from ledger.loft.layout_keys import FORMAT, TABLES, THICKNESS, TOP
from ledger.model.plan import Laminate, Material

_OWN_TOP_KEYS = ("corners", "mirror", "materials", "laminates")


@dataclass(frozen=True, slots=True, kw_only=True)
class ReadLayout:
    """The layout, None where a finding is a STOP, and what the plan made from it takes over.

    `sources` are the content of the materials and laminates, by the name that a plan gives them.
    """

    layout: Layout | None
    head: PlanHead | None
    materials: Mapping[str, Material]
    laminates: Mapping[str, Laminate]
    sources: Mapping[str, bytes]
    findings: tuple[Finding, ...]


def read_layout(path: Path) -> ReadLayout:
    """Read a layout file; the tables and profiles that it names lie in its folder.

    Raises
        WrongUse: there is no such file, or it cannot be read.
    """
    content = _content(path)
    problems = Problems()
    whole = read_toml(path.name, content, problems)
    if whole is None:
        return ReadLayout(
            layout=None, head=None, materials={}, laminates={}, sources={}, findings=problems.findings()
        )
    meant = whole.refuse_others((*TOP.words, *(table.word for table in TABLES)))
    check_format(whole, FORMAT)
    head = read_head(whole, meant)
    top = read_some(whole, TOP, None, _OWN_TOP_KEYS)
    files = FolderFiles(path.parent)
    sources = _sources(whole, files, top)
    materials, laminates = _tables(sources, top, problems)
    shelf = _shelf(whole, materials, laminates)
    read = read_tables(whole, shelf, Profiles(files))
    check_tables(whole, read, shelf)
    layout = layout_of(whole, read, shelf, top)
    if not problems.stopped:
        _compare_thicknesses(whole, shelf)
    check_filling(head, bool(whole.tables("tank")), problems, path.name)
    return ReadLayout(
        layout=None if problems.stopped else layout,
        head=head,
        materials=materials.records,
        laminates=laminates.records,
        sources=sources,
        findings=problems.findings(),
    )


def _content(path: Path) -> bytes:
    try:
        return path.read_bytes()
    except (OSError, ValueError) as error:
        told = "is a folder" if path.is_dir() else getattr(error, "strerror", None) or str(error)
        raise WrongUse(
            Finding(
                code="layout-missing",
                severity=Severity.STOP,
                where=Where(file=str(path)),
                what=f"the layout cannot be read: {told[:1].lower()}{told[1:]}",
                do="give the path of a layout file",
            )
        ) from None


def _sources(whole: TomlTable, files: FolderFiles, top: Mapping[str, Any]) -> dict[str, bytes]:
    found = {}
    for word, name in (("materials", MATERIALS), ("laminates", LAMINATES)):
        path = top.get(word, name)
        try:
            found[name] = read_beside(files, path)
        except FileRefused as refused:
            whole.stop(refused.code, word, refused.what, refused.do)
    return found


def _tables(
    sources: Mapping[str, bytes], top: Mapping[str, Any], problems: Problems
) -> tuple[Named[Material], Named[Laminate]]:
    """Both tables; where one is not there, no name in it is called unknown."""
    materials: Named[Material] = Named(records={}, names=None)
    laminates: Named[Laminate] = Named(records={}, names=None)
    if MATERIALS in sources:
        materials = read_materials(sources[MATERIALS], problems, top.get("materials", MATERIALS))
    if LAMINATES in sources:
        file = top.get("laminates", LAMINATES)
        laminates = read_laminates(sources[LAMINATES], materials, problems, file)
    return materials, laminates


def _shelf(whole: TomlTable, materials: Named[Material], laminates: Named[Laminate]) -> Shelf:
    unit = length_unit(whole)
    table = whole.table(THICKNESS.word)
    stated: dict[str, float] = {}
    if table is not None and THICKNESS.each is not None:
        stated = read_each(table, THICKNESS.each, unit)
    said = frozenset(table.values) if table is not None else frozenset()
    thicknesses = Thicknesses(materials, stated, said)
    shelf = Shelf(
        unit=unit,
        materials=materials,
        laminates=laminates,
        thicknesses=thicknesses,
        webs=names_said(whole, "web"),
        rows=names_said(whole, "row"),
        ribs=names_said(whole, "rib"),
    )
    if table is not None:
        for name in table.values:
            shelf.check_laminate(table, name, name)
    return shelf


def _compare_thicknesses(whole: TomlTable, shelf: Shelf) -> None:
    table = whole.table(THICKNESS.word)
    if table is None:
        return
    for name in table.values:
        if name in shelf.laminates.records:
            shelf.thicknesses.compare(table, shelf.laminates.records[name])
