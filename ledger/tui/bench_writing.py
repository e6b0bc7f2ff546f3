"""The bench's way into the book: what is checked by eye first, one operation in a thread, what is said."""

from __future__ import annotations

from pathlib import Path

from ledger.operations.clock_cups import RATIO_OUT
from ledger.operations.find_thing import FoundThing
from ledger.operations.judge_reading import Judged
from ledger.operations.log_entry import LoggedEntry
from ledger.operations.look_at_bench import BenchView, line_of
from ledger.operations.take_stock import Stock
from ledger.tui.crew import Crew, read_badge
from ledger.tui.desk import Desk
from ledger.tui.logging_slips import (
    Outcome,
    Request,
    effect_of,
    marked,
    refusal_of,
    request_of,
    request_of_reading,
    said_of,
    write,
)
from ledger.tui.messages import Message
from ledger.tui.slip import Slip
from ledger.tui.slip_drawing import judged_lines
from ledger.tui.work_screen import WorkScreen

# Their effect on the rest of the book is shown before they are done; a correction always is.
_SHOWN_FIRST = ("withdraw",)
# A keyboard's first repeat comes a quarter to three quarters of a second after the press.
_HELD_S = 0.8


class BenchWriting(WorkScreen[BenchView]):
    """Logs slips and readings. `writing` is true from the moment a thread has the entry."""

    def __init__(self) -> None:
        super().__init__()
        self.desk = Desk(self)
        self.writing = False
        self._shown_effect: Request | None = None
        self._shown_at = 0.0

    @property
    def book(self) -> Path:
        """The book."""
        return self.ledger_app.book

    @property
    def stock(self) -> Stock | None:
        """The build as last read."""
        return self.ledger_app.stock

    @property
    def crew(self) -> Crew:
        """Who logs."""
        return self.ledger_app.crew

    def find(self, text: str) -> FoundThing | None:
        """What a number stands for."""
        return self.ledger_app.find(text)

    def draw_all(self) -> None:
        """Every area anew."""

    # -- what is said of the slip

    def refuse(self, text: str, sign: str = "LOOK") -> None:
        """Say why nothing happened, until something does."""
        self.remind(sign, text)
        self.ring(2)

    def remind(self, sign: str, text: str) -> None:
        """Say what holds only as long as the slip stands as it does."""
        self.messages = self.messages.with_one(Message(sign=sign, text=text, passing=True))
        self.draw_messages()

    def settle_said(self) -> None:
        """The slip changed: refusals and reminders about it say nothing any more."""
        self.messages = self.messages.settled()
        self.draw_messages()

    # -- readings without a slip

    def settle_reading(self, text: str) -> bool:
        """A badge for a reading outside what was expected; True where it was one."""
        badge = read_badge(text)
        reading = self.desk.reading
        if badge is None or reading is None or reading.judged.inside is not False:
            return False
        self.ledger_app.badge(badge)
        self.log_reading(kept=True)
        return True

    def reading_taken(self, *, scanned: bool) -> None:
        """Expected, got, off; inside, a person's Enter has logged it already."""
        reading = self.desk.reading
        self.draw_all()
        if reading is None:
            return
        self._say_judged(reading.judged)
        if reading.judged.inside is False:
            self._ask_to_keep(reading.judged)
        elif scanned:
            self.say("", "Enter, or the log tag, logs it")
        else:
            self.log_reading()

    def log_reading(self, *, kept: bool = False) -> None:
        """Log the reading of the thing in hand. Outside its band it must be kept by a word or a badge."""
        reading = self.desk.reading
        if reading is None:
            return
        if reading.judged.inside is False and not kept:
            self._ask_to_keep(reading.judged)
        elif self._may_write():
            self._write(request_of_reading(reading.fields, self.crew))

    # -- slips

    def log_slip(self, *, kept: bool = False, by_key: bool = False) -> None:
        """Log the open slip, or say what is in the way. A key held down never confirms what it asked for."""
        slip = self.desk.slip
        shown_for = self.ledger_app.clock() - self._shown_at
        if by_key and self._shown_effect is not None and shown_for < _HELD_S:
            return
        if slip is None:
            self.refuse("no slip is open: type a word such as weigh, or scan a number")
        elif slip.changes:
            change = slip.changes[-1]
            when = f"{change.at.astimezone(self.now().tzinfo):%H:%M}"
            self.refuse(f"{change.by} {when}: {change.says}; look, then type looked")
        elif slip.missing:
            self.desk.slip = slip.moved_to(slip.missing[0])
            field = self.desk.slip.current
            wanted = ", ".join(word.replace("_", " ") for word in slip.missing)
            self.refuse(f"wants {wanted}{'' if field is None else f': {field.tip}'}")
        elif slip.value("seen_by") and slip.value("seen_by") == self.crew.by:
            self.desk.slip = slip.moved_to("seen_by")
            self.refuse(f"{self.crew.by} logs: somebody else must have seen it")
        elif self._may_write() and (kept or not self._slip_is_off()):
            self._write_or_show_effect(slip)
        self.draw_all()

    def forget_effect(self) -> None:
        """The slip changed: its effect must be shown again."""
        self._shown_effect = None

    def _slip_is_off(self) -> bool:
        judged = self.desk.judge_slip()
        if judged is None or judged.inside is not False:
            return False
        self._say_judged(judged)
        self._ask_to_keep(judged)
        return True

    def _say_judged(self, judged: Judged) -> None:
        lines = judged_lines(judged, self.units)
        words = ", ".join(" ".join(words.split()) for _, words in lines[:3])
        self.say("LOOK" if judged.inside is False else "ok", f"{judged.piece}: {words}")

    def _ask_to_keep(self, judged: Judged) -> None:
        fits = ", ".join(f"{one.piece}{', the opposite hand' if one.opposite else ''}" for one in judged.fits)
        more = f"; it fits {fits}" if fits else ""
        self.refuse(f"outside what was expected{more}: type keep, or scan a badge")

    def _may_write(self) -> bool:
        if self.writing:
            return False
        if self.crew.needs_badge(self.now()):
            self.refuse("whose entry is it? scan your badge or type +JK, then log again")
            self.draw_plate()
            return False
        wall = self.ledger_app.wall
        wall.look(self.ledger_app.last_logged_at)
        if wall.doubt is not None:
            self.refuse(f"{wall.doubt}: what time is it? type for example 14:25, or clock right")
            return False
        return True

    def _write_or_show_effect(self, slip: Slip) -> None:
        request = request_of(slip, self.crew)
        if slip.corrects is not None and not request.fields:
            self.refuse(f"nothing differs from No. {slip.corrects} yet")
            return
        shown_first = slip.corrects is not None or slip.kind in _SHOWN_FIRST
        self._write(request, preview=shown_first and self._shown_effect != request)

    def _write(self, request: Request, *, preview: bool = False) -> None:
        self.writing = True
        book, now = self.book, self.now
        request = marked(request, self.ledger_app.wall.mark(self.ledger_app.last_logged_at))
        then = self._effect_shown if preview else self._written
        self.in_thread(lambda: write(book, request, now, preview=preview), then, about="write")

    def _effect_shown(self, outcome: Outcome) -> None:
        self.writing = False
        if outcome.refused:
            self._not_written(outcome)
            return
        self._shown_effect = outcome.request
        self._shown_at = self.ledger_app.clock()
        self.remind("LOOK", f"{effect_of(outcome, self._withdrawn_by(outcome))}; log once more to do it")
        self.ring(1)
        self.draw_all()

    def _withdrawn_by(self, outcome: Outcome) -> str:
        seq = outcome.request.fields.get("seq", "") if outcome.request.kind == "withdraw" else ""
        logged = () if self.stock is None else self.stock.build.logged
        return next((line_of(entry) for entry in logged if str(entry.seq) == seq), "")

    def _written(self, outcome: Outcome) -> None:
        entry = outcome.entry
        if entry is None:
            self.writing = False
            self._not_written(outcome)
            return
        self._shown_effect = None
        self.ledger_app.wall.marked()
        self.desk.logged(outcome.request.draft, tuple(one.seq for one in outcome.entries))
        for sign, words in said_of(entry):
            self.say(sign, words)
        self.ring(1)
        self._go_on(outcome)
        self.writing = False
        self.ledger_app.book_changed()
        self.draw_all()
        self.draw_line()

    def _go_on(self, outcome: Outcome) -> None:
        entry, kind = outcome.entry, outcome.request.kind
        if entry is not None and kind == "mix":
            self._come_back(entry)
        elif kind == "lay":
            self.desk.hand = self.find(outcome.request.fields.get("piece", "")) or self.desk.hand
        elif kind == "weigh":
            self.desk.hand = None
        self.desk.open_next()

    def _come_back(self, mix: LoggedEntry) -> None:
        out = any(finding.code == RATIO_OUT for finding in mix.findings)
        cup = next((minted.number for minted in mix.minted), None)
        self.desk.come_back(None if out else cup)
        if out and self.desk.slip is not None:
            self.say("STOP", f"{cup} is out of ratio: not put into {self.desk.slip.kind}; mix another")

    def _not_written(self, outcome: Outcome) -> None:
        words, column = refusal_of(outcome)
        if self.desk.slip is not None and column is not None:
            self.desk.slip = self.desk.slip.moved_to(column)
        self.refuse(words, "STOP")
        self.draw_all()
