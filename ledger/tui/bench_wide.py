"""What the bench adds at 160 x 48: the stack of plies, where the piece goes, all findings with what to do."""

from __future__ import annotations

from collections.abc import Sequence

from rich.text import Text

from ledger.errors import Finding
from ledger.operations.look_at_bench import Place
from ledger.operations.look_at_ply import PlyInHand
from ledger.tui.bench_drawing import broken, cut, filled, signed, stroke_of, title_row
from ledger.tui.room import Room

_SIGN = {"stop": "STOP", "look": "LOOK"}
_STROKES_ACROSS = 12


def stack_text(ply: PlyInHand | None, room: Room) -> Text:
    """The plies at their angles as they lie before the person; the first laid is the lowest row."""
    rows = [title_row("STACK", "" if ply is None else f"{ply.part} {ply.side}", room)]
    if ply is None:
        return filled([*rows, Text("no ply in hand", style=room.signs.quiet)], room.height)
    rows.append(Text("top of the stack, as you see it", style=room.signs.quiet))
    for one in reversed(ply.stack):
        seen = ply.seen(one.angle_deg)
        across = max(4, min(_STROKES_ACROSS, round(_STROKES_ACROSS * one.coverage)))
        body = ((stroke_of(seen) or ".") + " ") * across
        state = "laid" if one.laid else "NOW" if one.number == ply.step else ""
        left = f"{one.number:>2} {body:<24}{signed(seen):>4} {state:<4} "
        row = Text(left + cut(one.material, max(4, room.width - len(left))))
        row.stylize(room.signs.mark if state == "NOW" else "" if one.laid else room.signs.quiet)
        row.truncate(room.width)
        rows.append(row)
    return filled(rows, room.height)


def findings_text(findings: Sequence[Finding], at: int, room: Room) -> Text:
    """All findings with what to do, from the one at `at` on, as many as there is room for."""
    rows = [Text()]
    shown = 0
    for finding in findings[at:]:
        word = _SIGN.get(finding.severity.value, "note")
        lines = broken(f"{finding.where}  {finding.what}; {finding.do}", room.width - 6)
        if len(rows) + len(lines) > room.height:
            break
        rows.append(Text.assemble((f"{word:<6}", room.signs.of(word)), (lines[0], "")))
        rows += [Text(f"      {line}") for line in lines[1:]]
        shown += 1
    turn = f"{at + 1} to {at + shown} of {len(findings)}, PgUp PgDn"
    rows[0] = title_row("FINDINGS", str(shown) if shown == len(findings) else turn, room)
    if not findings:
        rows.append(Text("ok    no rule has noticed anything", style=room.signs.quiet))
    return filled(rows, room.height)


def where_text(part: str | None, places: Sequence[Place], room: Room) -> Text:
    """Where the piece in hand goes: every part of the wing is a dot at its CG, this one an X."""
    mine = next((place for place in places if place.part == part), None)
    rows = [title_row("WHERE IT GOES", "" if mine is None else mine.part, room)]
    rows.append(
        Text("no piece in hand", style=room.signs.quiet)
        if mine is None
        else Text(cut(f"{mine.title}, in {mine.assembly or 'no assembly'}", room.width))
    )
    grid = _map_of(places, mine, room.width, max(3, room.height - 4), room.lines.v)
    for line in grid:
        row = Text(line)
        at = line.find("X")
        if at >= 0:
            row.stylize(room.signs.stop, at, at + 1)
        rows.append(row)
    rows.append(Text("LEFT".ljust(room.width - 5) + "RIGHT", style=room.signs.quiet))
    rows.append(Text("CGs from above, nose to the top", style=room.signs.quiet))
    return filled(rows, room.height)


def _map_of(places: Sequence[Place], mine: Place | None, width: int, height: int, middle: str) -> list[str]:
    cells = [[" "] * width for _ in range(height)]
    for row in cells:
        row[width // 2] = middle
    if not places:
        return ["".join(row) for row in cells]
    half_m = max((abs(place.y_m) for place in places), default=0.0) or 1.0
    first_m = min(place.x_m for place in places)
    span_m = max(place.x_m for place in places) - first_m or 1.0
    for place in (*places, *((mine,) if mine is not None else ())):
        across = round((place.y_m / half_m + 1.0) / 2.0 * (width - 1))
        down = round((place.x_m - first_m) / span_m * (height - 1))
        cells[down][across] = "X" if place is mine else "."
    return ["".join(row).rstrip() for row in cells]
