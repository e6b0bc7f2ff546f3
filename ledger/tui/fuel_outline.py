"""The tank from above to scale: true outlines of the cells, with holes where they are."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from itertools import pairwise

from rich.text import Text

from ledger.operations.look_at_tank import HoleMark
from ledger.reports.plain import clean
from ledger.tui.fuel_section import draw_wall, scale_for
from ledger.tui.room import Room

# One place is all a hole has here, and the first letter of `out` is the sign of caught air.
OUTLET = "X"


def outline_text(
    outlines: Mapping[str, Sequence[tuple[float, float]]], marks: Sequence[HoleMark], room: Room
) -> tuple[Text, float]:
    """Butt line to the right, station downwards, in exactly the rows of the room.

    With it comes how far lengths are stretched, 1 for true.
    """
    corners = [(bl, -fs) for outline in outlines.values() for fs, bl in outline]
    canvas = [[" "] * room.width for _ in range(room.height)]
    stretch = 1.0
    if corners:
        low = (min(u for u, _ in corners), min(w for _, w in corners))
        high = (max(u for u, _ in corners), max(w for _, w in corners))
        scale = scale_for(low, high, room.width, room.height)
        stretch = scale.stretch
        for outline in outlines.values():
            for (fs0, bl0), (fs1, bl1) in pairwise((*outline, *outline[:1])):
                draw_wall(canvas, (bl0, -fs0, bl1, -fs1), scale)
        for name, outline in outlines.items():
            if outline:
                middle = (
                    sum(bl for _, bl in outline) / len(outline),
                    sum(fs for fs, _ in outline) / len(outline),
                )
                column = int((middle[0] - scale.left_m) / scale.column_m) - len(name) // 2
                _put(canvas, column, int((scale.top_m + middle[1]) / scale.row_m), clean(name))
        # The outlet last: a drain hole beside it must not take its place.
        for mark in sorted(marks, key=lambda one: one.sign == "out"):
            column = int((mark.at_m[1] - scale.left_m) / scale.column_m)
            _put(
                canvas,
                column,
                int((scale.top_m + mark.at_m[0]) / scale.row_m),
                OUTLET if mark.sign == "out" else mark.sign,
            )
    return Text("\n").join([Text("".join(row)) for row in canvas]), stretch


def _put(canvas: list[list[str]], column: int, row: int, words: str) -> None:
    for offset, character in enumerate(words):
        if 0 <= row < len(canvas) and 0 <= column + offset < len(canvas[0]):
            canvas[row][column + offset] = character
