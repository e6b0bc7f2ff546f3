"""What can be done next: plies still to lay, pieces to weigh, parts to cut, joints to bond."""

from __future__ import annotations

from dataclasses import dataclass

from ledger.mass.plan_index import PlanIndex
from ledger.mass.report import PartMass, PieceMass, WeightReport
from ledger.model.acts import Lay
from ledger.model.plan import Form, Part, PartClass
from ledger.model.snapshot import PieceState, Snapshot

_LAY_ORDER = {"lay on": 0, "weigh": 1, "lay": 2, "cut": 3, "bond": 4, "coat": 5, "finish": 6}


@dataclass(frozen=True, slots=True, kw_only=True)
class Job:
    """One thing to do next: about what, in words, and which slip opens for it."""

    thing: str
    words: str
    kind: str


def list_next_jobs(snapshot: Snapshot, weights: WeightReport) -> tuple[Job, ...]:
    """Jobs in the order a bench would take them: what is begun before what is not."""
    index = PlanIndex(snapshot.plan)
    laid = steps_laid(snapshot)
    jobs: list[tuple[int, Job]] = []
    for part in weights.parts:
        planned = index.parts.get(part.part)
        if planned is not None:
            jobs += _jobs_of(part, planned, index, laid, snapshot)
    jobs.sort(key=lambda ranked: ranked[0])
    return tuple(job for _, job in jobs)


def steps_laid(snapshot: Snapshot) -> dict[str, set[int]]:
    """The steps logged on each piece."""
    laid: dict[str, set[int]] = {}
    for entry in snapshot.logged:
        if isinstance(entry.act, Lay):
            laid.setdefault(entry.act.piece, set()).add(entry.act.step)
    return laid


def in_steps(steps: list[int]) -> str:
    """`ply 3`, `plies 3 to 7`, or `plies 3, 5 to 7`."""
    runs: list[list[int]] = []
    for step in sorted(steps):
        if runs and step == runs[-1][-1] + 1:
            runs[-1].append(step)
        else:
            runs.append([step])
    words = [str(run[0]) if len(run) == 1 else f"{run[0]} to {run[-1]}" for run in runs]
    return f"{'ply' if len(steps) == 1 else 'plies'} {', '.join(words)}"


def _jobs_of(
    part: PartMass, planned: Part, index: PlanIndex, laid: dict[str, set[int]], snapshot: Snapshot
) -> list[tuple[int, Job]]:
    jobs = []
    for mass in part.pieces:
        piece = snapshot.pieces.get(mass.piece)
        if piece is None:
            jobs.append(_begin(mass.piece, planned, index))
        elif piece.state is PieceState.OPEN and piece.fitted_into is None and mass.state != "spare":
            jobs.append(_go_on(mass, planned, index, laid))
    return [(_LAY_ORDER[rank], job) for rank, job in (found for found in jobs if found is not None)]


def _go_on(
    mass: PieceMass, planned: Part, index: PlanIndex, laid: dict[str, set[int]]
) -> tuple[str, Job] | None:
    piece = mass.piece
    if planned.form is Form.SKIN and planned.made_of in index.laminates:
        steps = [step.number for step in index.laminates[planned.made_of].steps]
        missing = [step for step in steps if step not in laid.get(piece, set())]
        if missing:
            return "lay on", Job(thing=piece, words=in_steps(missing), kind="lay")
    if mass.known_by != "A":
        return "weigh", Job(thing=piece, words="weigh", kind="weigh")
    if planned.form is Form.SKIN and mass.state == PieceState.OPEN:
        return "finish", Job(thing=piece, words="weigh finished", kind="weigh")
    return None


def _begin(piece: str, planned: Part, index: PlanIndex) -> tuple[str, Job] | None:
    laminate = index.laminates.get(planned.made_of or "")
    if planned.part_class is PartClass.JOINT:
        return "bond", Job(thing=piece, words="bond", kind="bond")
    if planned.part_class is PartClass.FINISH:
        return "coat", Job(thing=piece, words="coat", kind="coat")
    if planned.form is Form.SKIN and laminate is not None and laminate.steps:
        return "lay", Job(thing=piece, words=f"lay, {len(laminate.steps)} plies", kind="lay")
    if planned.form is Form.PANEL and laminate is not None:
        return "cut", Job(thing=piece, words=f"cut from {laminate.name}", kind="cut")
    return "weigh", Job(thing=piece, words="weigh", kind="weigh")
