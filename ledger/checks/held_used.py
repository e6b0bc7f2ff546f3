"""Something on hold that was used all the same, and pieces that hold it."""

from __future__ import annotations

from datetime import datetime

from ledger.checks.batches_used import stock_of
from ledger.checks.facts import Facts
from ledger.checks.live_pieces import is_live, pieces_of
from ledger.errors import Finding, Severity, Where
from ledger.model.acts import Act, Bond, Fit
from ledger.model.snapshot import Snapshot

CODE = "held-used"


def held_used(facts: Facts) -> tuple[Finding, ...]:
    """Each use of a held lot, sheet, batch or piece after its hold, and each live piece that holds one."""
    snapshot = facts.snapshot
    if not snapshot.held:
        return ()
    since = {logged.seq: logged.at for logged in snapshot.logged}
    holds = {what: since[seq] for what, seq in snapshot.held.items() if seq in since}
    tainted = _made_of_held(snapshot, holds)
    used: list[Finding] = []
    holding: dict[str, set[str]] = {}
    for logged in snapshot.logged:
        for what in (*stock_of(logged.act), *_pieces_moved(logged.act)):
            origin = tainted.get(what)
            if origin is None:
                continue
            if logged.at >= holds[origin] and logged.seq > snapshot.held[origin]:
                used.append(_used(logged.seq, what, origin, logged.kind))
            for piece in pieces_of(logged.act):
                if piece != origin:
                    holding.setdefault(piece, set()).add(origin)
    return (
        *used,
        *(_holds(piece, origins) for piece, origins in holding.items() if is_live(piece, snapshot)),
    )


def _made_of_held(snapshot: Snapshot, holds: dict[str, datetime]) -> dict[str, str]:
    """Everything held, and every batch, sheet and offcut made from it, with the hold it comes from."""
    tainted = {what: what for what in holds}
    for number, sheet in snapshot.sheets.items():
        for lot in sheet.sheet.lots:
            if lot in tainted:
                tainted.setdefault(number, tainted[lot])
    for number, batch in snapshot.batches.items():
        for lot in (batch.mix.resin_lot, batch.mix.hardener_lot):
            if lot in tainted:
                tainted.setdefault(number, tainted[lot])
    for number, offcut in snapshot.offcuts.items():
        for source in (offcut.source, offcut.sheet):
            if source in tainted:
                tainted.setdefault(number, tainted[source])
    return tainted


def _pieces_moved(act: Act) -> tuple[str, ...]:
    match act:
        case Fit():
            return () if act.into is None else (act.piece,)
        case Bond():
            return act.pieces
        case _:
            return ()


def _used(seq: int, what: str, origin: str, kind: str) -> Finding:
    made = "" if what == origin else f" (made from {origin})"
    return Finding(
        code=CODE,
        severity=Severity.STOP,
        where=Where(entry=seq, thing=what),
        what=f"{what}{made} was used by {kind} while on hold",
        do="hold what it went into, or release it with a reason",
    )


def _holds(piece: str, origins: set[str]) -> Finding:
    return Finding(
        code=CODE,
        severity=Severity.LOOK,
        where=Where(thing=piece),
        what=f"holds {', '.join(sorted(origins))}, which is on hold",
        do="hold the piece too, or release the hold",
    )
