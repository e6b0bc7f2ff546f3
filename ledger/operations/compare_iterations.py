"""Two designs held against each other with the record as it stands: what would change, and what it costs."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace
from datetime import datetime
from pathlib import Path

from ledger.errors import Finding, Refused, Severity, Where
from ledger.fuel.report import FuelReport
from ledger.mass.part_changes import part_changes, why_changed
from ledger.mass.plan_index import PlanIndex
from ledger.mass.report import TotalMass, WeightReport
from ledger.mass.weigh_up import weigh_up
from ledger.model.comparison import (
    Comparison,
    FuelChange,
    InertiaPair,
    MassChange,
    Pair,
    PlacePair,
    UnfitPiece,
)
from ledger.model.entry import Logged
from ledger.model.fitting import Fitting, pieces_that_no_longer_fit
from ledger.model.plan import Plan
from ledger.model.progress import Progress, unwatched
from ledger.model.snapshot import Iteration, Piece, PieceState, Snapshot
from ledger.operations.choices_for_piece import choices_for
from ledger.operations.open_build import Build, open_build
from ledger.operations.plan_to_adopt import PlanToAdopt, read_plan_to_adopt
from ledger.operations.reckon_fuel import reckon_build


@dataclass(frozen=True, slots=True, kw_only=True)
class Side:
    """One of the two: the build with this plan as the current one."""

    build: Build
    name: str
    adopted: bool
    findings: tuple[Finding, ...] = ()

    @property
    def plan(self) -> Plan:
        """Its plan."""
        return self.build.snapshot.plan


def compare_iterations(
    book: Path, a: str, b: str, *, now: datetime | None = None, progress: Progress = unwatched
) -> Comparison:
    """Compare two iterations of a book by name; `b` may also be the folder of a plan not in it.

    Raises
        Refused: no iteration of that name, or the plan in the folder has errors.
        BookUnusable: the book cannot be opened.
        Stopped: `progress` was told to end the work.
    """
    build = open_build(book, now=now)
    first = _iteration(build.snapshot, a)
    second = _iteration(build.snapshot, b)
    if first is None or (second is None and not Path(b).is_dir()):
        raise Refused(*_unknown(build.snapshot, {a: first, b: second}, last=b))
    side_b = (
        Side(build=build_under(build, second), name=second.name, adopted=True)
        if second is not None
        else side_of_folder(build, read_plan_to_adopt(Path(b), build.cache, progress=progress), b)
    )
    side_a = Side(build=build_under(build, first), name=first.name, adopted=True)
    return compare_sides(side_a, side_b, progress=progress)


def build_under(build: Build, iteration: Iteration) -> Build:
    """The same record with that iteration as the current plan."""
    others = tuple(one for one in build.snapshot.iterations if one.seq != iteration.seq)
    return build.under(replace(build.snapshot, iterations=(*others, iteration)))


def side_of_folder(build: Build, wanted: PlanToAdopt, folder: str) -> Side:
    """The same record as if the plan of a folder had just been adopted."""
    snapshot = build.snapshot
    plan, seq = wanted.plan, snapshot.last_seq + 1
    if _iteration(snapshot, plan.name) is not None:
        # By its own name it could not be told from the iteration that has it.
        plan = replace(plan, name=folder)
    act = replace(wanted.act, plan=plan.name)
    entry = Logged(seq=seq, at=snapshot.now, logged_at=snapshot.now, by="", kind="adopt", act=act)
    iteration = Iteration(name=plan.name, seq=seq, at=snapshot.now, plan=plan)
    after = replace(snapshot, iterations=(*snapshot.iterations, iteration), logged=(*snapshot.logged, entry))
    build = build.under(after, wanted.files)
    return Side(build=build, name=plan.name, adopted=False, findings=wanted.findings)


def compare_sides(a: Side, b: Side, *, progress: Progress = unwatched) -> Comparison:
    """What the second changes of the first."""
    progress(f"weighing, {a.name}", 0, 2)
    weights_a = weigh_up(a.build.snapshot, a.build.cell_places())
    progress(f"weighing, {b.name}", 1, 2)
    weights_b = weigh_up(b.build.snapshot, b.build.cell_places())
    unfit = unfit_pieces(b.build.snapshot, weights_b, fitting_before=a.build.snapshot)
    mass = _mass_change(a, b, weights_a, weights_b)
    density = None if b.plan.fuel is None else b.plan.fuel.density_15c_kg_m3
    saved = mass.now_kg.change
    stays = _stays(b.build.snapshot)
    before = set(_stays(a.build.snapshot))
    pieces = b.build.snapshot.pieces
    listed = {*stays, *(piece.piece for piece in unfit)}
    return Comparison(
        a=a.name,
        b=b.name,
        plan_a=a.plan,
        plan_b=b.plan,
        adopted=b.adopted,
        mass=mass,
        fuel=_fuel_change(a, b, progress),
        fuel_density_kg_m3=density,
        saved_as_fuel_m3=None if density is None or saved is None else -saved / density,
        no_longer_fits=unfit,
        stays=stays,
        fits_again=tuple(name for name in stays if name not in before),
        findings=(*a.build.warnings, *b.findings),
        on_hold=tuple(name for name in stays if pieces[name].held_under is not None),
        spare=tuple(
            piece.name
            for piece in pieces.values()
            if piece.name not in listed and piece.state is not PieceState.SCRAPPED
        ),
    )


def unfit_pieces(
    snapshot: Snapshot, weights: WeightReport, *, fitting_before: Snapshot
) -> tuple[UnfitPiece, ...]:
    """The pieces that the current plan of a snapshot no longer wants as they are, with what can be done."""
    best = {piece.piece: piece.best_kg for part in weights.parts for piece in part.pieces}
    before = {piece.name for piece, _ in pieces_that_no_longer_fit(fitting_before)}
    plans = {iteration.name: PlanIndex(iteration.plan) for iteration in snapshot.iterations}
    now = plans[snapshot.plan.name]
    running: dict[str, int] = {}
    for piece in snapshot.pieces.values():
        running[piece.part] = max(piece.running, running.get(piece.part, 0))
    found = []
    for piece, why in pieces_that_no_longer_fit(snapshot):
        then = plans.get(piece.iteration)
        figures = () if then is None else why_changed(piece.part, then, now)
        found.append(
            UnfitPiece(
                piece=piece.name,
                number=piece.number,
                part=piece.part,
                state=piece.state.value,
                begun_under=piece.iteration,
                why=f"{now.plan.name}: {'; '.join(figures)}" if figures else why,
                best_kg=best.get(piece.name),
                fitted_before=piece.name not in before,
                choices=choices_for(piece, now, next_running=running[piece.part] + 1),
            )
        )
    return tuple(found)


def _mass_change(a: Side, b: Side, weights_a: WeightReport, weights_b: WeightReport) -> MassChange:
    now_a, now_b = ({part.part: part.best_kg for part in one.parts} for one in (weights_a, weights_b))
    parts = part_changes(a.plan, b.plan, now_a, now_b)
    total_a, total_b = weights_a.total, weights_b.total
    in_both = {part.name for part in a.plan.parts} & {part.name for part in b.plan.parts}
    return MassChange(
        now_kg=Pair(a=total_a.best_kg, b=total_b.best_kg),
        remade_kg=Pair(a=_remade(a, total_a).best_kg, b=_remade(b, total_b).best_kg),
        estimated_kg=Pair(a=total_a.estimated_kg, b=total_b.estimated_kg),
        cg_m=PlacePair(a=total_a.cg_m, b=total_b.cg_m),
        inertia_kg_m2=InertiaPair(a=total_a.inertia_kg_m2, b=total_b.inertia_kg_m2),
        parts=parts,
        parts_same=len(in_both - {part.part for part in parts}),
    )


def _remade(side: Side, total: TotalMass) -> TotalMass:
    """The wing once every piece that does not fit is made again as planned."""
    snapshot = side.build.snapshot
    unfit = {piece.name for piece, _ in pieces_that_no_longer_fit(snapshot)}
    if not unfit:
        return total
    pieces = {
        name: replace(piece, state=PieceState.SCRAPPED) if name in unfit else piece
        for name, piece in snapshot.pieces.items()
    }
    return weigh_up(replace(snapshot, pieces=pieces), side.build.cell_places()).total


def _stays(snapshot: Snapshot) -> tuple[str, ...]:
    """The live pieces that count under the current plan and fit it, or are accepted in it."""
    fitting = Fitting(snapshot.iterations)
    of_part: dict[str, list[Piece]] = {part.name: [] for part in snapshot.plan.parts}
    for piece in snapshot.pieces.values():
        if piece.part in of_part and piece.state is not PieceState.SCRAPPED:
            of_part[piece.part].append(piece)
    return tuple(
        piece.name
        for part, pieces in of_part.items()
        for spare in (fitting.spares(part, pieces),)
        for piece in pieces
        if piece.name not in spare and fitting.why_not(piece) is None
    )


def _fuel_change(a: Side, b: Side, progress: Progress) -> FuelChange | None:
    if not a.plan.tanks.tanks and not b.plan.tanks.tanks:
        return None
    from ledger.fuel.changes import fuel_change

    fuel_a = _fuel_of(a, progress)
    fuel_b = fuel_a if _same_fuel(a, b) else _fuel_of(b, progress)
    return fuel_change(fuel_a, fuel_b, (a.name, b.name))


def _fuel_of(side: Side, progress: Progress) -> FuelReport:
    return reckon_build(side.build, volumes_only=True, progress=_named(progress, side.name))


def _named(progress: Progress, plan: str) -> Progress:
    def tell(what: str, done: int, of: int) -> None:
        progress(f"{plan}: {what}", done, of)

    return tell


def _same_fuel(a: Side, b: Side) -> bool:
    """Whether both plans hold the same fuel in the same way, so that it need not be reckoned twice."""
    one, other = a.plan, b.plan
    if any(cell.displaced_mesh is not None for cell in one.tanks.cells):
        # The digest of a displaced solid is not in the plan's records.
        return False
    return (one.tanks, one.cell_digests, one.attitudes, one.fuel) == (
        other.tanks,
        other.cell_digests,
        other.attitudes,
        other.fuel,
    )


def _iteration(snapshot: Snapshot, name: str) -> Iteration | None:
    """The iteration of that name, whichever way it is capitalised."""
    wanted = name.casefold()
    return next((one for one in snapshot.iterations if one.name.casefold() == wanted), None)


def _unknown(snapshot: Snapshot, asked: Mapping[str, Iteration | None], *, last: str) -> tuple[Finding, ...]:
    known = ", ".join(iteration.name for iteration in snapshot.iterations)
    return tuple(
        Finding(
            code="unknown-iteration",
            severity=Severity.STOP,
            where=Where(thing=name),
            what="the book has no iteration of this name"
            + (", and there is no plan folder of this path" if name == last else ""),
            do=f"choose one of: {known}",
        )
        for name, found in asked.items()
        if found is None and not (name == last and Path(name).is_dir())
    )
