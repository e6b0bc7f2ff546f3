"""What the wing weighs, with what the rules notice about it."""

from __future__ import annotations

from dataclasses import dataclass
from pathlib import Path

from ledger.checks.facts import Facts
from ledger.checks.run import run_rules
from ledger.errors import Finding
from ledger.mass.report import WeightReport
from ledger.mass.weigh_up import weigh_up
from ledger.operations.open_build import open_build
from ledger.units import Display


@dataclass(frozen=True, slots=True, kw_only=True)
class Weights:
    """The weights of a build. `display` and `title` are those of the current plan."""

    report: WeightReport
    findings: tuple[Finding, ...]
    display: Display
    title: str


def weigh_up_build(book: Path) -> Weights:
    """Weigh up everything in the book."""
    build = open_build(book)
    snapshot = build.snapshot
    report = weigh_up(snapshot, build.cell_places())
    return Weights(
        report=report,
        findings=(*build.warnings, *run_rules(Facts(snapshot=snapshot, weights=report, fuel=None))),
        display=snapshot.plan.display,
        title=snapshot.plan.title,
    )
