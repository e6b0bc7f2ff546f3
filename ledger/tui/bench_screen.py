"""The bench: the open slip on the left, cups, next jobs and today on the right."""

from __future__ import annotations

import os.path
from collections.abc import Sequence
from datetime import datetime
from typing import ClassVar

from ledger.errors import Severity
from ledger.model.comparison import EntryToMake
from ledger.operations.clock_cups import Cup
from ledger.operations.find_thing import FoundThing
from ledger.operations.look_at_bench import BenchView, look_at_bench
from ledger.operations.open_build import Build
from ledger.tui.actions import BENCH, Action, action_for_word
from ledger.tui.bench_face import BenchFace
from ledger.tui.completing import candidates, completed
from ledger.tui.crew import read_badge
from ledger.tui.slip import Slip
from ledger.tui.slip_drawing import label_of
from ledger.tui.tour import SKIN

_SOON_MIN = 5.0
_PAGE = 3


class BenchScreen(BenchFace):
    """Gathers a slip, shows what the bench must know at a glance."""

    WORD = "bench"
    AREAS = ("slip", "line", "next", "today")
    ACTIONS: ClassVar[tuple[Action, ...]] = BENCH

    def __init__(self) -> None:
        super().__init__()
        self._rung_for: dict[str, int] = {}
        self._begun = False

    def on_mount(self) -> None:
        """Drafts first: a cup poured before a kill must show at once."""
        self.desk.bring_back()
        super().on_mount()
        self.draw_all()

    def look(self, build: Build, now: datetime) -> BenchView:
        """In a thread: the stock was taken together with the build."""
        stock = self.ledger_app.stock
        return look_at_bench(build.book if stock is None else stock, now)

    def show(self, view: BenchView) -> None:
        """The new view; entries of others that touch the open slip are said."""
        if not self.writing:
            self._see_others()
        self.desk.see_ply()
        if not self._begun:
            self._begun = True
            self._begin(view)
        self.job_at = min(self.job_at, max(0, len(view.jobs) - 1))
        self.today_at = min(self.today_at, max(0, len(view.today) - 1))
        self.draw_all()

    def _begin(self, view: BenchView) -> None:
        """What must not be missed on coming to the bench; the sample opens in the middle of a job."""
        stop = next((finding for finding in view.findings if finding.severity is Severity.STOP), None)
        if stop is not None:
            about = f"{stop.where.thing}: " if stop.where.thing else ""
            self.say("STOP", f"{about}{stop.what}; {stop.do}")
        tour = self.ledger_app.tour_line
        if tour is not None and tour.startswith("act 1") and self.desk.slip is None:
            self.open_kind("lay", self.find(SKIN))

    def tick(self) -> None:
        """Clocks go on; a cup that comes near its end, or passes it, rings three times."""
        super().tick()
        if self.view is not None:
            self._ring_for(self._cups())
            self._draw_side()
            self.draw_slip()

    def area_changed(self) -> None:
        """The mark moves with Tab."""
        self.draw_all()

    # -- what is heard

    def hear_typing(self) -> None:
        """The first key for the second component of a cup is its time zero."""
        if self.area == "slip":
            self.desk.press_in_field()
        super().hear_typing()
        self.draw_slip()

    def hear_scan(self, text: str) -> None:
        """The keys were a reader's, so the first of them was no person's press."""
        if not self.ledger_app.line.text:
            self.desk.was_scan()
        super().hear_scan(text)

    def hear_line(self, text: str) -> None:
        """A person's line, and so was its first press."""
        self.desk.was_typed()
        super().hear_line(text)

    def field_takes(self, text: str, *, scanned: bool) -> bool:
        """The open slip first, then a reading for the thing in hand."""
        if self.settle_reading(text):
            return True
        if self.desk.slip is not None:
            return self.area == "slip" and self._slip_takes(text, scanned=scanned)
        if text.strip() and self.desk.weigh(text, scanned=scanned):
            self.reading_taken(scanned=scanned)
            return True
        why = "" if scanned else self.desk.why_no_reading(text)
        if why and self.find(text) is None:
            self.ledger_app.line.put_refused(text)
            self.refuse(why)
        return bool(why)

    def take_thing(self, thing: FoundThing) -> bool:
        """A number with no slip to go into: what it is and what can be done with it."""
        self.desk.reading = None
        self.desk.hand = thing
        self.say("ok", thing.says)
        self.draw_all()
        return True

    def thing_in_hand(self) -> FoundThing | None:
        """What a word goes on with."""
        return self.desk.hand

    def take_enter(self) -> None:
        """Enter by hand on an empty line, outside a slip: the marked row, or a scanned reading."""
        view = self.view
        if self.area == "next" and view is not None and view.jobs:
            job = view.jobs[self.job_at]
            thing = self.find(job.thing) or self.find(job.thing.rsplit("/", 1)[0])
            self.open_kind(job.kind, thing)
        elif self.area == "today" and view is not None and view.today:
            self.open_correction(view.today[self.today_at].seq)
        else:
            self.log_reading()

    def open_kind(self, kind: str, about: FoundThing | None) -> None:
        """A word opened a slip."""
        self.desk.open(kind, about)
        self._slip_opened()

    def open_entries(self, entries: Sequence[EntryToMake]) -> None:
        """Another screen chose what is to be logged."""
        self.desk.open_entries(entries)
        self._slip_opened()

    def open_correction(self, seq: int | None = None) -> None:
        """F9, or Enter on one of today's entries."""
        self.desk.open_correction(seq)
        self._slip_opened()

    # -- actions

    def do_leave_slip(self) -> None:
        """Esc."""
        self.ledger_app.line.put("")
        self.desk.put_away()
        self._slip_opened()

    def do_stop(self) -> None:
        """The tag or word."""
        self.do_leave_slip()

    def do_next_ply(self) -> None:
        """The tag or word."""
        self.desk.next_ply()
        self._slip_opened()

    def do_new_cup(self) -> None:
        """The tag or word."""
        self.desk.new_cup()
        self._slip_opened()

    def do_undo(self) -> None:
        """The tag or word."""
        self.desk.undo()
        self._slip_opened()

    def do_pour(self) -> None:
        """The tag or word."""
        self.desk.stamp()
        self.draw_all()

    def do_looked(self) -> None:
        """The tag or word."""
        self.desk.looked()
        self.draw_all()

    def do_repeat(self) -> None:
        """The tag or word."""
        self.desk.same_again()
        self.draw_all()

    def do_throw_away(self) -> None:
        """The word."""
        self.desk.throw_away()
        self._slip_opened()

    def do_keep(self) -> None:
        """The tag or word: a reading outside what was expected stands."""
        if self.desk.slip is not None:
            self.log_slip(kept=True)
        elif self.desk.reading is not None:
            self.log_reading(kept=True)
        else:
            self.refuse("there is no reading to keep")

    def do_log(self) -> None:
        """The tag or word."""
        if self.desk.slip is None and self.desk.reading is not None:
            self.log_reading()
        else:
            self.log_slip()

    def do_field_before(self) -> None:
        """Up."""
        self._move(-1)

    def do_field_after(self) -> None:
        """Down."""
        self._move(1)

    def do_mark_before(self) -> None:
        """Up in a list."""
        self._mark(-1)

    def do_mark_after(self) -> None:
        """Down in a list."""
        self._mark(1)

    def do_page_before(self) -> None:
        """The findings' page before."""
        self.finding_at = max(0, self.finding_at - _PAGE)
        self._draw_wide()

    def do_page_after(self) -> None:
        """The findings' next page."""
        many = 0 if self.view is None else len(self.view.findings)
        self.finding_at = min(max(0, many - 1), self.finding_at + _PAGE)
        self._draw_wide()

    def do_empty_field(self) -> None:
        """Delete."""
        slip = self.desk.slip
        if slip is not None and slip.current is not None:
            self.settle_said()
            self.desk.slip = slip.put(slip.current.word, "")
            self.desk.keep()
            self.draw_slip()

    def do_complete(self) -> None:
        """Right: complete what is typed from what is open."""
        slip, view = self.desk.slip, self.view
        if slip is None or slip.current is None or view is None:
            return
        typed = self.ledger_app.line.text
        self.ledger_app.line.put(typed)
        found = candidates(slip.current, typed, view.open_things)
        common = os.path.commonprefix([one.text for one in found])  # noqa: RUF071  by character is meant
        if common:
            self.ledger_app.line.put(completed(typed, common))
        if len(found) != 1:
            names = ", ".join(f"{one.text} {one.says}" for one in found[:6])
            self.say("" if found else "LOOK", names or "nothing open begins like this")
        self.draw_slip()

    # -- inside

    def _slip_opened(self) -> None:
        self.forget_effect()
        self.go_to_area("slip")
        self.draw_all()
        self.draw_line()

    def _slip_takes(self, text: str, *, scanned: bool) -> bool:
        desk = self.desk
        if not text.strip():
            self._enter_in_slip()
            return True
        if not scanned and self._is_word_here(text):
            return False
        if desk.scanned(text) if scanned else desk.typed(text):
            self.forget_effect()
            self.draw_all()
            return True
        if read_badge(text) is not None and not desk.wants_badge:
            return False
        if action_for_word(text, self.table) is not None or self.ledger_app.is_about_crew(text):
            return False
        why = desk.refusal(text, scanned=scanned)
        if not scanned:
            # What a person typed is theirs to mend; what a reader sent is gone.
            self.ledger_app.line.put_refused(text)
        self.refuse(why or f"{text} does not fit here")
        self.draw_slip()
        return True

    def _is_word_here(self, text: str) -> bool:
        # Many fields take any letters, as initials, a number of one's own or a remark; `log` means log.
        action = action_for_word(text, BENCH)
        return action is not None and action.tag is not None

    def _enter_in_slip(self) -> None:
        slip = self.desk.slip
        field = None if slip is None else slip.current
        if slip is None or field is None:
            self.log_slip(by_key=True)
        elif field.required and not slip.value(field.word):
            self.refuse(f"{label_of(field.word)} must be filled: {field.tip}")
        else:
            self._stand_on(slip.passed())

    def _move(self, step: int) -> None:
        if self.desk.slip is not None:
            self._stand_on(self.desk.slip.moved(step))

    def _stand_on(self, slip: Slip) -> None:
        self.desk.slip = slip
        self.draw_slip()
        self.draw_line()

    def _mark(self, step: int) -> None:
        if self.view is None:
            return
        if self.area == "next":
            self.job_at = max(0, min(len(self.view.jobs) - 1, self.job_at + step))
        else:
            self.today_at = max(0, min(len(self.view.today) - 1, self.today_at + step))
        self._draw_side()

    def _see_others(self) -> None:
        for change in self.desk.see_others():
            slip = self.desk.slip
            under = slip is not None and change in slip.changes
            when = f"{change.at.astimezone(self.now().tzinfo):%H:%M}"
            self.say("LOOK" if under else "", f"{change.by} {when} No. {change.seq}: {change.says}")
            if under:
                self.ring(2)

    def _ring_for(self, cups: tuple[Cup, ...]) -> None:
        for cup in cups:
            if cup.minutes_left is None:
                continue
            stage = 2 if cup.past else 1 if cup.minutes_left < _SOON_MIN else 0
            before = self._rung_for.get(cup.number)
            self._rung_for[cup.number] = stage
            if before is not None and stage > before:
                words = "is PAST its pot life" if cup.past else f"has {cup.minutes_left:.0f} min left"
                self.say("STOP" if cup.past else "LOOK", f"{cup.number} {words}")
                self.ring(3)
