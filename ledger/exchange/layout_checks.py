"""What the walls of a layout must agree on, once all are read; shapes are not needed for it."""

from __future__ import annotations

from collections.abc import Iterable
from itertools import combinations, pairwise
from typing import TypeVar

from ledger.exchange.layout_shelf import Shelf
from ledger.exchange.toml_text import TomlTable
from ledger.loft.layout import NOSE, TAIL, Cap, Rib, Row, Section, SkinZone, Web
from ledger.loft.part_names import rib_part

_R = TypeVar("_R")
Tabled = tuple[tuple[TomlTable, _R], ...]

_SLACK_M = 1e-9
# Beyond these a wing is more likely in another unit than as large as that.
_MOST_HALF_SPAN_M = 40.0
_MOST_CHORD_M = 15.0


def check_sections(whole: TomlTable, sections: Tabled[Section]) -> None:
    """Two or more sections, each outboard of the one before."""
    tables = whole.tables("section")
    if len(tables) < 2:
        what = "a wing needs two sections" if not tables else "there is one section, and a wing needs two"
        place = whole if not tables else tables[0]
        place.stop("section-missing", None, what, "add a [[section]] for the root and one for the tip")
    for (_, before), (table, after) in pairwise(sections):
        if after.butt_line_m <= before.butt_line_m:
            table.stop(
                "section-out-of-order",
                "butt_line",
                f"BL {_mm(after.butt_line_m)} is not outboard of {_mm(before.butt_line_m)}, the one before",
                "put the sections in order, inboard first",
            )


def check_scale(whole: TomlTable, sections: tuple[Section, ...]) -> None:
    """Note, once, a wing too large to have been meant in its unit."""
    for words, sizes, most_m in (
        ("half span", [section.butt_line_m for section in sections], _MOST_HALF_SPAN_M),
        ("chord", [section.chord_m for section in sections], _MOST_CHORD_M),
    ):
        size_m = max(sizes, default=0.0)
        if size_m > most_m:
            what = f"a {words} of {size_m:.6g} m: check length_unit"
            do = "write the unit that the numbers are in, or leave it as it is if the wing is that large"
            whole.problems.look("unit-doubtful", whole.where("length_unit"), what, do)
            return


def check_betweens(
    span_m: tuple[float, float], skins: Tabled[SkinZone], webs: Tabled[Web], caps: Tabled[Cap]
) -> None:
    """Nothing is asked for beyond the sections, and splices and caps lie on their web."""
    spans = {web.name: web_span(web, span_m) for _, web in webs}
    for table, skin in skins:
        _check_between(table, skin.between_m, span_m, "the wing")
    for table, web in webs:
        whole = span_m if web.points_m is None else web_span(web, span_m, uncut=True)
        _check_between(table, web.between_m, whole, "the wing" if web.points_m is None else "its line")
        _check_splices(table, web, spans[web.name])
    for table, cap in caps:
        if cap.web in spans:
            _check_between(table, cap.between_m, spans[cap.web], f"web {cap.web}")


def web_span(web: Web, span_m: tuple[float, float], *, uncut: bool = False) -> tuple[float, float]:
    """The butt lines a web runs between; `uncut` leaves its `between` out."""
    if web.between_m is not None and not uncut:
        return web.between_m
    if web.points_m is None:
        return span_m
    low, high = sorted(point[1] for point in web.points_m)
    return low, high


def _check_between(
    table: TomlTable, between_m: tuple[float, float] | None, within_m: tuple[float, float], whose: str
) -> None:
    if between_m is None:
        return
    if between_m[0] < within_m[0] - _SLACK_M or between_m[1] > within_m[1] + _SLACK_M:
        table.stop(
            "between-outside",
            "between",
            f"BL {_mm(between_m[0])} to {_mm(between_m[1])} is not within {whose}, which runs from"
            f" {_mm(within_m[0])} to {_mm(within_m[1])}",
            "write butt lines within it",
        )


def _check_splices(table: TomlTable, web: Web, span_m: tuple[float, float]) -> None:
    if any(one >= other for one, other in pairwise(web.splices_m)):
        table.stop("value-out-of-range", "splices", "the splices do not rise", "write the inboard one first")
    for splice in web.splices_m:
        if not span_m[0] + _SLACK_M < splice < span_m[1] - _SLACK_M:
            table.stop(
                "splice-outside",
                "splices",
                f"BL {_mm(splice)} is not on web {web.name}, from {_mm(span_m[0])} to {_mm(span_m[1])}",
                "write butt lines between its ends",
            )


def check_rows(rows: Tabled[Row], webs: Tabled[Web], sections: tuple[Section, ...]) -> None:
    """The rear web of a row lies behind its front web, and no two rows share a place."""
    by_name = {web.name: web for _, web in webs}
    stations = {name: _stations(web, sections) for name, web in by_name.items() if _is_carried_on(web)}
    stations |= {NOSE: _ends(sections, 0.0), TAIL: _ends(sections, 1.0)}
    spans = []
    for table, row in rows:
        front, rear = stations.get(row.front), stations.get(row.rear)
        if front is None or rear is None:
            continue
        # Where they cross they are in order over a part of the span: the loft tells that.
        if row.front == row.rear or all(one >= other for one, other in zip(front, rear, strict=True)):
            table.stop(
                "row-out-of-order",
                "webs",
                f"{row.rear!r} does not lie behind {row.front!r}",
                "write the front web first, then the rear one",
            )
        else:
            spans.append((table, row, front, rear))
    for one, other in combinations(spans, 2):
        if _overlap(one[2:], other[2:]):
            other[0].stop(
                "rows-overlap",
                "webs",
                f"rows {one[1].name!r} and {other[1].name!r} share a place",
                "begin one where the other ends",
            )


def _is_carried_on(web: Web) -> bool:
    """Whether root and tip show where a web stands: one of two shares tells it of its own ends only."""
    shares = web.chord_shares
    return web.between_m is None or shares is None or shares[0] == shares[1]


def _stations(web: Web, sections: tuple[Section, ...]) -> tuple[float, float]:
    """Station of a web at the butt line of the root and of the tip, straight on beyond its ends."""
    root, tip = sections[0], sections[-1]
    if web.points_m is not None:
        (x0, y0), (x1, y1) = sorted(web.points_m, key=lambda point: point[1])
        slope = (x1 - x0) / (y1 - y0) if y1 > y0 else 0.0
        return (x0 + slope * (root.butt_line_m - y0), x0 + slope * (tip.butt_line_m - y0))
    inboard, outboard = web.chord_shares or (0.0, 0.0)
    return (root.leading_edge_m + inboard * root.chord_m, tip.leading_edge_m + outboard * tip.chord_m)


def _ends(sections: tuple[Section, ...], share: float) -> tuple[float, float]:
    root, tip = sections[0], sections[-1]
    return (root.leading_edge_m + share * root.chord_m, tip.leading_edge_m + share * tip.chord_m)


def _overlap(one: tuple[tuple[float, float], ...], other: tuple[tuple[float, float], ...]) -> bool:
    (front, rear), (other_front, other_rear) = one, other
    return all(max(front[end], other_front[end]) < min(rear[end], other_rear[end]) - 1e-6 for end in (0, 1))


def take_rib_parts(ribs: Tabled[Rib], rows: Iterable[Row], shelf: Shelf) -> None:
    """Note the part number of each rib in each row, and of one that runs through rows as one panel."""
    known = tuple(rows)
    names: set[str] = set()
    for table, rib in ribs:
        # Two ribs of one name are told of as such, not as so many parts.
        if rib.name.casefold() in names:
            continue
        names.add(rib.name.casefold())
        if rib.name == "0":
            what, do = "'0' stands for no rib in the name of a bay", "give the rib another name"
            table.stop("name-wrong", "name", what, do)
        for joined in _joined(rib, known):
            shelf.take_part(table, "name", rib_part(joined, rib.name))


def _joined(rib: Rib, rows: tuple[Row, ...]) -> list[str]:
    """Names of the panels of a rib: its rows, joined front to rear where it runs through a web."""
    own = [row for row in rows if row.name in rib.rows]
    behind = {
        row.name: other for row in own for other in own if row.rear == other.front and row.rear in rib.through
    }
    later = {row.name for row in behind.values()}
    names = []
    for row in own:
        if row.name in later:
            continue
        chain = [row]
        while chain[-1].name in behind and len(chain) <= len(own):
            chain.append(behind[chain[-1].name])
        names.append("".join(one.name for one in chain))
    return names


def _mm(length_m: float) -> str:
    return f"{length_m * 1000:g} mm"
