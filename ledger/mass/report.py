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
    """One piece, begun or still to come. `state` is open, finished, planned, scrapped or spare.

    `known_by` is A (weighed), C (from what was logged) or E (from the plan). `expected_kg` is what a
    scale should show today for the piece as logged, with whatever is fitted to it. `best_kg` is None
    where nothing says what the piece weighs; a spare is one more than the plan wants and counts nothing.
    """

    piece: str
    number: str | None
    state: str
    known_by: str
    estimated_kg: float | None
    calculated_kg: float | None
    actual_kg: float | None
    built_kg: float
    best_kg: float | None
    best_u_kg: float | None
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
    best_kg: float | None
    best_u_kg: float | None
    state: str
    cg_m: Vector | None
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
    """Where one batch went. `unaccounted_kg` is None where residue was not recorded.

    `charged_kg` is in live pieces and cells, `scrapped_kg` in scrapped ones. Ratios are hardener per
    resin by mass, as in `Material`; `ratio_verdict` is in, out or cannot tell.
    """

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
    ratio_why: str = ""
    smallest_provable_kg: float | None = None
    shared_kg: float | None = None
    demand_kg: float | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class WeighedAssembly:
    """A weighing of several pieces at once, net of tare and of what was only present.

    `unexplained_kg` is the net mass less the sum of the contents; it was spread over `spread_over`.
    `presumed` is true where nothing had been fitted, so that the planned contents begun by then stand
    in; then the spread rests on a guess that a rule reports.
    """

    what: str
    seq: int
    net_kg: float
    sum_kg: float
    unexplained_kg: float
    u_kg: float
    contents: tuple[str, ...]
    spread_over: tuple[str, ...]
    presumed: bool


@dataclass(frozen=True, slots=True, kw_only=True)
class Disagreement:
    """Two readings of one piece that differ by more than their uncertainty allows."""

    piece: str
    seq: int
    earlier_seq: int
    difference_kg: float
    allowed_kg: float


@dataclass(frozen=True, slots=True, kw_only=True)
class Unknown:
    """A mass that cannot be known from what was recorded, and what would make it known."""

    thing: str
    seq: int | None
    what: str
    do: str


@dataclass(frozen=True, slots=True, kw_only=True)
class PlyNotice:
    """A step of a piece that is not as its laminate wants. `what` says how.

    It is missing, twice, not in plan, skipped or to come. A step to come is noticed only on a piece
    already weighed: the weighing does not hold it. `seqs` are the entries that laid the step; of a
    step skipped, the one that laid a later step over it.
    """

    piece: str
    step: int
    what: str
    seqs: tuple[int, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class WeightReport:
    """Everything `weights` prints and the Weights screen shows."""

    iteration: str
    total: TotalMass
    parts: tuple[PartMass, ...]
    assemblies: tuple[AssemblyMass, ...]
    off_plan: tuple[CauseMass, ...]
    batches: tuple[BatchAccount, ...]
    weighed: tuple[WeighedAssembly, ...] = ()
    disagreements: tuple[Disagreement, ...] = ()
    unknowns: tuple[Unknown, ...] = ()
    plies: tuple[PlyNotice, ...] = ()
