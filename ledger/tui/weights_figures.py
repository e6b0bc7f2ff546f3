"""The rows above and below the tree: the headline, what is truly weighed, causes, the chosen row."""

from __future__ import annotations

from collections.abc import Sequence

from rich.text import Text

from ledger.mass.report import CAUSES, CauseMass, TotalMass
from ledger.operations.look_at_weights import WeightRow, WeightsView
from ledger.reports.plain import clean, shortened
from ledger.reports.weight_lines import signed_mass
from ledger.tui.room import Room
from ledger.tui.weights_tree import bar_of
from ledger.units import Dimension, Display, Rounding, show, show_small_mass, shown_unit

_CAUSE_ROWS = 4
_LETTERS = "ACE"


def headline_text(view: WeightsView, room: Room) -> Text:
    """Finished mass against estimate, and whether chance alone explains the difference."""
    total, display = view.total, view.display
    best = show(total.best_kg, Dimension.MASS, display)
    spread = show(total.best_u_kg, Dimension.MASS, display, rounding=Rounding.UP)
    estimated = show(total.estimated_kg, Dimension.MASS, display)
    text = Text().append("FINISHED ", style=room.signs.head)
    text.append(f"{best} +-{spread}   estimated {estimated}   ", style="")
    word, style = _verdict(view, room)
    text.append(word, style=style)
    built = f"built {show(total.built_kg, Dimension.MASS, display)}"
    if len(text.plain) + len(built) + 3 <= room.width:
        text.append(built.rjust(room.width - len(text.plain)), style="")
    text.truncate(room.width)
    return text


def _verdict(view: WeightsView, room: Room) -> tuple[str, str]:
    size = show(abs(view.off_kg), Dimension.MASS, view.display)
    if float(size.split()[0]) == 0.0:
        return "on plan", room.signs.ok
    word = "HEAVY" if view.off_kg > 0.0 else "LIGHT"
    if view.by_chance:
        return f"{word.lower()} {size}, may be chance", room.signs.ok
    return f"{word} {size}, not chance", room.signs.look


def known_text(total: TotalMass, room: Room) -> Text:
    """How much of the mass is weighed, calculated, estimated: a bar of its own letters."""
    shares = (total.share_actual, total.share_calculated, total.share_estimated)
    words = [f" {100 * share:.0f} %  " for share in shares]
    lead = "known by   "
    space = room.width - len(lead) - sum(2 + len(word) for word in words)
    lengths = _whole_parts(shares, max(3, space))
    text = Text().append(lead, style=room.signs.head)
    for letter, length, word in zip(_LETTERS, lengths, words, strict=True):
        text.append(f"{letter} {letter * length}{word}", style="")
    text.truncate(room.width)
    return text


def _whole_parts(shares: Sequence[float], space: int) -> list[int]:
    """Marks for each share that fill the space together, at least one for a share that is not nothing."""
    exact = [share * space for share in shares]
    marks = [max(1, int(share)) if share > 0.0 else 0 for share in exact]
    while 0 < sum(marks) < space:
        most = max((place for place, mark in enumerate(marks) if mark), key=lambda at: exact[at] - marks[at])
        marks[most] += 1
    while sum(marks) > space and max(marks) > 1:
        marks[marks.index(max(marks))] -= 1
    return marks


def causes_text(off_plan: Sequence[CauseMass], display: Display, room: Room, *, title: str = "") -> Text:
    """Off plan by cause, light to the left and heavy to the right, in as many columns as there is room."""
    by_cause = {one.cause: one.mass_kg for one in off_plan}
    causes = [cause for cause in CAUSES if cause in by_cause]
    widest = max((abs(mass) for mass in by_cause.values()), default=0.0)
    columns = 2 if room.width >= 76 else 1
    wide = room.width // columns
    half = min(10, max(4, (wide - 13 - 9 - 2) // 2))
    name = f"{title}OFF PLAN BY CAUSE {shown_unit(Dimension.MASS, display)}"
    head = f"{name:<22} {'light':>{half}}|{'heavy':<{half}}"
    rows = [Text(head[: room.width], style=room.signs.head)]
    cells = [
        f"{cause.replace('_', ', '):<13}{signed_mass(by_cause[cause], display):>9} "
        f"{bar_of(by_cause[cause], widest, half)}"
        for cause in causes
    ]
    down = _CAUSE_ROWS if columns == 2 else len(cells)
    for place in range(min(down, len(cells))):
        row = "".join(f"{cells[at]:<{wide}}" for at in range(place, len(cells), down))
        rows.append(Text(row[: room.width]))
    if not cells:
        rows.append(Text("nothing is off plan", style=room.signs.quiet))
    rows = rows[: room.height]
    return Text("\n").join([*rows, *[Text()] * (room.height - len(rows))])


def chosen_text(view: WeightsView, row: WeightRow | None, room: Room) -> Text:
    """The chosen row at length: what moved it, how it was weighed, what a rule noticed about it."""
    if row is None:
        return Text("no row is chosen", style=room.signs.quiet)
    display = view.display
    rows = [
        Text(shortened(f"{row.name}  {clean(row.title)}", room.width), style=room.signs.head),
        Text(
            f"now {show_small_mass(row.best_kg, display)} +-{show_small_mass(row.best_u_kg, display)}"
            f"   estimated {show_small_mass(row.estimated_kg, display)}   by {row.known_by or '-'}"
        ),
        Text(),
        *causes_text(
            row.off_plan, display, Room(width=min(room.width, 60), height=9, signs=room.signs)
        ).split("\n", allow_blank=True),
        Text(),
        Text("READINGS", style=room.signs.head),
        *_readings(view, row, room),
        Text(),
        Text("FINDINGS", style=room.signs.head),
        *_findings(view, row, room),
    ][: room.height]
    for one in rows:
        one.truncate(room.width)
    return Text("\n").join([*rows, *[Text()] * (room.height - len(rows))])


def _readings(view: WeightsView, row: WeightRow, room: Room) -> list[Text]:
    readings = view.readings.get(row.key, ())
    if not readings:
        return [Text("not weighed itself", style=room.signs.quiet)]
    return [
        Text(
            shortened(
                f"No. {one.seq:<5} {one.at:%d %b %H:%M}  {show_small_mass(one.reading_kg, view.display):>10}"
                f"  {one.scale or 'no scale said'}  {one.by}  {one.state or ''}",
                room.width,
            )
        )
        for one in reversed(readings)
    ]


def _findings(view: WeightsView, row: WeightRow, room: Room) -> list[Text]:
    rows = []
    for finding in view.findings.get(row.key, ()):
        word = {"stop": "STOP", "look": "LOOK"}.get(finding.severity.value, "note")
        text = Text().append(word, style=room.signs.of(word))
        text.append(f"  {clean(finding.what)}", style="")
        rows += [*_wrapped(text, room.width), *_wrapped(Text(f"      {clean(finding.do)}"), room.width)]
    return rows or [Text("ok    no rule has noticed anything", style=room.signs.quiet)]


def _wrapped(text: Text, width: int) -> list[Text]:
    """The text over as many rows as it needs, later rows set in."""
    if len(text.plain) <= width:
        return [text]
    at = text.plain.rfind(" ", 7, width)
    at = width if at <= 6 else at
    rest = Text("      ")
    rest.append_text(text[at:] if text.plain[at : at + 1] != " " else text[at + 1 :])
    return [text[:at], *_wrapped(rest, width)]
