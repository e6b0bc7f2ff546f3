"""A place as a message names it: in millimetres, which drawings and benches are in."""

from __future__ import annotations

from collections.abc import Iterable


def named_place(point_m: Iterable[float]) -> str:
    """A point of two or three coordinates in metres, for example `(2000, 100, 0) mm`."""
    return f"({', '.join(f'{1000.0 * value + 0.0:.6g}' for value in point_m)}) mm"
