"""A trace as a person reads it: what the thing is, what it came from, and everywhere it is now."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterator

from ledger.mass.trace import Trace, TraceLink
from ledger.reports.plain import aligned, clean
from ledger.units import Display, show_small_mass

_INDENT = "  "
_GOES_INTO_PIECES = ("material", "lot", "sheet", "offcut", "batch")


def trace_lines(trace: Trace, display: Display) -> tuple[str, ...]:
    """Everything `trace` prints, line by line; what is further away stands further in."""
    state = trace.state.upper() if trace.state in ("on hold", "scrapped", "expired") else trace.state
    return (
        clean(f"{trace.what}  {trace.kind}  {state}"),
        *pieces_lines(trace),
        "",
        *_side("MADE FROM", trace.made_from, "made_from", display),
        "",
        *_side("WENT INTO", trace.went_into, "went_into", display),
        "",
        f"entries  {', '.join(str(seq) for seq in trace.entries) or 'none'}",
    )


def pieces_lines(trace: Trace) -> tuple[str, ...]:
    """In how many pieces it is by now, near or far, and how they stand; none for what goes into no piece."""
    states = {link.what: link.state for link in _all_links(trace.went_into) if link.kind == "piece"}
    if not states:
        return ("in no piece yet",) if trace.kind in _GOES_INTO_PIECES else ()
    told = Counter(states.values())
    if len(states) == 1:
        return (f"in 1 piece, {next(iter(told))}",)
    return (f"in {len(states)} pieces: {', '.join(f'{many} {state}' for state, many in told.most_common())}",)


def _all_links(links: tuple[TraceLink, ...]) -> Iterator[TraceLink]:
    for link in links:
        yield link
        yield from _all_links(link.went_into)


def _side(head: str, links: tuple[TraceLink, ...], way: str, display: Display) -> tuple[str, ...]:
    rows = _rows(links, way, display, 1)
    if not rows:
        return (head, f"{_INDENT}nothing in the record")
    return aligned((head, "kind", "how", "used", "now"), rows, right=(3,))


def _rows(
    links: tuple[TraceLink, ...], way: str, display: Display, depth: int
) -> list[tuple[str, str, str, str, str]]:
    rows = []
    for link in links:
        mass = show_small_mass(link.mass_kg, display)
        rows.append((f"{_INDENT * depth}{link.what}", link.kind, link.how, mass, link.state))
        rows += _rows(link.made_from if way == "made_from" else link.went_into, way, display, depth + 1)
    return rows
