"""The weights as a person reads them: totals, what is off plan and why, every part."""

from __future__ import annotations

from ledger.mass.report import CAUSES, CauseMass, PartMass, TotalMass, WeightReport
from ledger.model.vectors import Vector
from ledger.reports.plain import aligned, clean
from ledger.units import Dimension, Display, show, shown_number, shown_unit

CAUTION = "for planning: not approved weight and balance"
_PART_PLACES = 3
_NOT_COUNTED = ("scrapped", "spare")


def weight_lines(report: WeightReport, display: Display, title: str = "") -> tuple[str, ...]:
    """Everything `weights` prints, line by line."""
    heading = clean(f"WEIGHTS  iteration {report.iteration}  {title}".rstrip())
    return (
        heading,
        CAUTION,
        "",
        *total_lines(report.total, display),
        "",
        *cause_lines(report.off_plan, display),
        "",
        *_part_lines(report.parts, display),
    )


def total_lines(total: TotalMass, display: Display) -> tuple[str, ...]:
    """The wing as a whole; totals of calculated and weighed cover only what exists, so they say so."""

    def mass(value_kg: float | None) -> str:
        return show(value_kg, Dimension.MASS, display)

    rows = (
        ("now", mass(total.best_kg), f"+- {mass(total.best_u_kg)} (one standard uncertainty)"),
        ("estimated", mass(total.estimated_kg), "from the plan, all parts"),
        ("calculated", mass(total.calculated_kg), "what has begun only"),
        ("weighed", mass(total.actual_kg), f"{_percent(total.share_actual)} of the mass now"),
        ("built", mass(total.built_kg), "what exists today"),
        ("CG", _place(total.cg_m, display), "station, butt line, water line"),
    )
    shares = (
        f"known by  A weighed {_percent(total.share_actual)}"
        f"  C calculated {_percent(total.share_calculated)}"
        f"  E estimated {_percent(total.share_estimated)}"
    )
    label = max(len(row[0]) for row in rows)
    figure = max(len(row[1]) for row in rows[:-1])
    return (
        *(f"{name:<{label}}  {value:>{figure}}  {words}" for name, value, words in rows[:-1]),
        f"{'CG':<{label}}  {rows[-1][1]}",
        shares,
    )


def cause_lines(off_plan: tuple[CauseMass, ...], display: Display) -> tuple[str, ...]:
    """Off plan by cause, and their sum: now less estimated."""
    by_cause = {one.cause: one.mass_kg for one in off_plan}
    rows = [
        (cause.replace("_", ", "), signed_mass(by_cause[cause], display))
        for cause in CAUSES
        if cause in by_cause
    ]
    rows.append(("in all", signed_mass(sum(by_cause.values()), display)))
    unit = shown_unit(Dimension.MASS, display)
    return aligned(("OFF PLAN BY CAUSE", unit), rows, right=(1,))


def signed_mass(mass_kg: float, display: Display) -> str:
    """A change of mass with its sign; a change too small to show has none."""
    text = shown_number(mass_kg, Dimension.MASS, display, places=_PART_PLACES)
    return text if text.startswith("-") or float(text) == 0 else f"+{text}"


def _part_lines(parts: tuple[PartMass, ...], display: Display) -> tuple[str, ...]:
    if not parts:
        return ("no parts in the plan",)
    mass, area = shown_unit(Dimension.MASS, display), shown_unit(Dimension.AREA, display)
    heads = (
        "part",
        "class",
        "pieces",
        "state",
        "by",
        f"estimated {mass}",
        "calculated",
        "weighed",
        "now",
        "+-",
        "off plan",
        f"area {area}",
    )
    rows = [_part_row(part, display) for part in parts]
    return aligned(heads, rows, right=range(5, len(heads)))


def _part_row(part: PartMass, display: Display) -> tuple[str, ...]:
    def mass(value_kg: float | None) -> str:
        if value_kg is None:
            return "-"
        return shown_number(value_kg, Dimension.MASS, display, places=_PART_PLACES)

    begun = sum(piece.state not in ("planned", "scrapped") for piece in part.pieces)
    return (
        part.part,
        part.part_class.value,
        f"{begun}/{part.quantity}",
        part.state,
        "".join(sorted({piece.known_by for piece in part.pieces if piece.state not in _NOT_COUNTED})) or "-",
        mass(part.estimated_kg),
        mass(part.calculated_kg),
        mass(part.actual_kg),
        mass(part.best_kg),
        mass(part.best_u_kg),
        "-" if part.best_kg is None else signed_mass(sum(one.mass_kg for one in part.off_plan), display),
        "-" if part.area_m2 is None else shown_number(part.area_m2, Dimension.AREA, display),
    )


def _place(cg_m: Vector | None, display: Display) -> str:
    if cg_m is None:
        return "-"
    return "   ".join(
        f"{axis} {show(value, Dimension.LENGTH, display)}"
        for axis, value in zip(("FS", "BL", "WL"), cg_m, strict=True)
    )


def _percent(share: float) -> str:
    return f"{100 * share:.0f} %"
