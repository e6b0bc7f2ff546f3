"""Which pieces an entry worked on, and whether they still count: what several rules ask."""

from __future__ import annotations

from ledger.model.acts import Act, Bond, Coat, Cut, Fit, Lay
from ledger.model.snapshot import PieceState, Snapshot


def pieces_of(act: Act) -> tuple[str, ...]:
    """The pieces that hold what the entry used."""
    match act:
        case Cut() | Bond():
            return act.pieces
        case Lay():
            return (act.piece,)
        case Coat():
            return () if act.piece is None else (act.piece,)
        case Fit():
            return () if act.into is None else (act.into,)
        case _:
            piece = getattr(act, "piece", None)
            return (piece,) if isinstance(piece, str) else ()


def is_live(piece: str, snapshot: Snapshot) -> bool:
    """Whether it is a piece, and not scrapped."""
    known = snapshot.pieces.get(piece)
    return known is not None and known.state is not PieceState.SCRAPPED
