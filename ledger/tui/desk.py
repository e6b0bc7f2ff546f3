"""What lies on the bench: the open slip, drafts put away, the thing in hand, a reading not yet logged.

No widget here: the screen passes in what was heard and draws what stands afterwards.
"""

from __future__ import annotations

from dataclasses import replace
from datetime import datetime
from pathlib import Path
from typing import Protocol

from ledger.model.declare import KINDS, Takes
from ledger.operations.clock_cups import Cup, mixing_cup, run_clocks
from ledger.operations.find_thing import FoundThing
from ledger.operations.judge_reading import Judged
from ledger.operations.keep_draft import DraftNotKept, drafts_of, drop_draft, keep_draft
from ledger.operations.look_at_ply import look_at_ply
from ledger.operations.propose_entry import (
    entry_to_correct,
    propose_entry,
    repeat_last,
)
from ledger.operations.see_changes import Change, see_changes
from ledger.operations.take_stock import Stock
from ledger.tui.crew import Crew, read_badge
from ledger.tui.field_text import takes_person
from ledger.tui.scale_reading import Reading, judge_slip, read_scale, scale_in_use
from ledger.tui.slip import Refusal, Slip, new_slip, slip_of
from ledger.units import Display

_SECOND_OF = {"hardener": "resin", "resin": "hardener"}


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


class Desk:
    """The bench's own memory. `own` are entries this session wrote; `seen_seq` the last one it looked at."""

    def __init__(self, shop: Shop) -> None:
        self.shop = shop
        self.slip: Slip | None = None
        self.drafts: dict[str, Slip] = {}
        self.hand: FoundThing | None = None
        self.reading: Reading | None = None
        self.come_back_to: str | None = None
        self._stamped_by_press = False
        self._came_back = False
        self.own: set[int] = set()
        self.seen_seq: int | None = None

    # -- drafts

    def bring_back(self) -> None:
        """Drafts from disk, the newest open again."""
        kept = sorted(drafts_of(self.shop.book), key=lambda draft: draft.kept_at)
        for draft in kept:
            if draft.kind in KINDS:
                self.drafts[draft.kind] = slip_of(draft, self.shop.units)
        if kept and self.slip is None and kept[-1].kind in self.drafts:
            self.slip = self.drafts.pop(kept[-1].kind)
            self._came_back = True
            self.shop.say("LOOK", f"{self.slip.kind}: {self.slip.kept} is open again")

    def keep(self) -> None:
        """The open slip onto the disk."""
        if self.slip is None:
            return
        try:
            keep_draft(self.shop.book, self.slip.draft(self.shop.now(), self.shop.crew.by))
        except DraftNotKept as error:
            self.shop.say("LOOK", str(error))

    def put_away(self) -> None:
        """Esc: the slip leaves the desk, its draft stays."""
        if self.slip is not None:
            self.keep()
            self.drafts[self.slip.kind] = replace(self.slip, kept=self.slip.kept or "put away")
            self.shop.say("", f"{self.slip.kind} put away, its draft kept: type {self.slip.kind} to go on")
            self.slip = None
        elif self.reading is not None:
            self.reading = None
        else:
            self.hand = None

    def throw_away(self) -> None:
        """The open draft is wanted no more."""
        if self.slip is None:
            self.shop.refuse("no slip is open")
            return
        kind, self.slip = self.slip.kind, None
        self._forget(kind)
        self.shop.say("ok", f"draft of {kind} thrown away")

    def logged(self, kind: str, seqs: tuple[int, ...]) -> None:
        """The slip is in the book."""
        self.own.update(seqs)
        self.slip = None
        self.reading = None
        self._forget(kind)

    def _forget(self, kind: str) -> None:
        self.drafts.pop(kind, None)
        try:
            drop_draft(self.shop.book, kind)
        except DraftNotKept as error:
            self.shop.say("LOOK", str(error))

    # -- opening

    def open(self, kind: str, about: FoundThing | None) -> None:
        """A slip of this kind: its draft if there is one, else a new one as proposed."""
        stock = self.shop.stock
        if stock is None:
            self.shop.refuse("the book is still being read: type it again")
            return
        if self.slip is not None and self.slip.kind == kind:
            self.shop.say("", f"{kind} is open already")
            return
        if self.slip is not None:
            self.put_away()
        self.reading = None
        kept = self.drafts.pop(kind, None)
        if kept is not None:
            self.slip = kept.at_first_open()
            self.shop.say("LOOK", f"the draft of {kind} is back; throw away begins anew")
            return
        proposal = propose_entry(stock, kind, about or self.hand, self.shop.now())
        self.slip = new_slip(kind, self.shop.units, proposal)
        for sign, words in proposal.says:
            self.shop.say(sign, words)
        self.keep()

    def open_correction(self, seq: int | None = None) -> None:
        """The last entry, or the one asked for, as a slip with its own texts."""
        stock = self.shop.stock
        found = None if stock is None else entry_to_correct(stock, seq)
        if found is None:
            self.shop.refuse("there is no entry to put right")
            return
        entry, texts = found
        if self.slip is not None:
            self.put_away()
        slip = Slip(kind=entry.kind, display=self.shop.units)
        known = {field.word for field in slip.fields}
        kept = {word: text for word, text in texts.items() if word in known}
        self.slip = replace(slip, values=kept, original=kept, corrects=entry.seq).at_first_open()
        self.keep()
        self.shop.say(
            "LOOK",
            f"No. {entry.seq} by {entry.by}: change what is wrong; its effect is shown before it is done",
        )

    def open_withdrawal(self) -> None:
        """Undo with no slip open: the last entry, to be withdrawn."""
        self.open("withdraw", None)
        if self.slip is not None and not self.slip.value("why"):
            self.slip = self.slip.put("why", "entered by mistake", proposed=True)
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
        waiting = self.slip.kind if self.slip is not None and self.slip.kind != "mix" else None
        self.open("mix", None)
        self.come_back_to = waiting

    def come_back(self, batch: str | None) -> None:
        """After a mix that a slip waited for: that slip again, with the new cup in it."""
        kind, self.come_back_to = self.come_back_to, None
        if kind is None or kind not in self.drafts:
            return
        self.slip = self.drafts.pop(kind)
        field = next((f for f in self.slip.fields if f.word in ("batches", "batch")), None)
        if batch is not None and field is not None:
            before = self.slip.value(field.word)
            joined = f"{before}; {batch}" if before and field.many else batch
            self.slip = self.slip.put(field.word, joined).moved_to(field.word)
        self.keep()

    # -- filling

    def typed(self, text: str) -> bool:
        """Text by hand into the open slip. False where it does not fit and may be a word instead."""
        if self.slip is None:
            return False
        if read_badge(text) is not None:
            return self.scanned(text)
        return self._took(self.slip.typed(text, self.shop.find, self.shop.crew.by))

    def scanned(self, text: str) -> bool:
        """A scan into the open slip. False where it may be a badge for who logs, or a word."""
        if self.slip is None:
            return False
        if read_badge(text) is not None and not self.wants_badge:
            return False
        result = self.slip.scanned(text, self.shop.find, self.shop.crew.by)
        return self._took(result)

    def refusal(self, text: str, *, scanned: bool) -> str:
        """Why the open slip does not take this text."""
        if self.slip is None:
            return ""
        take = self.slip.scanned if scanned or read_badge(text) else self.slip.typed
        result = take(text, self.shop.find, self.shop.crew.by)
        return result.text if isinstance(result, Refusal) else ""

    def undo(self) -> None:
        """Empty what was filled last."""
        if self.slip is None:
            self.open_withdrawal()
            return
        before = self.slip.undone()
        if before is None:
            self.shop.refuse("nothing was filled in here yet; stop puts the slip away")
            return
        self.slip = before
        self.keep()
        self.see_ply()

    def same_again(self) -> None:
        """The slip as it was logged last, but for what was measured."""
        stock = self.shop.stock
        if stock is None or self.slip is None:
            self.shop.refuse("open a slip first, then same")
            return
        texts = repeat_last(stock, self.slip.kind)
        for field in self.slip.fields:
            measured = field.required and field.takes in (Takes.QUANTITY, Takes.MEASURE)
            if field.word in texts and not measured and not self.slip.value(field.word):
                self.slip = self.slip.put(field.word, texts[field.word], proposed=True, note="as last")
        self.keep()

    def press_in_field(self) -> None:
        """A key went into the line of an open slip: for the second component, the first is time zero."""
        slip = self.slip
        if slip is None or slip.kind != "mix" or slip.stamped_at is not None or slip.current is None:
            return
        other = _SECOND_OF.get(slip.current.word)
        if other is not None and slip.value(other):
            self.stamp()
            self._stamped_by_press = True

    def was_scan(self) -> None:
        """The keys were a reader's: what it sent says itself whether the cup was poured."""
        if self._stamped_by_press and self.slip is not None and self.slip.kind == "mix":
            self.slip = replace(self.slip, stamped_at=None)
            self.keep()
        self._stamped_by_press = False

    def was_typed(self) -> None:
        """A person typed: the press that stamped the cup stands."""
        self._stamped_by_press = False

    def stamp(self) -> None:
        """Time zero of the cup that is being mixed, onto the disk at once."""
        slip = self.slip
        if slip is None or slip.kind != "mix":
            self.shop.refuse("no cup is being mixed: type mix")
            return
        if slip.stamped_at is not None:
            return
        self.slip = replace(slip, stamped_at=self.shop.now())
        self.keep()

    def _took(self, result: Slip | Refusal) -> bool:
        if isinstance(result, Refusal):
            return False
        before, self.slip = self.slip, result
        if before is not None and result.kind == "mix" and result.stamped_at is None:
            both = all(result.value(word) for word in _SECOND_OF)
            if both:
                self.slip = replace(result, stamped_at=self.shop.now())
        self.keep()
        self.see_ply()
        return True

    def see_ply(self) -> None:
        """The ply that an open lay slip is about, by what stands in it and in the book now."""
        slip, stock = self.slip, self.shop.stock
        if slip is None or stock is None or slip.kind != "lay":
            return
        piece, step = slip.value("piece"), slip.value("step")
        ply = look_at_ply(stock, piece, self.shop.now(), int(step) if step else None) if piece else None
        before, self.slip = slip.ply, replace(slip, ply=ply)
        if ply is not None and (before is None or (before.piece, before.step) != (ply.piece, ply.step)):
            # The disk keeps what was filled in; what stands beside it is proposed anew.
            about = self.shop.find(piece)
            notes = propose_entry(stock, "lay", about, self.shop.now(), step=ply.step).notes
            self.slip = replace(self.slip, notes=dict(notes))
        if self._came_back:
            self._came_back = False
            self.slip = self.slip.at_first_open()

    @property
    def wants_badge(self) -> bool:
        """Whether a badge is for a field of the open slip, and not for who logs."""
        if self.slip is None or self.shop.crew.needs_badge(self.shop.now()):
            return False
        return any(takes_person(field) for field in self.slip.fields)

    # -- weighing without a slip

    def weigh(self, text: str, *, scanned: bool) -> bool:
        """A reading for the thing in hand; True where the text was one."""
        stock, thing = self.shop.stock, self.hand
        if stock is None or thing is None:
            return False
        scale = scale_in_use(stock, self.shop.now())
        reading = read_scale(stock, thing, text, self.shop.units, scale, scanned=scanned)
        if reading is not None:
            self.reading = reading
        return reading is not None

    def judge_slip(self) -> Judged | None:
        """The open weigh slip's mean reading held against what was expected."""
        slip, stock = self.slip, self.shop.stock
        return None if slip is None or stock is None else judge_slip(slip, stock, self.shop.find)

    # -- what others did, and clocks

    def see_others(self) -> tuple[Change, ...]:
        """Entries by others since the last look; those the open slip leans on are put on it."""
        stock = self.shop.stock
        if stock is None:
            return ()
        last = stock.plate.last_seq
        if self.seen_seq is None:
            self.seen_seq = last
            return ()
        changes = see_changes(stock.build, self.seen_seq, self.own)
        self.seen_seq = max(self.seen_seq, last)
        if self.slip is not None:
            self.slip = self.slip.changed_under(changes)
        self.drafts = {kind: slip.changed_under(changes) for kind, slip in self.drafts.items()}
        return changes

    def looked(self) -> None:
        """The person has looked at what changed under the slip."""
        if self.slip is None or not self.slip.changes:
            self.shop.say("", "nothing has changed under a slip")
            return
        self.slip = replace(self.slip, changes=())
        self.shop.say("ok", "looked at; the slip can be logged")

    def cups(self, cups: tuple[Cup, ...]) -> tuple[Cup, ...]:
        """The cups of the book with those that are being mixed, by the clock of now."""
        stock, now = self.shop.stock, self.shop.now()
        slips = [*self.drafts.values(), *((self.slip,) if self.slip is not None else ())]
        mixing = tuple(
            mixing_cup(stock.build.snapshot, slip.value("resin_lot"), slip.stamped_at, now)
            for slip in slips
            if slip.kind == "mix" and slip.stamped_at is not None and stock is not None
        )
        return run_clocks((*mixing, *cups), now)
