"""Two iterations compared, as a person reads it: one line that says it all, then the figures."""

from __future__ import annotations

import shlex
from collections.abc import Sequence

from ledger.mass.part_changes import ADDED, CHANGED, REMOVED
from ledger.model.comparison import (
    AttitudeChange,
    Comparison,
    EntryToMake,
    Pair,
    PartChange,
    TankChange,
    UnfitPiece,
)
from ledger.reports.change_words import cg_words, cost_in_built_work, signed, with_sign
from ledger.reports.fuel_lines import EACH_ITS_OWN
from ledger.reports.plain import aligned, clean, how_many
from ledger.units import Dimension, Display, Rounding, from_si, show, shown_number, shown_unit

CAUTION = "COMPUTED, for planning: a flow test decides; not approved weight and balance"
_PART_PLACES = 3
_SAME_M3 = 1e-9
_AXES = ("CG FS", "CG BL", "CG WL")
_INERTIAS = (
    ("Ixx", 0, 0), ("Iyy", 1, 1), ("Izz", 2, 2), ("Ixy", 0, 1), ("Ixz", 0, 2), ("Iyz", 1, 2),
)  # fmt: skip
_INERTIA_UNITS = {Display.METRIC: ("kg", "m"), Display.US: ("lb", "ft")}

Row = tuple[str, str, str, str, str]


def compare_lines(comparison: Comparison, book: str) -> tuple[str, ...]:
    """Everything `compare` prints, line by line; `book` is written into the commands it names."""
    display = comparison.plan_b.display
    fuel = comparison.fuel
    several = fuel is not None and len(fuel.tanks) > 1
    whole = () if fuel is None else _tank_lines(fuel.whole, comparison, display, together=several)
    tanks = fuel.tanks if fuel is not None and several else ()
    sections: list[tuple[str, ...]] = [
        (headline(comparison), CAUTION, *_preview_lines(comparison)),
        _figure_lines(comparison, display),
        *([whole] if whole else []),
        *(_tank_lines(tank, comparison, display) for tank in tanks),
        _part_lines(comparison, display),
        _unfit_lines(comparison, book, display),
    ]
    return tuple(
        line for number, lines in enumerate(sections) for line in (*(("",) if number else ()), *lines)
    )


def headline(comparison: Comparison) -> str:
    """What the second is for the first in one line: mass, CG, usable, and what it costs in built work."""
    display = comparison.plan_b.display
    unfit, moved = len(comparison.no_longer_fits), comparison.mass.cg_m.change
    gains = [
        "mass not known"
        if comparison.mass.now_kg.change is None
        else f"{signed(comparison.mass.now_kg.change, Dimension.MASS, display)}"
        f" {shown_unit(Dimension.MASS, display)}",
        "" if moved is None else cg_words(moved, display),
        _usable_words(comparison, display),
    ]
    built = f"   {cost_in_built_work(unfit)}" if unfit else ""
    return clean(f"{comparison.b} for {comparison.a}:  {'  '.join(filter(None, gains))}{built}")


def choice_lines(piece: UnfitPiece, book: str) -> tuple[str, ...]:
    """What can be done about one piece, as commands."""
    rows = []
    for choice in piece.choices:
        for number, entry in enumerate(choice.entries):
            rows.append((choice.choice if number == 0 else "", command_words(entry, book)))
    wide = max((len(words) for words, _ in rows), default=0)
    return tuple(clean(f"    {words:<{wide}}  {command}") for words, command in rows)


def command_words(entry: EntryToMake, book: str) -> str:
    """The command of an entry; what only the builder knows stands in capitals."""
    given = [shlex.quote(f"{word}={value}") for word, value in entry.fields]
    asked = [f"{word}={word.upper()}" for word in entry.asks]
    return " ".join(["wingledger enter", shlex.quote(book), entry.kind, *given, *asked])


def _plain_zero(text: str) -> str:
    return text.removeprefix("-") if float(text) == 0 else text


def _usable_words(comparison: Comparison, display: Display) -> str:
    fuel = comparison.fuel
    if fuel is None:
        return ""
    change = fuel.whole.usable_m3.change
    if change is None:
        return "usable not known"
    number = signed(change, Dimension.VOLUME, display)
    return f"usable {number} {shown_unit(Dimension.VOLUME, display)}"


def _preview_lines(comparison: Comparison) -> tuple[str, ...]:
    if comparison.adopted:
        return ()
    return (clean(f"PREVIEW: {comparison.b} is not adopted, nothing was written"),)


def _figure_lines(comparison: Comparison, display: Display) -> tuple[str, ...]:
    mass, unit = comparison.mass, shown_unit(Dimension.MASS, display)
    length = shown_unit(Dimension.LENGTH, display)
    rows = [
        _row(f"now {unit}", mass.now_kg, Dimension.MASS, display, "finished wing, the record as it stands"),
        _row(f"remade {unit}", mass.remade_kg, Dimension.MASS, display,
             "the same, all that does not fit made again as planned"),
        _row(f"estimated {unit}", mass.estimated_kg, Dimension.MASS, display, "design against design"),
    ]  # fmt: skip
    for axis, name in enumerate(_AXES):
        a, b = (None if place is None else place[axis] for place in (mass.cg_m.a, mass.cg_m.b))
        rows.append(_row(f"{name} {length}", Pair(a=a, b=b), Dimension.LENGTH, display))
    rows += _inertia_rows(comparison, display)
    fuel_words = _worth_line(comparison, display)
    heads = ("", comparison.a, comparison.b, "change", "")
    return (*aligned(heads, rows, right=(1, 2, 3)), *(() if fuel_words is None else (fuel_words,)))


def _inertia_rows(comparison: Comparison, display: Display) -> list[Row]:
    mass_unit, length_unit = _INERTIA_UNITS[display]
    scale = from_si(1.0, mass_unit, Dimension.MASS) * from_si(1.0, length_unit, Dimension.LENGTH) ** 2
    pair = comparison.mass.inertia_kg_m2
    rows = []
    for number, (name, row, column) in enumerate(_INERTIAS):
        a, b = (None if matrix is None else matrix[row][column] * scale for matrix in (pair.a, pair.b))
        told = ["-" if one is None else _plain_zero(f"{one:.2f}") for one in (a, b)]
        change = "-" if a is None or b is None else with_sign(_plain_zero(f"{b - a:.2f}"))
        words = "about the CG" if number == 0 else ""
        rows.append((f"{name} {mass_unit} {length_unit}2", *told, change, words))
    return [(row[0], row[1], row[2], row[3], row[4]) for row in rows]


def _worth_line(comparison: Comparison, display: Display) -> str | None:
    """What the saved mass is worth as fuel; nothing where none is saved that could be shown."""
    worth, density = comparison.saved_as_fuel_m3, comparison.fuel_density_kg_m3
    saved = signed(comparison.mass.now_kg.change, Dimension.MASS, display)
    if comparison.fuel is None or saved == "-" or float(saved) == 0:
        return None
    if worth is None or density is None:
        return "what the change of mass is worth as fuel is not known: [fuel] has no density_15C"
    grade = "fuel" if comparison.plan_b.fuel is None else comparison.plan_b.fuel.grade
    amount = show(abs(worth), Dimension.VOLUME, display, rounding=Rounding.DOWN if worth > 0 else Rounding.UP)
    if float(amount.split()[0]) == 0:
        return None
    verb = "the mass saved is that of" if worth >= 0 else "the mass added is that of"
    return clean(f"{verb} {amount} of {grade} at {show(density, Dimension.DENSITY, display)}")


def _tank_lines(
    tank: TankChange, comparison: Comparison, display: Display, *, together: bool = False
) -> tuple[str, ...]:
    words = f"COMPUTED, {EACH_ITS_OWN}" if together and _each_at_its_own(tank) else "COMPUTED"
    unit = shown_unit(Dimension.VOLUME, display)
    up, down = Rounding.UP, Rounding.DOWN
    rows = [
        _row(f"gross {unit}", tank.gross_m3, Dimension.VOLUME, display),
        _row(f"capacity {unit}", tank.capacity_m3, Dimension.VOLUME, display),
        _row(f"caught air {unit}", tank.caught_air_m3, Dimension.VOLUME, display, rounding=up),
        _row(f"usable {unit}", tank.usable_m3, Dimension.VOLUME, display, words, rounding=down),
    ]
    heads = ("", comparison.a, comparison.b, "change", "")
    remark = "" if tank.remark is None else f"  {tank.remark}"
    return (
        clean(f"FUEL, {tank.tank}{remark}"),
        *aligned(heads, rows, right=(1, 2, 3)),
        *_attitude_lines(tank.attitudes, comparison, display),
    )


def _each_at_its_own(whole: TankChange) -> bool:
    """Whether less is usable of all tanks than at any one attitude, under either plan."""
    flown = [attitude.usable_m3 for attitude in whole.attitudes if attitude.flight]
    for usable_m3, at_m3 in (
        (whole.usable_m3.a, [one.a for one in flown if one.a is not None]),
        (whole.usable_m3.b, [one.b for one in flown if one.b is not None]),
    ):
        if usable_m3 is not None and at_m3 and usable_m3 < min(at_m3) - _SAME_M3:
            return True
    return False


def _attitude_lines(
    attitudes: Sequence[AttitudeChange], comparison: Comparison, display: Display
) -> tuple[str, ...]:
    if not attitudes:
        return ()
    unit = shown_unit(Dimension.VOLUME, display)
    heads = (
        "attitude",
        f"trapped {unit} {comparison.a}",
        comparison.b,
        "change",
        f"usable {unit} {comparison.a}",
        comparison.b,
        "change",
        "",
    )
    rows = []
    for one in attitudes:
        trapped = _row("", one.trapped_m3, Dimension.VOLUME, display, rounding=Rounding.UP)
        usable = _row("", one.usable_m3, Dimension.VOLUME, display, rounding=Rounding.DOWN)
        remark = one.remark or ("" if one.flight else "not flown")
        rows.append((one.attitude, *trapped[1:4], *usable[1:4], remark))
    return aligned(heads, rows, right=range(1, 7))


def _row(
    name: str,
    pair: Pair,
    dimension: Dimension,
    display: Display,
    words: str = "",
    *,
    rounding: Rounding = Rounding.NEAREST,
) -> Row:
    a, b = (
        "-" if one is None else shown_number(one, dimension, display, rounding=rounding)
        for one in (pair.a, pair.b)
    )
    return (name, a, b, signed(pair.change, dimension, display), words)


def _part_lines(comparison: Comparison, display: Display) -> tuple[str, ...]:
    parts = comparison.mass.parts
    count = {word: sum(part.change == word for part in parts) for word in (REMOVED, ADDED, CHANGED)}
    head = (
        f"PARTS  {count[REMOVED]} out  {count[ADDED]} in  {count[CHANGED]} changed"
        f"  {comparison.mass.parts_same} same"
    )
    if not parts:
        return (head,)
    unit = shown_unit(Dimension.MASS, display)
    heads = ("part", "change", f"planned {unit} {comparison.a}", comparison.b, "change", "why")
    return (head, *aligned(heads, [_part_row(part, display) for part in parts], right=(2, 3, 4)))


def _part_row(part: PartChange, display: Display) -> tuple[str, ...]:
    pair = part.planned_kg
    a, b = (
        "-" if one is None else shown_number(one, Dimension.MASS, display, places=_PART_PLACES)
        for one in (pair.a, pair.b)
    )
    # A part in one plan only changes the wing by all it weighs there.
    change = pair.change
    if part.change in (ADDED, REMOVED):
        change = pair.b if pair.a is None else -pair.a
    shown = signed(change, Dimension.MASS, display, places=_PART_PLACES)
    return (part.part, part.change, a, b, shown, "; ".join(part.why))


def _unfit_lines(comparison: Comparison, book: str, display: Display) -> tuple[str, ...]:
    unfit = comparison.no_longer_fits
    again = comparison.fits_again
    stays = f"{how_many(len(comparison.stays), 'built piece')} stay{'s' * (len(comparison.stays) == 1)}"
    if again:
        stays += f", {len(again)} of them did not fit {comparison.a}: {', '.join(again)}"
    if comparison.on_hold:
        stays += f", {len(comparison.on_hold)} of them ON HOLD: {', '.join(comparison.on_hold)}"
    spare = ""
    if comparison.spare:
        spare = f"; {len(comparison.spare)} spare or kept for stock: {', '.join(comparison.spare)}"
    if not unfit:
        none = not comparison.stays and not spare
        return (clean("BUILT  nothing yet" if none else f"BUILT  {stays}, every one that counts{spare}"),)
    lines = [
        clean(
            f"BUILT  {stays}{spare}; {how_many(len(unfit), 'piece')} no longer fit{'s' * (len(unfit) == 1)}"
        )
    ]
    when = "as things stand" if comparison.adopted else "once the plan is adopted"
    lines.append(f"what can be done about each, {when}; after one is made, compare again")
    for piece in unfit:
        mass = "" if piece.best_kg is None else f"  {show(piece.best_kg, Dimension.MASS, display, places=3)}"
        lines += [
            "",
            clean(f"  {piece.piece}  {piece.number}  {piece.state}{mass}"),
            clean(f"    {piece.why}"),
        ]
        lines += choice_lines(piece, book)
    return tuple(lines)
