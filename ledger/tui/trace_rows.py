"""The trace as rows: what a thing is, how much of it is fitted, links both ways, its entries."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from rich.text import Text

from ledger.mass.trace import TraceLink
from ledger.operations.look_at_trace import EntryLine, Suspect, TraceView
from ledger.reports.plain import clean, shortened, width_of
from ledger.tui.room import Room
from ledger.units import Display, show_small_mass

_MASS, _STATE = 9, 10


@dataclass(frozen=True, slots=True, kw_only=True)
class LinkRow:
    """One link as a row, and how many steps away it is."""

    link: TraceLink
    step: int


def rows_of(links: Sequence[TraceLink], way: str, steps: int, step: int = 1) -> tuple[LinkRow, ...]:
    """Links as far as `steps` away, what is farther away after what it hangs on."""
    rows: list[LinkRow] = []
    for link in links:
        rows.append(LinkRow(link=link, step=step))
        if step < steps:
            farther = link.made_from if way == "made_from" else link.went_into
            rows += rows_of(farther, way, steps, step + 1)
    return tuple(rows)


def headline_text(view: TraceView, room: Room) -> Text:
    """What it is and whether it is good: the word at the end of the row says."""
    traced = view.trace
    if traced is None:
        return Text("scan or type a number to see where it came from and where it went")
    tag = "" if view.number is None or view.number == traced.what else f" tag {view.number}"
    state = traced.state.upper() if traced.state in ("on hold", "scrapped", "expired") else traced.state
    text = Text().append(clean(traced.what), style=room.signs.head)
    words = "; ".join(clean(reason) for reason in view.why if reason != traced.state)
    text.append(
        shortened(f"{tag}  {traced.kind}, {state}  {words}", max(1, room.width - len(text.plain) - 6)),
        style="",
    )
    text.append(" " * max(1, room.width - width_of(text.plain) - len(view.verdict)))
    text.append(view.verdict, style=room.signs.of(view.verdict))
    return text


def pieces_text(view: TraceView, room: Room) -> Text:
    """In how many pieces, how many fitted, and whether it is on hold."""
    if view.trace is None:
        many = len(view.suspects)
        words = "1 thing is" if many == 1 else f"{many} things are"
        return Text(
            f"{words} on hold, or have STOP or LOOK" if many else "ok    nothing is on hold or flagged"
        )
    many, fitted = len(view.pieces), len(view.fitted)
    text = Text("")
    if many == 0 and view.trace.kind == "piece":
        if view.fitted_into is None:
            text.append("not fitted yet", style=room.signs.head)
        else:
            text.append(f"FITTED into {clean(view.fitted_into)}", style=room.signs.look)
    elif many == 0:
        text.append("IN no piece", style=room.signs.head)
    else:
        text.append(f"IN {many} {'piece' if many == 1 else 'pieces'}", style=room.signs.head)
        of_them = "it is" if many == 1 else f"{fitted} of them"
        if fitted:
            text.append(f", {of_them} FITTED", style=room.signs.look)
        else:
            text.append(", none fitted", style="")
        text.append(_grams(view), style="")
    hold = "ON HOLD" if view.on_hold else "NOT ON HOLD: type hold" if view.verdict == "STOP" else ""
    if hold:
        text.append(" " * max(2, room.width - width_of(text.plain) - len(hold)))
        text.append(hold, style=room.signs.stop)
    text.truncate(room.width)
    return text


def _grams(view: TraceView) -> str:
    """How much of what went straight into pieces is in fitted ones."""
    straight = [one for one in view.pieces if one.mass_kg is not None]
    if not straight:
        return ""
    fitted = sum(one.mass_kg or 0.0 for one in straight if one.fitted)
    whole = sum(one.mass_kg or 0.0 for one in straight)
    known = "" if len(straight) == len(view.pieces) else " known"
    if fitted == 0.0:
        return f": {show_small_mass(whole, view.display)}{known}"
    return f": {show_small_mass(fitted, view.display)} of {show_small_mass(whole, view.display)}{known}"


def links_text(rows: Sequence[LinkRow], title: str, at: int, display: Display, room: Room) -> Text:
    """One way of the trace; with Tab here the mark chooses a link."""
    shown = window(len(rows), at if room.here else 0, room.height - 1)
    many = "" if len(shown) == len(rows) else f"  {shown.start + 1}-{shown.stop} of {len(rows)}"
    head = f"{'> ' if room.here else ''}{title}{many}"
    # A figure is never cut: a lot of 100 kg takes a wider column.
    masses = (show_small_mass(row.link.mass_kg, display) for row in rows)
    mass_width = max((_MASS, *(1 + len(mass) for mass in masses)))
    name_width = max(8, room.width - mass_width - _STATE - 1)
    head_width = name_width + mass_width - len(" used")
    lines = [
        Text(
            f"{shortened(head, head_width):<{head_width}} used {'now':<{_STATE}}"[: room.width],
            style=room.signs.mark if room.here else room.signs.head,
        )
    ]
    lines += [
        _link_text(rows[place], place == at and room.here, display, (name_width, mass_width), room)
        for place in shown
    ]
    if not rows:
        lines.append(Text("nothing in the record", style=room.signs.quiet))
    return _filled(lines, room)


def _link_text(row: LinkRow, marked: bool, display: Display, widths: tuple[int, int], room: Room) -> Text:
    link, (name_width, mass_width) = row.link, widths
    how = "" if link.how in ("", "by the record") else f" {link.how}"
    name = shortened(f"{'>' if marked else ' '}{'  ' * (row.step - 1)}{link.what}{how}", name_width)
    mass = "" if link.mass_kg is None else show_small_mass(link.mass_kg, display)
    state = {"in the plan": "in plan"}.get(link.state, link.state)
    bad = state in ("on hold", "expired", "scrapped")
    text = Text(name + " " * (name_width - width_of(name)))
    text.append(f"{mass:>{mass_width}} ")
    text.append((state.upper() if bad else state)[:_STATE], style=room.signs.look if bad else "")
    if marked:
        text.stylize(room.signs.mark)
    text.truncate(room.width)
    return text


def entries_text(entries: Sequence[EntryLine], at: int, room: Room) -> Text:
    """Entries that name the thing, newest first."""
    head = f"{'> ' if room.here else ''}ENTRIES  {len(entries)}"
    lines = [Text(head, style=room.signs.mark if room.here else room.signs.head)]
    for place in window(len(entries), at if room.here else 0, room.height - 1):
        one = entries[place]
        marked = room.here and place == at
        row = f"{'>' if marked else ' '}No. {one.seq:<4} {one.at:%d %b %H:%M} {one.by:<3} {one.says}"
        lines.append(Text(shortened(row, room.width), style=room.signs.mark if marked else ""))
    return _filled(lines, room)


def suspects_text(suspects: Sequence[Suspect], at: int, room: Room) -> Text:
    """What there is to look into."""
    lines = [Text(f"{'> ' if room.here else ''}TO LOOK INTO  Enter follows it", style=room.signs.head)]
    for place in window(len(suspects), at if room.here else 0, room.height - 1):
        one = suspects[place]
        marked = room.here and place == at
        row = Text().append(">" if marked else " ", style=room.signs.mark if marked else "")
        row.append(f"{one.verdict:<5}", style=room.signs.of(one.verdict))
        row.append(shortened(f"{one.what:<16} {one.why}", room.width - 6), style="bold" if marked else "")
        lines.append(row)
    return _filled(lines, room)


def begin_text(room: Room) -> Text:
    """How to begin."""
    lines = [
        Text("HOW TO BEGIN", style=room.signs.head),
        Text("scan a tag, or type a number or name:"),
        Text("lot, batch, sheet, offcut, piece, part,"),
        Text("assembly, material, cell or scale"),
        Text(),
        Text("Enter or right follows the mark,"),
        Text("left goes back, Tab changes the list"),
    ]
    return _filled(lines, room)


def findings_text(view: TraceView, room: Room) -> Text:
    """What a rule noticed about the thing, with what to do."""
    lines = [Text("FINDINGS ABOUT IT", style=room.signs.head)]
    for finding in view.findings:
        word = {"stop": "STOP", "look": "LOOK"}.get(finding.severity.value, "note")
        row = Text().append(word, style=room.signs.of(word))
        row.append(shortened(f"  {finding.what}", room.width - 4), style="")
        lines += [row, Text(shortened(f"      {finding.do}", room.width))]
    if not view.findings:
        lines.append(Text("ok    no rule has noticed anything", style=room.signs.quiet))
    return _filled(lines, room)


def window(many: int, at: int, height: int) -> range:
    """The places that show, the mark among them."""
    height = max(0, height)
    first = max(0, min(at - height // 2, many - height))
    return range(first, min(many, first + height))


def _filled(lines: Sequence[Text], room: Room) -> Text:
    standing = list(lines[: room.height])
    for line in standing:
        line.truncate(room.width)
    return Text("\n").join([*standing, *[Text()] * (room.height - len(standing))])
