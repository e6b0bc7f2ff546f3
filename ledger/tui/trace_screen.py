"""Trace: scan or type a number, and see what it is, whether it is good, and how far it has gone."""

from __future__ import annotations

from datetime import datetime
from typing import ClassVar

from textual.app import ComposeResult
from textual.containers import Horizontal

from ledger.model.things import ThingKind
from ledger.operations.find_thing import FoundThing
from ledger.operations.look_at_trace import TraceView, look_at_trace
from ledger.operations.open_build import Build
from ledger.operations.take_stock import take_stock
from ledger.tui.actions import Action
from ledger.tui.area import Area
from ledger.tui.bench_drawing import rule
from ledger.tui.room import Room
from ledger.tui.trace_rows import (
    LinkRow,
    begin_text,
    entries_text,
    findings_text,
    headline_text,
    links_text,
    pieces_text,
    rows_of,
    suspects_text,
)
from ledger.tui.work_screen import WorkScreen

_LEFT, _WIDE_LEFT = 39, 79
_ENTRIES, _WIDE_ENTRIES = 5, 16
_STEPS, _WIDE_STEPS = 1, 2
_PAGE = 10


class TraceScreen(WorkScreen[TraceView]):
    """Goes from thing to thing along the links."""

    WORD = "trace"
    AREAS = ("went into", "made from", "entries")
    ACTIONS: ClassVar[tuple[Action, ...]] = (
        Action(name="row_before", word="row before", key="up", tip="the mark to the row above"),
        Action(name="row_after", word="row after", key="down", tip="the mark to the row below"),
        Action(name="page_before", word="page before", key="pageup", tip="a page up"),
        Action(name="page_after", word="page after", key="pagedown", tip="a page down"),
        Action(name="follow", word="follow", key="right", tip="go to the thing under the mark; also Enter"),
        Action(name="go_back", word="back", key="left", tip="back to the thing before"),
        Action(name="start_anew", word="anew", key="home", tip="the list of what there is to look into"),
    )
    DEFAULT_CSS = f"""
    TraceScreen .one-row {{ height: 1; }}
    TraceScreen .bar {{ width: 1; }}
    TraceScreen #trace-from {{ width: {_LEFT}; }}
    TraceScreen.-wide #trace-from {{ width: {_WIDE_LEFT}; }}
    TraceScreen #trace-lower {{ height: {_ENTRIES}; }}
    TraceScreen.-wide #trace-lower {{ height: {_WIDE_ENTRIES}; }}
    TraceScreen .wide-only {{ display: none; }}
    TraceScreen.-wide .wide-only {{ display: block; }}
    TraceScreen #trace-findings {{ width: {_WIDE_LEFT}; }}
    """

    def __init__(self) -> None:
        super().__init__()
        self.what: str | None = None
        self.before: list[str | None] = []
        self.marks: dict[str, int] = {}

    def compose_body(self) -> ComposeResult:
        """Two headline rows, both ways side by side, entries below."""
        yield Area(id="trace-headline", classes="one-row")
        yield Area(id="trace-pieces", classes="one-row")
        yield Area(id="trace-rule-top", classes="one-row")
        with Horizontal():
            yield Area(id="trace-from")
            yield Area(classes="bar")
            yield Area(id="trace-into")
        yield Area(id="trace-rule-middle", classes="one-row")
        with Horizontal(id="trace-lower"):
            yield Area(id="trace-findings", classes="wide-only")
            yield Area(classes="bar wide-only")
            yield Area(id="trace-entries")

    def look(self, build: Build, now: datetime) -> TraceView:  # noqa: ARG002
        """In a thread: follow what was asked for, in the stock taken together with the build."""
        stock = self.ledger_app.stock
        return look_at_trace(take_stock(build.book) if stock is None else stock, self.what)

    def show(self, view: TraceView) -> None:  # noqa: ARG002  the marks are counted in self.view
        """The new view, with the marks where they were."""
        for area in self.AREAS:
            self.marks[area] = max(0, min(self.marks.get(area, 0), self._many(area) - 1))
        self.draw_all()

    def area_changed(self) -> None:
        """The mark moves with Tab."""
        self.draw_all()

    def draw_all(self) -> None:
        """Every area."""
        view = self.view
        if view is None or not self.is_mounted:
            return
        width, left = self.app.size.width, self._left()
        self.query_one("#trace-headline", Area).draw(headline_text(view, self._room(width, 1)))
        self.query_one("#trace-pieces", Area).draw(pieces_text(view, self._room(width, 1)))
        lines = self.lines
        self.query_one("#trace-rule-top", Area).draw(rule(width, lines, [(left, lines.tee_down)]))
        joint = lines.cross if self.wide else lines.tee_up
        self.query_one("#trace-rule-middle", Area).draw(rule(width, lines, [(left, joint)]))
        for bar in self.query(".bar").results(Area):
            bar.draw("\n".join([lines.v] * self.app.size.height))
        height = self._links_height()
        made = self._room(left, height, "made from")
        into = self._room(width - left - 1, height, "went into")
        if view.trace is None:
            suspects = suspects_text(view.suspects, self.marks.get("went into", 0), into)
            self.query_one("#trace-into", Area).draw(suspects)
            self.query_one("#trace-from", Area).draw(begin_text(made))
        else:
            self._draw_links("went into", "#trace-into", "WENT INTO", into)
            self._draw_links("made from", "#trace-from", "MADE FROM", made)
        below = _WIDE_ENTRIES if self.wide else _ENTRIES
        entries = self._room(width - left - 1 if self.wide else width, below, "entries")
        self.query_one("#trace-entries", Area).draw(
            entries_text(view.entries, self.marks.get("entries", 0), entries)
        )
        if self.wide:
            self.query_one("#trace-findings", Area).draw(findings_text(view, self._room(left, below)))

    def _draw_links(self, area: str, widget: str, title: str, room: Room) -> None:
        if self.view is not None:
            text = links_text(self._links(area), title, self.marks.get(area, 0), self.view.display, room)
            self.query_one(widget, Area).draw(text)

    def _links(self, area: str) -> tuple[LinkRow, ...]:
        if self.view is None or self.view.trace is None:
            return ()
        traced, steps = self.view.trace, _WIDE_STEPS if self.wide else _STEPS
        if area == "made from":
            return rows_of(traced.made_from, "made_from", steps)
        return rows_of(traced.went_into, "went_into", steps)

    def _many(self, area: str) -> int:
        if self.view is None:
            return 0
        if area == "entries":
            return len(self.view.entries)
        if self.view.trace is None:
            return len(self.view.suspects) if area == "went into" else 0
        return len(self._links(area))

    def _left(self) -> int:
        return _WIDE_LEFT if self.wide else _LEFT

    def _links_height(self) -> int:
        return max(1, self.app.size.height - 5 - 4 - (_WIDE_ENTRIES if self.wide else _ENTRIES))

    def _room(self, width: int, height: int, area: str = "") -> Room:
        return Room(
            width=max(1, width), height=height, signs=self.signs, lines=self.lines, here=self.area == area
        )

    # -- what is heard

    def take_thing(self, thing: FoundThing) -> bool:
        """Whatever it is, follow it."""
        self._go_to(thing.name)
        return True

    def thing_in_hand(self) -> FoundThing | None:
        """The thing that is followed, so that hold begins with it."""
        traced = None if self.view is None else self.view.trace
        if self.view is None or traced is None or traced.kind not in {kind.value for kind in ThingKind}:
            return None
        return FoundThing(
            kind=ThingKind(traced.kind),
            number=self.view.number,
            name=traced.what,
            says=f"{traced.kind} {traced.what}, {traced.state}",
        )

    def take_enter(self) -> None:
        """Follow the link under the mark."""
        self.do_follow()

    def large_lines(self) -> tuple[str, ...]:
        """What it is, good or bad, and how far it has gone."""
        view = self.view
        if view is None or view.trace is None:
            return ("trace", "scan a number")
        return (
            view.trace.what,
            view.verdict,
            f"in {len(view.pieces)} pieces",
            f"fitted {len(view.fitted)}",
        )

    # -- what actions do

    def do_row_before(self) -> None:
        """Up."""
        self._move(-1)

    def do_row_after(self) -> None:
        """Down."""
        self._move(1)

    def do_page_before(self) -> None:
        """A page up."""
        self._move(-_PAGE)

    def do_page_after(self) -> None:
        """A page down."""
        self._move(_PAGE)

    def do_follow(self) -> None:
        """Go to what is under the mark."""
        view, at = self.view, self.marks.get(self.area, 0)
        if view is None or self.area == "entries" or at >= self._many(self.area):
            return
        if view.trace is None:
            self._go_to(view.suspects[at].what)
            return
        link = self._links(self.area)[at].link
        if link.kind in {kind.value for kind in ThingKind}:
            self._go_to(link.what)
        else:
            self.say("", f"{link.what} is the end of the record")

    def do_go_back(self) -> None:
        """To the thing before."""
        if self.before:
            self.what = self.before.pop()
            self.marks = {}
            self.ask_again()

    def do_start_anew(self) -> None:
        """To the list of what there is to look into, the mark on it."""
        self.go_to_area("went into")
        self._go_to(None)

    def _go_to(self, what: str | None) -> None:
        if what != self.what:
            self.before.append(self.what)
        self.what = what
        self.marks = {}
        self.ask_again()

    def _move(self, by: int) -> None:
        many = self._many(self.area)
        if many:
            self.marks[self.area] = max(0, min(many - 1, self.marks.get(self.area, 0) + by))
            self.draw_all()
