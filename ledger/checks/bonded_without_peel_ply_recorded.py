"""A bond on a laminate with no record that its peel ply was taken off."""

from __future__ import annotations

from ledger.checks.facts import Facts
from ledger.checks.peel_ply_not_said import BaggedParts
from ledger.errors import Finding, Severity, Where
from ledger.model.acts import Bond
from ledger.model.plan import Form
from ledger.model.snapshot import Snapshot

CODE = "bonded-without-peel-ply-recorded"


def bonded_without_peel_ply_recorded(facts: Facts) -> tuple[Finding, ...]:
    """Each bond that touches a laminate and does not say that the peel ply was removed."""
    snapshot = facts.snapshot
    bagged = BaggedParts(snapshot)
    laminated = _laminated_parts(snapshot)
    found = []
    for logged in snapshot.logged:
        act = logged.act
        if not isinstance(act, Bond) or act.peel_ply_removed:
            continue
        faces = [
            piece
            for piece in act.pieces
            if piece in snapshot.pieces and snapshot.pieces[piece].part in laminated
        ]
        if not faces or all(piece in snapshot.gone for piece in act.pieces):
            continue
        left_on = act.peel_ply_removed is False and any(bagged.is_bagged(piece) for piece in faces)
        found.append(
            Finding(
                code=CODE,
                severity=Severity.STOP if left_on else Severity.LOOK,
                where=Where(entry=logged.seq, thing=faces[0]),
                what=(
                    f"{' and '.join(faces)} bonded, "
                    + ("peel ply recorded as still on" if left_on else "peel ply not recorded as removed")
                ),
                do="open the joint" if left_on else "correct the bond with peel_ply_removed, or inspect it",
            )
        )
    return tuple(found)


def _laminated_parts(snapshot: Snapshot) -> set[str]:
    return {
        part.name
        for iteration in snapshot.iterations
        for part in iteration.plan.parts
        if part.form in (Form.PANEL, Form.SKIN) and iteration.plan.laminate(part.made_of or "") is not None
    }
