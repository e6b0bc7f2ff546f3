"""What one iteration changes of another, as rows: headline, figures, parts, pieces that no longer fit."""

from __future__ import annotations

from dataclasses import dataclass

from rich.text import Text

from ledger.model.comparison import Comparison, Pair, PartChange, UnfitPiece
from ledger.reports.change_words import cg_words, cost_in_built_work, signed, with_sign
from ledger.reports.plain import how_many, shortened, width_of
from ledger.tui.bench_drawing import filled, title_row
from ledger.tui.room import Room
from ledger.units import Dimension, Display, Rounding, show_small_mass, shown_number, shown_unit

_NAME, _FIGURE = 19, 11
_MOST_HALF = 24
_LONGEST = 12
_STATE = 8
_IN_OUT = {"added": "in", "removed": "out"}


@dataclass(frozen=True, slots=True, kw_only=True)
class FigureRow:
    """One figure as shown. `share` is the change as a share of the first, None where none can be drawn."""

    name: str
    a: str
    b: str
    change: str
    share: float | None = None


def padded(text: str, width: int) -> str:
    """User text in exactly that many cells, with at least one blank at the end."""
    short = shortened(text, width - 1)
    return short + " " * (width - width_of(short))


def in_sight(many: int, at: int, places: int) -> range:
    """The rows shown of a list with a mark in it."""
    top = max(0, min(at - places + 1, many - places))
    return range(top, min(many, top + places))


def headline_text(compared: Comparison, display: Display, room: Room) -> Text:
    """kg, mm and litres gained in one line, and how much built work it costs; the cost is never cut."""
    a, b = shortened(compared.a, _LONGEST), shortened(compared.b, _LONGEST)
    lead = "" if compared.adopted else "PREVIEW "
    told = [f"{b} for {a}:", with_unit(compared.mass.now_kg.change, Dimension.MASS, display)]
    told.append(_cg_words(compared, display))
    if compared.fuel is not None:
        told.append(f"usable {with_unit(compared.fuel.whole.usable_m3.change, Dimension.VOLUME, display)}")
    many = len(compared.no_longer_fits)
    for gap, last, end in _ways(many):
        if len(lead) + width_of(gap.join(told)) + len(last) + len(end) <= room.width:
            break
    text = Text(lead, style=room.signs.look)
    text.append(told[0], style=room.signs.head)
    text.append(gap + gap.join(told[1:]), style="")
    text.truncate(max(0, room.width - len(last) - len(end)))
    text.append(last)
    text.append(end, style=room.signs.look if many else room.signs.ok)
    return text


def _ways(many: int) -> tuple[tuple[str, str, str], ...]:
    """Ways to put the headline, shorter and shorter: two gaps, and what built work it costs."""
    if not many:
        fits = "ALL THAT IS BUILT FITS"
        return (("  ", "   ", fits), (" ", "  ", fits), (" ", "  ", "ALL FITS"))
    full = cost_in_built_work(many)
    short = f"{many} BUILT NO LONGER FIT"
    return (("  ", "   ", full), (" ", "  ", full), (" ", "  ", short), (" ", "  ", f"{many} BUILT UNFIT"))


def with_unit(change: float | None, dimension: Dimension, display: Display) -> str:
    """A change with its sign and unit; one not known is `-`."""
    return "-" if change is None else f"{signed(change, dimension, display)} {shown_unit(dimension, display)}"


def figure_rows(compared: Comparison, display: Display) -> tuple[FigureRow, ...]:
    """Every figure of the two, what matters most first."""
    mass, place = compared.mass, compared.mass.cg_m
    kg, whole_kg = shown_unit(Dimension.MASS, display), mass.now_kg.a
    rows = [_figure(f"now {kg}", mass.now_kg, Dimension.MASS, display, of=whole_kg)]
    if compared.no_longer_fits:
        rows.append(_figure(f"remade {kg}", mass.remade_kg, Dimension.MASS, display, of=whole_kg))
    fs = Pair(a=None if place.a is None else place.a[0], b=None if place.b is None else place.b[0])
    rows.append(_figure(f"CG FS {_mm(display)}", fs, Dimension.LENGTH, display))
    rows += _fuel_rows(compared, display)
    rows.append(_figure(f"estimated {kg}", mass.estimated_kg, Dimension.MASS, display, of=whole_kg))
    return (*rows, *_inertia(compared))


def _fuel_rows(compared: Comparison, display: Display) -> list[FigureRow]:
    if compared.fuel is None:
        return []
    whole = compared.fuel.whole
    # A share of the whole tank: of its own, a little caught air more would outdo every other bar.
    of, down, up = whole.gross_m3.a, Rounding.DOWN, Rounding.UP

    def row(name: str, pair: Pair, rounding: Rounding = Rounding.NEAREST) -> FigureRow:
        words = f"{name} {shown_unit(Dimension.VOLUME, display)}"
        return _figure(words, pair, Dimension.VOLUME, display, rounding=rounding, of=of)

    return [
        row("usable", whole.usable_m3, down),
        _saved(compared, display),
        row("capacity", whole.capacity_m3),
        row("most trapped", _worst(compared), up),
        row("gross", whole.gross_m3),
        row("caught air", whole.caught_air_m3),
    ]


def figures_text(compared: Comparison, rows: tuple[FigureRow, ...], at: int, room: Room) -> Text:
    """The figures of both in columns, less to the left and more to the right."""
    half = max(4, min(_MOST_HALF, (room.width - _NAME - 3 * _FIGURE - 3) // 2))
    places = room.height - 1
    shown = in_sight(len(rows), at if room.here else 0, places)
    more = f" {shown.start + 1}-{shown.stop}/{len(rows)}" if len(shown) < len(rows) else ""
    head = Text(f"{'> ' if room.here else ''}FIGURES{more}".ljust(_NAME), style=room.signs.head)
    names = "".join(_flush(name) for name in (compared.a, compared.b, "change"))
    head.append(f"{names}  {'less':>{half}}|{'more':<{half}}", style=room.signs.head)
    widest = max((abs(row.share) for row in rows if row.share is not None), default=0.0)
    lines = [head]
    for place in shown:
        row = rows[place]
        mark = ">" if room.here and place == at else " "
        line = Text(f"{mark}{row.name:<{_NAME - 1}}{row.a:>{_FIGURE}}{row.b:>{_FIGURE}}")
        line.append(f"{row.change:>{_FIGURE}}  {_bar(row, widest, half)}")
        if mark == ">":
            line.stylize(room.signs.mark)
        lines.append(line)
    return _fitted(lines, room)


def parts_text(compared: Comparison, at: int, display: Display, room: Room) -> Text:
    """How many parts are out, in, changed and the same, and why each changes."""
    parts = compared.mass.parts
    counts = {word: sum(_way(part) == word for part in parts) for word in ("out", "in", "changed")}
    told = f"{counts['out']} out  {counts['in']} in  {counts['changed']} changed  "
    rows = [title_row("PARTS", f"{told}{compared.mass.parts_same} same", room)]
    name, figure = (14, 10) if room.width < 60 else (22, 11)
    for place in in_sight(len(parts), at if room.here else 0, room.height - 1):
        part = parts[place]
        grams = grams_of(part, display)
        words = "; ".join(part.why) if _way(part) == "changed" and part.why else _way(part)
        space = room.width - 1 - name - figure
        row = Text(
            f"{_mark(room, place, at)}{padded(part.part, name)}{padded(words, space)}{grams:>{figure}}"
        )
        rows.append(_marked(row, room, place, at))
    if not parts:
        rows.append(Text("no part of the plan is changed", style=room.signs.quiet))
    return _fitted(rows, room)


def unfit_text(compared: Comparison, at: int, display: Display, room: Room) -> Text:
    """The built pieces that are not what the newer plan wants, each with how far it is."""
    unfit = compared.no_longer_fits
    title = f"BUILT, NOT WHAT {shortened(compared.b, _LONGEST)} WANTS"
    rows = [title_row(title, str(len(unfit)) if unfit else "", room)]
    for place in in_sight(len(unfit), at if room.here else 0, room.height - 1):
        one = unfit[place]
        state = f"{one.state[:_STATE]:<{_STATE}} {show_small_mass(one.best_kg, display):>8}"
        space = room.width - 1 - len(state)
        row = Text(f"{_mark(room, place, at)}{padded(one.piece, space)}{state}")
        rows.append(_marked(row, room, place, at))
    if not unfit:
        rows.append(Text("ok    every built piece fits", style=room.signs.quiet))
    return _fitted(rows, room)


def part_words(part: PartChange, display: Display) -> str:
    """One part at length, for the message lines."""
    why = "; ".join(part.why) or "nothing else is known of why"
    now = _grams(part.now_kg.change, display)
    return f"{part.part}, {part.title}: {_way(part)}; {why}; planned {grams_of(part, display)}, now {now}"


def unfit_words(one: UnfitPiece, *, wide: bool) -> str:
    """One piece at length, and what can be done about it."""
    choices = "; ".join(
        f"{choice.choice} ({choice.does})" if wide else choice.choice for choice in one.choices
    )
    return f"{one.piece}, begun under {one.begun_under}: {one.why}. Choose: {choices}"


def grams_of(part: PartChange, display: Display) -> str:
    """What the designs say it weighs more or less; a part in one of them weighs nothing in the other."""
    pair = part.planned_kg
    change = pair.change
    if change is None and _way(part) in ("in", "out"):
        change = pair.b if _way(part) == "in" else None if pair.a is None else -pair.a
    return _grams(change, display)


def _grams(change: float | None, display: Display) -> str:
    if change is None:
        return "-"
    return with_sign(show_small_mass(change, display))


def _way(part: PartChange) -> str:
    return _IN_OUT.get(part.change, part.change)


def _cg_words(compared: Comparison, display: Display) -> str:
    moved = compared.mass.cg_m.change
    return "CG -" if moved is None else cg_words(moved, display, forward="fwd")


def _mm(display: Display) -> str:
    return shown_unit(Dimension.LENGTH, display)


def _figure(
    name: str,
    pair: Pair,
    dimension: Dimension,
    display: Display,
    *,
    rounding: Rounding = Rounding.NEAREST,
    of: float | None = None,
) -> FigureRow:
    """`of` is what the change is drawn as a share of; nothing is drawn where it is not known."""
    share = pair.change / abs(of) if pair.change is not None and of else None
    return FigureRow(
        name=name,
        a=_number(pair.a, dimension, display, rounding),
        b=_number(pair.b, dimension, display, rounding),
        change=signed(pair.change, dimension, display),
        share=share,
    )


def _number(value: float | None, dimension: Dimension, display: Display, rounding: Rounding) -> str:
    return "-" if value is None else shown_number(value, dimension, display, rounding=rounding)


def _saved(compared: Comparison, display: Display) -> FigureRow:
    saved = compared.saved_as_fuel_m3
    change = signed(saved, Dimension.VOLUME, display)
    return FigureRow(
        name=f"saved, as fuel {shown_unit(Dimension.VOLUME, display)}", a="", b="", change=change
    )


def _worst(compared: Comparison) -> Pair:
    """The most trapped at any attitude flown."""
    if compared.fuel is None:
        return Pair(a=None, b=None)
    flown = [one.trapped_m3 for one in compared.fuel.whole.attitudes if one.flight]

    def most(volumes: list[float | None]) -> float | None:
        known = [volume for volume in volumes if volume is not None]
        return max(known) if known and len(known) == len(volumes) else None

    return Pair(a=most([one.a for one in flown]), b=most([one.b for one in flown]))


def _inertia(compared: Comparison) -> list[FigureRow]:
    a, b = compared.mass.inertia_kg_m2.a, compared.mass.inertia_kg_m2.b
    rows = []
    for axis, name in enumerate(("Ixx", "Iyy", "Izz")):
        pair = Pair(a=None if a is None else a[axis][axis], b=None if b is None else b[axis][axis])
        # Shown in kg m2 whatever the display: nobody measures it in a workshop.
        told = ["-" if value is None else f"{value:.2f}" for value in (pair.a, pair.b)]
        change = "-" if pair.change is None else f"{pair.change:+.2f}"
        change = "0.00" if change in ("+0.00", "-0.00") else change
        share = pair.change / abs(pair.a) if pair.change is not None and pair.a else None
        rows.append(FigureRow(name=f"{name} kg m2", a=told[0], b=told[1], change=change, share=share))
    return rows


def _bar(row: FigureRow, widest: float, half: int) -> str:
    nothing = row.share is None or widest <= 0.0 or float(row.change.strip("+-") or 0) == 0.0
    if nothing or row.share is None:
        return f"{'':<{half}}|{'':<{half}}"
    marks = max(1, min(half, round(half * abs(row.share) / widest)))
    if row.share < 0.0:
        return f"{'<' * marks:>{half}}|{'':<{half}}"
    return f"{'':<{half}}|{'>' * marks:<{half}}"


def _flush(name: str) -> str:
    short = shortened(name, _FIGURE - 1)
    return " " * (_FIGURE - width_of(short)) + short


def _mark(room: Room, place: int, at: int) -> str:
    return ">" if room.here and place == at else " "


def _marked(row: Text, room: Room, place: int, at: int) -> Text:
    if room.here and place == at:
        row.stylize(room.signs.mark)
    return row


def _fitted(rows: list[Text], room: Room) -> Text:
    for row in rows:
        row.truncate(room.width)
    return filled(rows, room.height)


def nothing_words(names: tuple[str, ...]) -> tuple[str, ...]:
    """What a screen says that has nothing to compare yet."""
    only = shortened(names[0], _LONGEST) if names else "none"
    return (
        f"{how_many(len(names), 'iteration')} so far: {only}. There is nothing to compare yet.",
        "",
        "preview FOLDER   compares a plan folder with the current plan; nothing is written",
        "adopt FOLDER     takes it into the book as the next iteration, after a preview",
        "loft LAYOUT OUT  makes a plan folder from a layout file; change one line and preview it",
    )
