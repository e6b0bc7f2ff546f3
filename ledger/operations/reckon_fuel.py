"""What the tanks hold and what stays in them, with what the rules notice about it."""

from __future__ import annotations

import dataclasses
from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import Path

from ledger.checks.facts import Facts
from ledger.checks.run import run_rules
from ledger.errors import Finding, Refused, Severity, Where
from ledger.fuel.density import density_at
from ledger.fuel.report import FuelReport
from ledger.mass.weigh_up import weigh_up
from ledger.model.attitude import Attitude
from ledger.model.progress import Progress, unwatched
from ledger.operations.open_build import Build, open_build
from ledger.units import Display

_LEVELS = 100


@dataclass(frozen=True, slots=True, kw_only=True)
class Fuel:
    """The fuel of a build. `display` is that of the current plan.

    `density_kg_m3` is at the temperature asked for, None where the plan gives no density.
    """

    report: FuelReport
    findings: tuple[Finding, ...]
    display: Display
    density_kg_m3: float | None = None


def reckon_fuel(
    book: Path,
    *,
    attitudes: Sequence[str] = (),
    asked: Attitude | None = None,
    levels: int = _LEVELS,
    temperature_k: float | None = None,
    progress: Progress = unwatched,
) -> Fuel:
    """Reckon every tank at every attitude of the plan; `attitudes` only chooses what is listed.

    Raises
        Refused: an attitude the plan does not have.
        Stopped: `progress` was told to end the work.
    """
    build = open_build(book)
    _refuse_unknown(build, attitudes)
    report = reckon_build(build, asked=asked, levels=levels, temperature_k=temperature_k, progress=progress)
    snapshot = build.snapshot
    planned = _listed(report, [attitude.name for attitude in snapshot.plan.attitudes])
    facts = Facts(snapshot=snapshot, weights=weigh_up(snapshot), fuel=planned)
    shown = (*attitudes, *(() if asked is None else (asked.name,)))
    return Fuel(
        report=_listed(report, shown) if attitudes else report,
        findings=(*build.warnings, *run_rules(facts)),
        display=snapshot.plan.display,
        density_kg_m3=density_at(snapshot.plan.fuel, temperature_k),
    )


def reckon_build(
    build: Build,
    *,
    asked: Attitude | None = None,
    levels: int = _LEVELS,
    temperature_k: float | None = None,
    volumes_only: bool = False,
    progress: Progress = unwatched,
) -> FuelReport:
    """The complete fuel report of an open build. A plan without tanks gives an empty one."""
    plan = build.snapshot.plan
    if not plan.tanks.tanks:
        return FuelReport(tanks=(), feeds=())
    from ledger.fuel.reckon import reckon

    return reckon(
        plan.tanks,
        build.cells(),
        build.displaced(),
        plan.attitudes,
        plan.fuel,
        levels=levels,
        asked=asked,
        temperature_k=temperature_k,
        volumes_only=volumes_only,
        progress=progress,
    )


def _refuse_unknown(build: Build, attitudes: Sequence[str]) -> None:
    names = [attitude.name for attitude in build.snapshot.plan.attitudes]
    unknown = [name for name in attitudes if name not in names]
    if unknown:
        raise Refused(
            *(
                Finding(
                    code="unknown-attitude",
                    severity=Severity.STOP,
                    where=Where(thing=name),
                    what=f"{build.snapshot.plan.name} has no attitude of this name",
                    do=f"choose one of: {', '.join(names) or 'it has none'}",
                )
                for name in unknown
            )
        )


def _listed(report: FuelReport, names: Sequence[str]) -> FuelReport:
    return dataclasses.replace(
        report,
        tanks=tuple(
            dataclasses.replace(
                tank,
                attitudes=tuple(attitude for attitude in tank.attitudes if attitude.attitude in names),
            )
            for tank in report.tanks
        ),
    )
