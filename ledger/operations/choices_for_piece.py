"""What can be done about a built piece that the current plan no longer wants as it is."""

from __future__ import annotations

from ledger.mass.plan_index import PlanIndex
from ledger.model.comparison import Choice, EntryToMake
from ledger.model.fitting import BUILT_TO_EARLIER
from ledger.model.plan import Form, Part, PartClass
from ledger.model.snapshot import Piece


def choices_for(piece: Piece, index: PlanIndex, *, next_running: int) -> tuple[Choice, ...]:
    """The choices, each with the entries it comes to, in their order.

    index : of the plan that no longer wants the piece. next_running : the running number of the next
    piece of its part. Each choice is good as things stand: once one is made, the next are other entries.
    """
    out = () if piece.fitted_into is None else (_entry("fit", piece=piece.name, out_of=piece.fitted_into),)
    keep = _entry("hold", what=piece.name, why="kept for stock")
    scrap = _entry("scrap", asks=("why",), what=piece.name)
    part = index.parts.get(piece.part)
    if part is None:
        return (
            Choice(
                choice="keep for stock",
                does="it is put aside and counts nothing in the wing",
                entries=(*out, keep),
            ),
            Choice(choice="scrap", does="it is written off", entries=(*out, scrap)),
        )
    made = _making(f"{part.name}/{next_running}", part, index)
    return (
        Choice(
            choice="cut again",
            does="another takes its place and this one is written off",
            entries=(*out, scrap, made),
        ),
        Choice(
            choice="accept",
            does="it stays in the wing as it is until its part changes again",
            entries=(_entry("accept", asks=("why",), finding=BUILT_TO_EARLIER, what=piece.name),),
        ),
        Choice(
            choice="keep for stock",
            does="another takes its place and this one, put aside, counts nothing in the wing",
            entries=(*out, keep, made),
        ),
    )


def _making(name: str, part: Part, index: PlanIndex) -> EntryToMake:
    laminate = None if part.made_of is None else index.laminates.get(part.made_of)
    if part.part_class is PartClass.JOINT:
        return _entry("bond", asks=("batches",), pieces=name)
    if part.form is Form.SKIN and laminate is not None and laminate.steps:
        return _entry("lay", asks=("lots", "batches"), piece=name, step=str(laminate.steps[0].number))
    if part.form is Form.PANEL or (part.form is Form.SKIN and laminate is not None):
        return _entry("cut", asks=("sheet",), pieces=name)
    return _entry("weigh", asks=("reading",), what=name)


def _entry(kind: str, *, asks: tuple[str, ...] = (), **fields: str) -> EntryToMake:
    return EntryToMake(kind=kind, fields=tuple(fields.items()), asks=asks)
