"""Which grams of which lot, sheet or batch are in which piece."""

from __future__ import annotations

from dataclasses import dataclass

from ledger.mass.cups import share_out_cups
from ledger.mass.deposits import Draw
from ledger.mass.plan_index import Indexes
from ledger.mass.read_entries import read_deposits
from ledger.model.snapshot import Snapshot


@dataclass(frozen=True, slots=True, kw_only=True)
class Charge:
    """One source going into one piece or cell by one entry. `mass_kg` is None where it cannot be known.

    A piece that only touches the adhesive of a bond has a charge of 0 with `what` "touches".
    """

    seq: int
    piece: str
    source: str
    step: int | None
    what: str
    mass_kg: float | None


def charges(snapshot: Snapshot) -> tuple[Charge, ...]:
    """Every charge in the order things happened, each one figure by best evidence."""
    if not snapshot.iterations:
        return ()
    deposits = read_deposits(snapshot, Indexes(snapshot))
    share_out_cups(snapshot, deposits)
    return tuple(_charge(draw) for draw in deposits.draws)


def _charge(draw: Draw) -> Charge:
    return Charge(
        seq=draw.seq,
        piece=draw.piece,
        source=draw.source,
        step=draw.step,
        what=draw.what,
        mass_kg=draw.mass_kg if draw.sure else None,
    )
