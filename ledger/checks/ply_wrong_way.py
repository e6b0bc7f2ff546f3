"""A ply laid in another direction than the laminate wants on that hand."""

from __future__ import annotations

from ledger.checks.facts import Facts
from ledger.errors import Finding, Severity, Where
from ledger.mass.plan_index import Indexes, PlanIndex
from ledger.model.acts import Lay
from ledger.model.plan import Part, Plan, Side
from ledger.model.snapshot import Snapshot

CODE = "ply-wrong-way"

# What a careful hand holds; common practice, no source.
_HELD_DEG = 5.0


def ply_wrong_way(facts: Facts) -> tuple[Finding, ...]:
    """Each ply whose logged direction differs from the plan's, mirrored pieces with the sign flipped."""
    directions = _Directions(facts.snapshot)
    found = []
    for logged in facts.snapshot.logged:
        act = logged.act
        if not isinstance(act, Lay) or act.orientation_deg is None:
            continue
        wanted = directions.wanted(act.piece, act.step)
        if wanted is None or turned_by(act.orientation_deg, wanted) <= _HELD_DEG:
            continue
        other_hand = turned_by(act.orientation_deg, -wanted) <= _HELD_DEG
        found.append(
            Finding(
                code=CODE,
                severity=Severity.STOP,
                where=Where(entry=logged.seq, thing=act.piece),
                what=(
                    f"step {act.step} laid at {act.orientation_deg:+g}, "
                    f"wants {format(wanted, '+g') if wanted else '0'}"
                    f"{', as on the other hand' if other_hand else ''}"
                ),
                do="take the ply off if it is wet; else hold the piece",
            )
        )
    return tuple(found)


def turned_by(one_deg: float, other_deg: float) -> float:
    """The angle between two fibre directions; a fibre has no front, so half a turn is none."""
    apart = (one_deg - other_deg) % 180.0
    return min(apart, 180.0 - apart)


def is_mirrored(part: Part, plan: Plan) -> bool:
    """Whether a part is the mirrored one of its pair; of two that name each other, the right hand is."""
    return part.mirror_of is not None and _mirrors(part, plan.part(part.mirror_of))


def _mirrors(part: Part, other: Part | None) -> bool:
    return other is None or other.mirror_of != part.name or part.side is Side.RIGHT


class _Directions:
    """The direction a step wants, by part; found once a part, not once a ply."""

    def __init__(self, snapshot: Snapshot) -> None:
        self._snapshot = snapshot
        self._indexes = Indexes(snapshot)
        self._known: dict[tuple[int, str], dict[int, float]] = {}

    def wanted(self, piece: str, step: int) -> float | None:
        known = self._snapshot.pieces.get(piece)
        if known is None:
            return None
        index = self._indexes.of(piece)
        key = (id(index), known.part)
        if key not in self._known:
            self._known[key] = _directions(known.part, index)
        return self._known[key].get(step)


def _directions(name: str, index: PlanIndex) -> dict[int, float]:
    part = index.parts.get(name)
    laminate = None if part is None or part.made_of is None else index.laminates.get(part.made_of)
    if part is None or laminate is None:
        return {}
    mirrored = part.mirror_of is not None and _mirrors(part, index.parts.get(part.mirror_of))
    sign = -1.0 if mirrored else 1.0
    return {
        step.number: sign * step.orientation_deg
        for step in laminate.steps
        if step.orientation_deg is not None
    }
