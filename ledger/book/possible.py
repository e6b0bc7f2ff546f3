"""What cannot have happened, so cannot be entered. Breaking a shop rule is not here: that is logged."""

from __future__ import annotations

import dataclasses
import math
import sqlite3

from ledger.book.names import Known, choices
from ledger.errors import Finding, Severity, Where
from ledger.model.acts import Act, Fit, Lay, Release, Weigh, Withdraw
from ledger.model.declare import KINDS, Field, Takes
from ledger.model.gather import split_piece_name
from ledger.model.things import KeptOffcut, Measure, Share
from ledger.units import Dimension

_MAY_BE_ZERO = {"residue", "bled", "tare", "accuracy", "kerf", "humidity"}
_ANY_SIGN = {Dimension.ANGLE}


def impossible(kind: str, act: Act, known: Known, *, where: Where) -> tuple[Finding, ...]:
    """Everything about an act, its names already resolved, that cannot be."""
    findings = list(_out_of_range(kind, act, where))
    match act:
        case Fit():
            findings.extend(_misfit(act, known, where))
        case Lay():
            findings.extend(_no_such_step(act, known, where))
        case Release():
            findings.extend(_not_held(act, known.connection, where))
        case Weigh():
            findings.extend(_tare_above_reading(act, where))
        case Withdraw():
            findings.extend(_not_to_withdraw(act, known.connection, where))
        case _:
            pass
    return tuple(findings)


def _stop(where: Where, column: str, code: str, what: str, do: str) -> Finding:
    return Finding(
        code=code, severity=Severity.STOP, where=dataclasses.replace(where, column=column), what=what, do=do
    )


def _out_of_range(kind: str, act: Act, where: Where) -> list[Finding]:
    findings = []
    typed = dict(act.typed)
    for declared in KINDS[kind].fields:
        for value in _numbers_in(getattr(act, declared.key)):
            problem = _problem(declared, value)
            if problem is not None:
                written = typed.get(declared.word, f"{value:g}")
                findings.append(
                    _stop(
                        where,
                        declared.word,
                        "out-of-range",
                        f"{written!r} {problem}",
                        "write what you measured, or leave it out",
                    )
                )
                break
    return findings


def _numbers_in(value: object) -> tuple[float, ...]:
    if isinstance(value, tuple):
        return tuple(number for item in value for number in _numbers_in(item))
    if isinstance(value, Share):
        return () if value.mass_kg is None else (value.mass_kg,)
    if isinstance(value, Measure):
        return (value.value,)
    if isinstance(value, KeptOffcut):
        return tuple(side for side in (value.length_m, value.width_m) if side is not None)
    return (value,) if isinstance(value, float) else ()


def _problem(declared: Field, value: float) -> str | None:
    if not math.isfinite(value):
        return "is not a finite number"
    if declared.takes is Takes.QUANTITY and _ANY_SIGN.intersection(declared.dimensions):
        return None
    if value < 0 or (value == 0 and declared.word not in _MAY_BE_ZERO):
        return "is below zero" if value < 0 else "is zero"
    if Dimension.FRACTION in declared.dimensions and value > 1:
        return "is more than 100 %"
    return None


def _misfit(act: Fit, known: Known, where: Where) -> list[Finding]:
    piece = known.piece(act.piece)
    now_in = None if piece is None else piece.fitted_into
    if act.out_of is not None:
        return _not_out_of(act.piece, act.out_of, now_in, where)
    if now_in is not None:
        what = f"{act.piece} is already in {now_in}"
        do = f"take it out first: fit piece={act.piece} out_of={now_in}"
        return [_stop(where, "into", "fitted-already", what, do)]
    return _not_into_itself(act, known, where)


def _not_out_of(piece: str, out_of: str, now_in: str | None, where: Where) -> list[Finding]:
    if now_in == out_of:
        return []
    so = f"{piece} is in {now_in}" if now_in is not None else f"{piece} is not fitted into anything"
    return [_stop(where, "out_of", "not-fitted-there", f"{so}, not in {out_of}", "name where it really is")]


def _not_into_itself(act: Fit, known: Known, where: Where) -> list[Finding]:
    within = act.into
    while within is not None:
        if within == act.piece:
            what = f"{act.into} is {act.piece} itself or sits inside it"
            return [
                _stop(where, "into", "fitted-into-itself", what, "name the piece or assembly it goes into")
            ]
        holder = known.piece(within)
        within = None if holder is None else holder.fitted_into
    return []


def _tare_above_reading(act: Weigh, where: Where) -> list[Finding]:
    mean_kg = sum(act.reading_kg) / len(act.reading_kg) if act.reading_kg else math.inf
    if act.tare_kg is None or act.tare_kg < mean_kg:
        return []
    what = "the tare is as much as the reading or more, so nothing is left"
    do = "write the reading with the tare in it, or leave the tare out where the scale took it off"
    return [_stop(where, "tare", "tare-above-reading", what, do)]


def _no_such_step(act: Lay, known: Known, where: Where) -> list[Finding]:
    split = split_piece_name(act.piece)
    part = None if split is None else known.part(split[0])
    # A piece of an earlier iteration may outlive its part number; its steps are then on paper only.
    if part is None or known.plan is None:
        return []
    laminate = None if part.made_of is None else known.plan.laminate(part.made_of)
    if laminate is None:
        what = f"{part.name} is made of {part.made_of or 'nothing named'}, which is not a laminate"
        return [_stop(where, "step", "no-such-step", what, "check the part")]
    if not laminate.steps:
        what = f"laminate {laminate.name} is one areal mass without steps"
        return [
            _stop(where, "step", "no-such-step", what, "give its steps in laminates.csv and adopt the plan")
        ]
    numbers = [step.number for step in laminate.steps]
    if act.step in numbers:
        return []
    what = f"laminate {laminate.name} of {part.name} has no step {act.step}"
    return [
        _stop(where, "step", "no-such-step", what, f"write {choices([str(n) for n in numbers], most=12)}")
    ]


def _not_held(act: Release, connection: sqlite3.Connection, where: Where) -> list[Finding]:
    if connection.execute("SELECT 1 FROM held WHERE what = ?", (act.what,)).fetchone() is not None:
        return []
    held = [row[0] for row in connection.execute("SELECT what FROM held ORDER BY seq DESC LIMIT 5")]
    do = f"on hold now: {', '.join(held)}" if held else "nothing is on hold"
    return [_stop(where, "what", "not-on-hold", f"{act.what} is not on hold", do)]


def _not_to_withdraw(act: Withdraw, connection: sqlite3.Connection, where: Where) -> list[Finding]:
    row = connection.execute("SELECT kind FROM entry WHERE seq = ?", (act.seq,)).fetchone()
    if row is None:
        (last,) = connection.execute("SELECT max(seq) FROM entry").fetchone()
        what = f"there is no entry {act.seq}"
        return [_stop(where, "seq", "no-such-entry", what, f"the last entry is {last}")]
    if row[0] == "withdraw":
        what = f"entry {act.seq} is a withdrawal, which cannot itself be withdrawn"
        return [_stop(where, "seq", "withdraw-of-withdraw", what, "enter again what was withdrawn")]
    before = connection.execute("SELECT by_seq FROM withdrawn WHERE seq = ?", (act.seq,)).fetchone()
    if before is not None:
        what = f"entry {act.seq} was withdrawn already, by entry {before[0]}"
        return [_stop(where, "seq", "withdrawn-already", what, "nothing more is needed")]
    if row[0] == "adopt":
        (others,) = connection.execute("SELECT count(*) FROM iteration WHERE seq <> ?", (act.seq,)).fetchone()
        if others == 0:
            what = f"entry {act.seq} adopted the only plan of this book"
            return [
                _stop(
                    where,
                    "seq",
                    "only-plan",
                    what,
                    "adopt the plan that should stand, then withdraw this one",
                )
            ]
    return []
