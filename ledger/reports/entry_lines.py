"""What the book answers after something was logged, adopted or withdrawn."""

from __future__ import annotations

import shlex
from collections.abc import Iterable, Sequence

from ledger.model.things import Minted
from ledger.reports.plain import clean, how_many


def entry_line(seq: int, kind: str, says: str) -> str:
    """One entry in one line."""
    return clean(f"entry {seq}  {kind}  {says}".rstrip())


def minted_lines(minted: Iterable[Minted]) -> tuple[str, ...]:
    """The numbers given out, to be written on tags."""
    return tuple(
        clean(
            f"  {one.kind.value} {one.number}"
            + (f"  {one.name}" if one.name and one.name != one.number else "")
        )
        for one in minted
    )


def started_lines(iteration: str, seq: int | None, digest: str | None) -> tuple[str, ...]:
    """Which plan was taken in, and by which entry; a preview has none."""
    entry = () if seq is None else (f"entry      {seq}",)
    last = () if digest is None else (f"digest     {digest}",)
    return (clean(f"iteration  {iteration}"), *entry, *last)


def unfit_lines(no_longer_fits: Sequence[tuple[str, str, str]]) -> tuple[str, ...]:
    """What a further plan does, or would do, to what is built. Each piece has its state and why."""
    unfit = how_many(len(no_longer_fits), "built piece") if no_longer_fits else "none"
    return (
        f"no longer fits  {unfit}",
        *(clean(f"  {piece}  {state}  {why}") for piece, state, why in no_longer_fits),
    )


def look_closer_lines(book: str, before: str | None, iteration: str, unfit: int) -> tuple[str, ...]:
    """Where the choices for pieces that no longer fit are told."""
    if not unfit or before is None:
        return ()
    words = " ".join(shlex.quote(word) for word in (book, before, iteration))
    return (clean(f"what can be done about each: wingledger compare {words}"),)
