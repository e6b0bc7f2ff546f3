"""From a layout to a plan folder, read back before it is there."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping
from pathlib import Path
from typing import TYPE_CHECKING

from ledger.errors import Finding, Refused, Severity, Where, WrongUse
from ledger.exchange.materials_table import LAMINATES, MATERIALS
from ledger.exchange.new_folder import Taken, made_aside, refuse_taken
from ledger.exchange.plan_cells import read_cells
from ledger.exchange.plan_folder import ReadPlan, read_plan
from ledger.exchange.problems import Problems
from ledger.loft.lofted_plan import ClassOfParts, LoftedPlan
from ledger.mass.plan_index import PlanIndex
from ledger.model.plan import Part, PartClass, Plan
from ledger.model.progress import Progress, unwatched

if TYPE_CHECKING:
    from ledger.exchange.layout_toml import ReadLayout
    from ledger.loft.lofted import Lofted

_LEVEL = (0.0, 0.0, 1.0)


def loft_wing(layout: Path, out: Path, *, progress: Progress = unwatched) -> LoftedPlan:
    """Loft the wing that a layout file describes and write its plan into a new folder.

    The plan is made aside and read back; only one without a STOP is given its name.

    Raises
        Refused: the layout, or what is lofted from it, has errors, all of which are told; something
            stands at `out`, but for an empty folder; or it cannot be written. Nothing is written.
        WrongUse: there is no such layout, or no folder to put the plan in.
        Stopped: `progress` was told to end the work; nothing is left of the folder.
    """
    from ledger.exchange.layout_toml import read_layout

    progress("layout", 0, 1)
    read = read_layout(layout)
    _check_out(out)
    lofted, files, findings = _lofted(read, progress)
    try:
        with made_aside(out, files, progress) as folder:
            plan = read_plan(folder, progress=progress)
            findings = _told_once((*findings, *plan.findings))
            if plan.plan is None:
                raise Refused(*findings)
            summed = _summed(plan.plan, plan, lofted, out, findings)
    except Taken as taken:
        raise Refused(_taken(out, str(taken))) from None
    except OSError as error:
        raise Refused(_not_written(out, error)) from None
    return summed


def _check_out(out: Path) -> None:
    if not out.parent.is_dir():
        raise WrongUse(_stop("folder-absent", str(out.parent), "there is no such folder", "make it first"))
    try:
        refuse_taken(out)
    except Taken as taken:
        raise Refused(_taken(out, str(taken))) from None
    except OSError as error:
        raise Refused(_not_written(out, error)) from None


def _lofted(read: ReadLayout, progress: Progress) -> tuple[Lofted, Mapping[str, bytes], tuple[Finding, ...]]:
    """What was lofted, and the files of its plan. Raises Refused with everything found."""
    from ledger.exchange.write_plan import plan_files
    from ledger.loft.loft import loft

    problems = Problems()
    problems.extend(read.findings)
    if read.layout is None or read.head is None:
        raise Refused(*problems.findings())
    lofted, found = loft(read.layout, progress)
    problems.extend(found)
    if lofted is None or problems.stopped:
        raise Refused(*problems.findings())
    files = plan_files(
        read.head,
        read.layout,
        lofted,
        materials=read.sources[MATERIALS],
        laminates=read.sources[LAMINATES],
        problems=problems,
        progress=progress,
    )
    if problems.stopped:
        raise Refused(*problems.findings())
    return lofted, files, problems.findings()


def _summed(
    plan: Plan, read: ReadPlan, lofted: Lofted, out: Path, findings: tuple[Finding, ...]
) -> LoftedPlan:
    return LoftedPlan(
        name=plan.name,
        title=plan.title,
        display=plan.display,
        folder=out,
        parts=len(plan.parts),
        cells=len(plan.tanks.cells),
        openings=len(plan.tanks.openings),
        classes=tuple(_classes(plan)),
        gross_m3=_gross(plan, read),
        account=lofted.account,
        findings=findings,
    )


def _classes(plan: Plan) -> Iterator[ClassOfParts]:
    index = PlanIndex(plan)
    for part_class in PartClass:
        parts = [part for part in plan.parts if part.part_class is part_class]
        if parts:
            yield ClassOfParts(
                part_class=part_class,
                pieces=sum(part.quantity for part in parts),
                area_m2=_sum(_area(index, part) for part in parts),
                estimated_kg=_sum(_mass(index, part) for part in parts),
            )


def _area(index: PlanIndex, part: Part) -> float | None:
    nominal = index.nominal(part.name)
    area = None if nominal is None else nominal.area_m2
    return None if area is None else part.quantity * area


def _mass(index: PlanIndex, part: Part) -> float | None:
    nominal = index.nominal(part.name)
    mass = None if nominal is None else nominal.estimated_kg
    return None if mass is None else part.quantity * mass


def _sum(values: Iterable[float | None]) -> float | None:
    """The sum; None where one of them is not there."""
    total = 0.0
    for value in values:
        if value is None:
            return None
        total += value
    return total


def _gross(plan: Plan, read: ReadPlan) -> float:
    """As `fuel` counts it: net of fillets and sealant."""
    from ledger.fuel.bays import Bay

    solids = read_cells(plan, read.files)
    return sum(Bay(cell, solids[cell.name], None, _LEVEL).gross_m3 for cell in plan.tanks.cells)


def _told_once(findings: Iterable[Finding]) -> tuple[Finding, ...]:
    return tuple(dict.fromkeys(findings))


def _taken(out: Path, what: str) -> Finding:
    return _stop("target-exists", str(out), what, "choose another")


def _not_written(out: Path, error: OSError) -> Finding:
    why = (error.strerror or str(error)).lower()
    what = f"the plan folder cannot be written: {why}"
    return _stop(
        "folder-not-written", str(out), what, "make room or choose another place; nothing was written"
    )


def _stop(code: str, file: str, what: str, do: str) -> Finding:
    return Finding(code=code, severity=Severity.STOP, where=Where(file=file), what=what, do=do)
