"""What others entered since a screen last looked, and whether an open slip leans on it."""

from __future__ import annotations

from collections.abc import Collection
from dataclasses import dataclass
from datetime import datetime

from ledger.model.acts import Act, Adopt, Withdraw
from ledger.model.entry import Logged
from ledger.model.references import names_used
from ledger.operations.open_build import Build
from ledger.operations.saying import say

_ABOUT_STOCK = frozenset({"receive", "instrument", "hold", "release", "scrap", "accept"})


@dataclass(frozen=True, slots=True, kw_only=True)
class Change:
    """One entry by someone else: who, when, what it says, and every name it touches.

    `everything` is true for a plan adopted or taken back: all of the build leans on it.
    """

    seq: int
    by: str
    at: datetime
    kind: str
    says: str
    names: frozenset[str]
    everything: bool

    def touches(self, names: Collection[str]) -> bool:
        """Whether a slip that names these leans on the change."""
        return self.everything or bool(self.names & {name.casefold() for name in names})


def see_changes(build: Build, after_seq: int, own: Collection[int]) -> tuple[Change, ...]:
    """Entries above `after_seq` that are not among one's `own`, withdrawals too, in order."""
    by_seq = {entry.seq: entry for entry in build.logged}
    return tuple(
        _change(entry, by_seq, build)
        for entry in build.logged
        if entry.seq > after_seq and entry.seq not in own
    )


def names_touched(entry: Logged, build: Build) -> frozenset[str]:
    """Every name the entry changes something about, pieces also by their tag, parts by their pieces."""
    names = {*names_used(entry), *_words_of(entry.act)}
    if entry.kind not in _ABOUT_STOCK:
        # A lot or a scale is the same after it was used; a cup, a sheet or a piece is not.
        names -= {*build.snapshot.lots, *build.snapshot.scales}
    for minted in entry.act.minted:
        names |= {minted.number, minted.name}
    for name in tuple(names):
        piece = build.snapshot.pieces.get(name)
        if piece is not None:
            names |= {piece.number, piece.part}
    return frozenset(name.casefold() for name in names)


def _words_of(act: Act) -> tuple[str, ...]:
    # Holds and scraps may name anything; findings are accepted for a thing by plain text.
    what = getattr(act, "what", None)
    return (what,) if isinstance(what, str) else ()


def _change(entry: Logged, by_seq: dict[int, Logged], build: Build) -> Change:
    names = names_touched(entry, build)
    undone = by_seq.get(entry.act.seq) if isinstance(entry.act, Withdraw) else None
    if undone is not None:
        names |= names_touched(undone, build)
    return Change(
        seq=entry.seq,
        by=entry.by,
        at=entry.at,
        kind=entry.kind,
        says=say(entry.kind, entry.act),
        names=names,
        everything=isinstance(entry.act, Adopt) or (undone is not None and isinstance(undone.act, Adopt)),
    )
