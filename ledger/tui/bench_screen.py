"""The bench: the open slip on the left, cups, next jobs and today on the right."""

from __future__ import annotations

import os.path
from datetime import datetime
from typing import ClassVar

from textual.app import ComposeResult
from textual.containers import Horizontal, Vertical

from ledger.operations.clock_cups import Cup
from ledger.operations.find_thing import FoundThing
from ledger.operations.look_at_bench import BenchView, look_at_bench
from ledger.operations.open_build import Build
from ledger.tui.actions import BENCH, Action, action_for_word
from ledger.tui.area import Area
from ledger.tui.bench_drawing import (
    cups_text,
    findings_text,
    jobs_text,
    rule,
    signed,
    stack_text,
    stroke_of,
    today_text,
    where_text,
)
from ledger.tui.bench_writing import BenchWriting
from ledger.tui.completing import candidates, completed
from ledger.tui.crew import read_badge
from ledger.tui.room import Room
from ledger.tui.slip_drawing import hand_text, idle_text, judged_lines, slip_text
from ledger.units import Dimension, show

_SOON_MIN = 5.0
# Columns and rows of the fixed layout, and of the large one.
_SLIP, _CUPS, _NEXT = 49, 4, 5
_WIDE_SLIP, _WIDE_SIDE, _WIDE_TOP, _WIDE_CUPS, _WIDE_NEXT, _WIDE_WHERE = 60, 46, 25, 8, 8, 52
_PAGE = 10


class BenchScreen(BenchWriting):
    """Gathers a slip, shows what the bench must know at a glance."""

    WORD = "bench"
    AREAS = ("slip", "line", "next", "today")
    ACTIONS: ClassVar[tuple[Action, ...]] = BENCH
    DEFAULT_CSS = f"""
    BenchScreen .rule {{ height: 1; }}
    BenchScreen .bar {{ width: 1; height: 1fr; }}
    BenchScreen #top {{ height: 1fr; }}
    BenchScreen #slip {{ width: {_SLIP}; }}
    BenchScreen #side {{ width: 1fr; }}
    BenchScreen #cups {{ height: {_CUPS}; }}
    BenchScreen #next {{ height: {_NEXT}; }}
    BenchScreen .wide-only {{ display: none; }}
    BenchScreen.-wide .wide-only {{ display: block; }}
    BenchScreen.-wide #slip {{ width: {_WIDE_SLIP}; }}
    BenchScreen.-wide #side {{ width: {_WIDE_SIDE}; }}
    BenchScreen.-wide #top {{ height: {_WIDE_TOP}; }}
    BenchScreen.-wide #cups {{ height: {_WIDE_CUPS}; }}
    BenchScreen.-wide #next {{ height: {_WIDE_NEXT}; }}
    BenchScreen.-wide #bottom {{ height: 1fr; }}
    BenchScreen.-wide #where {{ width: {_WIDE_WHERE}; }}
    """

    def __init__(self) -> None:
        super().__init__()
        self.job_at = 0
        self.today_at = 0
        self.finding_at = 0
        self._rung_for: dict[str, int] = {}

    # -- layout

    def compose_body(self) -> ComposeResult:
        """Slip, side column, and what the large layout adds."""
        yield Area(id="rule-top", classes="rule")
        with Horizontal(id="top"):
            yield Area(id="slip")
            yield Area(classes="bar")
            with Vertical(id="side"):
                yield Area(id="cups")
                yield Area(classes="rule side-rule")
                yield Area(id="next")
                yield Area(classes="rule side-rule")
                yield Area(id="today")
            yield Area(classes="bar wide-only")
            yield Area(id="stack", classes="wide-only")
        yield Area(id="rule-middle", classes="rule wide-only")
        with Horizontal(id="bottom", classes="wide-only"):
            yield Area(id="findings")
            yield Area(classes="bar")
            yield Area(id="where")
        yield Area(id="rule-bottom", classes="rule")

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
        self.job_at = min(self.job_at, max(0, len(view.jobs) - 1))
        self.today_at = min(self.today_at, max(0, len(view.today) - 1))
        self.draw_all()

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

    def draw_all(self) -> None:
        """Every area."""
        if self.is_mounted:
            self._draw_rules()
            self.draw_slip()
            self._draw_side()
            self._draw_wide()

    def draw_slip(self) -> None:
        """The left area: the slip, else the thing in hand, else how to begin."""
        if not self.is_mounted:
            return
        desk = self.desk
        room = self._room(_WIDE_SLIP if self.wide else _SLIP, self._top_height(), here=self.area == "slip")
        self.ledger_app.line.lone_keys = not self._wants_text()
        if desk.slip is not None:
            foot = (*desk.foot(self._cups()), *self._open_for_field())
            typing = self.ledger_app.line.text if room.here else ""
            text = slip_text(desk.slip, typing, foot, self.now(), room)
        elif desk.hand is not None:
            text = hand_text(desk.hand, self._about_hand(), room)
        else:
            last = None if self.view is None else self.view.last
            words = "" if last is None else f"No. {last.seq} {last.at:%H:%M} {last.by} {last.says}"
            text = idle_text(words, tuple(desk.drafts), room)
        self.query_one("#slip", Area).draw(text)

    def prompt(self) -> str:
        """What the line is for just now."""
        desk = self.desk
        if desk.slip is not None and self.area == "slip":
            field = desk.slip.current
            return "log, Enter or scan: " if field is None else f"{_label(field.word)}, scan or type: "
        if desk.slip is None and desk.hand is not None:
            return f"{desk.hand.name}, reading [{desk.weigh_unit}] or a word: "
        return "scan or type: "

    def large_lines(self) -> tuple[str, ...]:
        """The ply and its cup, or the shortest clocks."""
        cups, slip = self._cups(), self.desk.slip
        ply = None if slip is None else slip.ply
        if slip is None or ply is None or ply.step is None:
            lines = tuple(line for cup in cups[:3] for line in _large_cup(cup))
            return lines or super().large_lines()
        named = slip.value("batches").upper().split()
        chosen = [cup for cup in cups if cup.number.upper() in named] or list(cups[:1])
        seen = ply.seen_deg
        return (
            f"ply {ply.step}/{ply.steps} {signed(seen)}{stroke_of(seen)}",
            *(line for cup in chosen[:1] for line in _large_cup(cup)),
            *((f"needs {1000 * ply.needs_kg:.0f} g",) if ply.needs_kg else ()),
            ply.side,
        )

    # -- what is heard

    def hear_typing(self) -> None:
        """The first key for the second component of a cup is its time zero."""
        if self.area == "slip":
            self.desk.press_in_field()
        super().hear_typing()
        self.draw_slip()

    def field_takes(self, text: str, *, scanned: bool) -> bool:
        """The open slip first, then a reading for the thing in hand."""
        if self.settle_reading(text):
            return True
        if self.desk.slip is not None:
            return self.area == "slip" and self._slip_takes(text, scanned=scanned)
        if text.strip() and self.desk.weigh(text, scanned=scanned):
            self.reading_taken(scanned=scanned)
            return True
        return False

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
            self.desk.slip = slip.put(slip.current.word, "")
            self.desk.keep()
            self.draw_slip()

    def do_complete(self) -> None:
        """Right: complete what is typed from what is open."""
        slip, view = self.desk.slip, self.view
        if slip is None or slip.current is None or view is None:
            return
        typed = self.ledger_app.line.text
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
            self.ledger_app.line.put(text)
        self.refuse(why or f"{text} does not fit here")
        self.draw_slip()
        return True

    def _enter_in_slip(self) -> None:
        slip = self.desk.slip
        field = None if slip is None else slip.current
        if slip is None or field is None:
            self.log_slip()
        elif field.required and not slip.value(field.word):
            self.refuse(f"{_label(field.word)} must be filled: {field.tip}")
        else:
            self._move(1)

    def _move(self, step: int) -> None:
        if self.desk.slip is not None:
            self.desk.slip = self.desk.slip.moved(step)
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

    def _cups(self) -> tuple[Cup, ...]:
        return () if self.view is None else self.desk.cups(self.view.cups)

    def _open_for_field(self) -> tuple[tuple[str, str], ...]:
        slip, view = self.desk.slip, self.view
        if slip is None or slip.current is None or view is None or not slip.current.things:
            return ()
        found = candidates(slip.current, self.ledger_app.line.text, view.open_things)
        return (("", f"open: {', '.join(one.text for one in found[:8])}"),) if found else ()

    def _about_hand(self) -> tuple[tuple[str, str], ...]:
        desk = self.desk
        if desk.reading is not None:
            return judged_lines(desk.reading.judged, self.units)
        return () if self.view is None or desk.hand is None else self.view.lines_about(desk.hand.name)

    def _wants_text(self) -> bool:
        # A reading may begin with a lone digit; the screens' digits are keys only where nothing is asked for.
        return self.desk.hand is not None if self.desk.slip is None else self.area == "slip"

    # -- drawing

    def _room(self, width: int, height: int, *, here: bool = False) -> Room:
        return Room(width=width, height=height, signs=self.signs, lines=self.lines, here=here)

    def _top_height(self) -> int:
        return _WIDE_TOP if self.wide else max(3, self.app.size.height - 7)

    def _side_width(self) -> int:
        return _WIDE_SIDE if self.wide else max(10, self.app.size.width - _SLIP - 1)

    def _draw_side(self) -> None:
        view = self.view
        if view is None or not self.is_mounted:
            return
        width = self._side_width()
        cups, jobs = (_WIDE_CUPS, _WIDE_NEXT) if self.wide else (_CUPS, _NEXT)
        today = max(1, self._top_height() - cups - jobs - 2)
        added = show(view.today_kg, Dimension.MASS, self.units, places=1)
        self.query_one("#cups", Area).draw(cups_text(self._cups(), self._room(width, cups)))
        self.query_one("#next", Area).draw(
            jobs_text(view.jobs, self.job_at, self._room(width, jobs, here=self.area == "next"))
        )
        self.query_one("#today", Area).draw(
            today_text(view.today, added, self.today_at, self._room(width, today, here=self.area == "today"))
        )

    def _draw_wide(self) -> None:
        if not self.wide or self.view is None or not self.is_mounted:
            return
        ply = None if self.desk.slip is None else self.desk.slip.ply
        width, below = self.app.size.width, max(1, self.app.size.height - 8 - _WIDE_TOP)
        stack = self._room(width - _WIDE_SLIP - _WIDE_SIDE - 2, _WIDE_TOP)
        self.query_one("#stack", Area).draw(stack_text(ply, stack))
        self.query_one("#where", Area).draw(where_text(ply, self._room(_WIDE_WHERE, below)))
        findings = self._room(width - _WIDE_WHERE - 1, below)
        self.query_one("#findings", Area).draw(findings_text(self.view.findings, self.finding_at, findings))

    def _draw_rules(self) -> None:
        lines, width = self.lines, self.app.size.width
        bars = (_WIDE_SLIP, _WIDE_SLIP + 1 + _WIDE_SIDE) if self.wide else (_SLIP,)
        where = (width - _WIDE_WHERE - 1,) if self.wide else bars
        down, up = [(at, lines.tee_down) for at in bars], [(at, lines.tee_up) for at in where]
        self.query_one("#rule-top", Area).draw(rule(width, lines, down))
        self.query_one("#rule-bottom", Area).draw(rule(width, lines, up))
        middle = [(at, lines.tee_up) for at in bars] + [(at, lines.tee_down) for at in where]
        self.query_one("#rule-middle", Area).draw(rule(width, lines, middle))
        for area in self.query(".side-rule").results(Area):
            area.draw(rule(self._side_width(), lines))
        for bar in self.query(".bar").results(Area):
            bar.draw("\n".join([lines.v] * self.app.size.height))


def _label(word: str) -> str:
    return word.replace("_", " ")


def _large_cup(cup: Cup) -> tuple[str, ...]:
    if cup.minutes_left is None:
        return (cup.number,)
    time = f"past {-cup.minutes_left:.0f} min" if cup.past else f"{cup.minutes_left:.0f} min"
    grams = "" if cup.left_kg is None else f" {1000 * max(0.0, cup.left_kg):.0f} g"
    return (f"{cup.number}{grams}", time)
