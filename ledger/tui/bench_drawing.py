"""The bench's areas as ready text. Every row is cut to the room's width, never wrapped."""

from __future__ import annotations

from collections.abc import Sequence

from rich.text import Text

from ledger.operations.clock_cups import Cup
from ledger.operations.list_next_jobs import Job
from ledger.operations.look_at_bench import LoggedLine
from ledger.tui.room import Room
from ledger.tui.themes import Lines, Signs

_BAR = 7
_STROKES = "-/|\\"
_SIGN = {"stop": "STOP", "look": "LOOK"}


def cut(text: str, width: int) -> str:
    """The text in `width` cells, with two dots where something is left out."""
    words = " ".join(text.split()) if "\n" in text or "\t" in text else text
    return words if len(words) <= width else f"{words[: max(0, width - 2)]}.."


def broken(text: str, width: int) -> list[str]:
    """Words broken into lines."""
    lines: list[str] = []
    line = ""
    for word in text.split():
        longer = f"{line} {word}".strip()
        if len(longer) > width and line:
            lines.append(line)
            line = word[:width]
        else:
            line = longer[:width]
    return [*lines, line] if line else lines


def filled(rows: Sequence[Text], height: int) -> Text:
    """Rows joined, exactly as many as there is height."""
    standing = list(rows[:height])
    return Text("\n").join([*standing, *[Text()] * (height - len(standing))])


def rule(width: int, lines: Lines, tees: Sequence[tuple[int, str]] = ()) -> Text:
    """A horizontal rule with joints."""
    characters = [lines.h] * width
    for place, character in tees:
        if 0 <= place < width:
            characters[place] = character
    return Text("".join(characters))


def worded_rule(
    words: str, width: int, lines: Lines, signs: Signs, tees: Sequence[tuple[int, str]] = ()
) -> Text:
    """A rule with words set into its left end."""
    shown = f"{lines.h} {cut(words, width - 4)} "
    row = rule(width, lines, [(at, sign) for at, sign in tees if at >= len(shown)])
    row = Text(shown) + row[len(shown) :]
    row.stylize(signs.look, 2, len(shown) - 1)
    return row


def stroke_of(angle_deg: float | None) -> str:
    """The nearest of four strokes: 0 lies across, +45 rises to the right, 90 stands, -45 falls."""
    if angle_deg is None:
        return ""
    return _STROKES[round((angle_deg % 180.0) / 45.0) % 4]


def signed(angle_deg: float | None) -> str:
    """`+45`, `0`, `-45`, or nothing."""
    if angle_deg is None:
        return ""
    return "0" if angle_deg == 0.0 else f"{angle_deg:+g}"


def in_minutes(minutes: float) -> str:
    """A clock's minutes in five cells."""
    if minutes >= 600:
        return f"{minutes / 60:.0f} h"
    return f"{int(minutes)} min" if minutes < 100 else f"{int(minutes // 60)}h{int(minutes % 60):02d}"


def cups_text(cups: Sequence[Cup], room: Room) -> Text:
    """Shortest clock first: number, what, bar, minutes, grams. Past is a word."""
    rows = [title_row("CUPS", "pot life     g", room)]
    shown = _cups_in_sight(cups, room.height - 1)
    rows += [_cup_row(cup, room) for cup in shown]
    if len(shown) < len(cups):
        left = [cup for cup in cups if cup not in shown]
        past = sum(cup.past for cup in left)
        out = sum(cup.out and not cup.past for cup in left)
        rows.append(
            Text(f"and {len(left)} more", style=room.signs.quiet)
            + Text(f", {past} PAST" if past else "", style=room.signs.stop)
            + Text(f", {out} OUT" if out else "", style=room.signs.stop)
        )
    if not cups:
        rows.append(Text("no cup is open", style=room.signs.quiet))
    return filled(rows, room.height)


def jobs_text(jobs: Sequence[Job], at: int, room: Room) -> Text:
    """Next jobs; with Tab here the mark chooses one and Enter opens its slip."""
    rows = [title_row("NEXT", str(len(jobs)) if jobs else "", room)]
    places = room.height - 1
    for place in _in_sight(len(jobs), at, places, room):
        job = jobs[place]
        words = cut(job.words, max(8, room.width - 14))
        space = max(1, room.width - len(words) - 1)
        name = cut(job.thing.removesuffix("/1"), space - 1)
        rows.append(_marked(f"{name:<{space}}{words}", place == at, room))
    if not jobs:
        rows.append(Text("nothing left that the plan asks for", style=room.signs.quiet))
    return filled(rows, room.height)


def today_text(today: Sequence[LoggedLine], added: str, at: int, room: Room) -> Text:
    """Today's entries, newest first, and what they added."""
    many = f"{len(today)} {'entry' if len(today) == 1 else 'entries'}"
    rows = [title_row("TODAY", f"{many}  +{added}", room)]
    for place in _in_sight(len(today), at, room.height - 1, room):
        entry = today[place]
        rows.append(_marked(f"{entry.at:%H:%M} {entry.says}", place == at, room))
    return filled(rows, room.height)


def title_row(word: str, right: str, room: Room) -> Text:
    """An area's name, marked where Tab is, with a few words at the right."""
    row = Text(f"> {word}" if room.here else word, style=room.signs.mark if room.here else room.signs.head)
    space = room.width - len(row.plain)
    row.append(cut(right, max(0, space - 1)).rjust(space) if right else "", style=room.signs.quiet)
    return row


def _cup_row(cup: Cup, room: Room) -> Text:
    signs = room.signs
    row = Text(f"{cup.number[:6]:<7}{cup.what[:4]:<5}")
    grams = "" if cup.left_kg is None else f"{1000 * max(0.0, cup.left_kg):.0f}"
    if cup.out or cup.held:
        row.append("OUT OF RATIO" if cup.out else "ON HOLD", style=signs.stop)
        row.append("STOP".rjust(room.width - len(row.plain)), style=signs.stop)
        return row
    if cup.minutes_left is None:
        row.append("no pot life")
    elif cup.past:
        row.append(f"PAST {in_minutes(-cup.minutes_left)}", style=signs.stop)
        row.append("STOP".rjust(room.width - len(row.plain)), style=signs.stop)
        return row
    else:
        share = cup.minutes_left * 60.0 / (cup.pot_life_s or 1.0)
        whole = max(1, min(_BAR, round(share * _BAR)))
        row.append(room.lines.full * whole + room.lines.empty * (_BAR - whole))
        row.append(f" {in_minutes(cup.minutes_left):>6}", style=signs.look if cup.minutes_left < 5.0 else "")
    row.truncate(room.width - len(grams) - 1)
    row.append(grams.rjust(room.width - len(row.plain)), style="")
    return row


def _cups_in_sight(cups: Sequence[Cup], places: int) -> Sequence[Cup]:
    """Running cups first; past and out ones are never crowded out: up to two rows are kept for them."""
    if len(cups) <= places:
        return cups
    running = [cup for cup in cups if not cup.past and not cup.out]
    past = [cup for cup in cups if cup.past or cup.out]
    rows = places - 1
    kept = running[: max(rows - min(2, len(past)), 0)]
    return [*kept, *past[: rows - len(kept)]]


def _in_sight(many: int, at: int, places: int, room: Room) -> range:
    top = max(0, min(at - places + 1, many - places)) if room.here else 0
    return range(top, min(many, top + places))


def _marked(words: str, marked: bool, room: Room) -> Text:
    mark = ">" if marked and room.here else " "
    row = Text(cut(f"{mark}{words}", room.width))
    if mark == ">":
        row.stylize(room.signs.mark)
    return row
