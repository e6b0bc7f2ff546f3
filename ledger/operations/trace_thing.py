"""What a thing was made from and what it went into."""

from __future__ import annotations

from dataclasses import dataclass
from pathlib import Path

from ledger.checks.facts import Facts
from ledger.checks.run import run_rules
from ledger.errors import Finding
from ledger.mass.trace import Trace, trace
from ledger.mass.weigh_up import weigh_up
from ledger.operations.open_build import open_build
from ledger.units import Display


@dataclass(frozen=True, slots=True, kw_only=True)
class Followed:
    """A trace with the findings about the thing itself. `display` is that of the current plan."""

    trace: Trace
    findings: tuple[Finding, ...]
    display: Display


def trace_thing(book: Path, what: str) -> Trace:
    """Follow a number or name both ways.

    Raises
        Refused: nothing in the book has that name or number.
    """
    return trace(open_build(book).snapshot, what)


def follow_thing(book: Path, what: str) -> Followed:
    """The same with the findings about the thing, or about an entry that names it."""
    build = open_build(book)
    snapshot = build.snapshot
    traced = trace(snapshot, what)
    about = tuple(
        finding
        for finding in run_rules(Facts(snapshot=snapshot, weights=weigh_up(snapshot), fuel=None))
        if finding.where.thing == traced.what or finding.where.entry in traced.entries
    )
    return Followed(trace=traced, findings=(*build.warnings, *about), display=snapshot.plan.display)
