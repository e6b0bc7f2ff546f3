"""Two iterations compared, as plain JSON values."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from ledger.errors import Finding
from ledger.model.comparison import (
    AttitudeChange,
    Choice,
    Comparison,
    InertiaPair,
    Pair,
    PartChange,
    PlacePair,
    TankChange,
    UnfitPiece,
)
from ledger.reports.figures import finding_figures

Figures = dict[str, Any]

_NOT_KNOWN = Pair(a=None, b=None)


def compare_figures(comparison: Comparison) -> Figures:
    """What `compare --json` prints, and `adopt --preview --json` under `comparison`."""
    mass, fuel = comparison.mass, comparison.fuel
    whole = None if fuel is None else fuel.whole
    return {
        "a": comparison.a,
        "b": comparison.b,
        "adopted": comparison.adopted,
        "mass_kg": _pair(mass.now_kg),
        "remade_kg": _pair(mass.remade_kg),
        "estimated_kg": _pair(mass.estimated_kg),
        "cg_m": _place(mass.cg_m),
        "inertia_kg_m2": _inertia(mass.inertia_kg_m2),
        **_volumes(whole),
        "attitudes": [] if whole is None else [_attitude(one) for one in whole.attitudes],
        "tanks": [] if fuel is None else [_tank(tank) for tank in fuel.tanks],
        "fuel_density_kg_m3": comparison.fuel_density_kg_m3,
        "saved_as_fuel_m3": comparison.saved_as_fuel_m3,
        "parts": [_part(part) for part in mass.parts],
        "parts_same": mass.parts_same,
        "no_longer_fits": [unfit_figures(piece) for piece in comparison.no_longer_fits],
        "stays": list(comparison.stays),
        "fits_again": list(comparison.fits_again),
        "on_hold": list(comparison.on_hold),
        "spare": list(comparison.spare),
    }


def adopted_figures(
    *,
    iteration: str,
    seq: int | None,
    digest: str | None,
    no_longer_fits: Sequence[UnfitPiece],
    comparison: Comparison | None,
    findings: Sequence[Finding],
) -> Figures:
    """What `start --json` and `adopt --json` print; only a preview has a comparison."""
    return {
        "iteration": iteration,
        "seq": seq,
        "digest": digest,
        "no_longer_fits": [unfit_figures(piece) for piece in no_longer_fits],
        "comparison": None if comparison is None else compare_figures(comparison),
        "findings": finding_figures(findings),
    }


def unfit_figures(piece: UnfitPiece) -> Figures:
    """One built piece that no longer fits."""
    return {
        "piece": piece.piece,
        "number": piece.number,
        "part": piece.part,
        "state": piece.state,
        "begun_under": piece.begun_under,
        "why": piece.why,
        "best_kg": piece.best_kg,
        "fitted_before": piece.fitted_before,
        "choices": [_choice(choice) for choice in piece.choices],
    }


def _choice(choice: Choice) -> Figures:
    return {
        "choice": choice.choice,
        "does": choice.does,
        "entries": [
            {"kind": entry.kind, "fields": dict(entry.fields), "asks": list(entry.asks)}
            for entry in choice.entries
        ],
    }


def _pair(pair: Pair) -> Figures:
    return {"a": pair.a, "b": pair.b, "change": pair.change}


def _place(pair: PlacePair) -> Figures:
    return {
        word: None if place is None else list(place)
        for word, place in (("a", pair.a), ("b", pair.b), ("change", pair.change))
    }


def _inertia(pair: InertiaPair) -> Figures:
    return {
        word: None if matrix is None else [list(row) for row in matrix]
        for word, matrix in (("a", pair.a), ("b", pair.b), ("change", pair.change))
    }


def _volumes(tank: TankChange | None) -> Figures:
    return {
        "gross_m3": _pair(_NOT_KNOWN if tank is None else tank.gross_m3),
        "capacity_m3": _pair(_NOT_KNOWN if tank is None else tank.capacity_m3),
        "caught_air_m3": _pair(_NOT_KNOWN if tank is None else tank.caught_air_m3),
        "usable_m3": _pair(_NOT_KNOWN if tank is None else tank.usable_m3),
    }


def _tank(tank: TankChange) -> Figures:
    return {
        "tank": tank.tank,
        **_volumes(tank),
        "attitudes": [_attitude(one) for one in tank.attitudes],
        "remark": tank.remark,
    }


def _attitude(attitude: AttitudeChange) -> Figures:
    return {
        "attitude": attitude.attitude,
        "flight": attitude.flight,
        "trapped_m3": _pair(attitude.trapped_m3),
        "usable_m3": _pair(attitude.usable_m3),
        "remark": attitude.remark,
    }


def _part(part: PartChange) -> Figures:
    return {
        "part": part.part,
        "change": part.change,
        "a_kg": part.planned_kg.a,
        "b_kg": part.planned_kg.b,
        "now_kg": _pair(part.now_kg),
        "why": "; ".join(part.why),
    }
