"""Which entries used which lots, sheets and batches: what several rules ask."""

from __future__ import annotations

from collections.abc import Iterator

from ledger.model.acts import Act, Bond, BuildUp, Coat, Cut, Lay, Mix, Sheet
from ledger.model.things import Share


def batches_of(act: Act) -> tuple[str, ...]:
    """The cups an entry used."""
    match act:
        case Lay() | Bond():
            return _named(act.batches)
        case Coat() | BuildUp():
            return () if act.batch is None else (act.batch,)
        case _:
            return ()


def lots_of(act: Act) -> tuple[str, ...]:
    """The lots an entry used."""
    match act:
        case Lay():
            return _named(act.lots)
        case Mix():
            return (act.resin_lot, act.hardener_lot)
        case Coat() | BuildUp():
            return () if act.lot is None else (act.lot,)
        case Sheet():
            return act.lots
        case _:
            return ()


def stock_of(act: Act) -> Iterator[str]:
    """Every lot, sheet, offcut and batch an entry used."""
    yield from lots_of(act)
    yield from batches_of(act)
    if isinstance(act, Cut):
        yield act.sheet


def _named(shares: tuple[Share, ...]) -> tuple[str, ...]:
    return tuple(share.what for share in shares)
