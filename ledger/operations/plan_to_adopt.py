"""A plan folder read, with all that adopting it would write."""

from __future__ import annotations

import hashlib
from collections.abc import Mapping
from dataclasses import dataclass
from pathlib import Path

from ledger.book.reading import StoredGeometry
from ledger.errors import Finding, Refused
from ledger.model.acts import Adopt, PlanFile
from ledger.model.plan import Plan
from ledger.model.progress import Progress, unwatched
from ledger.operations.stored_plan import keep_plan


@dataclass(frozen=True, slots=True, kw_only=True)
class PlanToAdopt:
    """A plan that was read without a STOP, with all its files."""

    plan: Plan
    files: Mapping[str, bytes]
    act: Adopt
    findings: tuple[Finding, ...]


def read_plan_to_adopt(
    folder: Path, geometry: StoredGeometry, *, progress: Progress = unwatched
) -> PlanToAdopt:
    """Read a plan folder.

    Raises
        Refused: the plan has errors; all of them are in it.
        WrongUse: there is no such folder.
        Stopped: `progress` was told to end the work.
    """
    from ledger.exchange.plan_folder import read_plan

    read = read_plan(folder, geometry, progress=progress)
    if read.plan is None:
        raise Refused(*read.findings)
    files = tuple(
        PlanFile(path=path, sha256=hashlib.sha256(content).hexdigest())
        for path, content in sorted(read.files.items())
    )
    act = Adopt(plan=read.plan.name, title=read.plan.title, files=files)
    keep_plan(act, read.plan, geometry)
    return PlanToAdopt(plan=read.plan, files=read.files, act=act, findings=read.findings)
