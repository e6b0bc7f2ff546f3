"""From a slip, or a reading, to an entry: what is checked by hand first, and what is said afterwards."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, replace
from datetime import datetime
from pathlib import Path

from ledger.errors import Finding, FindingsError, Severity
from ledger.operations.correct_entry import correct_entry
from ledger.operations.log_entry import LoggedEntry, log_entry
from ledger.tui.crew import Crew
from ledger.tui.slip import Slip

_SIGN = {Severity.STOP: "STOP", Severity.LOOK: "LOOK"}


@dataclass(frozen=True, slots=True, kw_only=True)
class Request:
    """One entry to be written. `corrects` is the entry it takes the place of, `draft` its slip's name."""

    kind: str
    fields: Mapping[str, str]
    by: str
    corrects: int | None = None
    draft: str | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Outcome:
    """What came of it: the entries written (or, in a preview, that would be), or why none were."""

    request: Request
    entries: tuple[LoggedEntry, ...] = ()
    refused: tuple[Finding, ...] = ()

    @property
    def entry(self) -> LoggedEntry | None:
        """The entry itself; of a correction, the one that counts now."""
        return self.entries[-1] if self.entries else None


def request_of(slip: Slip, crew: Crew) -> Request:
    """The slip's fields as an operation takes them. A correction names only what was changed."""
    fields = dict(slip.values)
    if slip.corrects is not None:
        words = {*fields, *slip.original}
        changed = {
            word: fields.get(word, "")
            for word in words
            if fields.get(word, "") != slip.original.get(word, "")
        }
        return Request(
            kind=slip.kind, fields=changed, by=crew.by or "", corrects=slip.corrects, draft=slip.name
        )
    if slip.stamped_at is not None:
        fields.setdefault("at", slip.stamped_at.isoformat())
    return Request(kind=slip.kind, fields={**fields, **_others(crew)}, by=crew.by or "", draft=slip.name)


def request_of_reading(fields: Mapping[str, str], crew: Crew) -> Request:
    """A weighing without a slip."""
    return Request(kind="weigh", fields={**fields, **_others(crew)}, by=crew.by or "")


def marked(request: Request, mark: str | None) -> Request:
    """The request with a mark in its remark. A correction keeps its own time, so it needs none."""
    if mark is None or request.corrects is not None:
        return request
    remark = "; ".join(part for part in (request.fields.get("remark", ""), mark) if part)
    return replace(request, fields={**request.fields, "remark": remark})


def write(book: Path, request: Request, now: Callable[[], datetime], *, preview: bool = False) -> Outcome:
    """Write the entry, or only look at what it would do. Called in a thread."""
    try:
        if request.corrects is not None:
            corrected = correct_entry(
                book, request.corrects, request.fields, by=request.by, now=now(), preview=preview
            )
            return Outcome(request=request, entries=(corrected.withdrawn, corrected.entered))
        logged = log_entry(
            book, request.kind, dict(request.fields), by=request.by, now=now(), preview=preview
        )
    except FindingsError as error:
        return Outcome(request=request, refused=error.findings)
    return Outcome(request=request, entries=(logged,))


def said_of(entry: LoggedEntry) -> tuple[tuple[str, str], ...]:
    """The lines for the message area: the entry, then the gravest of what arose."""
    given = [minted.number for minted in entry.minted if minted.number not in entry.says]
    tags = f"  tag {' '.join(given)}" if given else ""
    lines = [("ok", f"No. {entry.seq}  {entry.at:%H:%M} {entry.by}  {entry.says}{tags}")]
    grave = [finding for finding in entry.findings if finding.severity in _SIGN]
    if grave:
        first = grave[0]
        more = f" (and {len(grave) - 1} more: findings)" if len(grave) > 1 else ""
        lines.append((_SIGN[first.severity], f"{_of(first)}; {first.do}{more}"))
    return tuple(lines)


def _of(finding: Finding) -> str:
    thing = finding.where.thing
    return finding.what if not thing or thing in finding.what else f"{thing}  {finding.what}"


def effect_of(outcome: Outcome, withdrawn: str = "") -> str:
    """A preview in one line; of a withdrawal, what it takes back."""
    entry = outcome.entry
    if entry is None:
        return ""
    grave = [finding for finding in entry.findings if finding.severity in _SIGN]
    arising = f"; then {_SIGN[grave[0].severity]}: {_of(grave[0])}" if grave else ""
    says = f"it would take back {withdrawn}" if withdrawn else f"it would say: {entry.says}"
    return f"{says}{arising}"


def refusal_of(outcome: Outcome) -> tuple[str, str | None]:
    """Why nothing was written, in one line, and the field it is about."""
    first = outcome.refused[0]
    more = f" (and {len(outcome.refused) - 1} more)" if len(outcome.refused) > 1 else ""
    field = (first.where.column or "").replace("_", " ")
    return f"{field + ': ' if field else ''}{first.what}; {first.do}{more}", first.where.column


def _others(crew: Crew) -> dict[str, str]:
    return {"with": "; ".join(crew.others)} if crew.others else {}
