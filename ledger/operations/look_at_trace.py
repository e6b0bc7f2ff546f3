"""What the Trace screen shows, frozen: one thing, good or bad, where it is now and what it came from."""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from datetime import datetime

from ledger.errors import Finding, Severity
from ledger.mass.report import WeightReport
from ledger.mass.trace import Trace, TraceLink, trace
from ledger.model.fitting import Fitting
from ledger.model.snapshot import Snapshot
from ledger.operations.saying import say
from ledger.operations.take_stock import Stock
from ledger.units import Display

_STOP, _LOOK, _OK = "STOP", "LOOK", "ok"
_WORD = {Severity.STOP: _STOP, Severity.LOOK: _LOOK, Severity.NOTE: _OK}
# States that are bad in themselves, whatever else was noticed.
_BAD = {"on hold": _STOP, "expired": _LOOK}


@dataclass(frozen=True, slots=True, kw_only=True)
class InPiece:
    """One piece the thing is in, and how much of it where that is known."""

    piece: str
    mass_kg: float | None
    fitted: bool


@dataclass(frozen=True, slots=True, kw_only=True)
class EntryLine:
    """One entry that names the thing."""

    seq: int
    at: datetime
    by: str
    kind: str
    says: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Suspect:
    """Something a STOP or LOOK is about, or on hold: where to begin when nothing was scanned."""

    what: str
    verdict: str
    why: str


@dataclass(frozen=True, slots=True, kw_only=True)
class TraceView:
    """`trace` is None until something is asked for. `verdict` is STOP, LOOK or ok, `why` its reasons.

    `fitted_into` is where a piece itself sits.
    """

    display: Display
    trace: Trace | None
    number: str | None
    verdict: str
    why: tuple[str, ...]
    findings: tuple[Finding, ...]
    pieces: tuple[InPiece, ...]
    on_hold: bool
    fitted_into: str | None
    entries: tuple[EntryLine, ...]
    suspects: tuple[Suspect, ...]

    @property
    def fitted(self) -> tuple[InPiece, ...]:
        """Those already fitted into something."""
        return tuple(one for one in self.pieces if one.fitted)


def look_at_trace(stock: Stock, what: str | None) -> TraceView:
    """Follow a number or name both ways; with None, say what there is to look into.

    Raises
        Refused: nothing in the book has that name or number.
    """
    snapshot = stock.build.snapshot
    suspects = suspects_of(snapshot, stock.findings)
    if what is None:
        return _view(snapshot, suspects, None, ())
    traced = trace(snapshot, what)
    piece = snapshot.pieces.get(traced.what)
    names = {traced.what} if piece is None else {traced.what, piece.part}
    about = tuple(
        finding
        for finding in stock.findings
        if finding.where.thing in names and finding.severity is not Severity.NOTE
    )
    return _view(snapshot, suspects, traced, about, ratio=_ratio_words(stock.weights, traced.what))


def _view(
    snapshot: Snapshot,
    suspects: tuple[Suspect, ...],
    traced: Trace | None,
    about: tuple[Finding, ...],
    *,
    ratio: str = "",
) -> TraceView:
    passed_on = () if traced is None else _passed_on(traced, suspects)
    verdict, why = ("", ()) if traced is None else _judged(traced, about, passed_on, ratio)
    return TraceView(
        display=snapshot.plan.display,
        trace=traced,
        number=None if traced is None else _tag(snapshot, traced.what),
        verdict=verdict,
        why=why,
        findings=about,
        pieces=() if traced is None else pieces_with(snapshot, traced),
        fitted_into=None if traced is None else _fitted_into(snapshot, traced.what),
        on_hold=traced is not None and traced.what in snapshot.held,
        entries=() if traced is None else _lines(snapshot, traced.entries),
        suspects=suspects,
    )


def _passed_on(traced: Trace, suspects: Sequence[Suspect]) -> tuple[Suspect, ...]:
    """What the thing was made from, near or far, that is itself on hold or flagged."""
    sources = {link.what for link in _all_links(traced.made_from, "made_from")}
    return tuple(one for one in suspects if one.what in sources)


def _judged(
    traced: Trace, about: Sequence[Finding], passed_on: Sequence[Suspect], ratio: str
) -> tuple[str, tuple[str, ...]]:
    """The gravest of its state, of what rules noticed about it, and of what it was made from."""
    own = _BAD.get(traced.state, _OK)
    words = {own, *(_WORD[finding.severity] for finding in about), *(one.verdict for one in passed_on)}
    verdict = _STOP if _STOP in words else _LOOK if _LOOK in words else _OK
    reasons = [
        (_WORD[finding.severity], finding.what)
        for finding in about
        if not (ratio and "ratio" in finding.code)
    ]
    reasons += [(one.verdict, f"made with {one.what} {one.verdict}") for one in passed_on]
    # A sort that keeps the order within one grade.
    reasons.sort(key=lambda reason: reason[0] != _STOP)
    return verdict, (
        *([traced.state] if own != _OK else []),
        *([ratio] if ratio else []),
        *(reason for _, reason in reasons),
    )


def _ratio_words(weights: WeightReport, what: str) -> str:
    """A batch's mix ratio as it is written: hardener to 100 of resin."""
    account = next((account for account in weights.batches if account.batch == what), None)
    if account is None or account.ratio_low is None or account.ratio_high is None:
        return ""
    low, high = 100.0 * account.ratio_low, 100.0 * account.ratio_high
    got = f"{low:.1f}" if f"{low:.1f}" == f"{high:.1f}" else f"{low:.1f}-{high:.1f}"
    wanted = "" if account.ratio_wanted is None else f", wants {100.0 * account.ratio_wanted:.1f}"
    return f"hardener {got} to 100{wanted}: {account.ratio_verdict.upper()}"


def pieces_with(snapshot: Snapshot, traced: Trace) -> tuple[InPiece, ...]:
    """Every live piece the thing is in, near or by way of others, with the mass that went straight in.

    Whether it can still be reached no entry of this release says: fitted is all that is known.
    """
    straight: dict[str, list[float | None]] = {}
    for link in traced.went_into:
        straight.setdefault(link.what, []).append(link.mass_kg)
    inside: dict[str, None] = {}
    for link in _all_links(traced.went_into, "went_into"):
        if link.what in snapshot.pieces and link.what not in snapshot.gone:
            inside[link.what] = None
    return tuple(
        InPiece(
            piece=name,
            mass_kg=_sum(straight.get(name, [None])),
            fitted=snapshot.pieces[name].fitted_into is not None,
        )
        for name in inside
    )


def suspects_of(snapshot: Snapshot, findings: Sequence[Finding]) -> tuple[Suspect, ...]:
    """Things of the book on hold or with a STOP or LOOK, the gravest first; none that is kept for stock."""
    fitting = Fitting(snapshot.iterations)
    kept = {
        name
        for name, piece in snapshot.pieces.items()
        if name in snapshot.held and name not in snapshot.gone and not fitting.may_count(piece)
    }
    found: dict[str, Suspect] = {
        name: Suspect(what=name, verdict=_STOP, why=f"on hold since entry {seq}")
        for name, seq in snapshot.held.items()
        if name not in kept
    }
    known: tuple[Mapping[str, object], ...] = (
        snapshot.pieces,
        snapshot.lots,
        snapshot.sheets,
        snapshot.offcuts,
        snapshot.batches,
        snapshot.scales,
    )
    ranked = sorted(findings, key=lambda finding: finding.severity is not Severity.STOP)
    for finding in ranked:
        name = finding.where.thing
        if finding.severity is Severity.NOTE or name is None or name in found:
            continue
        if any(name in things for things in known) or snapshot.plan.part(name) is not None:
            word = _STOP if finding.severity is Severity.STOP else _LOOK
            found[name] = Suspect(what=name, verdict=word, why=finding.what)
    return tuple(found.values())


def _all_links(links: Sequence[TraceLink], way: str) -> Iterator[TraceLink]:
    for link in links:
        yield link
        yield from _all_links(link.made_from if way == "made_from" else link.went_into, way)


def _sum(masses: Sequence[float | None]) -> float | None:
    known = [mass for mass in masses if mass is not None]
    return sum(known) if len(known) == len(masses) else None


def _tag(snapshot: Snapshot, name: str) -> str | None:
    piece = snapshot.pieces.get(name)
    return None if piece is None else piece.number


def _fitted_into(snapshot: Snapshot, name: str) -> str | None:
    piece = snapshot.pieces.get(name)
    return None if piece is None else piece.fitted_into


def _lines(snapshot: Snapshot, entries: Sequence[int]) -> tuple[EntryLine, ...]:
    wanted = set(entries)
    return tuple(
        EntryLine(
            seq=logged.seq, at=logged.at, by=logged.by, kind=logged.kind, says=say(logged.kind, logged.act)
        )
        for logged in reversed(snapshot.logged)
        if logged.seq in wanted
    )
