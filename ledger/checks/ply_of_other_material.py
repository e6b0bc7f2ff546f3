"""A ply laid from a lot of another material than its step wants."""

from __future__ import annotations

from ledger.checks.facts import Facts
from ledger.checks.plies_laid import plies_laid
from ledger.errors import Finding, Severity, Where

CODE = "ply-of-other-material"


def ply_of_other_material(facts: Facts) -> tuple[Finding, ...]:
    """Each ply with a lot whose material is not the one of its step."""
    found = []
    for ply in plies_laid(facts.snapshot):
        wanted = ply.layer.material
        for share in ply.act.lots if wanted in ply.materials else ():
            lot = facts.snapshot.lots.get(share.what)
            if lot is None or lot.receive.material == wanted:
                continue
            found.append(
                Finding(
                    code=CODE,
                    severity=Severity.LOOK,
                    where=Where(entry=ply.seq, thing=ply.act.piece),
                    what=f"step {ply.act.step} wants {wanted}, lot {share.what} is {lot.receive.material}",
                    do="correct the lot if it was scanned wrong, or accept the other material",
                )
            )
    return tuple(found)
