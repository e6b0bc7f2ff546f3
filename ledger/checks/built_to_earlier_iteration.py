"""A piece begun under an earlier iteration whose part has changed since."""

from __future__ import annotations

from ledger.checks.facts import Facts
from ledger.errors import Finding, Severity, Where
from ledger.model.plan import Plan
from ledger.model.snapshot import Piece, PieceState, Snapshot

CODE = "built-to-earlier-iteration"


def built_to_earlier_iteration(facts: Facts) -> tuple[Finding, ...]:
    """Each live piece whose part is not what it was when the piece was begun."""
    return tuple(
        Finding(
            code=CODE,
            severity=Severity.LOOK,
            where=Where(thing=piece.name),
            what=f"begun under {piece.iteration}; {why}",
            do="measure whether it still fits, then rework, scrap or accept it",
        )
        for piece, why in pieces_that_no_longer_fit(facts.snapshot)
    )


def pieces_that_no_longer_fit(snapshot: Snapshot) -> tuple[tuple[Piece, str], ...]:
    """The live pieces that differ from the current plan, each with what has changed."""
    plans = {iteration.name: iteration.plan for iteration in snapshot.iterations}
    found = []
    for piece in snapshot.pieces.values():
        if piece.state is PieceState.SCRAPPED or piece.iteration == snapshot.plan.name:
            continue
        why = why_it_no_longer_fits(piece.part, plans.get(piece.iteration), snapshot.plan)
        if why is not None:
            found.append((piece, why))
    return tuple(found)


def why_it_no_longer_fits(part: str, then: Plan | None, now: Plan) -> str | None:
    """What changed about a part between two plans, in words; None where a piece of it still fits."""
    part_now = now.part(part)
    if part_now is None:
        return f"{now.name} has no part {part}"
    if then is None:
        return "that iteration was withdrawn"
    part_then = then.part(part)
    if part_then is None:
        return None
    changed = []
    if _digest(then, part) != _digest(now, part):
        changed.append("its geometry or its place")
    if part_then.made_of != part_now.made_of:
        changed.append(f"what it is made of ({part_then.made_of} then, {part_now.made_of} now)")
    elif part_now.made_of is not None and then.laminate(part_now.made_of) != now.laminate(part_now.made_of):
        changed.append(f"laminate {part_now.made_of}")
    return f"{now.name} changes {' and '.join(changed)}" if changed else None


def _digest(plan: Plan, part: str) -> str | None:
    return next(
        (shape.digest for one, shape in zip(plan.parts, plan.shapes, strict=True) if one.name == part), None
    )
