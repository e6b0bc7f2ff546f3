"""Part numbers that follow from names in a layout; without the side."""

from __future__ import annotations


def rib_part(row: str, rib: str) -> str:
    """`RIB.F1`: rib 1 in row F."""
    return f"RIB.{row}{rib}"


def web_part(web: str, length: str | None) -> str:
    """`WEB.M.IN`: one length of web M; `WEB.M` where it is in one."""
    return f"WEB.{web}" if length is None else f"WEB.{web}.{length}"
