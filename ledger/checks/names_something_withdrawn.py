"""An entry that rests on one since withdrawn: the lot, sheet or cup it names is not in the book any more."""

from __future__ import annotations

from collections.abc import Iterator

from ledger.checks.facts import Facts
from ledger.errors import Finding, Severity, Where
from ledger.model.declare import KINDS, Takes
from ledger.model.entry import Logged
from ledger.model.snapshot import Snapshot
from ledger.model.things import Share, ThingKind

CODE = "names-something-withdrawn"

_NUMBERED = {
    ThingKind.LOT,
    ThingKind.SHEET,
    ThingKind.OFFCUT,
    ThingKind.BATCH,
    ThingKind.INSTRUMENT,
    ThingKind.PIECE,
}


def names_something_withdrawn(facts: Facts) -> tuple[Finding, ...]:
    """One finding for each entry and number that it names in vain."""
    known = _known(facts.snapshot)
    return tuple(
        Finding(
            code=CODE,
            severity=Severity.LOOK,
            where=Where(entry=entry.seq, column=word, thing=name),
            what=f"{name} is named here, and the entry that made it known was withdrawn",
            do="correct or withdraw this entry, or enter again what was withdrawn",
        )
        for entry in facts.snapshot.logged
        for word, name in _numbers_named(entry)
        if name not in known
    )


def _known(snapshot: Snapshot) -> set[str]:
    assemblies: set[str] = set()
    for iteration in snapshot.iterations:
        for part in iteration.plan.parts:
            segments = [segment for segment in part.assembly.split("/") if segment]
            assemblies.update("/".join(segments[:count]) for count in range(1, len(segments) + 1))
    return {
        *snapshot.lots,
        *snapshot.sheets,
        *snapshot.offcuts,
        *snapshot.batches,
        *snapshot.scales,
        *snapshot.pieces,
        *assemblies,
    }


def _numbers_named(entry: Logged) -> Iterator[tuple[str, str]]:
    for declared in KINDS[entry.kind].fields:
        if declared.takes not in (Takes.NAME, Takes.SHARE) or not _NUMBERED.intersection(declared.things):
            continue
        if ThingKind.PERSON in declared.things:
            continue
        value = getattr(entry.act, declared.key)
        for item in value if isinstance(value, tuple) else (value,):
            if item is not None:
                yield declared.word, item.what if isinstance(item, Share) else item
