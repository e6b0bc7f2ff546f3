"""Whether the geometry kept in the book is what the stored plan files give when it is computed again."""

from __future__ import annotations

import json
import math
import sqlite3
from collections.abc import Iterator
from typing import Any

from ledger.book.reading import files_of
from ledger.errors import Finding, Severity, Where
from ledger.model.acts import Adopt
from ledger.model.body import plain_of
from ledger.model.progress import Progress, unwatched
from ledger.operations.stored_plan import plan_key

_RELATIVE = 1e-9
_ABSOLUTE = 1e-12


class _Recording:
    """A cache that has nothing and keeps what is computed."""

    def __init__(self) -> None:
        self.computed: dict[str, bytes] = {}

    def get(self, key: str) -> bytes | None:
        return self.computed.get(key)

    def put(self, key: str, content: bytes) -> None:
        self.computed[key] = content


def recompute_geometry(
    connection: sqlite3.Connection, adopt: Adopt, progress: Progress = unwatched
) -> tuple[Finding, ...]:
    """Read the plan that an entry adopted from its stored files and compare all that is kept of it.

    Records and arrays must be the same; figures may differ by the last places that another machine
    rounds otherwise. What is not kept is no finding: it is computed when it is wanted.
    """
    from ledger.exchange.plan_folder import read_plan_files

    computed = _Recording()
    read = read_plan_files(files_of(connection, adopt), computed, progress=progress)
    if read.plan is None:
        return read.findings
    computed.put(plan_key(adopt), json.dumps(plain_of(read.plan)).encode())
    return tuple(_differences(connection, computed.computed))


def _differences(connection: sqlite3.Connection, computed: dict[str, bytes]) -> Iterator[Finding]:
    for key, content in computed.items():
        row = connection.execute("SELECT value FROM geometry WHERE key = ?", (key,)).fetchone()
        if row is not None and row[0] != content and not _same_figures(row[0], content):
            yield Finding(
                code="geometry-differs",
                severity=Severity.STOP,
                where=Where(thing=key),
                what="what is kept of the plan's geometry is not what its files give",
                do="compare with a backup, and restore it if the backup is whole",
            )


def _same_figures(kept: bytes, content: bytes) -> bool:
    try:
        return _close(json.loads(kept), json.loads(content))
    except (ValueError, RecursionError):
        return False


def _close(one: Any, other: Any) -> bool:
    if isinstance(one, float) or isinstance(other, float):
        numbers = isinstance(one, (int, float)) and isinstance(other, (int, float))
        return numbers and math.isclose(one, other, rel_tol=_RELATIVE, abs_tol=_ABSOLUTE)
    if type(one) is not type(other):
        return False
    if isinstance(one, dict):
        return one.keys() == other.keys() and all(_close(one[key], other[key]) for key in one)
    if isinstance(one, list):
        return len(one) == len(other) and all(_close(*pair) for pair in zip(one, other, strict=True))
    return bool(one == other)
