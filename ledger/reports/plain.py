"""Text made safe and straight for a terminal: no control codes, columns that line up."""

from __future__ import annotations

import unicodedata
from collections.abc import Iterable, Sequence

# Control, format (bidirectional overrides among them), surrogate, and the two line separators.
_UNSAFE = ("Cc", "Cf", "Cs", "Zl", "Zp")


def clean(text: str) -> str:
    """The text with every control or direction code written out, so that none reaches the terminal."""
    if text.isascii() and text.isprintable():
        return text
    return "".join(
        char
        if unicodedata.category(char) not in _UNSAFE
        else char.encode("unicode_escape", "backslashreplace").decode()
        for char in text
    )


def how_many(count: int, one: str, several: str | None = None) -> str:
    """A count with its word: `no pieces`, `1 piece`, `2 pieces`."""
    return f"{count or 'no'} {one if count == 1 else several or f'{one}s'}"


def width_of(text: str) -> int:
    """How many terminal cells the text takes."""
    if text.isascii():
        return len(text)
    return sum(
        0 if unicodedata.combining(char) else 2 if unicodedata.east_asian_width(char) in "WF" else 1
        for char in text
    )


def shortened(text: str, width: int) -> str:
    """The text cut to `width` cells, with two dots where something was left out."""
    text = clean(text)
    if width_of(text) <= width:
        return text
    kept = ""
    for char in text:
        if width_of(kept + char) > max(0, width - 2):
            break
        kept += char
    return f"{kept}.."[:width] if width < 2 else f"{kept}.."


def aligned(
    heads: Sequence[str], rows: Iterable[Sequence[str]], *, right: Iterable[int] = (), indent: str = ""
) -> tuple[str, ...]:
    """A table as lines. Columns in `right` end flush; a column is as wide as its widest cell."""
    cells = [[clean(cell) for cell in row] for row in (heads, *rows)]
    flush = frozenset(right)
    widths = [max(width_of(row[column]) for row in cells) for column in range(len(heads))]
    return tuple(
        (
            indent
            + "  ".join(_padded(cell, widths[column], column in flush) for column, cell in enumerate(row))
        ).rstrip()
        for row in cells
    )


def _padded(cell: str, width: int, flush_right: bool) -> str:
    space = " " * (width - width_of(cell))
    return space + cell if flush_right else cell + space
