"""A piece that was cut more than once: there is one of it, and its mass counts with every cut."""

from __future__ import annotations

from ledger.checks.facts import Facts
from ledger.errors import Finding, Severity, Where
from ledger.model.acts import Cut

CODE = "cut-twice"


def cut_twice(facts: Facts) -> tuple[Finding, ...]:
    """Each piece named by two cuts, or twice by one."""
    cuts: dict[str, list[int]] = {}
    for logged in facts.snapshot.logged:
        if isinstance(logged.act, Cut):
            for piece in logged.act.pieces:
                cuts.setdefault(piece, []).append(logged.seq)
    return tuple(
        Finding(
            code=CODE,
            severity=Severity.LOOK,
            where=Where(entry=seqs[-1], thing=piece),
            what=f"cut {len(seqs)} times, in entries {', '.join(map(str, seqs[:-1]))} and {seqs[-1]}",
            do="withdraw the wrong entry; a spoiled first one is scrapped, then its part is cut again",
        )
        for piece, seqs in cuts.items()
        if len(seqs) > 1
    )
