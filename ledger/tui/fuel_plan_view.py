"""The tank from above, nose to the top: cells as boxes in their true arrangement, drawn in text.

Boxes keep who lies beside, before and behind whom; widths follow the span. Right is right: the
butt line grows to the right, the station downwards.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from functools import partial
from itertools import groupby

from rich.text import Text

from ledger.operations.look_at_tank import CellNow, Footprint, HoleMark, TankDrawn, TankNow
from ledger.reports.plain import clean
from ledger.tui.room import Room

_LEAST_INSIDE = 4
# Edges of the span nearer than this share of the narrowest cell are one line.
_SAME_EDGE = 0.25
FEEDS, TRAPPED, AIR = "=", "#", "o"


@dataclass(frozen=True, slots=True, kw_only=True)
class Box:
    """Where one cell stands: columns `left` to `right` and layers `top` to `bottom`, both inclusive."""

    cell: str
    left: int
    right: int
    top: int
    bottom: int


@dataclass(frozen=True, slots=True, kw_only=True)
class Arrangement:
    """All boxes with the butt lines between the columns, from left to right."""

    boxes: tuple[Box, ...]
    edges_m: tuple[float, ...]
    layers: int

    def box(self, cell: str) -> Box | None:
        """The box of a cell."""
        return next((box for box in self.boxes if box.cell == cell), None)


def arranged(footprints: Sequence[Footprint]) -> Arrangement:
    """Columns by where cells begin and end along the span, layers by who lies before whom in a column."""
    edges = _edges(footprints)
    columns = {foot.cell: _columns(foot, edges) for foot in footprints}
    ordered = sorted(footprints, key=lambda foot: (foot.middle_m[0], foot.middle_m[1], -foot.middle_m[2]))
    top: dict[str, int] = {}
    for place, foot in enumerate(ordered):
        before = (other for other in ordered[:place] if _meet(columns[foot.cell], columns[other.cell]))
        top[foot.cell] = max((top[other.cell] + 1 for other in before), default=0)
    layers = max(top.values(), default=-1) + 1
    boxes = []
    for place, foot in enumerate(ordered):
        behind = [other for other in ordered[place + 1 :] if _meet(columns[foot.cell], columns[other.cell])]
        bottom = min((top[other.cell] - 1 for other in behind), default=layers - 1)
        left, right = columns[foot.cell]
        boxes.append(Box(cell=foot.cell, left=left, right=right, top=top[foot.cell], bottom=bottom))
    order = {foot.cell: place for place, foot in enumerate(footprints)}
    return Arrangement(
        boxes=tuple(sorted(boxes, key=lambda box: order[box.cell])), edges_m=edges, layers=layers
    )


def neighbour(arrangement: Arrangement, cell: str, across: int, down: int) -> str:
    """The cell reached from one by a step right or down; the same where there is none."""
    here = arrangement.box(cell)
    if here is None:
        return cell

    def beyond(box: Box) -> bool:
        if across:
            apart = box.left - here.right if across > 0 else here.left - box.right
            return apart > 0
        apart = box.top - here.bottom if down > 0 else here.top - box.bottom
        return apart > 0 and box.left <= here.right and here.left <= box.right

    def far(box: Box) -> tuple[int, int]:
        along, aside = abs(box.left - here.left), abs(box.top - here.top)
        return (along, aside) if across else (aside, along)

    return min((box for box in arrangement.boxes if beyond(box)), key=far, default=here).cell


def plan_text(arrangement: Arrangement, drawn: TankDrawn, now: TankNow, *, chosen: str, room: Room) -> Text:
    """Boxes with their fill, percent and hole marks, in exactly the rows of the room.

    What does not fit beside the chosen cell is left out, and an arrow at the edge says so.
    """
    canvas = _Canvas(arrangement, chosen, room)
    cells = {cell.cell: cell for cell in now.cells}
    footprints = {foot.cell: foot for foot in drawn.footprints}
    for box in arrangement.boxes:
        if canvas.shows(box):
            canvas.frame(box)
    for box in arrangement.boxes:
        if canvas.shows(box):
            canvas.fill(box, cells[box.cell], now.asked.attitude.up, chosen == box.cell)
    for mark in drawn.marks:
        canvas.mark(mark, footprints)
    canvas.arrows()
    return canvas.text()


def _edges(footprints: Sequence[Footprint]) -> tuple[float, ...]:
    if not footprints:
        return ()
    near = _SAME_EDGE * min(foot.high_m[1] - foot.low_m[1] for foot in footprints)
    found: list[list[float]] = []
    for value in sorted(edge for foot in footprints for edge in (foot.low_m[1], foot.high_m[1])):
        if found and value - found[-1][0] <= near:
            found[-1].append(value)
        else:
            found.append([value])
    return tuple(sum(group) / len(group) for group in found)


def _columns(foot: Footprint, edges: Sequence[float]) -> tuple[int, int]:
    def nearest(value: float) -> int:
        return min(range(len(edges)), key=lambda place: abs(edges[place] - value))

    left, right = nearest(foot.low_m[1]), nearest(foot.high_m[1])
    return (left, max(left, right - 1))


def _meet(one: tuple[int, int], other: tuple[int, int]) -> bool:
    return one[0] <= other[1] and other[0] <= one[1]


class _Canvas:
    """Characters and styles, and where each column and layer begins."""

    def __init__(self, arrangement: Arrangement, chosen: str, room: Room) -> None:
        self.arrangement = arrangement
        self.room = room
        self.rows = [[" "] * room.width for _ in range(room.height)]
        self.styles: dict[tuple[int, int], str] = {}
        box = arrangement.box(chosen)
        columns, layers = len(arrangement.edges_m) - 1, arrangement.layers
        self.first_column, self.last_column = _window(
            columns, (room.width - 1) // (_LEAST_INSIDE + 1), 0 if box is None else box.left
        )
        self.first_layer, self.last_layer = _window(
            layers, (room.height - 1) // 2, 0 if box is None else box.top
        )
        self.x = self._column_places()
        self.y = _even_places(self.last_layer - self.first_layer, room.height - 1)

    def _column_places(self) -> list[int]:
        edges = self.arrangement.edges_m[self.first_column : self.last_column + 1]
        many, space = len(edges) - 1, self.room.width - 1
        if many < 1:
            return [0]
        spare = space - many * (_LEAST_INSIDE + 1)
        span = edges[-1] - edges[0]
        places = [0]
        for place in range(1, many + 1):
            share = (edges[place] - edges[0]) / span if span > 0.0 else place / many
            places.append(place * (_LEAST_INSIDE + 1) + round(share * max(0, spare)))
        return places

    def shows(self, box: Box) -> bool:
        """Whether any of the box is in the window."""
        return (
            box.left < self.last_column
            and box.right >= self.first_column
            and box.top < self.last_layer
            and box.bottom >= self.first_layer
        )

    def sides(self, box: Box) -> tuple[int, int, int, int]:
        """Left, right, top and bottom lines of a box, as far as they are in the window."""
        left = self.x[max(box.left, self.first_column) - self.first_column]
        right = self.x[min(box.right + 1, self.last_column) - self.first_column]
        top = self.y[max(box.top, self.first_layer) - self.first_layer]
        bottom = self.y[min(box.bottom + 1, self.last_layer) - self.first_layer]
        return left, right, top, bottom

    def put(self, column: int, row: int, words: str, style: str = "") -> None:
        """Put characters down where they are on the canvas."""
        for offset, character in enumerate(words):
            if 0 <= row < len(self.rows) and 0 <= column + offset < self.room.width:
                self.rows[row][column + offset] = character
                if style:
                    self.styles[(row, column + offset)] = style

    def frame(self, box: Box) -> None:
        """The four lines."""
        left, right, top, bottom = self.sides(box)
        for row in (top, bottom):
            for column in range(left + 1, right):
                if self.rows[row][column] != "+":
                    self.put(column, row, "-")
        for column in (left, right):
            for row in range(top + 1, bottom):
                if self.rows[row][column] != "+":
                    self.put(column, row, "|")
        for column in (left, right):
            for row in (top, bottom):
                self.put(column, row, "+")

    def fill(self, box: Box, cell: CellNow, up: tuple[float, float, float], chosen: bool) -> None:
        """Name, percent and fill. Fuel runs to the low side; where a box is full of words the sign stays."""
        left, right, top, bottom = self.sides(box)
        wide, high = right - left - 1, bottom - top - 1
        if wide < 1 or high < 1:
            return
        # The mark stands inside: on the wall it would take the place of a hole.
        name = f"{'>' if chosen else ''}{clean(box.cell)}"[:wide]
        percent = _percent(cell, wide if high > 1 else wide - len(name))
        free = [(column, row) for row in range(high) for column in range(wide)]
        taken = {(column, 0) for column in range(len(name))}
        taken |= {(wide - 1 - column, high - 1) for column in range(len(percent))}
        free = [place for place in free if place not in taken]
        # Lowest place first: x is aft and down the page, y to the right.
        free.sort(
            key=lambda place: (up[1] * (place[0] + 0.5) / wide + up[0] * (place[1] + 0.5) / high, place)
        )
        for place, sign in zip(free, _signs(cell, len(free)), strict=True):
            style = {FEEDS: self.room.signs.fuel, TRAPPED: self.room.signs.trapped}.get(sign, "")
            self.put(left + 1 + place[0], top + 1 + place[1], sign, style)
        self.put(left + 1, top + 1, name, self.room.signs.mark if chosen else "")
        if percent:
            sign = self.room.signs.trapped if percent.endswith(TRAPPED) else ""
            self.put(right - len(percent), bottom - 1, percent, sign)

    def mark(self, mark: HoleMark, footprints: Mapping[str, Footprint]) -> None:
        """A hole on the wall it goes through; one that leads outside on the nearest side of its cell."""
        boxes = [box for box in map(self.arrangement.box, mark.cells) if box is not None]
        if not boxes or not all(self.shows(box) for box in boxes):
            return
        left, right, top, bottom = self.sides(boxes[0])
        across, down = _share(mark, footprints[boxes[0].cell])
        column = left + 1 + min(right - left - 2, int(across * (right - left - 1)))
        row = top + 1 + min(bottom - top - 2, int(down * (bottom - top - 1)))
        if len(boxes) == 2:
            wall = self._wall(boxes[0], boxes[1])
            if wall is not None:
                self._on_wall(mark.sign, wall, column, row)
                return
        # A word needs a line to lie on; only a single sign can stand in an upright one.
        upright = len(mark.sign) == 1 and min(across, 1.0 - across) < min(down, 1.0 - down)
        if upright:
            line = left if across < 0.5 else right
            self._first_free([(line, at) for at in _around(row, top + 1, bottom - 1)], mark.sign)
        else:
            line, last = top if down < 0.5 else bottom, max(left + 1, right - len(mark.sign))
            self._first_free([(at, line) for at in _around(min(column, last), left + 1, last)], mark.sign)

    def _wall(self, one: Box, other: Box) -> tuple[str, int, int, int] | None:
        left, right, top, bottom = self.sides(one)
        left2, right2, top2, bottom2 = self.sides(other)
        for line in ({left, right} & {left2, right2}) if max(top, top2) < min(bottom, bottom2) else ():
            return ("|", line, max(top, top2) + 1, min(bottom, bottom2) - 1)
        for line in ({top, bottom} & {top2, bottom2}) if max(left, left2) < min(right, right2) else ():
            return ("-", line, max(left, left2) + 1, min(right, right2) - 1)
        return None

    def _on_wall(self, sign: str, wall: tuple[str, int, int, int], column: int, row: int) -> None:
        kind, line, first, last = wall
        if kind == "|":
            self._first_free([(line, at) for at in _around(row, first, last)], sign)
        else:
            self._first_free([(at, line) for at in _around(column, first, last)], sign)

    def _first_free(self, places: Sequence[tuple[int, int]], sign: str) -> None:
        for column, row in places:
            if all(self.rows[row][column + offset] in "|-" for offset in range(len(sign))):
                self.put(column, row, sign, self.room.signs.head)
                return

    def arrows(self) -> None:
        """Where the window ends before the tank does."""
        middle = (self.y[0] + self.y[-1]) // 2
        if self.first_column > 0:
            self.put(0, middle, "<", self.room.signs.look)
        if self.last_column < len(self.arrangement.edges_m) - 1:
            self.put(self.x[-1], middle, ">", self.room.signs.look)
        if self.first_layer > 0:
            self.put(1, 0, "^", self.room.signs.look)
        if self.last_layer < self.arrangement.layers:
            self.put(1, self.y[-1], "v", self.room.signs.look)

    def _style_at(self, row: int, column: int) -> str:
        return self.styles.get((row, column), "")

    def text(self) -> Text:
        """All rows."""
        rows = []
        for number, row in enumerate(self.rows):
            text, column = Text(), 0
            # A span for each run of one style: a span a character takes longer to paint than to reckon.
            for style, run in groupby(range(len(row)), partial(self._style_at, number)):
                many = len(list(run))
                text.append("".join(row[column : column + many]), style=style)
                column += many
            rows.append(text)
        return Text("\n").join(rows)


def _signs(cell: CellNow, places: int) -> list[str]:
    """What stands in each free place, lowest first: trapped, feeding, blank, caught air."""
    share = cell.share if cell.share is not None else cell.trapped_share
    if share is None:
        return ["?"] * places
    kept = min(share, cell.trapped_share if cell.trapped_share is not None else share)
    trapped = _places(kept, places)
    feeding = min(_places(share - kept, places), places - trapped) if share - kept > 1e-6 else 0
    if share - kept > 1e-6 and feeding == 0 and trapped > 1:
        trapped, feeding = trapped - 1, 1
    air = min(_places(cell.air_share, places), places - trapped - feeding)
    blank = places - trapped - feeding - air
    return [TRAPPED] * trapped + [FEEDS] * feeding + [" "] * blank + [AIR] * air


def _places(share: float, places: int) -> int:
    """At least one place for half a percent; less than that would cry wolf in every cell."""
    if share < 0.005:
        return 0
    return min(places, max(1, round(share * places)))


def _percent(cell: CellNow, wide: int) -> str:
    """`74 %`, or where that is too wide `74=` with the sign of most of it."""
    if cell.share is None:
        return "? %" if wide >= 3 else "?"[:wide]
    number = f"{100.0 * cell.share:.0f}"
    if wide >= len(number) + 4:
        return f"{number} %"
    kept = cell.trapped_share or 0.0
    sign = "" if number == "0" else TRAPPED if kept >= cell.share / 2.0 else FEEDS
    return f"{number}{sign}"[:wide]


def _share(mark: HoleMark, foot: Footprint) -> tuple[float, float]:
    shares = []
    for axis in (1, 0):
        size = foot.high_m[axis] - foot.low_m[axis]
        share = (mark.at_m[axis] - foot.low_m[axis]) / size if size > 0.0 else 0.5
        shares.append(max(0.0, min(1.0, share)))
    return shares[0], shares[1]


def _window(many: int, fit: int, at: int) -> tuple[int, int]:
    fit = max(1, fit)
    if many <= fit:
        return 0, many
    first = max(0, min(at - fit // 2, many - fit))
    return first, first + fit


def _even_places(many: int, space: int) -> list[int]:
    return [round(place * space / many) for place in range(many + 1)] if many else [0]


def _around(at: int, first: int, last: int) -> list[int]:
    return sorted(range(first, last + 1), key=lambda place: (abs(place - at), place))
