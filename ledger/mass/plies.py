"""A ply laid: the cloth or core from its lots, the resin from its cups."""

from __future__ import annotations

from ledger.mass.deposits import Deposit, Reading
from ledger.mass.laminate import Layer
from ledger.mass.magnitudes import (
    GEOMETRY_TOLERANCE,
    RESIN_HABIT,
    SCATTER_WITHIN_LOT,
    SPLIT_UNKNOWN,
    STATED_GRAMS,
)
from ledger.mass.plan_index import Nominal
from ledger.mass.spread import NO_CUP_SAID, lot_spread
from ledger.model.acts import Lay
from ledger.model.plan import MaterialKind
from ledger.model.things import Share

_BY_THE_AREA_VARIANCE = SCATTER_WITHIN_LOT**2 + GEOMETRY_TOLERANCE**2


def lay(reading: Reading, place: int, seq: int, act: Lay) -> None:
    """Read a `lay` entry."""
    nominal = reading.indexes.nominal(act.piece)
    layer = layer_numbered(nominal, act.step)
    area = act.area_m2
    if area is None and nominal is not None and nominal.measure is not None:
        area = nominal.measure * (1.0 if layer is None else layer.coverage)
    deposit = reading.add(act.piece, Deposit(place=place, seq=seq, kind="lay", step=act.step, area=area))
    if layer is not None and area is not None:
        deposit.nominal_kg = area * (layer.dry + layer.resin)
    _take_lots(reading, deposit, act, layer)
    _take_cups(reading, deposit, act)


def layer_numbered(nominal: Nominal | None, number: int) -> Layer | None:
    """A planned layer by its step."""
    if nominal is None or nominal.layers is None:
        return None
    for layer in nominal.layers:
        if layer.number == number:
            return layer
    return None


def _take_lots(reading: Reading, deposit: Deposit, act: Lay, layer: Layer | None) -> None:
    stated = sum(share.mass_kg or 0.0 for share in act.lots)
    unstated = sum(share.mass_kg is None for share in act.lots)
    for share in act.lots:
        used = reading.stock.lot_layer(share.what, act.piece, act.step, layer)
        mass = share.mass_kg
        if used is not None and used.kind is MaterialKind.PROCESS:
            mass = 0.0
        elif mass is None and used is not None and deposit.area is not None:
            mass = max(deposit.area * used.dry - stated, 0.0) / unstated
        sure = share.mass_kg is not None or unstated == 1
        what = "ply" if used is None else used.kind.value
        reading.draw(deposit.seq, act.piece, share.what, what, mass, step=act.step, sure=sure)
        if mass is None:
            reading.deposits.not_known(
                act.piece,
                deposit.seq,
                f"what step {act.step} weighs is not known",
                "give the areal mass of the lot, or its grams with the ply",
            )
            continue
        _take_lot(reading, deposit, share, used=used, mass_kg=mass, lots=len(act.lots))
        if not sure:
            deposit.own_variance += (SPLIT_UNKNOWN * mass) ** 2


def _take_lot(
    reading: Reading, deposit: Deposit, share: Share, *, used: Layer | None, mass_kg: float, lots: int
) -> None:
    deposit.dry_kg += mass_kg
    if used is not None and used.dry > 0.0:
        if used.kind is MaterialKind.CORE:
            deposit.demand_kg += used.resin * (deposit.area or mass_kg / used.dry) / lots
        else:
            deposit.demand_kg += mass_kg * used.resin / used.dry
    if share.mass_kg is not None:
        deposit.own_variance += (STATED_GRAMS * mass_kg) ** 2
        return
    material = None if used is None else reading.indexes.material(used.material)
    mean = lot_spread(material, reading.stock.is_measured(share.what))
    # Resin by the cloth's areal mass goes with it, so a lot that is heavy by a share makes the ply so.
    whole = mass_kg if used is None or not used.dry else mass_kg * (used.dry + used.resin) / used.dry
    deposit.sources = (*deposit.sources, (("lot", share.what), mean * whole))
    deposit.own_variance += _BY_THE_AREA_VARIANCE * whole * whole


def _take_cups(reading: Reading, deposit: Deposit, act: Lay) -> None:
    if not act.batches:
        if deposit.demand_kg > 0.0:
            deposit.sources = (*deposit.sources, (NO_CUP_SAID, RESIN_HABIT * deposit.demand_kg))
        return
    stated = sum(share.mass_kg or 0.0 for share in act.batches)
    unstated = sum(share.mass_kg is None for share in act.batches)
    rest = max(deposit.demand_kg - stated, 0.0) / unstated if unstated else 0.0
    for share in act.batches:
        sure = share.mass_kg is not None or unstated == 1
        reading.use_cup(
            deposit,
            act.piece,
            share.what,
            stated_kg=share.mass_kg,
            demand_kg=rest,
            what="resin",
            sure=sure,
        )
        if not sure:
            deposit.own_variance += (SPLIT_UNKNOWN * rest) ** 2
