"""What is wrong with a layout, at the line that says it, and where long work may be ended."""

from __future__ import annotations

from collections.abc import Callable

from ledger.errors import Finding, Severity, Where

# Called between two pieces of long work: what it raises ends the work.
Tick = Callable[[], None]


def stop(place: Where, code: str, what: str, do: str) -> Finding:
    """A fault that holds back the whole plan."""
    return Finding(code=code, severity=Severity.STOP, where=place, what=what, do=do)


def millimetres(length_m: float) -> str:
    """A length as a message shows it."""
    return f"{1000.0 * length_m:.1f} mm"
