"""Whether a piece is still what the current plan wants, and which pieces of a part count."""

from __future__ import annotations

from collections.abc import Iterable, Mapping

from ledger.model.plan import Laminate, Part, Plan
from ledger.model.snapshot import Iteration, Piece, PieceState, Snapshot

BUILT_TO_EARLIER = "built-to-earlier-iteration"


class Fitting:
    """Pieces held against the last of some iterations.

    A piece is good for the iteration it was begun under and for each it was accepted under: it fits
    while its part is now what it was in one of them. So a part changed and changed back takes its
    first pieces again, and an acceptance holds until the part changes once more. One put on hold when
    it did not fit is kept for stock, and counts nothing while it is on hold and does not fit.
    """

    def __init__(self, iterations: Iterable[Iteration]) -> None:
        plans = [iteration.plan for iteration in iterations]
        self._plans = {plan.name: _ByName(plan) for plan in plans}
        self._now = self._plans[plans[-1].name]

    def why_not(self, piece: Piece) -> str | None:
        """What the current plan changes about the piece's part; None for one that fits or is accepted."""
        if piece.iteration == self._now.plan.name:
            return None
        why = self._now.why_not(piece.part, self._plans.get(piece.iteration))
        if why is None or any(self._same_as_under(name, piece.part) for name in piece.accepted_under):
            return None
        return why

    def may_count(self, piece: Piece) -> bool:
        """Whether it is to go into the wing where the part wants it: not scrapped, not kept for stock."""
        return piece.state is not PieceState.SCRAPPED and not self._is_kept(piece)

    def first_to_count(self, pieces: Iterable[Piece]) -> list[Piece]:
        """Pieces of one part, those that count in the wing before those that would be spare.

        One that no longer fits is spare before any that does, even where it is built in: what is
        made in its stead takes its place. Then it is the one that sits nowhere, not the one made last.
        """
        listed = list(pieces)
        if len(listed) < 2:
            return listed
        return sorted(
            listed, key=lambda one: (self.why_not(one) is not None, one.fitted_into is None, one.running)
        )

    def spares(self, part: str, pieces: Iterable[Piece]) -> set[str]:
        """Names of live pieces of a part that are kept for stock, or more than the current plan wants.

        Of a part it dropped none is one too many: what becomes of it has still to be said.
        """
        live = [piece for piece in pieces if piece.state is not PieceState.SCRAPPED]
        kept = {piece.name for piece in live if self._is_kept(piece)}
        planned = self._now.parts.get(part)
        if planned is None:
            return kept
        rest = self.first_to_count(piece for piece in live if piece.name not in kept)
        return kept | {piece.name for piece in rest[planned.quantity :]}

    def _is_kept(self, piece: Piece) -> bool:
        if piece.held_under is None or self.why_not(piece) is None:
            return False
        then = self._plans.get(piece.held_under)
        # On hold since before the change, it is on hold for another reason.
        return then is not None and then.why_not(piece.part, self._plans.get(piece.iteration)) is not None

    def _same_as_under(self, iteration: str, part: str) -> bool:
        then = self._plans.get(iteration)
        if then is None:
            return False
        if part not in then.parts or part not in self._now.parts:
            return part not in then.parts and part not in self._now.parts
        return self._now.why_not(part, then) is None


def pieces_that_no_longer_fit(snapshot: Snapshot) -> tuple[tuple[Piece, str], ...]:
    """The live pieces that differ from the current plan, each with what has changed.

    One accepted is left out, and so is one kept for stock or spare: it counts nothing in the wing.
    """
    fitting = Fitting(snapshot.iterations)
    found = []
    for piece in snapshot.pieces.values():
        if piece.state is not PieceState.SCRAPPED:
            why = fitting.why_not(piece)
            if why is not None:
                found.append((piece, why))
    if not found:
        return ()
    spare = _spares(snapshot.pieces, fitting, {piece.part for piece, _ in found})
    return tuple((piece, why) for piece, why in found if piece.name not in spare)


def why_it_no_longer_fits(part: str, then: Plan | None, now: Plan) -> str | None:
    """What changed about a part between two plans, in words; None where a piece of it still fits."""
    return _ByName(now).why_not(part, None if then is None else _ByName(then))


def pieces_meant(what: str, pieces: Mapping[str, Piece]) -> tuple[str, ...]:
    """Names of the pieces that a text means by name or by tag, however it is capitalised."""
    if what in pieces:
        return (what,)
    wanted = what.casefold()
    return tuple(
        piece.name for piece in pieces.values() if wanted in (piece.name.casefold(), piece.number.casefold())
    )


def _spares(pieces: Mapping[str, Piece], fitting: Fitting, parts: set[str]) -> set[str]:
    of_part: dict[str, list[Piece]] = {part: [] for part in parts}
    for piece in pieces.values():
        if piece.part in of_part:
            of_part[piece.part].append(piece)
    return {name for part, its in of_part.items() for name in fitting.spares(part, its)}


class _ByName:
    """A plan's parts, their geometry and laminates by name."""

    def __init__(self, plan: Plan) -> None:
        self.plan = plan
        self.parts: dict[str, Part] = {part.name: part for part in plan.parts}
        self.digests = {part.name: shape.digest for part, shape in zip(plan.parts, plan.shapes, strict=False)}
        self.laminates: dict[str, Laminate] = {laminate.name: laminate for laminate in plan.laminates}

    def why_not(self, part: str, then: _ByName | None) -> str | None:
        """What this plan changes about a part since another one."""
        name, part_now = self.plan.name, self.parts.get(part)
        if part_now is None:
            return f"{name} has no part {part}"
        if then is None:
            return f"that iteration was withdrawn, {name} is in force"
        part_then = then.parts.get(part)
        if part_then is None:
            return None
        changed = []
        if then.digests.get(part) != self.digests.get(part):
            changed.append("its geometry or its place")
        made_of, before = part_now.made_of, part_then.made_of
        if before != made_of:
            changed.append(f"what it is made of ({before} then, {made_of} now)")
        elif made_of is not None and then.laminates.get(made_of) != self.laminates.get(made_of):
            changed.append(f"laminate {made_of}")
        return f"{name} changes {' and '.join(changed)}" if changed else None
