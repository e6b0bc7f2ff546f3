"""All iterations over time: a row each, and best mass and usable fuel as a chart in characters."""

from __future__ import annotations

from collections.abc import Sequence

from rich.text import Text

from ledger.operations.look_at_iterations import Moment
from ledger.reports.plain import shortened, width_of
from ledger.tui.bench_drawing import filled
from ledger.tui.iterations_figures import in_sight, padded
from ledger.tui.room import Room
from ledger.units import Dimension, Display, Rounding, shown_number, shown_unit

MASS, FUEL, BOTH = "*", "u", "%"
_COLUMN = 7
_LEAST_APART = 2
_LABEL = 7


def history_text(moments: Sequence[Moment], at: int, display: Display, room: Room) -> Text:
    """Date adopted, name, estimated, best, forecast and usable; a figure that does not exist is `-`."""
    name = max(6, room.width - 8 - 4 * _COLUMN)
    kg, litres = shown_unit(Dimension.MASS, display), shown_unit(Dimension.VOLUME, display)
    lead = f"{'> ' if room.here else ''}OVER TIME {kg}, {litres.removeprefix('US ')}"
    heads = ("estim.", "best", "forec.", "usable")
    head = f"{lead:<{8 + name}}{''.join(f'{word:>{_COLUMN}}' for word in heads)}"
    rows = [Text(head[: room.width], style=room.signs.head)]
    # The newest stand below, and are what shows where there is no room for all.
    last = len(moments) - 1
    for place in in_sight(len(moments), at if room.here else last, room.height - 1):
        one = moments[place]
        mark = ">" if room.here and place == at else " "
        row = Text(f"{mark}{one.at:%d %b} {padded(one.name, name)}")
        if one.withdrawn:
            row.append("withdrawn".rjust(4 * _COLUMN), style=room.signs.quiet)
        else:
            row.append(_figures(one, display))
        if mark == ">":
            row.stylize(room.signs.mark)
        row.truncate(room.width)
        rows.append(row)
    return filled(rows, room.height)


def moment_words(one: Moment) -> str:
    """One iteration at length, for the message lines."""
    state = f"withdrawn; it was entry {one.seq}" if one.withdrawn else f"entry {one.seq}"
    return f"{one.name}, {one.title}: adopted {one.at:%Y-%m-%d %H:%M} by {one.by}, {state}"


def chart_text(moments: Sequence[Moment], display: Display, room: Room) -> Text:
    """Best mass and usable fuel, each from its least to its most; equal places are one sign for both."""
    shown = [one for one in moments if not one.withdrawn]
    kg, litres = shown_unit(Dimension.MASS, display), shown_unit(Dimension.VOLUME, display)
    head = f"{MASS} best {kg}   {FUEL} usable {litres}"
    if room.width > 48:
        head += f"   {BOTH} both"
    rows = [Text(shortened(head, room.width), style=room.signs.head)]
    down, across = room.height - 1, room.width - 2 * _LABEL - 2
    if across < 4 or down < 2 or not shown:
        return filled(rows, room.height)
    masses, fuels = [one.best_kg for one in shown], [one.usable_m3 for one in shown]
    places = _places(shown, across)
    canvas = [[" "] * across for _ in range(down)]
    for values, sign in ((masses, MASS), (fuels, FUEL)):
        for column, row in zip(places, _rows(values, down), strict=True):
            if row is not None:
                there = canvas[row][column]
                canvas[row][column] = sign if there in (" ", sign) else BOTH
    left = _labels([_mass(value, display) for value in masses], masses, down)
    right = _labels([_usable(value, display) for value in fuels], fuels, down)
    for row in range(down):
        line = Text(f"{left[row]:>{_LABEL}}{room.lines.v}")
        for sign in canvas[row]:
            line.append(
                sign, style=room.signs.fuel if sign == FUEL else room.signs.head if sign != " " else ""
            )
        line.append(f"{room.lines.v}{right[row]:<{_LABEL}}", style="")
        rows.append(line)
    return filled(rows, room.height)


def _figures(one: Moment, display: Display) -> str:
    masses = [_mass(value, display) for value in (one.estimated_kg, one.best_kg, one.forecast_kg)]
    return "".join(f"{text:>{_COLUMN}}" for text in (*masses, _usable(one.usable_m3, display)))


def _mass(value: float | None, display: Display) -> str:
    return "-" if value is None else shown_number(value, Dimension.MASS, display)


def _usable(value: float | None, display: Display) -> str:
    if value is None:
        return "-"
    return shown_number(value, Dimension.VOLUME, display, rounding=Rounding.DOWN)


def _places(moments: Sequence[Moment], across: int) -> list[int]:
    """Columns by date; those of one day are set apart so that each can be seen."""
    if len(moments) == 1:
        return [across // 2]
    first = moments[0].at
    span = (moments[-1].at - first).total_seconds()
    room = across - 1
    apart = min(_LEAST_APART, room // (len(moments) - 1))
    if apart < 1:
        # More iterations than columns: order is all that can be drawn.
        return [round(room * place / (len(moments) - 1)) for place in range(len(moments))]
    spare = room - apart * (len(moments) - 1)
    return [
        place * apart + round(spare * ((one.at - first).total_seconds() / span if span > 0 else 0.0))
        for place, one in enumerate(moments)
    ]


def _rows(values: Sequence[float | None], down: int) -> list[int | None]:
    """Row of each value, the most on top; where all are the same they stand in the middle."""
    known = [value for value in values if value is not None]
    if not known:
        return [None] * len(values)
    low, high = min(known), max(known)
    if high - low <= 1e-9 * max(1.0, abs(high)):
        return [None if value is None else (down - 1) // 2 for value in values]
    return [None if value is None else round((down - 1) * (high - value) / (high - low)) for value in values]


def _labels(shown: Sequence[str], values: Sequence[float | None], down: int) -> list[str]:
    """The most and the least of a chart's values, as they are shown in the rows beside it."""
    known = sorted((value, text) for value, text in zip(values, shown, strict=True) if value is not None)
    labels = [""] * down
    if not known:
        return labels
    (_, bottom), (_, top) = known[0], known[-1]
    if top == bottom:
        labels[(down - 1) // 2] = top
    else:
        labels[0], labels[-1] = top, bottom
    return [label if width_of(label) <= _LABEL else label[:_LABEL] for label in labels]
