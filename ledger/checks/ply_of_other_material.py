"""A ply laid from a lot of another material than its step wants."""

from __future__ import annotations

from ledger.checks.facts import Facts
from ledger.errors import Finding, Severity, Where
from ledger.mass.plan_index import Indexes
from ledger.mass.plies import layer_numbered
from ledger.model.acts import Lay

CODE = "ply-of-other-material"


def ply_of_other_material(facts: Facts) -> tuple[Finding, ...]:
    """Each ply with a lot whose material is not the one of its step."""
    snapshot = facts.snapshot
    indexes = Indexes(snapshot)
    found = []
    for logged in snapshot.logged:
        act = logged.act
        if not isinstance(act, Lay) or act.piece in snapshot.gone:
            continue
        layer = layer_numbered(indexes.nominal(act.piece), act.step)
        if layer is None or layer.material not in indexes.of(act.piece).materials:
            continue
        for share in act.lots:
            lot = snapshot.lots.get(share.what)
            if lot is None or lot.receive.material == layer.material:
                continue
            found.append(
                Finding(
                    code=CODE,
                    severity=Severity.LOOK,
                    where=Where(entry=logged.seq, thing=act.piece),
                    what=(
                        f"step {act.step} wants {layer.material}, lot {share.what} is {lot.receive.material}"
                    ),
                    do="correct the lot if it was scanned wrong, or accept the other material",
                )
            )
    return tuple(found)
