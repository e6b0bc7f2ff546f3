"""What stands below an open slip: what others changed, what to pour, what the ply needs."""

from __future__ import annotations

from datetime import datetime

from ledger.operations.clock_cups import Cup
from ledger.operations.plan_pour import plan_pour
from ledger.operations.propose_entry import covering
from ledger.operations.take_stock import Stock
from ledger.tui.slip import Slip

Foot = tuple[tuple[str, str], ...]

# They are about the cup itself, and use nothing of it.
_ABOUT_CUPS = frozenset({"mix", "hold", "release", "scrap", "note"})


def foot_of(slip: Slip, stock: Stock | None, cups: tuple[Cup, ...], now: datetime) -> Foot:
    """Lines under the fields, each with its sign."""
    lines = [
        ("LOOK", f"{change.by} {change.at.astimezone(now.tzinfo):%H:%M}: {change.says}")
        for change in slip.changes[-2:]
    ]
    if slip.changes:
        lines.append(("", "type looked (or scan its tag) before it is logged"))
    if slip.kind == "mix" and stock is not None:
        advice = plan_pour(stock, slip.values)
        if advice is not None:
            lines.append((advice.sign, advice.says))
    return (*lines, *_unfit_cups(slip, cups), *_ply_foot(slip, cups))


def named_cups(slip: Slip) -> frozenset[str]:
    """The numbers of the cups that stand in a slip."""
    texts = (slip.value("batches"), slip.value("batch"))
    return frozenset(part.split()[0].upper() for text in texts for part in text.split(";") if part.strip())


def _unfit_cups(slip: Slip, cups: tuple[Cup, ...]) -> Foot:
    if slip.kind in _ABOUT_CUPS:
        return ()
    lines = []
    named = named_cups(slip)
    for cup in cups:
        if cup.unfit and cup.number.upper() in named:
            why = "out of ratio" if cup.out else "on hold" if cup.held else "past its pot life"
            lines.append(("STOP", f"{cup.number} is {why}: use another"))
    return tuple(lines)


def _ply_foot(slip: Slip, cups: tuple[Cup, ...]) -> Foot:
    ply = slip.ply
    if ply is None or ply.step is None:
        return ()
    lines: list[tuple[str, str]] = []
    named = named_cups(slip)
    chosen = tuple(cup for cup in cups if cup.number.upper() in named)
    if ply.needs_kg:
        short = sum(max(0.0, cup.left_kg or 0.0) for cup in chosen) < ply.needs_kg
        unfit = any(cup.unfit for cup in chosen)
        sign = "STOP" if unfit else "LOOK" if short else "ok"
        lines.append((sign, covering(ply.needs_kg, chosen)))
    laid = 1000 * ply.resin_laid_kg
    planned = "" if ply.resin_planned_kg is None else f"   {1000 * ply.resin_planned_kg:.0f} g in the plan"
    lines.append(("", f"resin  {laid:.0f} g laid{planned}"))
    figures = [
        f"{value:.2f} kg {word}"
        for value, word in ((ply.calculated_kg, "calc"), (ply.estimated_kg, "est"))
        if value is not None
    ]
    if figures:
        lines.append(("", f"piece  {'   '.join(figures)}"))
    return tuple(lines)
