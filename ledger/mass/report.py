"""What the mass layer says about a build: masses, CG, inertia, what is off plan and why."""

from __future__ import annotations

from dataclasses import dataclass

from ledger.model.plan import PartClass, Side
from ledger.model.vectors import Matrix, Vector

CAUSES = ("planning", "geometry", "stock", "plies", "resin", "bond_coat", "trim_repair", "unexplained")


@dataclass(frozen=True, slots=True, kw_only=True)
class CauseMass:
    """How much of what is off plan one cause explains."""

    cause: str
    mass_kg: float


@dataclass(frozen=True, slots=True, kw_only=True)
class PieceMass:
    """One piece, begun or still to come. `state` is open, finished, planned or scrapped.

    `known_by` is A (weighed), C (from what was logged) or E (from the plan). `expected_kg` is what a
    scale should show today for the piece as logged.
    """

    piece: str
    number: str | None
    state: str
    known_by: str
    estimated_kg: float | None
    calculated_kg: float | None
    actual_kg: float | None
    built_kg: float
    best_kg: float
    best_u_kg: float
    expected_kg: float | None
    expected_u_kg: float | None
    off_plan: tuple[CauseMass, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class PartMass:
    """All pieces of one part. `state` is the least advanced of its pieces."""

    part: str
    title: str
    part_class: PartClass
    side: Side
    assembly: str
    quantity: int
    estimated_kg: float | None
    calculated_kg: float | None
    actual_kg: float | None
    built_kg: float
    best_kg: float
    best_u_kg: float
    state: str
    cg_m: Vector
    area_m2: float | None
    pieces: tuple[PieceMass, ...]
    off_plan: tuple[CauseMass, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class AssemblyMass:
    """One node of the assembly tree. `path` is its name with `/`; the first node is the whole."""

    path: str
    depth: int
    estimated_kg: float
    best_kg: float
    best_u_kg: float
    pieces_begun: int
    pieces_planned: int
    known_by: str
    cg_m: Vector | None
    off_plan: tuple[CauseMass, ...]
    parts: tuple[str, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class TotalMass:
    """The whole wing. Calculated and actual are over what has begun and what was weighed only."""

    estimated_kg: float
    calculated_kg: float | None
    actual_kg: float | None
    best_kg: float
    best_u_kg: float
    built_kg: float
    share_actual: float
    share_calculated: float
    share_estimated: float
    cg_m: Vector | None
    inertia_kg_m2: Matrix | None


@dataclass(frozen=True, slots=True, kw_only=True)
class BatchAccount:
    """Where one batch went. `unaccounted_kg` is None where residue was not recorded."""

    batch: str
    mixed_kg: float
    charged_kg: float
    residue_kg: float | None
    bled_kg: float | None
    scrapped_kg: float
    unaccounted_kg: float | None
    ratio_low: float | None
    ratio_high: float | None
    ratio_wanted: float | None
    ratio_verdict: str


@dataclass(frozen=True, slots=True, kw_only=True)
class WeightReport:
    """Everything `weights` prints and the Weights screen shows."""

    iteration: str
    total: TotalMass
    parts: tuple[PartMass, ...]
    assemblies: tuple[AssemblyMass, ...]
    off_plan: tuple[CauseMass, ...]
    batches: tuple[BatchAccount, ...]
