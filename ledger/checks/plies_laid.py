"""Every ply that was laid with the layer it stands for: what several rules ask."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass

from ledger.mass.laminate import Layer
from ledger.mass.plan_index import Indexes
from ledger.mass.plies import layer_numbered
from ledger.model.acts import Lay
from ledger.model.plan import Material
from ledger.model.snapshot import Snapshot


@dataclass(frozen=True, slots=True, kw_only=True)
class PlyLaid:
    """One `lay` of a piece that is still there. `materials` are those of the piece's own iteration."""

    seq: int
    act: Lay
    layer: Layer
    materials: Mapping[str, Material]


def plies_laid(snapshot: Snapshot) -> Iterator[PlyLaid]:
    """In the order of the log; a step that the laminate does not have is left out."""
    indexes = Indexes(snapshot)
    for logged in snapshot.logged:
        act = logged.act
        if not isinstance(act, Lay) or act.piece in snapshot.gone:
            continue
        layer = layer_numbered(indexes.nominal(act.piece), act.step)
        if layer is not None:
            yield PlyLaid(seq=logged.seq, act=act, layer=layer, materials=indexes.of(act.piece).materials)
