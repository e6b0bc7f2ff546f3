"""A fabric wet out with a cup of adhesive, sealant or other paste."""

from __future__ import annotations

from ledger.checks.batches_used import batches_of
from ledger.checks.facts import Facts
from ledger.errors import Finding, Severity, Where
from ledger.mass.plan_index import Indexes
from ledger.mass.plies import layer_numbered
from ledger.model.acts import Lay
from ledger.model.plan import MaterialKind

CODE = "fabric-wet-with-paste"


def fabric_wet_with_paste(facts: Facts) -> tuple[Finding, ...]:
    """Each ply of dry fabric with a cup whose resin is no laminating resin by its kind."""
    snapshot = facts.snapshot
    indexes = Indexes(snapshot)
    found = []
    for logged in snapshot.logged:
        act = logged.act
        if not isinstance(act, Lay) or act.piece in snapshot.gone:
            continue
        layer = layer_numbered(indexes.nominal(act.piece), act.step)
        if layer is None or layer.kind is not MaterialKind.FABRIC:
            continue
        for number in batches_of(act):
            batch = snapshot.batches.get(number)
            lot = None if batch is None else snapshot.lots.get(batch.mix.resin_lot)
            material = None if lot is None else indexes.of(act.piece).materials.get(lot.receive.material)
            if material is not None and material.kind is not MaterialKind.RESIN:
                found.append(
                    Finding(
                        code=CODE,
                        severity=Severity.STOP,
                        where=Where(entry=logged.seq, thing=act.piece),
                        what=f"step {act.step} wet with {number}, which is {material.name}, {material.kind}",
                        do="correct the cup if it was scanned wrong; else take the ply off again",
                    )
                )
    return tuple(found)
