"""The data plate: rows 1 and 2 of every screen."""

from __future__ import annotations

from datetime import datetime

from rich.text import Text

from ledger.operations.take_stock import Plate
from ledger.tui.crew import Crew
from ledger.tui.themes import Signs
from ledger.units import Dimension, Display, Rounding, show, shown_number

# In the shown unit: below these a figure with one place has one digit left.
_LEAST_SPREAD, _LEAST_MASS = 0.095, 10.0


def plate_rows(
    word: str, plate: Plate | None, crew: Crew, now: datetime, *, width: int, signs: Signs
) -> tuple[Text, Text]:
    """Screen, iteration and who logs; then the wing in one line with its STOP and LOOK counts."""
    return _first(f"{who_logs(crew, now)}  {now:%a %H:%M}", word, plate, width, signs), _second(
        plate, width, signs
    )


def who_logs(crew: Crew, now: datetime) -> str:
    """Who logs and who is with them; `(badge)` where the next log asks for one."""
    who = "nobody logs" if crew.by is None else f"logs {crew.by}"
    if crew.others:
        who += f" with {' '.join(crew.others)}"
    return f"{who} (badge)" if crew.by is not None and crew.needs_badge(now) else who


def _first(right: str, word: str, plate: Plate | None, width: int, signs: Signs) -> Text:
    name = "" if plate is None else f"  {plate.iteration} {plate.title}"
    room = max(0, width - len(word) - len(right) - 2)
    row = Text(word.upper(), style=signs.head)
    row.append(_cut(name, room).ljust(room))
    row.append("  ")
    row.append(right, style=signs.head)
    row.truncate(width)
    return row


def _second(plate: Plate | None, width: int, signs: Signs) -> Text:
    if plate is None:
        return Text("reading the book")
    display = plate.display
    places = _mass_places(plate, display)
    best = shown_number(plate.best_kg, Dimension.MASS, display, places=places)
    spread = show(plate.best_u_kg, Dimension.MASS, display, places=places, rounding=Rounding.UP)
    usable = show(plate.usable_m3, Dimension.VOLUME, display, rounding=Rounding.DOWN)
    fs = show(plate.cg_fs_m, Dimension.LENGTH, display, places=0 if display.value == "metric" else 1)
    left = f"now {best} +-{spread}  CG FS {fs}  usable {usable}  weighed {100 * plate.share_actual:.0f} %"
    right = Text()
    right.append(f"STOP {plate.stops}", style=signs.stop if plate.stops else signs.quiet)
    right.append("  ")
    right.append(f"LOOK {plate.looks}", style=signs.look if plate.looks else signs.quiet)
    # US units are longer: the counts at the end must never be what is cut.
    room = width - len(right.plain) - 1
    shorter = (left, left.replace("  ", " "), left.replace("  ", " ").replace("CG FS", "CG"))
    row = Text(next((words for words in shorter if len(words) <= room), shorter[-1][:room]))
    row.pad_right(width - len(row.plain) - len(right.plain))
    row.append_text(right)
    row.truncate(width)
    return row


def _mass_places(plate: Plate, display: Display) -> int | None:
    """One place, as a wing is spoken of; those of the weights screen where one would say too little."""
    coarse = float(shown_number(plate.best_u_kg, Dimension.MASS, display)) < _LEAST_SPREAD
    light = abs(float(shown_number(plate.best_kg, Dimension.MASS, display))) < _LEAST_MASS
    return None if coarse or light else 1


def _cut(text: str, room: int) -> str:
    return text if len(text) <= room else f"{text[: max(0, room - 2)]}.."
