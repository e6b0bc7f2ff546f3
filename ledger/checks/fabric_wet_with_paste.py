"""A fabric wet out with a cup of adhesive, sealant or other paste."""

from __future__ import annotations

from ledger.checks.batches_used import batches_of
from ledger.checks.facts import Facts
from ledger.checks.plies_laid import plies_laid
from ledger.errors import Finding, Severity, Where
from ledger.model.plan import MaterialKind

CODE = "fabric-wet-with-paste"


def fabric_wet_with_paste(facts: Facts) -> tuple[Finding, ...]:
    """Each ply of dry fabric with a cup whose resin is no laminating resin by its kind."""
    snapshot = facts.snapshot
    found = []
    for ply in plies_laid(snapshot):
        for number in batches_of(ply.act) if ply.layer.kind is MaterialKind.FABRIC else ():
            batch = snapshot.batches.get(number)
            lot = None if batch is None else snapshot.lots.get(batch.mix.resin_lot)
            material = None if lot is None else ply.materials.get(lot.receive.material)
            if material is not None and material.kind is not MaterialKind.RESIN:
                what = f"step {ply.act.step} wet with {number}, which is {material.name}, {material.kind}"
                found.append(
                    Finding(
                        code=CODE,
                        severity=Severity.STOP,
                        where=Where(entry=ply.seq, thing=ply.act.piece),
                        what=what,
                        do="correct the cup if it was scanned wrong; else take the ply off again",
                    )
                )
    return tuple(found)
