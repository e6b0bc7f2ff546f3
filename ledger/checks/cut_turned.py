"""Pieces cut at an angle that turns the plies of their faces."""

from __future__ import annotations

from ledger.checks.facts import Facts
from ledger.checks.ply_wrong_way import turned_by
from ledger.errors import Finding, Severity, Where
from ledger.model.acts import Cut
from ledger.model.plan import MaterialKind
from ledger.model.snapshot import Snapshot

CODE = "cut-turned"

# A nest on a router table is set to better than this; common practice, no source.
_HELD_DEG = 2.0


def cut_turned(facts: Facts) -> tuple[Finding, ...]:
    """Each cut turned on its sheet so that a face ply no longer lies as the laminate says."""
    snapshot = facts.snapshot
    return tuple(
        Finding(
            code=CODE,
            severity=Severity.LOOK,
            where=Where(entry=logged.seq, thing=logged.act.pieces[0]),
            what=f"cut at {logged.act.angle_deg:g} deg from the sheet's length, which turns its face plies",
            do="check that the piece may have its plies so, and accept it or scrap it",
        )
        for logged in snapshot.logged
        if isinstance(logged.act, Cut)
        and logged.act.angle_deg is not None
        and _turns(logged.act.angle_deg, _faces(logged.act.sheet, snapshot))
        and any(piece not in snapshot.gone for piece in logged.act.pieces)
    )


def _turns(angle_deg: float, faces: tuple[float, ...] | None) -> bool:
    if faces is None:
        # A sheet with no directions on record may still be as stiff one way as the other at a right angle.
        return min(angle_deg % 90.0, 90.0 - angle_deg % 90.0) > _HELD_DEG
    return any(turned_by(face + angle_deg, face) > _HELD_DEG for face in faces)


def _faces(number: str, snapshot: Snapshot) -> tuple[float, ...] | None:
    """The directions of a sheet's fibres; None where its laminate does not say."""
    whole = snapshot.offcuts[number].sheet if number in snapshot.offcuts else number
    sheet = snapshot.sheets.get(whole)
    laminate = None if sheet is None else snapshot.plan.laminate(sheet.sheet.laminate)
    if laminate is None:
        return None
    fibres = {
        one.name for one in snapshot.plan.materials if one.kind in (MaterialKind.FABRIC, MaterialKind.PREPREG)
    }
    angles = tuple(
        step.orientation_deg
        for step in laminate.steps
        if step.material in fibres and step.orientation_deg is not None
    )
    return angles or None
