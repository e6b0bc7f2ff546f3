"""The bench's face: which areas there are, how big, and what each shows just now."""

from __future__ import annotations

from collections.abc import Sequence

from textual.app import ComposeResult
from textual.containers import Horizontal, Vertical

from ledger.operations.clock_cups import Cup
from ledger.tui.area import Area
from ledger.tui.bench_drawing import (
    cups_text,
    jobs_text,
    rule,
    signed,
    stroke_of,
    today_text,
    worded_rule,
)
from ledger.tui.bench_wide import findings_text, stack_text, where_text
from ledger.tui.bench_writing import BenchWriting
from ledger.tui.completing import candidates
from ledger.tui.large_cups import cups_by_urgency, large_cup
from ledger.tui.large_print import large_rows
from ledger.tui.room import Room
from ledger.tui.scale_reading import weigh_unit
from ledger.tui.slip_drawing import hand_text, idle_text, judged_lines, label_of, slip_text
from ledger.tui.slip_foot import foot_of, named_cups
from ledger.tui.tour import INVENTED
from ledger.units import Dimension, show

# Columns and rows of the fixed layout, and of the large one.
_SLIP, _CUPS, _NEXT = 49, 6, 5
_WIDE_SLIP, _WIDE_SIDE, _WIDE_TOP, _WIDE_CUPS, _WIDE_NEXT, _WIDE_WHERE = 58, 46, 25, 8, 8, 54


class BenchFace(BenchWriting):
    """Draws the slip in hand, cups, next jobs, today; in the large layout the stack, its place, findings."""

    DEFAULT_CSS = f"""
    BenchFace .rule {{ height: 1; }}
    BenchFace .bar {{ width: 1; height: 1fr; }}
    BenchFace #top {{ height: 1fr; }}
    BenchFace #slip {{ width: {_SLIP}; }}
    BenchFace #side {{ width: 1fr; }}
    BenchFace #cups {{ height: {_CUPS}; }}
    BenchFace #next {{ height: {_NEXT}; }}
    BenchFace .wide-only {{ display: none; }}
    BenchFace.-wide .wide-only {{ display: block; }}
    BenchFace.-wide #slip {{ width: {_WIDE_SLIP}; }}
    BenchFace.-wide #side {{ width: {_WIDE_SIDE}; }}
    BenchFace.-wide #top {{ height: {_WIDE_TOP}; }}
    BenchFace.-wide #cups {{ height: {_WIDE_CUPS}; }}
    BenchFace.-wide #next {{ height: {_WIDE_NEXT}; }}
    BenchFace.-wide #bottom {{ height: 1fr; }}
    BenchFace.-wide #where {{ width: {_WIDE_WHERE}; }}
    """

    def __init__(self) -> None:
        super().__init__()
        self.job_at = 0
        self.today_at = 0
        self.finding_at = 0

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

    # -- drawing

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
            foot = (*foot_of(desk.slip, self.stock, self._cups(), self.now()), *self._open_for_field())
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
            return "log, Enter or scan: " if field is None else f"{label_of(field.word)}, scan or type: "
        if desk.slip is None and desk.hand is not None:
            return f"{desk.hand.name}, reading [{weigh_unit(self.units)}] or a word: "
        return "scan or type: "

    def large_lines(self) -> tuple[str, ...]:
        """The ply and its cup, else every cup's minutes; what is left over follows in small letters."""
        cups, slip = self._cups(), self.desk.slip
        ply = None if slip is None else slip.ply
        if slip is None or ply is None or ply.step is None:
            ordered = cups_by_urgency(cups, large_rows(self.app.size.height - 5))
            return tuple(large_cup(cup) for cup in ordered) or super().large_lines()
        named = named_cups(slip)
        chosen = [cup for cup in cups if cup.number.upper() in named] or list(cups[:1])
        others = [cup for cup in cups if cup not in chosen]
        seen = ply.seen_deg
        left_g = 1000 * sum(max(0.0, cup.left_kg or 0.0) for cup in chosen)
        return (
            f"{ply.side[:5]} {ply.step}/{ply.steps} {signed(seen)}{stroke_of(seen)}",
            *(large_cup(cup) for cup in chosen[:1]),
            *((f"{left_g:.0f} of {1000 * ply.needs_kg:.0f} g",) if ply.needs_kg else ()),
            *(large_cup(cup) for cup in chosen[1:]),
            *(large_cup(cup) for cup in sorted(others, key=lambda cup: (not cup.unfit, not cup.has_some))),
        )

    def _cups(self) -> tuple[Cup, ...]:
        return () if self.view is None else self.desk.cups(self.view.cups)

    def _open_for_field(self) -> tuple[tuple[str, str], ...]:
        slip, view = self.desk.slip, self.view
        if slip is None or slip.current is None or view is None or not slip.current.things:
            return ()
        found = candidates(slip.current, self.ledger_app.line.text, view.open_things)
        row = "open:"
        for one in found:
            if len(row) + len(one.text) + 2 > _SLIP - 2:
                break
            row = f"{row} {one.text}"
        return (("", row),) if found else ()

    def _about_hand(self) -> tuple[tuple[str, str], ...]:
        desk = self.desk
        if desk.reading is not None:
            return judged_lines(desk.reading.judged, self.units)
        return () if self.view is None or desk.hand is None else self.view.lines_about(desk.hand.name)

    def _wants_text(self) -> bool:
        # A reading may begin with a lone digit; the screens' digits are keys only where nothing is asked for.
        return self.desk.hand is not None if self.desk.slip is None else self.area == "slip"

    def _room(self, width: int, height: int, *, here: bool = False) -> Room:
        return Room(width=width, height=height, signs=self.signs, lines=self.lines, here=here)

    def _top_height(self) -> int:
        return _WIDE_TOP if self.wide else max(3, self.app.size.height - 7)

    def _side_width(self) -> int:
        return _WIDE_SIDE if self.wide else max(10, self.app.size.width - _SLIP - 1)

    def _draw_tour(self, down: Sequence[tuple[int, str]]) -> None:
        """In the sample build the rules above and below say what it is, and what to try next."""
        tour = self.ledger_app.tour_line
        if tour is None:
            return
        width = self.app.size.width
        self.query_one("#rule-top", Area).draw(worded_rule(INVENTED, width, self.lines, self.signs, down))
        self.query_one("#rule-bottom", Area).draw(worded_rule(tour, width, self.lines, self.signs))

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

    def _part_in_hand(self) -> str | None:
        """The part that the slip or the hand is about: a piece is named by its part and a number."""
        slip, hand = self.desk.slip, self.desk.hand
        named = "" if slip is None else slip.value("piece") or slip.value("pieces") or slip.value("what")
        name = named.split(";")[0].strip() or ("" if hand is None else hand.name)
        return name.rsplit("/", 1)[0] if name else None

    def _draw_wide(self) -> None:
        if not self.wide or self.view is None or not self.is_mounted:
            return
        ply = None if self.desk.slip is None else self.desk.slip.ply
        width, below = self.app.size.width, max(1, self.app.size.height - 8 - _WIDE_TOP)
        stack = self._room(width - _WIDE_SLIP - _WIDE_SIDE - 2, _WIDE_TOP)
        self.query_one("#stack", Area).draw(stack_text(ply, stack))
        place = self._room(_WIDE_WHERE, below)
        self.query_one("#where", Area).draw(where_text(self._part_in_hand(), self.view.places, place))
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
        self._draw_tour(down)
        for area in self.query(".side-rule").results(Area):
            area.draw(rule(self._side_width(), lines))
        for bar in self.query(".bar").results(Area):
            bar.draw("\n".join([lines.v] * self.app.size.height))
