"""The entries in the order in which things happened."""

from __future__ import annotations

from datetime import datetime
from itertools import pairwise

from ledger.model.entry import Logged


def as_it_happened(logged: tuple[Logged, ...]) -> list[Logged]:
    """Entries by their own time, those of the same time as logged.

    A sheet filled in at the bench is typed in later: by number, a trim made before a weighing would
    count after it. A correction stands in the place of what it corrects, so its time may not carry
    it past the entry that follows there.
    """
    if all(one.at <= another.at for one, another in pairwise(logged)):
        return list(logged)
    keyed: list[tuple[datetime, int]] = []
    following: datetime | None = None
    for place in range(len(logged) - 1, -1, -1):
        entry = logged[place]
        at = entry.at
        if entry.act.corrects is not None and following is not None and following < at:
            at = following
        else:
            following = at
        keyed.append((at, place))
    keyed.sort()
    return [logged[place] for _, place in keyed]
