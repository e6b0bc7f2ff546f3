"""Drafts that are not open: put away or left behind, on disk and by name."""

from __future__ import annotations

from dataclasses import replace
from datetime import datetime
from pathlib import Path

from ledger.model.declare import KINDS
from ledger.operations.find_thing import FoundThing
from ledger.operations.keep_draft import DraftNotKept, drafts_of, drop_draft, keep_draft
from ledger.operations.propose_entry import field_for
from ledger.tui.slip import Slip, slip_of
from ledger.units import Display


class DraftBox:
    """Slips by the name of their draft, the one put away last at the end."""

    def __init__(self) -> None:
        self.slips: dict[str, Slip] = {}

    def fill(self, book: Path, units: Display) -> Slip | None:
        """Read what the disk keeps. The slip that was open when the program ended is handed back."""
        opened = None
        for draft in sorted(drafts_of(book), key=lambda draft: draft.kept_at):
            if draft.kind not in KINDS:
                continue
            slip = slip_of(draft, units)
            self.slips[slip.name] = slip
            opened = None if draft.away else slip
        if opened is not None:
            self.slips.pop(opened.name)
        return opened

    def add(self, slip: Slip) -> None:
        """One put away."""
        self.slips.pop(slip.name, None)
        self.slips[slip.name] = replace(slip, kept=slip.kept or "put away")

    def take(self, kind: str, about: FoundThing | None) -> Slip | None:
        """The draft of this kind to go on with: a thing in hand beats a draft about something else."""
        plain = [slip for slip in self.slips.values() if slip.kind == kind and slip.corrects is None]
        fitting = [slip for slip in plain if about is None or _is_about(slip, about)]
        return self.slips.pop(fitting[-1].name) if fitting else None

    def make_way(self, book: Path, kind: str, now: datetime, by: str | None) -> str:
        """Give the plain name free for a new slip; the draft that bore it, by its new name, stays."""
        slip = self.slips.pop(kind, None)
        if slip is None:
            return ""
        slip = replace(slip, apart=_subject(slip) or f"{now:%H:%M}")
        self.slips[slip.name] = slip
        keep_draft(book, slip.draft(now, by, away=True))
        drop_draft(book, kind)
        return slip.name

    def forget(self, book: Path, name: str) -> None:
        """Logged, thrown away, or never written in.

        Raises
            DraftNotKept: the disk could not be written.
        """
        self.slips.pop(name, None)
        drop_draft(book, name)


def _is_about(slip: Slip, thing: FoundThing) -> bool:
    word = field_for(slip.declared, thing)
    text = "" if word is None else slip.value(word).casefold()
    names = {name.casefold() for name in (thing.name, thing.number) if name}
    return not text or any(part.split()[0] in names for part in text.split(";") if part.strip())


def _subject(slip: Slip) -> str:
    return next((slip.value(field.word) for field in slip.fields if slip.value(field.word)), "")


__all__ = ["DraftBox", "DraftNotKept"]
