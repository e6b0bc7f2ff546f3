"""A plan folder read whole: every file, every name in it looked up, every problem told at once."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from pathlib import Path

from ledger.errors import Finding, Severity, Where, WrongUse
from ledger.exchange.geometry_cache import GeometryCache, MemoryCache
from ledger.exchange.geometry_files import GeometryFiles, GeometryRefused
from ledger.exchange.materials_table import LAMINATES, MATERIALS, Named, read_laminates, read_materials
from ledger.exchange.part_shapes import read_shapes
from ledger.exchange.parts_table import PARTS, read_parts
from ledger.exchange.plan_files import FileRefused, FolderFiles, PlanFiles, StoredFiles
from ledger.exchange.plan_toml import PLAN, PlanHead, check_filling, read_plan_head
from ledger.exchange.problems import Problems
from ledger.exchange.tanks_toml import TANKS, ReadTanks, read_tanks
from ledger.exchange.toml_text import TomlTable, read_toml
from ledger.model.plan import Laminate, Material, Part, Plan, Shape
from ledger.model.progress import Progress, unwatched
from ledger.model.tanks import Cell, Tanks

LOADING = "loading.toml"


@dataclass(frozen=True, slots=True, kw_only=True)
class ReadPlan:
    """The plan, None where a finding is a STOP; the content of every file it uses; and the findings."""

    plan: Plan | None
    files: Mapping[str, bytes]
    findings: tuple[Finding, ...]


def read_plan(
    folder: Path, cache: GeometryCache | None = None, *, progress: Progress = unwatched
) -> ReadPlan:
    """Read a plan folder; `progress` is told each part and each cell whose geometry comes next.

    Raises
        WrongUse: there is no such folder.
        Stopped: `progress` was told to end the work.
    """
    if not folder.is_dir():
        what = "is not a folder" if folder.exists() else "does not exist"
        raise WrongUse(
            Finding(
                code="plan-missing",
                severity=Severity.STOP,
                where=Where(file=str(folder)),
                what=f"the plan folder {what}",
                do="give the path of a folder with plan.toml in it",
            )
        )
    return _read(FolderFiles(folder), cache, progress)


def read_plan_files(
    files: Mapping[str, bytes], cache: GeometryCache | None = None, *, progress: Progress = unwatched
) -> ReadPlan:
    """Read a plan from the content of its files, by path; `progress` as in `read_plan`."""
    return _read(StoredFiles(files), cache, progress)


def _read(files: PlanFiles, cache: GeometryCache | None, progress: Progress) -> ReadPlan:
    problems = Problems()
    head = _head(files, problems)
    materials, laminates = _tables(files, problems)
    geometry = GeometryFiles(files, cache if cache is not None else MemoryCache())
    parts, shapes = _parts(files, geometry, materials, laminates, problems, progress=progress)
    tanks, digests = _tanks(files, geometry, materials, problems, progress=progress)
    _keep_loading(files, problems)
    if head is not None:
        check_filling(head, bool(tanks.tanks), problems)
    plan = None
    if head is not None and not problems.stopped:
        plan = Plan(
            name=head.name,
            title=head.title,
            display=head.display,
            materials=tuple(materials.records.values()),
            laminates=tuple(laminates.records.values()),
            parts=parts,
            shapes=shapes,
            tanks=tanks,
            cell_digests=digests,
            attitudes=head.attitudes,
            fuel=head.fuel,
            tolerances=head.tolerances,
            growths=head.growths,
        )
    return ReadPlan(plan=plan, files=dict(sorted(files.used.items())), findings=problems.findings())


def _fetched(files: PlanFiles, path: str, problems: Problems) -> bytes | None:
    """The content of one of the plan's own files; None where it is not there."""
    try:
        return files.read(path)
    except FileRefused as refused:
        if refused.code != "file-missing":
            problems.stop(refused.code, Where(file=path), refused.what, refused.do)
        return None


def _head(files: PlanFiles, problems: Problems) -> PlanHead | None:
    content = _fetched(files, PLAN, problems)
    if content is None:
        if not problems.stopped:
            problems.stop(
                "file-missing",
                Where(file=PLAN),
                "the folder has no plan.toml",
                "write one, with format and name",
            )
        return None
    return read_plan_head(content, problems)


def _tables(files: PlanFiles, problems: Problems) -> tuple[Named[Material], Named[Laminate]]:
    content = _fetched(files, MATERIALS, problems)
    materials: Named[Material] = Named(records={}, names=frozenset())
    if content is not None:
        materials = read_materials(content, problems)
    content = _fetched(files, LAMINATES, problems)
    laminates: Named[Laminate] = Named(records={}, names=frozenset())
    if content is not None:
        laminates = read_laminates(content, materials, problems)
    return materials, laminates


def _parts(
    files: PlanFiles,
    geometry: GeometryFiles,
    materials: Named[Material],
    laminates: Named[Laminate],
    problems: Problems,
    *,
    progress: Progress,
) -> tuple[tuple[Part, ...], tuple[Shape, ...]]:
    content = _fetched(files, PARTS, problems)
    if content is None:
        problems.look(
            "file-missing", Where(file=PARTS), "the plan has no parts, so it weighs nothing", f"write {PARTS}"
        )
        return (), ()
    rows = read_parts(content, materials, laminates, problems)
    return read_shapes(rows, geometry, materials.records, laminates.records, progress)


def _tanks(
    files: PlanFiles,
    geometry: GeometryFiles,
    materials: Named[Material],
    problems: Problems,
    *,
    progress: Progress,
) -> tuple[Tanks, tuple[str, ...]]:
    content = _fetched(files, TANKS, problems)
    read = None if content is None else read_tanks(content, materials, problems)
    if read is None:
        return Tanks(), ()
    return read.tanks, _cell_digests(read, geometry, progress)


def _cell_digests(read: ReadTanks, geometry: GeometryFiles, progress: Progress) -> tuple[str, ...]:
    digests = []
    cells = read.tanks.cells
    for done, (table, cell) in enumerate(zip(read.cell_tables, cells, strict=True)):
        progress(f"plan, cell {cell.name}", done, len(cells))
        try:
            digests.append(geometry.cell_digest(cell.mesh, cell.mesh_unit))
        except (GeometryRefused, FileRefused) as refused:
            _note_mesh(table, "mesh", cell, refused)
            continue
        if cell.displaced_mesh is not None:
            try:
                geometry.cell_digest(cell.displaced_mesh, cell.mesh_unit)
            except (GeometryRefused, FileRefused) as refused:
                _note_mesh(table, "displaced_mesh", cell, refused)
                continue
        _check_room(table, cell, geometry)
    return tuple(digests)


def _note_mesh(table: TomlTable, key: str, cell: Cell, refused: GeometryRefused | FileRefused) -> None:
    if refused.code == "unit-missing":
        table.stop_for_length_unit()
        return
    table.stop(refused.code, key, f"cell {cell.name!r}: {refused.what}", refused.do)


def _check_room(table: TomlTable, cell: Cell, geometry: GeometryFiles) -> None:
    gross = geometry.cell_volume_m3(cell.mesh, cell.mesh_unit)
    key, taken = "displaced", cell.displaced_m3
    if cell.displaced_mesh is not None:
        key, taken = "displaced_mesh", geometry.cell_volume_m3(cell.displaced_mesh, cell.mesh_unit)
    if taken is not None and taken >= gross:
        table.stop(
            "displaced-too-big",
            key,
            f"{taken * 1000:.6g} L is displaced in cell {cell.name!r}, which holds {gross * 1000:.6g} L",
            "correct the volume or the unit of the mesh",
        )


def _keep_loading(files: PlanFiles, problems: Problems) -> None:
    content = _fetched(files, LOADING, problems)
    if content is not None:
        read_toml(LOADING, content, problems)
