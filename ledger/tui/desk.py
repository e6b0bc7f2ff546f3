"""What lies on the bench: the open slip, drafts put away, the thing in hand, a reading not yet logged.

No widget here: the screen passes in what was heard and draws what stands afterwards.
"""

from __future__ import annotations

from dataclasses import replace

from ledger.model.declare import Takes
from ledger.operations.clock_cups import Cup, cups_on_bench, mixing_cup, run_clocks
from ledger.operations.judge_reading import Judged
from ledger.operations.look_at_ply import look_at_ply
from ledger.operations.propose_entry import propose_entry, repeat_last
from ledger.operations.see_changes import Change, see_changes
from ledger.operations.take_stock import Stock
from ledger.operations.without_entry import without_entry
from ledger.tui.crew import read_badge
from ledger.tui.desk_slips import Shop, SlipsOnDesk
from ledger.tui.field_text import takes_person
from ledger.tui.scale_reading import judge_slip, read_scale, why_no_reading
from ledger.tui.slip import Refusal, Slip

__all__ = ["Desk", "Shop"]

_SECOND_OF = {"hardener": "resin", "resin": "hardener"}


class Desk(SlipsOnDesk):
    """The bench's own memory: fills the open slip, weighs without one, sees what others did."""

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
        self.shop.settle_said()
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
        self.shop.settle_said()
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
        slip, stock = self.slip, self.stock_for_slip()
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

    def stock_for_slip(self) -> Stock | None:
        """What the open slip is held against: a correction, as if what it corrects had never been logged."""
        stock, seq = self.shop.stock, None if self.slip is None else self.slip.corrects
        if stock is None or seq is None:
            return stock
        if self._without is None or self._without[0] is not stock or self._without[1] != seq:
            self._without = (stock, seq, without_entry(stock, seq))
        return self._without[2]

    # -- weighing without a slip

    def weigh(self, text: str, *, scanned: bool) -> bool:
        """A reading for the thing in hand; True where the text was one."""
        stock, thing = self.shop.stock, self.hand
        if stock is None or thing is None:
            return False
        reading = read_scale(stock, thing, text, self.shop.units, scanned=scanned)
        if reading is not None:
            self.reading = reading
        return reading is not None

    def why_no_reading(self, text: str) -> str:
        """What is wrong with a text that looks like a reading for the thing in hand; else nothing."""
        return "" if self.hand is None else why_no_reading(self.hand, text, self.shop.units)

    def judge_slip(self) -> Judged | None:
        """The open weigh slip's mean reading held against what was expected."""
        slip, stock = self.slip, self.stock_for_slip()
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
        self.box.slips = {name: slip.changed_under(changes) for name, slip in self.drafts.items()}
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
        stock, now = self.stock_for_slip(), self.shop.now()
        if stock is not None and stock is not self.shop.stock:
            cups = cups_on_bench(stock.build.snapshot, stock.weights, now)
        slips = [*self.drafts.values(), *((self.slip,) if self.slip is not None else ())]
        mixing = tuple(
            mixing_cup(stock.build.snapshot, slip.value("resin_lot"), slip.stamped_at, now)
            for slip in slips
            if slip.kind == "mix" and slip.stamped_at is not None and stock is not None
        )
        return run_clocks((*mixing, *cups), now)
