"""Both plans from above, webs, ribs and cells in outline, and what is trapped and usable at each attitude."""

from __future__ import annotations

from itertools import pairwise

from rich.text import Text

from ledger.model.comparison import AttitudeChange, Comparison
from ledger.operations.outline_plan import FromAbove
from ledger.reports.change_words import signed
from ledger.reports.plain import shortened
from ledger.tui.bench_drawing import filled
from ledger.tui.fuel_section import Scale, draw_wall, scale_for
from ledger.tui.iterations_figures import in_sight, padded, with_unit
from ledger.tui.room import Room
from ledger.units import Dimension, Display, Rounding, shown_number, shown_unit

_FIGURE = 8
Point = tuple[float, float]


def plans_scale(plans: tuple[FromAbove, ...], width: int, height: int) -> Scale | None:
    """One scale for all of them, so that what moved is seen to have moved; None with nothing to draw."""
    corners = [point for plan in plans for line in (*plan.panels, *plan.cells) for point in line]
    if not corners:
        return None
    us, ws = [bl for _, bl in corners], [-fs for fs, _ in corners]
    return scale_for((min(us), min(ws)), (max(us), max(ws)), width, height)


def plan_from_above_text(name: str, plan: FromAbove, scale: Scale | None, room: Room) -> Text:
    """One plan, nose to the top, the left wing at the left."""
    head = Text(shortened(f"{name} FROM ABOVE, nose to the top", room.width), style=room.signs.head)
    if scale is None or not (plan.panels or plan.cells):
        return filled([head, Text("no panel and no cell to draw", style=room.signs.quiet)], room.height)
    if scale.stretch > 1.05:
        head.append(f"   fore and aft drawn {scale.stretch:.1f} times", style=room.signs.quiet)
        head.truncate(room.width)
    canvas = [[" "] * room.width for _ in range(room.height - 1)]
    for line in plan.cells:
        _draw(canvas, (*line, *line[:1]), scale, ":")
    for line in plan.panels:
        _draw(canvas, line, scale, "")
    return filled([head, *(Text("".join(row)) for row in canvas)], room.height)


def attitudes_text(compared: Comparison, at: int, display: Display, room: Room) -> Text:
    """Trapped and usable at each attitude under both; a worse figure of the newer one says so in a word."""
    a, b = shortened(compared.a, _FIGURE - 1), shortened(compared.b, _FIGURE - 1)
    litres = shown_unit(Dimension.VOLUME, display)
    rows = compared.fuel.whole.attitudes if compared.fuel is not None else ()
    shown = in_sight(len(rows), at if room.here else 0, room.height - 2)
    more = f" {shown.start + 1}-{shown.stop}/{len(rows)}" if len(shown) < len(rows) else ""
    name = max(10, room.width - 6 * _FIGURE - 8)
    lead = f"{'> ' if room.here else ''}ATTITUDES{more}"
    heads = [
        Text(f"{padded(lead, name)}{f'TRAPPED {litres}':>{3 * _FIGURE}}{f'USABLE {litres}':>{3 * _FIGURE}}"),
        Text(" " * name + "".join(f"{word:>{_FIGURE}}" for word in (a, b, "change", a, b, "change"))),
    ]
    for head in heads:
        head.stylize(room.signs.head)
    lines = list(heads)
    for place in shown:
        one = rows[place]
        mark = ">" if room.here and place == at else " "
        line = Text(f"{mark}{padded(one.attitude, name - 1)}{_both(one, display)}")
        worse = one.usable_m3.change is not None and one.usable_m3.change < -1e-9
        line.append("  LESS" if worse else "  turned" if one.remark else "", style=room.signs.look)
        line.truncate(room.width)
        lines.append(line)
    if not rows:
        lines.append(Text("no tank in either plan", style=room.signs.quiet))
    return filled(lines, room.height)


def attitude_words(one: AttitudeChange, display: Display) -> str:
    """One attitude at length, for the message lines."""
    flown = "flown" if one.flight else "not flown"
    trapped = with_unit(one.trapped_m3.change, Dimension.VOLUME, display)
    return f"{one.attitude}, {flown}: trapped {trapped}{'; ' + one.remark if one.remark else ''}"


def _both(one: AttitudeChange, display: Display) -> str:
    told = []
    for pair, rounding in ((one.trapped_m3, Rounding.UP), (one.usable_m3, Rounding.DOWN)):
        told += [
            "-" if value is None else shown_number(value, Dimension.VOLUME, display, rounding=rounding)
            for value in (pair.a, pair.b)
        ]
        told.append(signed(pair.change, Dimension.VOLUME, display))
    return "".join(f"{text:>{_FIGURE}}" for text in told)


def _draw(canvas: list[list[str]], line: tuple[Point, ...], scale: Scale, sign: str) -> None:
    layer = canvas if not sign else [[" "] * len(canvas[0]) for _ in canvas]
    for (fs0, bl0), (fs1, bl1) in pairwise(line):
        draw_wall(layer, (bl0, -fs0, bl1, -fs1), scale)
    if sign:
        for row, drawn in zip(canvas, layer, strict=True):
            for column, character in enumerate(drawn):
                if character != " " and row[column] == " ":
                    row[column] = sign
