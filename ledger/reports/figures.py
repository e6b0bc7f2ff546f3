"""The figures for other programs: each report as plain JSON values, with the keys of its schema."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from ledger.errors import Finding
from ledger.fuel.report import AttitudeFuel, FuelReport, TankFuel
from ledger.mass.report import CauseMass, PartMass, TotalMass, WeightReport
from ledger.mass.trace import Trace, TraceLink
from ledger.model.things import Minted

Figures = dict[str, Any]


def weight_figures(report: WeightReport) -> Figures:
    """What `weights --json` prints."""
    return {
        "iteration": report.iteration,
        "total": _total(report.total),
        "parts": [_part(part) for part in report.parts],
        "off_plan": _causes(report.off_plan),
        "forecast": {"mass_kg": None, "low_kg": None, "high_kg": None},
    }


def _total(total: TotalMass) -> Figures:
    return {
        "estimated_kg": total.estimated_kg,
        "calculated_kg": total.calculated_kg,
        "actual_kg": total.actual_kg,
        "best_kg": total.best_kg,
        "best_u_kg": total.best_u_kg,
        "built_kg": total.built_kg,
        "share_actual": total.share_actual,
        "cg_m": None if total.cg_m is None else list(total.cg_m),
        "inertia_kg_m2": None if total.inertia_kg_m2 is None else [list(row) for row in total.inertia_kg_m2],
    }


def _part(part: PartMass) -> Figures:
    return {
        "part": part.part,
        "class": part.part_class.value,
        "estimated_kg": part.estimated_kg,
        "calculated_kg": part.calculated_kg,
        "actual_kg": part.actual_kg,
        "best_kg": part.best_kg,
        "best_u_kg": part.best_u_kg,
        "state": part.state,
        "cg_m": None if part.cg_m is None else list(part.cg_m),
        "area_m2": part.area_m2,
    }


def _causes(off_plan: tuple[CauseMass, ...]) -> list[Figures]:
    return [{"cause": one.cause, "mass_kg": one.mass_kg} for one in off_plan]


def fuel_figures(report: FuelReport) -> Figures:
    """What `fuel --json` prints."""
    return {
        "tanks": [_tank(tank) for tank in report.tanks],
        "feeds": [
            {
                "feed": feed.feed,
                "join": feed.join,
                "usable_m3": feed.usable_m3,
                "governing_attitude": feed.governing_attitude,
            }
            for feed in report.feeds
        ],
    }


def _tank(tank: TankFuel) -> Figures:
    return {
        "tank": tank.tank,
        "gross_m3": tank.gross_m3,
        "capacity_m3": tank.capacity_m3,
        "capacity_limit": tank.capacity_limit,
        "caught_air_m3": tank.caught_air_m3,
        "usable_m3": tank.usable_m3,
        "usable_u_m3": tank.usable_u_m3,
        "governing_attitude": tank.governing_attitude,
        "cells": [
            {
                "cell": cell.cell,
                "gross_m3": cell.gross_m3,
                "filled_m3": cell.filled_m3,
                "air_caught_by": cell.air_caught_by,
            }
            for cell in tank.cells
        ],
        "attitudes": [_attitude(attitude) for attitude in tank.attitudes],
    }


def _attitude(attitude: AttitudeFuel) -> Figures:
    return {
        "attitude": attitude.attitude,
        "pitch_deg": attitude.pitch_deg,
        "roll_deg": attitude.roll_deg,
        "up": list(attitude.up),
        "flight": attitude.flight,
        "trapped_m3": attitude.trapped_m3,
        "lost_m3": attitude.lost_m3,
        "cells": [
            {
                "cell": cell.cell,
                "trapped_m3": cell.trapped_m3,
                "level_m": cell.level_m,
                "trapped_by": cell.trapped_by,
            }
            for cell in attitude.cells
        ],
        "table": [
            {
                "level_m": row.level_m,
                "volume_m3": row.volume_m3,
                "surface_m2": row.surface_m2,
                "cg_m": None if row.cg_m is None else list(row.cg_m),
            }
            for row in attitude.table
        ],
        "drained": [
            {
                "quantity_m3": row.quantity_m3,
                "usable_m3": row.usable_m3,
                "mass_kg": row.mass_kg,
                "cg_m": None if row.cg_m is None else list(row.cg_m),
            }
            for row in attitude.drained
        ],
    }


def trace_figures(trace: Trace) -> Figures:
    """What `trace --json` prints: nested as far as the record goes."""
    return {
        "what": trace.what,
        "kind": trace.kind,
        "state": trace.state,
        "made_from": [_link(link, "made_from") for link in trace.made_from],
        "went_into": [_link(link, "went_into") for link in trace.went_into],
        "entries": list(trace.entries),
    }


def _link(link: TraceLink, way: str) -> Figures:
    further = link.made_from if way == "made_from" else link.went_into
    return {
        "what": link.what,
        "kind": link.kind,
        "mass_kg": link.mass_kg,
        "how": link.how,
        "state": link.state,
        way: [_link(one, way) for one in further],
    }


def finding_figures(findings: Sequence[Finding]) -> list[Figures]:
    """Findings as they stand in every output that has any."""
    return [
        {
            "code": finding.code,
            "severity": finding.severity.value,
            "where": str(finding.where),
            "what": finding.what,
            "do": finding.do,
        }
        for finding in findings
    ]


def minted_figures(minted: Sequence[Minted]) -> dict[str, str]:
    """Numbers given out, by the piece's name or, for all else, by what it is: `{"lot": "L014K"}`."""
    return {one.name if one.kind.value == "piece" else one.kind.value: one.number for one in minted}


def entry_figures(seq: int, digest: str, minted: Sequence[Minted], findings: Sequence[Finding]) -> Figures:
    """What `enter --json` prints for one entry."""
    return {
        "seq": seq,
        "digest": digest,
        "minted": minted_figures(minted),
        "findings": finding_figures(findings),
    }


def check_figures(
    *,
    entries: int,
    last_digest: str,
    short_code: str,
    chain_ok: bool,
    replay_ok: bool,
    findings: Sequence[Finding],
) -> Figures:
    """What `check --json` prints."""
    return {
        "entries": entries,
        "last_digest": last_digest,
        "short_code": short_code,
        "chain_ok": chain_ok,
        "replay_ok": replay_ok,
        "findings": finding_figures(findings),
    }
