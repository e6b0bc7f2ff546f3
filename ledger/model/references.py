"""Which known things an entry refers to, read from the declaration of its kind."""

from __future__ import annotations

from ledger.model.declare import KINDS, Takes
from ledger.model.entry import Logged
from ledger.model.things import Share


def names_used(logged: Logged) -> tuple[str, ...]:
    """Every name or number of a known thing in the entry's fields, in field order, each once.

    A number that the entry gives out itself is not among them: those are in `act.minted`.
    """
    names: dict[str, None] = {}
    for field in KINDS[logged.kind].fields:
        if field.takes not in (Takes.NAME, Takes.SHARE) or field.mints is not None:
            continue
        value = getattr(logged.act, field.key)
        for one in value if isinstance(value, tuple) else (value,):
            if one is not None:
                names[one.what if isinstance(one, Share) else one] = None
    return tuple(names)
