"""Arrays in metres: outlines, surfaces, solids and what stands below a level. Knows no parts and no files.

`level_table` is the function for other programs; it is fetched when first asked for, so that
importing this package loads no array library. Its module is called `levels`: a module of the same
name as the function would take its place here as soon as anything imported it.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from ledger.geometry.levels import level_table

__all__ = ["level_table"]


def __getattr__(name: str) -> object:
    if name == "level_table":
        from ledger.geometry.levels import level_table

        return level_table
    raise AttributeError(f"module {__name__!r} has no attribute {name!r}")
