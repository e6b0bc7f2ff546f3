"""The fuel screen's figures in words: the column beside the drawing, openings by litres gained, the map."""

from __future__ import annotations

from collections.abc import Sequence

from rich.text import Text

from ledger.factors import from_si
from ledger.operations.look_at_tank import TankDrawn, TankNow
from ledger.operations.survey_tank import Gain, Rung
from ledger.reports.fuel_lines import behind, trapped_text, usable_text
from ledger.reports.plain import clean, shortened
from ledger.tui.room import Room
from ledger.units import Dimension, Display, Rounding, show, shown_number, shown_unit

_OUNCES_PER_GAL = 128.0
_MAP_NOSE = 8
_TRAPPED_ROWS = 4
_SOONER = "its top edge draws air sooner"
_SHORT_SOONER = "(its top draws air sooner)"


def small_volume(volume_m3: float | None, display: Display) -> str:
    """Millilitres, or US fluid ounces, of what a moved hole frees."""
    if volume_m3 is None:
        return "-"
    if display is Display.US:
        return f"{_OUNCES_PER_GAL * from_si(volume_m3, 'US gal', Dimension.VOLUME):.2f} fl oz"
    return f"{1e6 * volume_m3:.0f} mL"


def tilt_words(pitch_deg: float, roll_deg: float) -> tuple[str, str]:
    """`NOSE UP 12` and `ROLL LEFT 3`; level is a word too."""
    nose = (
        "NOSE level" if pitch_deg == 0.0 else f"NOSE {'UP' if pitch_deg > 0 else 'DOWN'} {abs(pitch_deg):g}"
    )
    roll = (
        "ROLL level" if roll_deg == 0.0 else f"ROLL {'RIGHT' if roll_deg > 0 else 'LEFT'} {abs(roll_deg):g}"
    )
    return nose, roll


def figures_text(drawn: TankDrawn, now: TankNow, display: Display, room: Room) -> Text:
    """What is in the tank, what stays in it and behind which hole, and what the tank holds."""
    rule = Text(room.lines.h * room.width)
    trapped = _trapped(drawn, now, display, room)
    # Where a reason needs a row of its own, it takes that of the rule: the column has none to spare.
    rows = [
        *_standing(now, display, room),
        rule,
        *trapped,
        *([rule] if len(trapped) == _TRAPPED_ROWS else []),
        *_holds(drawn, display, room),
    ]
    for row in rows:
        row.truncate(room.width)
    rows = rows[: room.height]
    return Text("\n").join([*rows, *[Text()] * (room.height - len(rows))])


def _standing(now: TankNow, display: Display, room: Room) -> list[Text]:
    attitude = now.asked.attitude
    nose, roll = tilt_words(attitude.pitch_deg, attitude.roll_deg)
    name = "as no attitude of the plan" if now.attitude is None else f'as "{clean(now.attitude)}"'
    pushed = [
        f"{word} {value:g} g"
        for word, value in (("ax", attitude.ax_g), ("ay", attitude.ay_g), ("az", attitude.az_g))
        if value
    ]
    mass = show(now.mass_kg, Dimension.MASS, display) if now.mass_kg is not None else "no density"
    held = show(now.asked.quantity_m3, Dimension.VOLUME, display)
    rows = [
        Text(f"{nose}{roll:>{max(1, room.width - len(nose))}}", style=room.signs.head),
        Text(shortened(f"{name}  {' '.join(pushed)}".rstrip(), room.width)),
        Text(
            _fitting(
                room.width, f"in tank {held:>9} {mass:>10}", f"in tank {held} {mass}", f"in {held}, {mass}"
            )
        ),
    ]
    if now.outlet_wl_m is None and now.cg_m is None:
        why = "empty" if now.asked.quantity_m3 <= 0.0 else "less than trapped: which"
        return [*rows, Text(why), Text("" if why == "empty" else "cell it is in is not known")]
    level = show(now.outlet_wl_m, Dimension.LENGTH, display)
    rows.append(Text("no level at an outlet" if now.outlet_wl_m is None else f"level WL {level} at outlet"))
    if now.cg_m is None:
        return [*rows, Text("CG not known")]
    fs, bl = (shown_number(value, Dimension.LENGTH, display) for value in now.cg_m[:2])
    return [*rows, Text(f"CG FS {fs} BL {bl} {shown_unit(Dimension.LENGTH, display)}")]


def _trapped(drawn: TankDrawn, now: TankNow, display: Display, room: Room) -> list[Text]:
    worst = now.worst
    head = Text("TRAPPED ", style=room.signs.trapped)
    head.append(trapped_text(now.trapped_m3, display), style="")
    if worst is None:
        return [head, Text("nothing stays at this tilt"), Text(), Text()]
    if worst.trapped_m3 is None:
        head.append("  STOP", style=room.signs.stop)
        return [
            head,
            Text(shortened(f"{worst.cell} holds {worst.pockets} pockets", room.width)),
            Text("not counted: see findings"),
            Text(),
        ]
    space = room.width - len(head.plain) - 1
    cell, most = clean(worst.cell), trapped_text(worst.trapped_m3, display)
    head.append(f" {_fitting(space, f'{cell} {most}', f'{cell} {most.split()[0]}', cell):>{space}}", style="")
    lower, wider = now.frees_lower_1mm_m3, now.frees_wider_10pc_m3
    moves = [Text("no hole to move frees it"), Text()]
    if lower is not None and wider is not None:
        moves = [Text(_worth("1 mm lower", lower, display)), Text(_worth("10 % wider", wider, display))]
        outlets = {mark.name for mark in drawn.marks if mark.sign == "out"}
        if wider < 0.0 and worst.opening in outlets:
            full = f"{moves[1].plain}: {_SOONER}"
            moves[1:] = [Text(full)] if len(full) <= room.width else [moves[1], Text(_SHORT_SOONER)]
    return [head, Text(shortened(behind(worst.trapped_by), room.width)), *moves]


def _worth(move: str, freed_m3: float, display: Display) -> str:
    return f"{move} {'frees' if freed_m3 >= 0.0 else 'costs'} {small_volume(abs(freed_m3), display)}"


def _holds(drawn: TankDrawn, display: Display, room: Room) -> list[Text]:
    fuel = drawn.fuel
    worst = "" if fuel.governing_attitude is None else f"worst at {clean(fuel.governing_attitude)}"
    capacity = show(fuel.capacity_m3, Dimension.VOLUME, display)
    air = f"  o {trapped_text(fuel.caught_air_m3, display)}" if fuel.caught_air_m3 else ""
    usable = usable_text(fuel.usable_m3, display)
    return [
        Text(_fitting(room.width, f"capacity {capacity:>9}{air}", f"capacity {capacity:>9}")),
        Text(_fitting(room.width, f"usable   {usable:>9}  COMPUTED", f"usable {usable} COMPUTED")),
        Text(shortened(worst, room.width)),
    ]


def _fitting(width: int, *choices: str) -> str:
    """The fullest that fits: a figure is left out whole, never cut."""
    return next((choice for choice in choices if len(choice) <= width), choices[-1])


def _short_nose(pitch_deg: float) -> str:
    return "level" if pitch_deg == 0.0 else f"{'up' if pitch_deg > 0.0 else 'down'} {abs(pitch_deg):g}"


def _short_roll(roll_deg: float) -> str:
    return "level" if roll_deg == 0.0 else f"{'right' if roll_deg > 0.0 else 'left'} {abs(roll_deg):g}"


def cell_line(now: TankNow, cell: str, display: Display) -> str:
    """The chosen cell in one line."""
    one = next((one for one in now.cells if one.cell == cell), None)
    if one is None:
        return ""
    full = "not known" if one.share is None else f"{100.0 * one.share:.0f} %"
    kept = trapped_text(one.trapped_m3, display)
    why = behind(one.trapped_by) if one.trapped_m3 is None or one.trapped_m3 > 0.0 else ""
    return clean(f"{cell} {full} full, traps {kept} {why}".rstrip())


def gains_text(gains: Sequence[Gain], display: Display, room: Room) -> Text:
    """Openings by what moving them would free at this tilt, the one worth most first."""
    rows = [Text("OPENINGS BY LITRES GAINED at this tilt", style=room.signs.head)]
    wide = max(12, room.width - 30)
    rows.append(Text(f"{'':<{wide}}{'1 mm lower':>14}{'10 % wider':>14}", style=room.signs.quiet))
    for gain in gains:
        name = shortened(f"{gain.opening}", wide - 1)
        lower, wider = (small_volume(value, display) for value in (gain.lower_1mm_m3, gain.wider_10pc_m3))
        rows.append(Text(f"{name:<{wide}}{lower:>14}{wider:>14}"))
    if not gains:
        rows.append(Text("no opening traps anything", style=room.signs.quiet))
    if any(gain.wider_10pc_m3 < 0.0 for gain in gains):
        why = "below 0: an outlet's top edge draws air sooner"
        rows = [*rows[: room.height - 1], Text(shortened(why, room.width), style=room.signs.quiet)]
    rows = rows[: room.height]
    return Text("\n").join([*rows, *[Text()] * (room.height - len(rows))])


def curve_text(curve: Sequence[Rung], now: TankNow, display: Display, room: Room) -> Text:
    """What the tank holds by the level at its outlet, full at the top; the row nearest to now is marked."""
    length, volume = shown_unit(Dimension.LENGTH, display), shown_unit(Dimension.VOLUME, display)
    rows = [Text(f"CURVE: {volume} in tank by WL {length} at outlet, this tilt", style=room.signs.head)]
    held = now.asked.quantity_m3
    here = min(curve, key=lambda rung: abs(rung.volume_m3 - held), default=None)
    most = max((rung.volume_m3 for rung in curve), default=0.0)
    space = max(4, room.width - 22)
    for rung in reversed(curve):
        marks = round(space * rung.volume_m3 / most)
        kept = min(marks, round(space * (now.trapped_m3 or 0.0) / most))
        level = shown_number(rung.outlet_wl_m, Dimension.LENGTH, display)
        litres = shown_number(rung.volume_m3, Dimension.VOLUME, display)
        row = Text().append(f"{'>' if rung is here else ' '}{level:>9} |", style="")
        row.append("#" * kept, style=room.signs.trapped).append("=" * (marks - kept), style=room.signs.fuel)
        row.append(f" {litres}", style=room.signs.mark if rung is here else "")
        rows.append(row)
    if not curve:
        rows.append(Text("no fuel leaves at this tilt", style=room.signs.quiet))
    for row in rows:
        row.truncate(room.width)
    rows = rows[: room.height]
    return Text("\n").join([*rows, *[Text()] * (room.height - len(rows))])


def map_text(
    pitches_deg: Sequence[float],
    rolls_deg: Sequence[float],
    trapped_m3: Sequence[Sequence[float | None]],
    *,
    most_m3: float,
    display: Display,
    room: Room,
) -> Text:
    """What stays in the tank at each nose and roll: `all` of it, or litres; the worst has the sign."""
    unit = shown_unit(Dimension.VOLUME, display)
    column = min(10, (room.width - _MAP_NOSE) // max(1, len(rolls_deg)))
    rows = [
        Text(f"MAP: trapped {unit} by nose and roll, COMPUTED", style=room.signs.head),
        Text(f"{'':<{_MAP_NOSE}}" + "".join(f"{_short_roll(roll):>{column}}" for roll in rolls_deg)),
    ]
    known = [value for line in trapped_m3 for value in line if value is not None]
    for pitch, line in zip(pitches_deg, trapped_m3, strict=True):
        row = Text(f"{_short_nose(pitch):<{_MAP_NOSE}}")
        for value in line:
            number = "pockets"
            if value is not None and value >= most_m3:
                number = "all"
            elif value is not None:
                number = shown_number(value, Dimension.VOLUME, display, rounding=Rounding.UP)
            worst = value is not None and value >= max(known) * (1.0 - 1e-9)
            row.append(
                f"{number + (' #' if worst else ''):>{column}}", style=room.signs.trapped if worst else ""
            )
        rows.append(row)
    rows.append(Text("# worst; the plan's attitudes decide usable", style=room.signs.quiet))
    for row in rows:
        row.truncate(room.width)
    rows = rows[: room.height]
    return Text("\n").join([*rows, *[Text()] * (room.height - len(rows))])
