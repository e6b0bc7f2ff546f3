"""What a slip begins with: fields taken from what is in hand, from the entry before, from what is open."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from datetime import datetime

from ledger.errors import Finding
from ledger.model import acts  # noqa: F401  the kinds are declared when this is imported
from ledger.model.declare import KINDS, Kind
from ledger.model.entry import Logged
from ledger.model.plan import MaterialKind
from ledger.model.things import ThingKind
from ledger.operations.clock_cups import Cup, best_cup, cups_on_bench
from ledger.operations.correct_entry import fields_of
from ledger.operations.find_thing import FoundThing
from ledger.operations.list_next_jobs import list_next_jobs
from ledger.operations.look_at_ply import PlyInHand, is_laid_up, look_at_ply
from ledger.operations.saying import say
from ledger.operations.take_stock import Stock

# A measurement is never proposed: only where things come from and what they are called.
_AS_LAST = {
    "mix": ("resin_lot", "hardener_lot", "method", "scale"),
    "weigh": ("scale",),
    "weigh_points": ("scale",),
    "cut": ("sheet", "revision", "kerf"),
    "bond": ("surface",),
    "sheet": ("laminate", "lots"),
    "receive": (),
}
_CUP_KINDS = {"bond": (MaterialKind.PASTE,), "coat": (MaterialKind.SEALANT, MaterialKind.FINISH)}


@dataclass(frozen=True, slots=True, kw_only=True)
class Proposal:
    """What stands in a new slip before anyone writes in it. `notes` say beside a field where it is from.

    `says` are lines for the message area, each with its sign.
    """

    values: Mapping[str, str]
    notes: Mapping[str, str]
    ply: PlyInHand | None = None
    says: tuple[tuple[str, str], ...] = ()


def propose_entry(
    stock: Stock, kind: str, about: FoundThing | None, now: datetime, *, step: int | None = None
) -> Proposal:
    """Fields and notes for a new slip of this kind, with the thing in hand in its place."""
    declared = KINDS[kind]
    values: dict[str, str] = {}
    notes: dict[str, str] = {}
    if about is not None:
        word = field_for(declared, about)
        if word is not None:
            values[word] = about.number or about.name if about.kind is not ThingKind.PIECE else about.name
            notes[word] = "in hand"
    _as_last(stock, kind, values, notes)
    if kind == "lay":
        return _lay(stock, about, now, step=step, values=values, notes=notes)
    if kind in _CUP_KINDS:
        _open_cup(stock, kind, now, values, notes)
    last = last_entry(stock)
    if kind == "withdraw" and last is not None:
        values.setdefault("seq", str(last.seq))
        notes.setdefault("seq", f"{last.at:%H:%M} {last.by} {say(last.kind, last.act)}")
    if kind == "accept":
        _open_finding(stock.findings, about, values, notes)
    return Proposal(values=values, notes=notes)


def field_for(declared: Kind, thing: FoundThing) -> str | None:
    """The first field of a kind that takes a thing like this, a field that gives out numbers never."""
    wanted = {thing.kind} | ({ThingKind.PIECE} if thing.kind is ThingKind.PART else set())
    return next(
        (field.word for field in declared.fields if field.mints is None and wanted & set(field.things)), None
    )


def last_entry(stock: Stock) -> Logged | None:
    """The entry written last that still counts. A correction stands in its entry's place, and may be it."""
    counting = (entry for entry in stock.build.snapshot.logged if entry.kind not in ("adopt", "withdraw"))
    return max(counting, key=lambda entry: entry.seq, default=None)


def last_of_kind(stock: Stock, kind: str) -> Logged | None:
    """The entry of a kind logged last."""
    return next((entry for entry in reversed(stock.build.snapshot.logged) if entry.kind == kind), None)


def scale_in_use(stock: Stock) -> str | None:
    """The scale of the last weighing, while it stands."""
    last = last_of_kind(stock, "weigh")
    scale = None if last is None else fields_of(last).get("scale")
    return None if scale in stock.build.snapshot.gone else scale


def repeat_last(stock: Stock, kind: str) -> Mapping[str, str]:
    """The texts of the last entry of a kind, without its time, its person and the number it gave out."""
    last = last_of_kind(stock, kind)
    if last is None:
        return {}
    own = {field.word for field in KINDS[kind].fields if field.mints is not None} | {"at", "by", "with"}
    return {word: text for word, text in fields_of(last).items() if word not in own}


def entry_to_correct(stock: Stock, seq: int | None = None) -> tuple[Logged, Mapping[str, str]] | None:
    """The last entry that can be put right, or the one asked for, with its fields as text."""
    if seq is None:
        entry = last_entry(stock)
    else:
        logged = (one for one in stock.build.snapshot.logged if one.kind not in ("adopt", "withdraw"))
        entry = next((one for one in logged if one.seq == seq), None)
    return None if entry is None else (entry, fields_of(entry))


def _as_last(stock: Stock, kind: str, values: dict[str, str], notes: dict[str, str]) -> None:
    last = last_of_kind(stock, kind)
    if last is None or not _AS_LAST.get(kind):
        return
    texts = fields_of(last)
    gone = stock.build.snapshot.gone
    for word in _AS_LAST[kind]:
        if word in texts and word not in values and texts[word] not in gone:
            values[word] = texts[word]
            notes[word] = "as last"


def _lay(
    stock: Stock,
    about: FoundThing | None,
    now: datetime,
    *,
    step: int | None,
    values: dict[str, str],
    notes: dict[str, str],
) -> Proposal:
    piece = _piece_to_lay(stock, about)
    ply = None if piece is None else look_at_ply(stock, piece, now, step)
    if ply is None:
        return Proposal(values=values, notes=notes)
    values["piece"], notes["piece"] = ply.piece, ply.title
    says: list[tuple[str, str]] = []
    if ply.step is None:
        return Proposal(
            values=values, notes=notes, ply=ply, says=(("LOOK", f"every step of {ply.piece} is laid"),)
        )
    values["step"], notes["step"] = str(ply.step), f"of {ply.steps}"
    if "lots" not in values:
        notes["lots"] = ply.lot_note
        if ply.lot is not None:
            values["lots"] = ply.lot
    if ply.seen_deg is not None:
        notes["orientation"] = f"plan {ply.seen_deg:+.0f} deg" if ply.seen_deg else "plan 0 deg"
    if ply.area_m2 is not None:
        notes["area"] = f"plan {ply.area_m2:.3f} m2"
    if ply.needs_kg:
        says += _cups_for_ply(ply, values, notes)
    return Proposal(values=values, notes=notes, ply=ply, says=tuple(says))


def _cups_for_ply(ply: PlyInHand, values: dict[str, str], notes: dict[str, str]) -> list[tuple[str, str]]:
    needs_g = 1000 * (ply.needs_kg or 0.0)
    notes["batches"] = f"needs {needs_g:.0f} g"
    if "batches" in values:
        return []
    first = best_cup(ply.cups)
    if first is None:
        return [("LOOK", f"ply {ply.step} needs {needs_g:.0f} g and no cup is open: scan one, or new cup")]
    values["batches"] = first.number
    notes["batches"] = "open cup"
    if first.left_kg is not None and 1000 * first.left_kg < needs_g:
        return [
            (
                "LOOK",
                f"ply {ply.step} needs {needs_g:.0f} g, {first.number} has "
                f"{1000 * max(0.0, first.left_kg):.0f} g: scan a second cup",
            )
        ]
    return []


def covering(needs_kg: float, cups: tuple[Cup, ...]) -> str:
    """`needs 99 g: B031 has 71, 11 min`: what a step needs against what stands ready."""
    have = [
        f"{cup.number} has {'?' if cup.left_kg is None else format(1000 * max(0.0, cup.left_kg), '.0f')}"
        f"{_clock(cup)}"
        for cup in cups
    ]
    return f"needs {1000 * needs_kg:.0f} g: {'; '.join(have) or 'no cup yet'}"


def _clock(cup: Cup) -> str:
    if cup.out or cup.held:
        return ", OUT OF RATIO" if cup.out else ", ON HOLD"
    if cup.minutes_left is None:
        return ""
    return f", PAST {-cup.minutes_left:.0f} min" if cup.past else f", {cup.minutes_left:.0f} min"


def _piece_to_lay(stock: Stock, about: FoundThing | None) -> str | None:
    if about is not None and about.kind in (ThingKind.PIECE, ThingKind.PART):
        return about.name if is_laid_up(stock, about.name) else None
    snapshot = stock.build.snapshot
    jobs = [job for job in list_next_jobs(snapshot, stock.weights) if job.kind == "lay"]
    last = last_of_kind(stock, "lay")
    if last is not None:
        piece = getattr(last.act, "piece", None)
        if any(job.thing == piece for job in jobs):
            return str(piece)
    return jobs[0].thing if jobs else None


def _open_cup(stock: Stock, kind: str, now: datetime, values: dict[str, str], notes: dict[str, str]) -> None:
    snapshot = stock.build.snapshot
    field = "batches" if kind == "bond" else "batch"
    if field in values or "lot" in values:
        return

    def is_for(cup: Cup) -> bool:
        material = snapshot.plan.material(cup.resin_material or "")
        return material is not None and material.kind in _CUP_KINDS[kind]

    cup = best_cup(filter(is_for, cups_on_bench(snapshot, stock.weights, now)))
    if cup is not None:
        values[field], notes[field] = cup.number, "open cup"


def _open_finding(
    findings: tuple[Finding, ...], about: FoundThing | None, values: dict[str, str], notes: dict[str, str]
) -> None:
    names = set() if about is None else {about.name, about.number}
    for finding in findings:
        if about is None or finding.where.thing in names:
            values["finding"] = finding.code
            values["what"] = finding.where.thing or str(finding.where)
            notes["finding"] = finding.what
            return
