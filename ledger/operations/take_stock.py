"""One moment of the build with its figures, for a screen: the plate's line and what it rests on."""

from __future__ import annotations

from dataclasses import dataclass
from datetime import datetime
from pathlib import Path

from ledger.checks.facts import Facts
from ledger.checks.run import run_rules
from ledger.errors import Finding, Severity
from ledger.fuel.report import FuelReport
from ledger.mass.report import WeightReport
from ledger.mass.weigh_up import weigh_up
from ledger.model.progress import Progress, unwatched
from ledger.operations.open_build import Build, open_build
from ledger.operations.reckon_fuel import reckon_build
from ledger.units import Display


@dataclass(frozen=True, slots=True, kw_only=True)
class Plate:
    """The data plate: what stands on the first two rows of every screen."""

    iteration: str
    title: str
    display: Display
    best_kg: float
    best_u_kg: float
    cg_fs_m: float | None
    usable_m3: float | None
    share_actual: float
    stops: int
    looks: int
    last_seq: int
    last_at: datetime | None


@dataclass(frozen=True, slots=True, kw_only=True)
class Stock:
    """The open build, its weights, its fuel and its findings. `fuel` is None until it was asked for."""

    build: Build
    weights: WeightReport
    fuel: FuelReport | None
    findings: tuple[Finding, ...]
    plate: Plate


def take_stock(
    book: Path,
    before: Stock | None = None,
    *,
    with_fuel: bool = True,
    progress: Progress = unwatched,
) -> Stock:
    """Read the book and reckon. Fuel comes from `before` where the plan is still the same adoption.

    Raises
        BookUnusable: the book cannot be opened.
        Stopped: `progress` was told to end the work.
    """
    build = open_build(book)
    snapshot = build.snapshot
    weights = weigh_up(snapshot, build.cell_places())
    fuel = _same_plans_fuel(build, before)
    if fuel is None and with_fuel:
        fuel = reckon_build(build, progress=progress)
    findings = run_rules(Facts(snapshot=snapshot, weights=weights, fuel=fuel))
    return Stock(
        build=build,
        weights=weights,
        fuel=fuel,
        findings=findings,
        plate=_plate(build, weights, fuel, findings),
    )


def _same_plans_fuel(build: Build, before: Stock | None) -> FuelReport | None:
    if before is None or before.fuel is None:
        return None
    mine, theirs = build.snapshot.iterations[-1], before.build.snapshot.iterations[-1]
    return before.fuel if mine.seq == theirs.seq and mine.name == theirs.name else None


def _plate(
    build: Build, weights: WeightReport, fuel: FuelReport | None, findings: tuple[Finding, ...]
) -> Plate:
    snapshot, total = build.snapshot, weights.total
    usable = None if fuel is None or not fuel.tanks else [tank.usable_m3 for tank in fuel.tanks]
    known = usable is not None and all(volume is not None for volume in usable)
    return Plate(
        iteration=snapshot.plan.name,
        title=snapshot.plan.title,
        display=snapshot.plan.display,
        best_kg=total.best_kg,
        best_u_kg=total.best_u_kg,
        cg_fs_m=None if total.cg_m is None else total.cg_m[0],
        usable_m3=sum(volume or 0.0 for volume in usable) if known and usable else None,
        share_actual=total.share_actual,
        stops=sum(finding.severity is Severity.STOP for finding in findings),
        looks=sum(finding.severity is Severity.LOOK for finding in findings),
        last_seq=snapshot.last_seq,
        last_at=snapshot.logged[-1].at if snapshot.logged else None,
    )
