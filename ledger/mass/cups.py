"""Where each cup went: the resin of a ply by best evidence, and the account of every batch."""

from __future__ import annotations

from ledger.mass.deposits import CupUse, Deposits
from ledger.mass.mix_ratio import (
    Measured,
    Verdict,
    Wanted,
    measured,
    ratio_interval,
    scale_bound,
    smallest_provable_kg,
    verdict,
)
from ledger.mass.plan_index import Indexes
from ledger.mass.report import BatchAccount
from ledger.model.snapshot import Batch, PieceState, Snapshot


def share_out_cups(snapshot: Snapshot, deposits: Deposits) -> None:
    """Settle what each use took: stated grams, else the account where residue is known, else nominal."""
    for number in deposits.uses:
        share_out_cup(number, snapshot, deposits)


def share_out_cup(number: str, snapshot: Snapshot, deposits: Deposits) -> None:
    """Settle one cup, from the start: a use logged since may have changed what the others took."""
    uses = deposits.uses[number]
    for use in uses:
        stated = use.stated_kg is not None
        use.by = "stated" if stated else "nominal"
        use.draw.mass_kg = use.stated_kg if stated else use.demand_kg
        use.draw.sure = not use.split
    batch = snapshot.batches.get(number)
    if batch is not None and batch.mix.residue_kg is not None:
        _share_account(uses, left_for_uses_kg(batch, snapshot))
    for use in uses:
        what = f"how much of {number} went into it is not known, so it counts nothing"
        if use.draw.mass_kg is None:
            do = "correct the entry with the grams used"
            deposits.not_known(use.draw.piece, use.draw.seq, what, do)
        else:
            deposits.known_after_all(use.draw.piece, use.draw.seq, what)


def _share_account(uses: list[CupUse], left_kg: float) -> None:
    unstated = [use for use in uses if use.stated_kg is None]
    left_kg -= sum(use.stated_kg or 0.0 for use in uses)
    if not unstated or left_kg < 0.0:
        return
    unknown = [use for use in unstated if use.demand_kg is None]
    demand = sum(use.demand_kg or 0.0 for use in unstated)
    if unknown:
        # Shared by demand, what has none would take nothing and the plies would take its share.
        for use in unknown:
            use.draw.mass_kg = max(left_kg - demand, 0.0) / len(unknown)
            use.draw.sure = use.draw.sure and len(unknown) == 1
            use.by = "account"
        return
    if demand <= 0.0:
        return
    for use in unstated:
        use.draw.mass_kg = left_kg * (use.demand_kg or 0.0) / demand
        use.by = "account"


def cup_measured(batch: Batch, snapshot: Snapshot) -> Measured:
    """A batch's grams with their bounds, by its method and scale."""
    scale = snapshot.scales.get(batch.mix.scale) if batch.mix.scale is not None else None
    return measured(batch.mix, None if scale is None else scale.instrument)


def left_for_uses_kg(batch: Batch, snapshot: Snapshot) -> float:
    """What was mixed less what stayed in the cup and what was bled off."""
    mixed = cup_measured(batch, snapshot).mixed_kg
    return mixed - (batch.mix.residue_kg or 0.0) - (batch.mix.bled_kg or 0.0)


def ratio_wanted(batch: Batch, indexes: Indexes) -> tuple[float | None, float | None]:
    """The ratio by lot, else by material, and the tolerance by material; of the resin first."""
    lots = indexes.snapshot.lots
    pair = [lots[number] for number in (batch.mix.resin_lot, batch.mix.hardener_lot) if number in lots]
    materials = [material for lot in pair if (material := indexes.material(lot.receive.material)) is not None]
    ratios = [lot.receive.ratio for lot in pair] + [material.ratio for material in materials]
    tolerances = [material.ratio_tolerance for material in materials]
    return (
        next((ratio for ratio in ratios if ratio is not None), None),
        next((tolerance for tolerance in tolerances if tolerance is not None), None),
    )


def batch_accounts(snapshot: Snapshot, indexes: Indexes, deposits: Deposits) -> tuple[BatchAccount, ...]:
    """Every batch: where it went and what its readings prove about its ratio."""
    return tuple(batch_account(batch, indexes, deposits) for batch in snapshot.batches.values())


def batch_account(batch: Batch, indexes: Indexes, deposits: Deposits) -> BatchAccount:
    """One batch: where it went and what its readings prove about its ratio."""
    snapshot, uses = indexes.snapshot, deposits.uses.get(batch.number, [])
    cup = cup_measured(batch, snapshot)
    charged = scrapped = 0.0
    for use in uses:
        piece = snapshot.pieces.get(use.draw.piece)
        if piece is not None and piece.state is PieceState.SCRAPPED:
            scrapped += use.draw.mass_kg or 0.0
        else:
            charged += use.draw.mass_kg or 0.0
    residue, bled = batch.mix.residue_kg, batch.mix.bled_kg
    unaccounted = None
    if residue is not None:
        unaccounted = cup.mixed_kg - charged - scrapped - residue - (bled or 0.0)
    ratio, tolerance = ratio_wanted(batch, indexes)
    wanted = None if ratio is None or tolerance is None else Wanted(ratio=ratio, tolerance=tolerance)
    interval = ratio_interval(cup)
    scale = snapshot.scales.get(batch.mix.scale) if batch.mix.scale is not None else None
    bound = scale_bound(None if scale is None else scale.instrument)
    found = verdict(interval, wanted)
    shared = [use for use in uses if use.by == "account"]
    return BatchAccount(
        batch=batch.number,
        mixed_kg=cup.mixed_kg,
        charged_kg=charged,
        residue_kg=residue,
        bled_kg=bled,
        scrapped_kg=scrapped,
        unaccounted_kg=unaccounted,
        ratio_low=None if interval is None else interval.low,
        ratio_high=None if interval is None else interval.high,
        ratio_wanted=ratio,
        ratio_verdict=found.value,
        ratio_why=_why(found, ratio, tolerance, interval is None),
        smallest_provable_kg=None if wanted is None else smallest_provable_kg(wanted, bound),
        shared_kg=sum(use.draw.mass_kg or 0.0 for use in shared) if shared else None,
        demand_kg=sum(use.demand_kg or 0.0 for use in shared) if shared else None,
    )


def _why(found: Verdict, ratio: float | None, tolerance: float | None, no_interval: bool) -> str:
    if found is not Verdict.CANNOT_TELL:
        return ""
    if ratio is None:
        return "no ratio is declared for its resin or hardener"
    if tolerance is None:
        return "no ratio tolerance is declared for its resin or hardener"
    if no_interval:
        return "the scale cannot tell its resin from none"
    return "the readings allow ratios both inside and outside the tolerance"
