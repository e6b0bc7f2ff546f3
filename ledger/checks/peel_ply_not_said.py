"""A bagged piece weighed without saying whether its peel ply was still on."""

from __future__ import annotations

from ledger.checks.facts import Facts
from ledger.errors import Finding, Severity, Where
from ledger.mass.plan_index import Indexes, PlanIndex
from ledger.model.acts import Bond, Weigh
from ledger.model.entry import Logged
from ledger.model.plan import MaterialKind
from ledger.model.snapshot import PieceState, Snapshot

CODE = "peel-ply-not-said"


def peel_ply_not_said(facts: Facts) -> tuple[Finding, ...]:
    """Each live piece with process material in its laminate whose last weighing says nothing of it."""
    snapshot = facts.snapshot
    bagged = BaggedParts(snapshot)
    last: dict[str, Logged] = {}
    removed: set[str] = set()
    for logged in snapshot.logged:
        act = logged.act
        if isinstance(act, Bond) and act.peel_ply_removed:
            removed.update(act.pieces)
        elif isinstance(act, Weigh) and act.what in snapshot.pieces:
            last[act.what] = logged
            if act.what in removed:
                last.pop(act.what)
    return tuple(
        Finding(
            code=CODE,
            severity=Severity.LOOK,
            where=Where(entry=logged.seq, thing=piece),
            what="weighed without saying whether its peel ply was on",
            do="correct the weighing with present: peel ply and its grams, or peel ply 0 g if it was off",
        )
        for piece, logged in last.items()
        if isinstance(logged.act, Weigh)
        and not logged.act.present
        and bagged.is_bagged(piece)
        and snapshot.pieces[piece].state is not PieceState.SCRAPPED
    )


class BaggedParts:
    """Which pieces have process material, such as peel ply, in their laminate."""

    def __init__(self, snapshot: Snapshot) -> None:
        self._snapshot = snapshot
        self._indexes = Indexes(snapshot)
        self._known: dict[tuple[int, str | None], bool] = {}

    def is_bagged(self, piece: str) -> bool:
        """Whether the laminate of a piece holds process material."""
        known = self._snapshot.pieces.get(piece)
        if known is None:
            return False
        index = self._indexes.of(piece)
        part = index.parts.get(known.part)
        key = (id(index), None if part is None else part.made_of)
        if key not in self._known:
            self._known[key] = _is_bagged(index, key[1])
        return self._known[key]


def _is_bagged(index: PlanIndex, made_of: str | None) -> bool:
    laminate = None if made_of is None else index.laminates.get(made_of)
    if laminate is None:
        return False
    materials = (index.materials.get(step.material) for step in laminate.steps)
    return any(one is not None and one.kind is MaterialKind.PROCESS for one in materials)
