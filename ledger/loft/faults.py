"""What is wrong with a layout, found by its geometry, at the line that says it."""

from __future__ import annotations

from ledger.errors import Finding, Severity, Where


def stop(place: Where, code: str, what: str, do: str) -> Finding:
    """A fault that holds back the whole plan."""
    return Finding(code=code, severity=Severity.STOP, where=place, what=what, do=do)


def millimetres(length_m: float) -> str:
    """A length as a message shows it."""
    return f"{1000.0 * length_m:.1f} mm"
