"""The assembly tree as rows of text, and which of its rows are to be seen. Only what shows is drawn."""

from __future__ import annotations

from collections.abc import Sequence
from collections.abc import Set as AbstractSet

from rich.text import Text

from ledger.operations.look_at_weights import WeightRow, WeightsView
from ledger.reports.plain import clean, shortened, width_of
from ledger.reports.weight_lines import signed_mass
from ledger.tui.room import Room
from ledger.units import Dimension, Display, Rounding, shown_number

_PLACES = 3
_BUILT, _MASS, _SPREAD, _BY, _OFF, _FLAG = 7, 9, 6, 4, 8, 5
_FIXED = _BUILT + 2 * _MASS + _SPREAD + _BY + _OFF + _FLAG
_HALF, _WIDE_HALF = 5, 10
_WIDE = 90
_LEAST_NAME = 21
NO_PARTS = "no parts in the plan: fill its parts.csv, then wingledger adopt BOOK PLAN"


def seen_rows(rows: Sequence[WeightRow], opened: AbstractSet[str]) -> tuple[int, ...]:
    """Places of the rows that show: a closed branch is stepped over in one go."""
    seen = []
    place = 0
    while place < len(rows):
        seen.append(place)
        row = rows[place]
        place = place + 1 if row.key in opened or row.end == place + 1 else row.end
    return tuple(seen)


def branches_to(rows: Sequence[WeightRow], key: str) -> tuple[str, ...]:
    """The branches that must be open for a row to be seen; empty where it stands at the top, or is not."""
    place = next((place for place, row in enumerate(rows) if row.key == key), None)
    if place is None:
        return ()
    return tuple(row.key for at, row in enumerate(rows[:place]) if at < place < row.end)


def head_text(room: Room) -> Text:
    """What the columns are."""
    name, half = _name_width(room), _half(room)
    head = (
        f"{'':<{name}}{'built':>{_BUILT}}{'estimated':>{_MASS + 1}}{'now':>{_MASS - 1}}{'+-':>{_SPREAD}}"
        f"{'by':>{_BY}}{'off plan':>{_OFF + 1}}{'':<{_FLAG - 1}}{'light':>{half}}|{'heavy':<{half}}"
    )
    return Text(head[: room.width], style=room.signs.head)


def tree_text(view: WeightsView, seen: Sequence[int], at: int, opened: AbstractSet[str], room: Room) -> Text:
    """The window of the tree around the mark, as many rows as there is room for."""
    top = first_shown(len(seen), at, room.height)
    rows = [
        _row_text(view, view.rows[seen[place]], place == at, opened, room)
        for place in range(top, min(len(seen), top + room.height))
    ]
    if not rows:
        rows = [Text(NO_PARTS, style=room.signs.quiet)]
    return Text("\n").join([*rows, *[Text()] * (room.height - len(rows))])


def first_shown(many: int, at: int, height: int) -> int:
    """Where the window begins, so that the mark stays in its middle where it can."""
    return max(0, min(at - height // 2, many - height))


def bar_of(off_kg: float | None, widest_kg: float, half: int) -> str:
    """`<<<|` light or `|>>>` heavy. What is off by a figure that shows has at least one mark."""
    if off_kg is None or _shows_as_nothing(off_kg) or widest_kg <= 0.0:
        return f"{'':<{half}}|{'':<{half}}"
    marks = max(1, round(half * abs(off_kg) / widest_kg))
    marks = min(half, marks)
    if off_kg < 0.0:
        return f"{'<' * marks:>{half}}|{'':<{half}}"
    return f"{'':<{half}}|{'>' * marks:<{half}}"


def _shows_as_nothing(off_kg: float) -> bool:
    return float(f"{off_kg:.{_PLACES}f}") == 0.0


def _row_text(view: WeightsView, row: WeightRow, marked: bool, opened: AbstractSet[str], room: Room) -> Text:
    display = view.display
    flag = row.flag
    if row.key not in opened and row.inside == "STOP":
        flag = "STOP"
    elif row.key not in opened:
        flag = flag or row.inside
    off = "-" if row.off_kg is None else signed_mass(row.off_kg, display)
    text = Text(f"{_named(row, marked, opened, room)}{_built(row):>{_BUILT}}")
    text.append(f"{_mass(row.estimated_kg, display):>{_MASS}}{_mass(row.best_kg, display):>{_MASS}}")
    text.append(f"{_spread(row.best_u_kg, display):>{_SPREAD}}{row.known_by:>{_BY}}{off:>{_OFF}}")
    text.append(" ")
    text.append(f"{flag:<{_FLAG - 1}}", style=room.signs.of(flag))
    text.append(bar_of(row.off_kg, view.widest_off_kg, _half(room)))
    if marked:
        text.stylize(room.signs.mark)
    text.truncate(room.width)
    return text


def _named(row: WeightRow, marked: bool, opened: AbstractSet[str], room: Room) -> str:
    width = _name_width(room)
    mark = ">" if marked else " "
    branch = " " if row.kind == "piece" else "-" if row.key in opened else "+"
    # In 80 columns the number of a piece is worth more than a deep step.
    step = " " if room.width < _WIDE else "  "
    words = f"{mark}{step * min(row.depth, 4)}{branch} {clean(row.name)}"
    if row.kind == "part" and width > _LEAST_NAME + 10:
        words += f"  {clean(row.title)}"
    short = shortened(words, width - 1)
    return short + " " * (width - width_of(short))


def _built(row: WeightRow) -> str:
    if row.kind == "piece" and not row.planned:
        return "scrap" if row.state == "scrapped" else row.state[: _BUILT - 1]
    return f"{row.begun}/{row.planned}"


def _mass(mass_kg: float | None, display: Display) -> str:
    return "-" if mass_kg is None else shown_number(mass_kg, Dimension.MASS, display, places=_PLACES)


def _spread(u_kg: float | None, display: Display) -> str:
    if u_kg is None:
        return "-"
    return shown_number(u_kg, Dimension.MASS, display, places=_PLACES, rounding=Rounding.NEAREST)


def _half(room: Room) -> int:
    return _HALF if room.width < _WIDE else _WIDE_HALF


def _name_width(room: Room) -> int:
    return max(_LEAST_NAME, room.width - _FIXED - 2 * _half(room) - 1)
