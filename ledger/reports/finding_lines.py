"""Findings as a person reads them: the word first, then where, what and what to do."""

from __future__ import annotations

from collections.abc import Sequence

from ledger.errors import Finding, Severity
from ledger.reports.plain import clean

WORD = {Severity.STOP: "STOP", Severity.LOOK: "LOOK", Severity.NOTE: "note"}


def finding_line(finding: Finding) -> str:
    """One finding in one line."""
    where = str(finding.where)
    place = f"{where}  " if where else ""
    return clean(f"{WORD[finding.severity]}  {place}{finding.what}; {finding.do}")


def finding_lines(findings: Sequence[Finding]) -> tuple[str, ...]:
    """Each finding in a line of its own."""
    return tuple(finding_line(finding) for finding in findings)


def counted(findings: Sequence[Finding]) -> str:
    """How many there are, by word."""
    stops = sum(finding.severity is Severity.STOP for finding in findings)
    looks = sum(finding.severity is Severity.LOOK for finding in findings)
    return f"STOP {stops}  LOOK {looks}  note {len(findings) - stops - looks}"
