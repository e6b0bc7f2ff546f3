"""Slips opened at the bench, put away and brought back; the desk fills them."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from datetime import datetime
from pathlib import Path
from typing import Protocol

from ledger.model.comparison import EntryToMake
from ledger.operations.find_thing import FoundThing
from ledger.operations.keep_draft import DraftNotKept, keep_draft
from ledger.operations.propose_entry import Proposal, entry_to_correct, propose_entry
from ledger.operations.take_stock import Stock
from ledger.tui.crew import Crew
from ledger.tui.draft_box import DraftBox
from ledger.tui.scale_reading import Reading
from ledger.tui.slip import Slip, new_slip
from ledger.units import Display


class Shop(Protocol):
    """What the desk needs from the screen it belongs to."""

    @property
    def book(self) -> Path:
        """The book."""

    @property
    def stock(self) -> Stock | None:
        """The build as last read."""

    @property
    def crew(self) -> Crew:
        """Who logs."""

    @property
    def units(self) -> Display:
        """The build's units."""

    def now(self) -> datetime:
        """The computer's time."""

    def find(self, text: str) -> FoundThing | None:
        """What a number stands for."""

    def say(self, sign: str, text: str) -> None:
        """Put a line on the message lines."""

    def refuse(self, text: str, sign: str = "LOOK") -> None:
        """Say why nothing happened, and ring twice."""

    def remind(self, sign: str, text: str) -> None:
        """Say what holds only as long as the slip stands as it does."""

    def settle_said(self) -> None:
        """The slip changed: refusals and reminders about it say nothing any more."""


class SlipsOnDesk:
    """Which slip is open, and which wait.

    `own` are entries this session wrote; `seen_seq` the last one it looked at.
    """

    def __init__(self, shop: Shop) -> None:
        self.shop = shop
        self.slip: Slip | None = None
        self.box = DraftBox()
        self.hand: FoundThing | None = None
        self.reading: Reading | None = None
        self.come_back_to: str | None = None
        self._stamped_by_press = False
        self._came_back = False
        self._next: tuple[EntryToMake, ...] = ()
        self.own: set[int] = set()
        self.seen_seq: int | None = None
        self._without: tuple[Stock, int, Stock] | None = None

    # -- drafts

    @property
    def drafts(self) -> dict[str, Slip]:
        """Slips put away, by name."""
        return self.box.slips

    def bring_back(self) -> None:
        """Drafts from disk; the slip that was open when the program ended is open again."""
        opened = self.box.fill(self.shop.book, self.shop.units)
        if opened is not None and self.slip is None:
            self.slip = opened
            self._came_back = True
            self.shop.say("LOOK", f"{self.slip.name}: {self.slip.kept} is open again")

    def keep(self, *, away: bool = False) -> None:
        """The open slip onto the disk."""
        if self.slip is None:
            return
        try:
            keep_draft(self.shop.book, self.slip.draft(self.shop.now(), self.shop.crew.by, away=away))
        except DraftNotKept as error:
            self.shop.say("LOOK", str(error))

    def put_away(self, *, though_untouched: bool = False) -> None:
        """Esc: the slip leaves the desk; its draft stays, if anybody wrote in it."""
        self.shop.settle_said()
        slip = self.slip
        if slip is None:
            if self.reading is not None:
                self.reading = None
            else:
                self.hand = None
        elif slip.untouched and not though_untouched:
            self.slip = None
            self._forget(slip.name)
            self.shop.say("", f"{slip.name} put away; nothing was written in it")
        else:
            self.keep(away=True)
            self.box.add(slip)
            self.shop.say("", f"{slip.name} put away, its draft kept: {self._how_back(slip)}")
            self.slip = None

    def _how_back(self, slip: Slip) -> str:
        if slip.corrects is None:
            return f"type {slip.kind} to go on"
        return "F9, or Enter on its row under TODAY, goes on"

    def throw_away(self) -> None:
        """The open draft is wanted no more."""
        if self.slip is None:
            self.shop.refuse("no slip is open")
            return
        self.shop.settle_said()
        name, self.slip = self.slip.name, None
        self._forget(name)
        self.shop.say("ok", f"draft of {name} thrown away")

    def logged(self, name: str | None, seqs: tuple[int, ...]) -> None:
        """What stood in the slip of this name, or was read off a scale without one, is in the book."""
        self.shop.settle_said()
        self.own.update(seqs)
        self._next = self.slip.then if self.slip is not None and self.slip.name == name else ()
        self.slip = None
        self.reading = None
        if name is not None:
            self._forget(name)

    def _forget(self, name: str) -> None:
        try:
            self.box.forget(self.shop.book, name)
        except DraftNotKept as error:
            self.shop.say("LOOK", str(error))

    # -- opening

    def open(self, kind: str, about: FoundThing | None) -> None:
        """A slip of this kind: its draft if there is one about the same thing, else one as proposed."""
        if not self._may_open(kind):
            return
        stock, thing = self.shop.stock, about or self.hand
        if stock is None:
            return
        self.reading = None
        kept = self.box.take(kind, thing)
        if kept is not None:
            self.slip = kept.at_first_open()
            self.keep()
            self.shop.say("LOOK", f"the draft of {kept.name} is back; throw away begins anew")
            return
        aside = self.box.make_way(self.shop.book, kind, self.shop.now(), self.shop.crew.by)
        if aside:
            self.shop.say("", f"the draft of {aside} waits")
        proposal = propose_entry(stock, kind, thing, self.shop.now())
        self.slip = new_slip(kind, self.shop.units, proposal)
        for sign, words in proposal.says:
            self.shop.remind(sign, words)
        self.keep()

    def open_entries(self, entries: Sequence[EntryToMake]) -> None:
        """Slips with what these entries say in them: the first on the desk, the others as drafts."""
        for place in range(len(entries) - 1, 0, -1):
            if self._open_given(entries[place], of_many=True):
                self._follow_with(entries[place + 1 :])
                self.put_away()
        if not entries or not self._open_given(entries[0], of_many=len(entries) > 1):
            return
        self._follow_with(entries[1:])
        waits = ", then ".join(entry.kind for entry in entries[1:])
        if waits:
            self.shop.remind("LOOK", f"after {entries[0].kind}: {waits}; each waits as a draft")

    def _follow_with(self, entries: Sequence[EntryToMake]) -> None:
        if self.slip is not None:
            self.slip = replace(self.slip, then=tuple(entries))

    def open_next(self) -> None:
        """After a slip was logged: the draft that was prepared to follow it."""
        entries, self._next = self._next, ()
        if self.slip is not None or not entries:
            return
        # By what stands in it: a draft made to give way since has another name.
        wanted = set(entries[0].fields)
        for name, slip in self.drafts.items():
            if slip.kind == entries[0].kind and wanted <= set(slip.values.items()):
                self.slip = self.drafts.pop(name).at_first_open()
                self.keep()
                self.shop.remind("LOOK", f"{slip.kind} comes next; Esc keeps it for later")
                return

    def _open_given(self, entry: EntryToMake, *, of_many: bool) -> bool:
        stock = self.shop.stock
        if stock is None or not self._may_open(""):
            return False
        # What stands in a draft of this kind is about something else: it waits under its own name.
        self.box.make_way(self.shop.book, entry.kind, self.shop.now(), self.shop.crew.by)
        proposal = Proposal(values={}, notes={})
        # Lots and cups proposed for a ply are those of the ply laid next, not of this piece.
        if entry.kind != "lay":
            proposal = propose_entry(stock, entry.kind, None, self.shop.now())
        given = dict(entry.fields)
        values = {**proposal.values, **given}
        notes = {word: text for word, text in proposal.notes.items() if word not in given}
        self.slip = new_slip(entry.kind, self.shop.units, Proposal(values=values, notes=notes))
        if of_many:
            # Half of what belongs together must not be lost for want of a keystroke.
            self.slip = replace(self.slip, original={})
        self.reading = None
        self.keep()
        return True

    def _may_open(self, kind: str) -> bool:
        stock = self.shop.stock
        # What was logged here a moment ago may not have been read back yet.
        if stock is None or max(self.own, default=0) > stock.plate.last_seq:
            self.shop.refuse("the book is still being read: type it again")
            return False
        if self.slip is not None and self.slip.name == kind:
            self.shop.say("", f"{kind} is open already")
            return False
        self.shop.settle_said()
        if self.slip is not None:
            self.put_away(though_untouched=self.slip.corrects is None)
        return True

    def open_correction(self, seq: int | None = None) -> None:
        """The last entry, or the one asked for, as a slip with its own texts."""
        if not self._may_open(""):
            return
        stock = self.shop.stock
        found = None if stock is None else entry_to_correct(stock, seq)
        if found is None:
            self.shop.refuse("there is no entry to put right")
            return
        entry, texts = found
        slip = Slip(kind=entry.kind, display=self.shop.units, corrects=entry.seq)
        known = {field.word for field in slip.fields}
        texts = {word: text for word, text in texts.items() if word in known}
        begun = self.drafts.pop(slip.name, None)
        slip = replace(slip, values=texts) if begun is None else begun
        self.slip = replace(slip, original=texts).at_first_open()
        self.keep()
        self.shop.remind(
            "LOOK",
            f"No. {entry.seq} by {entry.by}: change what is wrong; its effect is shown before it is done",
        )

    def open_withdrawal(self) -> None:
        """Undo with no slip open: the last entry, to be withdrawn, whatever was to be withdrawn before."""
        if self._may_open("withdraw"):
            self.drafts.pop("withdraw", None)
            self.open("withdraw", None)
        if self.slip is not None and not self.slip.value("why"):
            slip = self.slip.put("why", "entered by mistake", proposed=True)
            self.slip = replace(slip, original=dict(slip.values))
            self.keep()

    def next_ply(self) -> None:
        """A lay slip for the next step of the piece in hand, or of the one laid last."""
        if self.slip is not None and self.slip.kind == "lay":
            self.shop.refuse("a ply is open: log it, or stop, then next ply")
            return
        self.drafts.pop("lay", None)
        self.open("lay", None)

    def new_cup(self) -> None:
        """A mix slip; what wanted the cup comes back when it is logged."""
        waiting = self.slip.name if self.slip is not None and self.slip.kind != "mix" else None
        self.open("mix", None)
        self.come_back_to = waiting

    def come_back(self, batch: str | None) -> None:
        """After a mix that a slip waited for: that slip again, with the new cup in it if it is fit."""
        name, self.come_back_to = self.come_back_to, None
        if name is None or name not in self.drafts:
            return
        self.slip = self.drafts.pop(name)
        field = next((f for f in self.slip.fields if f.word in ("batches", "batch")), None)
        if batch is not None and field is not None:
            before = self.slip.value(field.word)
            joined = f"{before}; {batch}" if before and field.many else batch
            self.slip = self.slip.put(field.word, joined).moved_to(field.word)
        self.keep()
