"""Everything the rules notice about a build today."""

from __future__ import annotations

from pathlib import Path

from ledger.checks.facts import Facts
from ledger.checks.run import run_rules
from ledger.errors import Finding
from ledger.mass.weigh_up import weigh_up
from ledger.model.progress import Progress, unwatched
from ledger.operations.open_build import Build, open_build
from ledger.operations.reckon_fuel import reckon_build


def list_findings(book: Path | Build, *, progress: Progress = unwatched) -> tuple[Finding, ...]:
    """Every finding nobody has accepted, gravest first."""
    build = open_build(book) if isinstance(book, Path) else book
    snapshot = build.snapshot
    fuel = reckon_build(build, progress=progress)
    return run_rules(Facts(snapshot=snapshot, weights=weigh_up(snapshot), fuel=fuel))
