"""What a rule may look at: the snapshot and the figures computed from it, all frozen."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

from ledger.errors import Finding
from ledger.fuel.report import FuelReport
from ledger.mass.report import WeightReport
from ledger.model.snapshot import Snapshot


@dataclass(frozen=True, slots=True, kw_only=True)
class Facts:
    """One moment of the build. `fuel` is None where the plan has no tanks or the mesh was not asked for."""

    snapshot: Snapshot
    weights: WeightReport
    fuel: FuelReport | None


Rule = Callable[[Facts], tuple[Finding, ...]]
