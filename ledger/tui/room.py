"""The room an area has, and what it may be drawn with."""

from __future__ import annotations

from dataclasses import dataclass

from ledger.tui.themes import PLAIN, Lines, Signs


@dataclass(frozen=True, slots=True, kw_only=True)
class Room:
    """Cells across and down, styles, rule characters, and whether Tab is on the area."""

    width: int
    height: int
    signs: Signs
    lines: Lines = PLAIN
    here: bool = False
