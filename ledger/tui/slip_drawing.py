"""An open slip, or the thing in hand, as ready text: head, fields with their marks, and what stands below."""

from __future__ import annotations

from collections.abc import Sequence
from datetime import datetime

from rich.text import Text

from ledger.model.declare import Field
from ledger.model.things import ThingKind
from ledger.operations.find_thing import FoundThing
from ledger.operations.judge_reading import Judged
from ledger.tui.bench_drawing import broken, cut, filled, signed, stroke_of
from ledger.tui.room import Room
from ledger.tui.slip import Slip
from ledger.units import Display, show_small_mass

Foot = Sequence[tuple[str, str]]

_WORD = 17
_MOST_FOOT = 2
_OFFERS: dict[ThingKind, str] = {
    ThingKind.PIECE: "lay cut bond coat trim build_up fit weigh hold scrap note trace",
    ThingKind.PART: "cut lay bond weigh note",
    ThingKind.LOT: "mix hold release scrap note trace",
    ThingKind.SHEET: "cut hold release scrap note trace",
    ThingKind.OFFCUT: "cut hold release scrap note trace",
    ThingKind.BATCH: "lay bond coat build_up hold release scrap note trace",
    ThingKind.INSTRUMENT: "instrument hold release scrap note",
    ThingKind.CELL: "coat note fuel",
    ThingKind.ASSEMBLY: "weigh fit note",
    ThingKind.MATERIAL: "receive note",
    ThingKind.LAMINATE: "sheet note",
    ThingKind.OPENING: "note fuel",
    ThingKind.ITERATION: "note",
}


def slip_text(slip: Slip, typing: str, foot: Foot, now: datetime, room: Room) -> Text:
    """Head, fields and foot; the fields scroll so that the marked one is in sight."""
    head = _head(slip, now, room)
    below = [row for sign, words in foot for row in _foot_rows(sign, words, room)]
    rows = [_field_row(slip, place, typing, now, room) for place in range(len(slip.fields) + 1)]
    places = max(3, room.height - len(head) - len(below))
    top = max(0, min(slip.at_field - places + 2, len(rows) - places))
    shown = rows[top : top + places]
    spare = [Text()] * (places - len(shown))
    return filled([*head, *shown, *spare, *below], room.height)


def hand_text(thing: FoundThing, lines: Foot, room: Room) -> Text:
    """The thing in hand: what it is, what is expected, which words go on from here."""
    rows = [Text(cut(f"{thing.kind.value.upper()}  {thing.name}", room.width), room.signs.head)]
    rows += [Text(f"  {line}") for line in broken(thing.says, room.width - 2)[:3]]
    rows.append(Text())
    rows += [row for sign, words in lines for row in _foot_rows(sign, words, room)]
    rows.append(Text())
    rows.append(Text("  or type a word:", room.signs.quiet))
    rows += [Text(f"  {line}") for line in broken(_OFFERS.get(thing.kind, "note"), room.width - 2)]
    return filled(rows, room.height)


def idle_text(last: str, drafts: Sequence[str], room: Room) -> Text:
    """Nothing open: how to begin, what was logged last, which drafts wait."""
    signs = room.signs
    rows = [
        Text("BENCH  nothing open", signs.head),
        Text(),
        Text("  scan a piece, read the scale, Enter: weighed"),
        Text("  scan any number: what it is, what can be done"),
        Text("  type a word and Enter to open a slip:"),
        Text("    mix lay cut bond coat weigh receive sheet", signs.mark),
        Text("    trim fit scrap hold note and more: actions", signs.mark),
        Text(),
    ]
    if last:
        rows.append(Text("  last entry", signs.quiet))
        rows += [Text(f"  {line}") for line in broken(last, room.width - 2)[:3]]
        rows.append(Text("  F9 puts it right", signs.quiet))
    if drafts:
        rows += [Text(), Text(cut(f"  drafts kept: {', '.join(drafts)}", room.width), signs.look)]
    return filled(rows, room.height)


def judged_lines(judged: Judged, display: Display) -> tuple[tuple[str, str], ...]:
    """Expected, got, off, and whom else the reading would fit."""
    if judged.expected_kg is None or judged.off_kg is None:
        return (("", f"got {show_small_mass(judged.got_kg, display)}, nothing to hold it against"),)
    band = show_small_mass(judged.band_kg, display)
    off = show_small_mass(judged.off_kg, display)
    plus = "" if off.startswith("-") else "+"
    lines = [
        ("", f"expected {show_small_mass(judged.expected_kg, display)}  +-{band}"),
        ("", f"got      {show_small_mass(judged.got_kg, display)}"),
        ("ok" if judged.inside else "LOOK", f"off {plus}{off}"),
    ]
    for one in judged.fits:
        hand = ", the opposite hand" if one.opposite else ""
        lines.append(("LOOK", f"it fits {one.piece} ({show_small_mass(one.expected_kg, display)}){hand}"))
    return tuple(lines)


def _head(slip: Slip, now: datetime, room: Room) -> list[Text]:
    signs, width = room.signs, room.width
    mark = "> " if room.here else ""
    ply = slip.ply
    if ply is None:
        first = Text(cut(f"{mark}{slip.kind.upper()}  {slip.declared.tip}", width), signs.head)
        return [first, _state_row(slip, now, room)]
    seen = ply.seen_deg
    angle = f"   {signed(seen)}  {stroke_of(seen)}  as you see it" if seen is not None else ""
    step = "every ply is laid" if ply.step is None else f"ply {ply.step} of {ply.steps}{angle}"
    named = f"{mark}{slip.kind.upper()}  {ply.part}  {ply.side}  piece {ply.running}"
    return [
        Text(cut(named, width), signs.head),
        Text(cut(f"  {step}", width), signs.mark),
        _state_row(slip, now, room),
    ]


def _state_row(slip: Slip, now: datetime, room: Room) -> Text:
    if slip.corrects is not None:
        return Text(cut(f"  corrects No. {slip.corrects}", room.width), room.signs.look)
    if slip.stamped_at is not None:
        minutes = int((now - slip.stamped_at).total_seconds() // 60)
        zero = f"{slip.stamped_at.astimezone(now.tzinfo):%H:%M:%S}"
        return Text(cut(f"  time zero {zero}, {minutes} min ago", room.width), room.signs.mark)
    return Text(cut(f"  {slip.kept}", room.width) if slip.kept else "", room.signs.quiet)


def _field_row(slip: Slip, place: int, typing: str, now: datetime, room: Room) -> Text:
    here, signs = place == slip.at_field, room.signs
    if place == len(slip.fields):
        return _log_row(slip, here, room)
    field = slip.fields[place]
    needed = "*" if field.required else "/" if slip.in_group(field.word) else " "
    word = cut(_labelled(slip, field), _WORD)
    row = Text(f"{'>' if here else ' '}{needed}{word:<{_WORD}} ", signs.mark if here else "")
    space = room.width - len(row.plain)
    if here and typing:
        row.append(f"..{typing[-(space - 3) :]}_" if len(typing) >= space else f"{typing}_", style="")
        return row
    value = _moment(slip.value("at"), now) if field.word == "at" else slip.value(field.word)
    standing = "now" if field.word == "at" and not value else ""
    note = slip.notes.get(field.word, "") or (field.tip if here and not value else standing)
    shown = cut(value or ("____" if here or field.required else ""), space)
    row.append(shown, style="bold" if value and field.word not in slip.proposed else "")
    left = space - len(shown) - 2
    if note and left >= 6:
        row.append("  " + cut(note, left), style=signs.quiet)
    return row


def _moment(text: str, now: datetime) -> str:
    try:
        at = datetime.fromisoformat(text).astimezone(now.tzinfo)
    except ValueError:
        return text
    # A bare date or a time without an offset stays as it was typed.
    if "T" not in text:
        return text
    return f"{at:%H:%M}" if at.date() == now.date() else f"{at:%Y-%m-%d %H:%M}"


def _log_row(slip: Slip, here: bool, room: Room) -> Text:
    row = Text(f"{'> ' if here else '  '}{'log':<{_WORD}} ", style=room.signs.mark if here else "")
    wanting = ", ".join(label_of(word) for word in slip.missing)
    row.append(cut(f"wants {wanting}" if wanting else "Enter logs it", room.width - len(row.plain)), style="")
    return row


def _foot_rows(sign: str, words: str, room: Room) -> list[Text]:
    indent = 2 + (len(sign) + 1 if sign else 0)
    # Figures stand in columns by their spaces; only what is too long is broken into words.
    space = room.width - indent
    lines = [words] if len(words) <= space else broken(words, space)
    if len(lines) > _MOST_FOOT:
        lines = [*lines[: _MOST_FOOT - 1], cut(" ".join(lines[_MOST_FOOT - 1 :]), space)]
    first = Text("  ")
    if sign:
        first.append(sign, style=room.signs.of(sign))
        first.append(" ", style="")
    first.append(lines[0] if lines else "", style="")
    return [first, *(Text(" " * indent + line) for line in lines[1:])]


def _labelled(slip: Slip, field: Field) -> str:
    unit = slip.unit(field)
    return label_of(field.word) if unit is None else f"{label_of(field.word)} [{unit}]"


def label_of(word: str) -> str:
    """A field's word as a person reads it."""
    return word.replace("_", " ")
