"""What one plan changes about the parts of another, with why in words and figures."""

from __future__ import annotations

import math
from collections.abc import Iterator, Mapping

from ledger.mass.plan_index import PlanIndex
from ledger.model.comparison import Pair, PartChange
from ledger.model.plan import Form, Laminate, Material, Part, Plan, Shape, Step
from ledger.model.vectors import Vector
from ledger.units import Dimension, Display, show, shown_number

ADDED, REMOVED, CHANGED = "added", "removed", "changed"

_MEASURED = {
    Form.PANEL: ("area", Dimension.AREA),
    Form.SKIN: ("area", Dimension.AREA),
    Form.SOLID: ("volume", Dimension.VOLUME),
    Form.RUN: ("length", Dimension.LENGTH),
}
# Less than these is not seen in the figures as they are shown: 0.1 mm and 0.1 %.
_MOVED_M = 5e-5
_GREW = 5e-4
_WAYS = (("aft", "forward"), ("right", "left"), ("up", "down"))
# What of a material enters a mass.
_FIGURES = (
    ("areal_mass_kg_m2", "areal mass", Dimension.AREAL_MASS),
    ("density_kg_m3", "density", Dimension.DENSITY),
    ("thickness_m", "thickness", Dimension.LENGTH),
    ("linear_mass_kg_m", "mass per length", Dimension.LINEAR_MASS),
    ("resin_uptake_kg_m2", "resin uptake", Dimension.AREAL_MASS),
)


def part_changes(
    a: Plan, b: Plan, now_a: Mapping[str, float | None], now_b: Mapping[str, float | None]
) -> tuple[PartChange, ...]:
    """The parts that plan `b` leaves out, changes or adds, in the order of the plans.

    now_a, now_b : the best mass of each part's pieces in kg under either plan, with the record as it stands.
    """
    index_a, index_b = PlanIndex(a), PlanIndex(b)
    found = []
    for name in dict.fromkeys((*index_a.parts, *index_b.parts)):
        part_a, part_b = index_a.parts.get(name), index_b.parts.get(name)
        why = tuple(_why(part_a, part_b, index_a, index_b))
        shown = part_b or part_a
        if why and shown is not None:
            found.append(
                PartChange(
                    part=name,
                    title=shown.title,
                    change=REMOVED if part_b is None else ADDED if part_a is None else CHANGED,
                    planned_kg=Pair(a=_planned_kg(part_a, index_a), b=_planned_kg(part_b, index_b)),
                    now_kg=Pair(a=now_a.get(name), b=now_b.get(name)),
                    why=why,
                )
            )
    return tuple(found)


def why_changed(part: str, a: PlanIndex, b: PlanIndex) -> tuple[str, ...]:
    """What plan `b` changes about the shape, place or make of a part that both have."""
    one, other = a.parts.get(part), b.parts.get(part)
    if one is None or other is None:
        return ()
    display = b.plan.display
    return (
        *_shape_words(one, other, a.shapes.get(part), b.shapes.get(part), display),
        *_made_of_words(one, other, a, b, display),
    )


def _planned_kg(part: Part | None, index: PlanIndex) -> float | None:
    nominal = None if part is None else index.nominal(part.name)
    if part is None or nominal is None or nominal.estimated_kg is None:
        return None
    return part.quantity * nominal.estimated_kg


def _why(a: Part | None, b: Part | None, index_a: PlanIndex, index_b: PlanIndex) -> Iterator[str]:
    display = index_b.plan.display
    if b is None:
        yield f"not in {index_b.plan.name}"
    elif a is None:
        yield _as_new(b, index_b, display)
    else:
        yield from _shape_words(a, b, index_a.shapes.get(a.name), index_b.shapes.get(b.name), display)
        yield from _made_of_words(a, b, index_a, index_b, display)
        yield from _count_words(a, b, display)
        yield from _kept_plan_words(a, b, index_a, index_b)
        yield from _home_words(a, b)


def _as_new(part: Part, index: PlanIndex, display: Display) -> str:
    shape, measured = index.shapes.get(part.name), _MEASURED.get(part.form)
    size = "" if shape is None or measured is None else f" {show(shape.measure, measured[1], display)}"
    made_of = "" if part.made_of is None else f" of {part.made_of}"
    count = "" if part.quantity == 1 else f", {part.quantity} pieces"
    return f"{part.form.value}{size}{made_of}{count}"


def _shape_words(a: Part, b: Part, was: Shape | None, now: Shape | None, display: Display) -> Iterator[str]:
    if a.form is not b.form:
        yield f"{b.form.value}, was {a.form.value}"
        return
    if was is None or now is None or was.digest == now.digest:
        return
    said = False
    measured = _MEASURED.get(b.form)
    if measured is not None and abs(now.measure - was.measure) > _GREW * was.measure:
        yield f"{measured[0]} {_percent(was.measure, now.measure)}"
        said = True
    moved = moved_words(was.centroid_m, now.centroid_m, display)
    if moved is not None:
        yield f"middle {moved}" if said else f"placed {moved}"
        said = True
    if a.face is not b.face:
        yield f"drawn on {b.face.value}, was {a.face.value}"
        said = True
    if not said:
        # The same size about the same middle, as far as figures show: the outline, or the way it is turned.
        yield "outline or direction" if measured is not None else "place"


def moved_words(was: Vector, now: Vector, display: Display) -> str | None:
    """`40.0 mm aft, 3.0 mm up`; None for less than can be made."""
    moves = [
        (new - old, ways) for old, new, ways in zip(was, now, _WAYS, strict=True) if abs(new - old) > _MOVED_M
    ]
    if not moves:
        return None
    return ", ".join(
        f"{show(abs(move), Dimension.LENGTH, display)} {ways[0] if move > 0 else ways[1]}"
        for move, ways in moves
    )


def _made_of_words(
    a: Part, b: Part, index_a: PlanIndex, index_b: PlanIndex, display: Display
) -> Iterator[str]:
    if a.made_of != b.made_of:
        yield f"of {b.made_of or 'nothing named'}, was {a.made_of or 'nothing named'}"
        return
    if b.made_of is None:
        return
    was, now = index_a.laminates.get(b.made_of), index_b.laminates.get(b.made_of)
    if was is not None and now is not None and was != now:
        yield f"laminate {b.made_of}: {'; '.join(_laminate_words(was, now, display))}"
    for name in _materials_of(b.made_of, now):
        before, after = index_a.materials.get(name), index_b.materials.get(name)
        if before is not None and after is not None:
            yield from (f"{name}: {words}" for words in _material_words(before, after, display))


def _laminate_words(a: Laminate, b: Laminate, display: Display) -> Iterator[str]:
    if a.areal_mass_kg_m2 != b.areal_mass_kg_m2:
        now, was = (
            "steps" if one is None else show(one, Dimension.AREAL_MASS, display)
            for one in (b.areal_mass_kg_m2, a.areal_mass_kg_m2)
        )
        yield f"{now}, was {was}"
    steps_a, steps_b = ({step.number: step for step in laminate.steps} for laminate in (a, b))
    for number in sorted({*steps_a, *steps_b}):
        was_step, now_step = steps_a.get(number), steps_b.get(number)
        if was_step == now_step:
            continue
        if now_step is None:
            yield f"step {number} gone"
        elif was_step is None:
            yield f"step {number} {_step_words(now_step)} added"
        else:
            yield f"step {number} {_step_words(now_step)}, was {_step_words(was_step)}"


def _step_words(step: Step) -> str:
    words = step.material
    if step.orientation_deg is not None:
        words += f" at {step.orientation_deg:g} deg"
    if step.coverage != 1.0:
        words += f" over {100 * step.coverage:g} %"
    if step.resin_fraction is not None:
        words += f" {100 * step.resin_fraction:g} % resin"
    return words


def _materials_of(made_of: str, laminate: Laminate | None) -> tuple[str, ...]:
    if laminate is None:
        return (made_of,)
    return tuple(dict.fromkeys(step.material for step in laminate.steps))


def _material_words(a: Material, b: Material, display: Display) -> Iterator[str]:
    if a.kind is not b.kind:
        yield f"{b.kind.value}, was {a.kind.value}"
    for key, words, dimension in _FIGURES:
        was, now = getattr(a, key), getattr(b, key)
        if was != now:
            yield f"{words} {_figure(now, dimension, display)}, was {_figure(was, dimension, display)}"


def _figure(value: float | None, dimension: Dimension, display: Display) -> str:
    return "not given" if value is None else show(value, dimension, display)


def _count_words(a: Part, b: Part, display: Display) -> Iterator[str]:
    if a.quantity != b.quantity:
        yield f"{b.quantity} piece{'' if b.quantity == 1 else 's'}, was {a.quantity}"
    was, now = a.planned_mass_kg, b.planned_mass_kg
    if was != now:
        told = [
            "not planned" if one is None else f"{shown_number(one, Dimension.MASS, display, places=3)}"
            for one in (now, was)
        ]
        yield f"planned mass {told[0]}, was {told[1]}"


def _kept_plan_words(a: Part, b: Part, index_a: PlanIndex, index_b: PlanIndex) -> Iterator[str]:
    """A planned mass left as it was hides what a new outline or laminate does."""
    if b.planned_mass_kg is None or b.form is Form.ITEM or a.planned_mass_kg != b.planned_mass_kg:
        return
    was, now = index_a.nominal(a.name), index_b.nominal(b.name)
    if was is None or now is None or not was.mass_kg or now.mass_kg is None:
        return
    if abs(now.mass_kg - was.mass_kg) > _GREW * was.mass_kg:
        gives = _percent(was.mass_kg, now.mass_kg)
        yield f"its planned mass stays, though geometry and materials give {gives}"


def _home_words(a: Part, b: Part) -> Iterator[str]:
    for words, now, was in (
        ("side", b.side.value, a.side.value),
        ("in", b.assembly or "no assembly", a.assembly or "no assembly"),
        ("class", b.part_class.value, a.part_class.value),
        ("mirror of", b.mirror_of or "none", a.mirror_of or "none"),
    ):
        if now != was:
            yield f"{words} {now}, was {was}"


def _percent(was: float, now: float) -> str:
    if was <= 0.0 or not math.isfinite(now / was):
        return "changed"
    return f"{100 * (now / was - 1):+.1f} %"
