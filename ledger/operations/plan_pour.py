"""Before the second component goes in: how much of it, between which marks, and what an overshoot costs."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from ledger.errors import LedgerError
from ledger.mass.mix_ratio import (
    BringBack,
    Component,
    Measured,
    Pour,
    Verdict,
    Wanted,
    bring_back,
    ratio_interval,
    scale_bound,
    second_pour,
    verdict,
)
from ledger.model.snapshot import Snapshot
from ledger.operations.take_stock import Stock
from ledger.units import Dimension, read_quantity


@dataclass(frozen=True, slots=True, kw_only=True)
class PourAdvice:
    """What to pour, or, once both are in, whether it is right. `says` is one line with its sign."""

    pour: Pour | None
    verdict: Verdict | None
    back: BringBack | None
    sign: str
    says: str


def plan_pour(stock: Stock, fields: Mapping[str, str]) -> PourAdvice | None:
    """Advice from the fields of a mix slip as they stand; None while neither component is weighed."""
    method = fields.get("method", "")
    resin_lot, hardener_lot = fields.get("resin_lot", ""), fields.get("hardener_lot", "")
    resin, hardener = fields.get("resin", ""), fields.get("hardener", "")
    scale = fields.get("scale", "")
    snapshot = stock.build.snapshot
    resin_kg, hardener_kg = _poured(resin, method), _poured(hardener, method)
    if method == "running total" and resin_kg is not None and hardener_kg is not None:
        hardener_kg -= resin_kg
    if resin_kg is None and hardener_kg is None:
        return None
    wanted = wanted_ratio(snapshot, resin_lot.strip().upper(), hardener_lot.strip().upper())
    if wanted is None:
        return PourAdvice(
            pour=None, verdict=None, back=None, sign="LOOK", says="no ratio is known for these lots"
        )
    found = snapshot.scales.get(scale.strip())
    bound = scale_bound(None if found is None else found.instrument)
    if resin_kg is not None and hardener_kg is not None:
        return _judged(resin_kg, hardener_kg, wanted, bound)
    first = Component.RESIN if resin_kg is not None else Component.HARDENER
    first_kg = resin_kg if resin_kg is not None else hardener_kg or 0.0
    if first_kg <= 0.0:
        return None
    pour = second_pour(first, first_kg, wanted, bound)
    proof = "" if pour.provable else "; too little to prove on this scale"
    return PourAdvice(
        pour=pour,
        verdict=None,
        back=None,
        sign="" if pour.provable else "LOOK",
        says=f"pour {pour.component.value} {1000 * pour.target_kg:.1f} g, "
        f"between {1000 * pour.low_kg:.1f} and {1000 * pour.high_kg:.1f}{proof}",
    )


def wanted_ratio(snapshot: Snapshot, resin_lot: str, hardener_lot: str) -> Wanted | None:
    """The ratio by lot, else by material; of the resin first."""
    lots = [snapshot.lots[number] for number in (resin_lot, hardener_lot) if number in snapshot.lots]
    materials = [snapshot.plan.material(lot.receive.material) for lot in lots]
    ratios = [lot.receive.ratio for lot in lots] + [one.ratio for one in materials if one is not None]
    ratio = next((one for one in ratios if one is not None), None)
    tolerance = next(
        (one.ratio_tolerance for one in materials if one is not None and one.ratio_tolerance is not None),
        None,
    )
    return None if ratio is None or tolerance is None else Wanted(ratio=ratio, tolerance=tolerance)


def _judged(resin_kg: float, hardener_kg: float, wanted: Wanted, bound: float) -> PourAdvice:
    cup = Measured(resin_kg=resin_kg, hardener_kg=hardener_kg, resin_bound_kg=bound, hardener_bound_kg=bound)
    found = verdict(ratio_interval(cup), wanted)
    share = 100 * hardener_kg / resin_kg if resin_kg > 0.0 else 0.0
    line = f"{share:.1f} to 100, wants {100 * wanted.ratio:.0f}"
    if found is Verdict.IN:
        return PourAdvice(pour=None, verdict=found, back=None, sign="ok", says=f"{line}: in")
    back = bring_back(resin_kg, hardener_kg, wanted)
    more = f"{1000 * back.mass_kg:.1f} g more {back.component.value} brings it to the middle"
    sign = "STOP" if found is Verdict.OUT else "LOOK"
    word = "OUT" if found is Verdict.OUT else "this scale cannot tell"
    return PourAdvice(pour=None, verdict=found, back=back, sign=sign, says=f"{line}: {word}; {more}")


def _poured(text: str, method: str) -> float | None:
    """Every pour added up; of an untared scale the last reading."""
    try:
        pours = [
            read_quantity(part, Dimension.MASS)
            for chunk in text.replace("+", ";").split(";")
            if (part := chunk.strip())
        ]
    except LedgerError:
        return None
    if not pours:
        return None
    return max(pours) if method == "running total" else sum(pours)
