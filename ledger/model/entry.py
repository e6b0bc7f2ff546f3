"""An entry of the book: its envelope and, once read, the act inside."""

from __future__ import annotations

from dataclasses import dataclass
from datetime import datetime

from ledger.model.acts import Act

FIRST_PREVIOUS = "0" * 64


@dataclass(frozen=True, slots=True, kw_only=True)
class Entry:
    """A row of the table `entry`, as stored: every column is text but `seq`."""

    seq: int
    id: str
    at: str
    logged_at: str
    by: str
    kind: str
    body: str
    previous: str
    digest: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Logged:
    """An entry that counts, with its act read from the body."""

    seq: int
    at: datetime
    logged_at: datetime
    by: str
    kind: str
    act: Act
