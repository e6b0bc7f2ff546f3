"""A section through the tank: the true outline of each cell and its fuel up to the tilted surface."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from itertools import groupby

from rich.text import Text

from ledger.operations.cut_tank import Cut, CutCell
from ledger.tui.fuel_plan_view import FEEDS, TRAPPED
from ledger.tui.room import Room

# A character is about twice as tall as it is wide.
_TALL = 2.0
_MOST_STRETCH = 6.0
_TOP, _MIDDLE, _LOW = "'", "-", "_"


@dataclass(frozen=True, slots=True, kw_only=True)
class Scale:
    """Metres at the left and the top, metres a column and a row; `stretch` of heights, 1 for true."""

    left_m: float
    top_m: float
    column_m: float
    row_m: float
    stretch: float


def scale_for(low: tuple[float, float], high: tuple[float, float], columns: int, rows: int) -> Scale:
    """The largest scale at which what lies between (u, w) low and high fits; flat things are stretched."""
    wide, tall = max(high[0] - low[0], 1e-6), max(high[1] - low[1], 1e-6)
    column = wide / columns
    # Half a row is kept free above and below, so that the outline's own lines fit.
    row = tall / max(1.0, rows - 0.5)
    if row > _TALL * column:
        column = row / _TALL
    row = max(row, _TALL * column / _MOST_STRETCH)
    left = (low[0] + high[0]) / 2.0 - column * columns / 2.0
    top = (low[1] + high[1]) / 2.0 + row * rows / 2.0
    return Scale(left_m=left, top_m=top, column_m=column, row_m=row, stretch=_TALL * column / row)


def section_text(cut: Cut, room: Room) -> Text:
    """The cut in exactly the rows of the room: `=` feeds, `#` trapped, lines are walls."""
    scale = scale_of(cut, room.width, room.height)
    canvas = [[" "] * room.width for _ in range(room.height)]
    for cell in cut.cells:
        _fill(canvas, cut, cell, scale)
    for cell in cut.cells:
        for segment in cell.segments:
            draw_wall(canvas, segment, scale)
    if not cut.cells:
        words = "no cell of this tank is cut here"
        canvas[room.height // 2][: len(words)] = list(words[: room.width])
    styles = {FEEDS: room.signs.fuel, TRAPPED: room.signs.trapped}
    rows = []
    for line in canvas:
        text = Text()
        for style, run in groupby(line[: room.width], lambda sign: styles.get(sign, "")):
            text.append("".join(run), style=style)
        rows.append(text)
    return Text("\n").join(rows)


def scale_of(cut: Cut, columns: int, rows: int) -> Scale:
    """The scale at which all that is cut fits."""
    ends = [end for cell in cut.cells for row in cell.segments for end in (row[:2], row[2:])]
    if not ends:
        return scale_for((0.0, 0.0), (1.0, 1.0), columns, rows)
    us, ws = [end[0] for end in ends], [end[1] for end in ends]
    return scale_for((min(us), min(ws)), (max(us), max(ws)), columns, rows)


def crossings(segments: Sequence[tuple[float, float, float, float]], u: float) -> list[float]:
    """Heights at which the outline crosses an upright line, ascending; inside lies between pairs."""
    found = []
    for u0, w0, u1, w1 in segments:
        if (u0 <= u) != (u1 <= u):
            found.append(w0 + (w1 - w0) * (u - u0) / (u1 - u0))
    return sorted(found)


def _fill(canvas: list[list[str]], cut: Cut, cell: CutCell, scale: Scale) -> None:
    if cell.level_m == -math.inf:
        return
    up_u, up_fixed = (cut.up[0], cut.up[1]) if cut.axis == 1 else (cut.up[1], cut.up[0])
    for column in range(len(canvas[0])):
        u = scale.left_m + (column + 0.5) * scale.column_m
        heights = crossings(cell.segments, u)
        for bottom, top in zip(heights[::2], heights[1::2], strict=False):
            aside = u * up_u + cut.at_m * up_fixed
            surface = min(top, (cell.level_m - aside) / cut.up[2])
            kept = (cell.kept_level_m - aside) / cut.up[2]
            for row in _rows_between(bottom, surface, scale, len(canvas)):
                middle = scale.top_m - (row + 0.5) * scale.row_m
                canvas[row][column] = TRAPPED if min(max(middle, bottom), surface) <= kept else FEEDS


def _rows_between(bottom: float, top: float, scale: Scale, rows: int) -> range:
    """Rows that fuel takes up; a film thinner than a row still takes the row of its bottom."""
    if top - bottom <= 1e-9:
        return range(0)
    first = int((scale.top_m - top) / scale.row_m + 0.5)
    last = int((scale.top_m - bottom) / scale.row_m)
    return range(max(0, min(first, last)), min(rows - 1, last) + 1)


def draw_wall(canvas: list[list[str]], segment: tuple[float, float, float, float], scale: Scale) -> None:
    """Put one wall on rows of characters: `|` where steep, else a line high, middle or low in its row."""
    u0, w0, u1, w1 = segment
    column0, column1 = (u0 - scale.left_m) / scale.column_m, (u1 - scale.left_m) / scale.column_m
    row0, row1 = (scale.top_m - w0) / scale.row_m, (scale.top_m - w1) / scale.row_m
    across, down = column1 - column0, row1 - row0
    steps = max(1, math.ceil(2.0 * max(abs(across), abs(down))))
    steep = abs(down) > 1.5 * abs(across)
    for step in range(steps + 1):
        column = column0 + across * step / steps
        row = row0 + down * step / steps
        at_column = min(len(canvas[0]) - 1, max(0, int(column)))
        at_row = min(len(canvas) - 1, max(0, int(row)))
        if canvas[at_row][at_column] == "|":
            continue
        sign = "|" if steep else _level_sign(row - at_row)
        # A floor under fuel is known by the fuel itself; the surface of a film must not vanish behind it.
        if sign != "|" and canvas[at_row][at_column] in (FEEDS, TRAPPED):
            continue
        canvas[at_row][at_column] = sign


def _level_sign(share: float) -> str:
    return _TOP if share < 0.34 else _MIDDLE if share < 0.67 else _LOW
