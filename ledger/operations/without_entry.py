"""The build as if one entry had never been logged: what a correction of it is held against."""

from __future__ import annotations

from dataclasses import replace

from ledger.mass.weigh_up import weigh_up
from ledger.model.gather import gather
from ledger.operations.take_stock import Stock


def without_entry(stock: Stock, seq: int) -> Stock:
    """Weights and records without the entry; fuel, findings and plate stay those of the whole book."""
    build = stock.build
    plans = {iteration.seq: iteration.plan for iteration in build.snapshot.iterations}
    if seq in plans:
        return stock
    logged = tuple(entry for entry in build.logged if entry.seq != seq)
    snapshot = gather(logged, lambda adopted: plans[adopted.seq], now=build.snapshot.now)
    less = replace(build, snapshot=snapshot, logged=logged)
    return replace(stock, build=less, weights=weigh_up(snapshot, less.cell_places()))
