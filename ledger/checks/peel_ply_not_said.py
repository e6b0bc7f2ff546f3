"""A bagged piece weighed without saying whether its peel ply was still on."""

from __future__ import annotations

from ledger.checks.facts import Facts
from ledger.errors import Finding, Severity, Where
from ledger.model.acts import Bond, Weigh
from ledger.model.entry import Logged
from ledger.model.plan import MaterialKind, Plan
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
        self._plans = {iteration.name: iteration.plan for iteration in snapshot.iterations}
        self._known: dict[tuple[str, str], bool] = {}

    def is_bagged(self, piece: str) -> bool:
        """Whether the laminate of a piece holds process material."""
        known = self._snapshot.pieces.get(piece)
        if known is None:
            return False
        key = (known.iteration, known.part)
        if key not in self._known:
            self._known[key] = _is_bagged(known.part, self._plans.get(known.iteration, self._snapshot.plan))
        return self._known[key]


def _is_bagged(name: str, plan: Plan) -> bool:
    part = plan.part(name)
    laminate = None if part is None or part.made_of is None else plan.laminate(part.made_of)
    if laminate is None:
        return False
    process = {one.name for one in plan.materials if one.kind is MaterialKind.PROCESS}
    return any(step.material in process for step in laminate.steps)
