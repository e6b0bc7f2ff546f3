"""Cups in large print: a line each, and in which order where not all have room."""

from __future__ import annotations

from collections.abc import Sequence

from ledger.operations.clock_cups import Cup


def large_cup(cup: Cup) -> str:
    """`B031 11 min`, `B029 past 4`, `B030 out`, `B028 empty`."""
    if cup.out or cup.held:
        return f"{cup.number} {'out' if cup.out else 'hold'}"
    if cup.minutes_left is None:
        return cup.number
    if cup.past:
        return f"{cup.number} past {int(-cup.minutes_left)}"
    return f"{cup.number} {int(cup.minutes_left)} min" if cup.has_some else f"{cup.number} empty"


def cups_by_urgency(cups: Sequence[Cup], rows: int) -> tuple[Cup, ...]:
    """Running cups, then those not to be used, then empty ones; of the unfit the first keeps a large row."""
    running = [cup for cup in cups if not cup.unfit and cup.has_some]
    unfit = [cup for cup in cups if cup.unfit]
    empty = [cup for cup in cups if not cup.unfit and not cup.has_some]
    before = running[: max(1, rows - 1)] if unfit else running
    return (*before, *unfit, *running[len(before) :], *empty)
