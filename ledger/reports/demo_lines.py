"""The main figures of a build on one screen of 80 columns and 24 rows, what is wrong first."""

from __future__ import annotations

from collections.abc import Sequence

from ledger.errors import Finding, Severity
from ledger.fuel.report import FuelReport
from ledger.mass.report import CauseMass, WeightReport
from ledger.model.comparison import Comparison
from ledger.reports.compare_lines import headline
from ledger.reports.finding_lines import WORD, counted
from ledger.reports.fuel_lines import CAUTION, hole_line, tank_line
from ledger.reports.plain import shortened
from ledger.reports.weight_lines import signed_mass, total_lines
from ledger.units import Dimension, Display, shown_unit

ROWS = 24
COLUMNS = 80


def demo_lines(
    weights: WeightReport,
    fuel: FuelReport,
    findings: Sequence[Finding],
    display: Display,
    *,
    change: Comparison | None = None,
) -> tuple[str, ...]:
    """At most 24 rows of 80 columns; `change` is what the iteration changed of the one before it."""
    below = (
        "",
        f"iteration {weights.iteration}; for planning, not approved weight and balance",
        *((headline(change),) if change is not None else ()),
        *total_lines(weights.total, display),
        _main_causes(weights.off_plan, display),
        "",
        f"FUEL  {CAUTION}",
        *(line for tank in fuel.tanks for line in (tank_line(tank, display), *hole_line(tank, display))),
    )
    groups = _grouped(findings)
    room = ROWS - len(below) - 1
    shown = groups if len(groups) <= room else groups[: room - 1]
    rest = sum(map(len, groups)) - sum(map(len, shown))
    lines = (
        counted(findings),
        *(_group_line(group) for group in shown),
        *((f"and {rest} more: wingledger check BOOK",) if rest else ()),
        *below,
    )
    return tuple(shortened(line, COLUMNS) for line in lines[:ROWS])


def _grouped(findings: Sequence[Finding]) -> list[tuple[Finding, ...]]:
    """STOP and LOOK findings by rule and thing; one of each rule comes before the second of any."""
    groups: dict[tuple[Severity, str, str], list[Finding]] = {}
    for finding in findings:
        if finding.severity is not Severity.NOTE:
            groups.setdefault((finding.severity, finding.code, _place(finding)), []).append(finding)
    of_its_rule: dict[tuple[Severity, str], int] = {}
    ranked = []
    for (severity, code, _), group in groups.items():
        rank = of_its_rule[(severity, code)] = of_its_rule.get((severity, code), -1) + 1
        ranked.append((severity is Severity.LOOK, rank, tuple(group)))
    return [group for _, _, group in sorted(ranked, key=lambda one: one[:2])]


def _group_line(group: tuple[Finding, ...]) -> str:
    first = group[0]
    place = _place(first)
    # What is wrong often begins with the thing's own name.
    what = first.what.removeprefix(f"{place} ")
    more = f" (+{len(group) - 1})" if len(group) > 1 else ""
    line = f"{WORD[first.severity]}  {place}  {what}"
    return f"{shortened(line, COLUMNS - len(more))}{more}"


def _place(finding: Finding) -> str:
    return finding.where.thing or str(finding.where)


def _main_causes(off_plan: Sequence[CauseMass], display: Display) -> str:
    largest = sorted(off_plan, key=lambda one: -abs(one.mass_kg))[:3]
    causes = "  ".join(f"{one.cause} {signed_mass(one.mass_kg, display)}" for one in largest)
    return f"off plan {shown_unit(Dimension.MASS, display)}  {causes}"
