"""Which findings an entry brings up: what the rules notice after it and did not notice before."""

from __future__ import annotations

from datetime import datetime
from pathlib import Path

from ledger.checks.facts import Facts
from ledger.checks.run import run_rules
from ledger.errors import Finding
from ledger.mass.weigh_up import weigh_up
from ledger.model.entry import Logged
from ledger.model.gather import gather
from ledger.model.snapshot import Snapshot
from ledger.operations.open_build import Build, open_build

_noticed: dict[str, tuple[Finding, ...]] = {}
_MOST_NOTICED = 8


def notice(snapshot: Snapshot) -> tuple[Finding, ...]:
    """Every finding about a snapshot that needs no fuel reckoning; kept for the next entry after it."""
    known = _noticed.get(snapshot.last_digest)
    if known is not None:
        return known
    findings = run_rules(Facts(snapshot=snapshot, weights=weigh_up(snapshot), fuel=None))
    if len(_noticed) >= _MOST_NOTICED:
        _noticed.clear()
    _noticed[snapshot.last_digest] = findings
    return findings


def arisen_since(book: Path, before: tuple[Finding, ...], now: datetime) -> tuple[Finding, ...]:
    """What is noticed now and was not among what was noticed before."""
    known = set(before)
    return tuple(finding for finding in notice(open_build(book, now=now).snapshot) if finding not in known)


def would_arise(build: Build, entries: tuple[Logged, ...], now: datetime) -> tuple[Finding, ...]:
    """The same for entries that were not written."""
    plans = {iteration.seq: iteration.plan for iteration in build.snapshot.iterations}
    after = gather((*build.logged, *entries), lambda adopted: plans[adopted.seq], now=now)
    known = set(notice(build.snapshot))
    findings = run_rules(Facts(snapshot=after, weights=weigh_up(after), fuel=None))
    return tuple(finding for finding in findings if finding not in known)
