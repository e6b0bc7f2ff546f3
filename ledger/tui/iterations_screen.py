"""Iterations: what a change of design does to mass, CG and fuel, and what built work it costs."""

from __future__ import annotations

from rich.text import Text
from textual.app import ComposeResult
from textual.containers import Horizontal, Vertical

from ledger.model.comparison import Comparison, UnfitPiece
from ledger.operations.find_thing import FoundThing
from ledger.operations.look_at_iterations import IterationsView
from ledger.tui.area import Area
from ledger.tui.bench_drawing import filled, rule
from ledger.tui.iterations_actions import ATTITUDES, FIGURES, HISTORY, PARTS, UNFIT
from ledger.tui.iterations_asking import IterationsAsking
from ledger.tui.iterations_figures import (
    figure_rows,
    figures_text,
    headline_text,
    nothing_words,
    part_words,
    parts_text,
    unfit_text,
    unfit_words,
)
from ledger.tui.iterations_history import chart_text, history_text, moment_words
from ledger.tui.iterations_plans import attitude_words, attitudes_text, plan_from_above_text, plans_scale
from ledger.tui.list_screen import ListScreen
from ledger.tui.messages import fits
from ledger.tui.room import Room

# Rows of the body below the headline and its rule; the list of parts takes what is left.
_FIGURES, _WIDE_FIGURES = 5, 14
_HISTORY, _WIDE_HISTORY = 5, 12
_SIDE = 78
_PARTS = 47
_CHART = 34
_PLAN = 14


class IterationsScreen(IterationsAsking):
    """Two iterations side by side, all of them below; both plans from above where there is room."""

    DEFAULT_CSS = f"""
    IterationsScreen .one-row {{ height: 1; }}
    IterationsScreen .bar {{ width: 1; }}
    IterationsScreen #iterations-figures {{ height: {_FIGURES}; }}
    IterationsScreen.-wide #iterations-figures {{ height: {_WIDE_FIGURES}; }}
    IterationsScreen #iterations-parts {{ width: {_PARTS}; }}
    IterationsScreen #iterations-lower {{ height: {_HISTORY}; }}
    IterationsScreen.-wide #iterations-lower {{ height: {_WIDE_HISTORY}; }}
    IterationsScreen #iterations-chart {{ width: {_CHART}; }}
    IterationsScreen .wide-only {{ display: none; }}
    IterationsScreen.-wide .wide-only {{ display: block; }}
    IterationsScreen #iterations-side {{ width: {_SIDE}; }}
    IterationsScreen #iterations-plan-a, IterationsScreen #iterations-plan-b {{ height: {_PLAN}; }}
    """

    def __init__(self) -> None:
        super().__init__()
        self.marks: dict[str, int] = {}

    def compose_body(self) -> ComposeResult:
        """Headline, figures, parts beside what no longer fits, history beside its chart."""
        yield Area(id="iterations-headline", classes="one-row")
        yield Area(id="iterations-rule-top", classes="one-row")
        with Horizontal():
            with Vertical():
                yield Area(id="iterations-figures")
                yield Area(id="iterations-rule-middle", classes="one-row")
                with Horizontal():
                    yield Area(id="iterations-parts")
                    yield Area(classes="bar")
                    yield Area(id="iterations-unfit")
                yield Area(id="iterations-rule-lower", classes="one-row")
                with Horizontal(id="iterations-lower"):
                    yield Area(id="iterations-history")
                    yield Area(classes="bar")
                    yield Area(id="iterations-chart")
            yield Area(classes="bar wide-only")
            with Vertical(id="iterations-side", classes="wide-only"):
                yield Area(id="iterations-plan-a")
                yield Area(id="iterations-plan-b")
                yield Area(id="iterations-rule-side", classes="one-row")
                yield Area(id="iterations-attitudes")

    @property
    def comparison(self) -> Comparison | None:
        """The two that are compared, once that is done."""
        return None if self.compared is None else self.compared.comparison

    def area_changed(self) -> None:
        """The mark moves with Tab."""
        self.draw_all()

    def marks_back(self) -> None:
        """Another pair: every mark to the first row."""
        self.marks = {}

    # -- drawing

    def draw_all(self) -> None:
        """Every area."""
        if not self.is_mounted:
            return
        self._draw_rules()
        self._draw_headline()
        self._draw_compared()
        self._draw_history()
        if self.wide:
            self._draw_side()

    def _draw_rules(self) -> None:
        width, lines = self.app.size.width, self.lines
        left = self._left()
        top = [(left, lines.tee_down)] if self.wide else []
        self.query_one("#iterations-rule-top", Area).draw(rule(width, lines, top))
        self.query_one("#iterations-rule-middle", Area).draw(rule(left, lines, [(_PARTS, lines.tee_down)]))
        joints = [(_PARTS, lines.tee_up), (left - _CHART - 1, lines.tee_down)]
        self.query_one("#iterations-rule-lower", Area).draw(rule(left, lines, joints))
        self.query_one("#iterations-rule-side", Area).draw(rule(_SIDE, lines))
        for bar in self.query(".bar").results(Area):
            bar.draw("\n".join([lines.v] * self.app.size.height))

    def _draw_headline(self) -> None:
        room = self._room(self.app.size.width, 1)
        comparison, found = self.comparison, self.compared
        if comparison is not None and found is not None:
            text = headline_text(comparison, found.display, room)
        elif found is not None or (self.view is not None and len(self.names) < 2):
            text = Text("NOTHING TO COMPARE YET", style=self.signs.head)
        else:
            text = Text("comparing" if self.long.running else "not compared: type compare")
        self.query_one("#iterations-headline", Area).draw(text)

    def _draw_compared(self) -> None:
        found, comparison = self.compared, self.comparison
        left, parts_height = self._left(), self._parts_height()
        figures = self.query_one("#iterations-figures", Area)
        parts = self.query_one("#iterations-parts", Area)
        unfit = self.query_one("#iterations-unfit", Area)
        if found is None or comparison is None:
            words = nothing_words(self.names) if found is not None else ()
            figures.draw(filled([Text(row[:left]) for row in words], self._figures_height()))
            parts.draw("")
            unfit.draw("")
            return
        rows = figure_rows(comparison, found.display)
        room = self._room(left, self._figures_height(), FIGURES)
        figures.draw(figures_text(comparison, rows, self._at(FIGURES), room))
        room = self._room(_PARTS, parts_height, PARTS)
        parts.draw(parts_text(comparison, self._at(PARTS), found.display, room))
        room = self._room(left - _PARTS - 1, parts_height, UNFIT)
        unfit.draw(unfit_text(comparison, self._at(UNFIT), found.display, room))

    def _draw_history(self) -> None:
        found, below = self.compared, self._history_height()
        if found is None:
            return
        left = self._left() - _CHART - 1
        room = self._room(left, below, HISTORY)
        history = history_text(found.history, self._at(HISTORY), found.display, room)
        self.query_one("#iterations-history", Area).draw(history)
        chart = chart_text(found.history, found.display, self._room(_CHART, below))
        self.query_one("#iterations-chart", Area).draw(chart)

    def _draw_side(self) -> None:
        found, comparison = self.compared, self.comparison
        if found is None or comparison is None or found.plans is None:
            return
        scale = plans_scale(found.plans, _SIDE, _PLAN - 1)
        named = ((comparison.a, "a"), (comparison.b, "b"))
        for (name, letter), plan in zip(named, found.plans, strict=True):
            text = plan_from_above_text(name, plan, scale, self._room(_SIDE, _PLAN))
            self.query_one(f"#iterations-plan-{letter}", Area).draw(text)
        room = self._room(_SIDE, self._side_height(), ATTITUDES)
        attitudes = attitudes_text(comparison, self._at(ATTITUDES), found.display, room)
        self.query_one("#iterations-attitudes", Area).draw(attitudes)

    def large_lines(self) -> tuple[str, ...]:
        """Which two, and the change in mass, and how much built work it costs."""
        found, comparison = self.compared, self.comparison
        if found is None or comparison is None:
            return (self.WORD, *self.names[-1:])
        room = Room(width=200, height=1, signs=self.signs)
        first = headline_text(comparison, found.display, room).plain.split("  ")
        many = len(comparison.no_longer_fits)
        return (f"{comparison.b} for {comparison.a}"[:16], first[1].strip(), f"{many} no longer fit")

    # -- marks

    def _many(self, area: str) -> int:
        found, comparison = self.compared, self.comparison
        if found is None:
            return 0
        if area == HISTORY:
            return len(found.history)
        if comparison is None:
            return 0
        attitudes = comparison.fuel.whole.attitudes if comparison.fuel is not None else ()
        return {
            FIGURES: len(figure_rows(comparison, found.display)),
            PARTS: len(comparison.mass.parts),
            UNFIT: len(comparison.no_longer_fits),
            ATTITUDES: len(attitudes),
        }[area]

    def _at(self, area: str) -> int:
        return max(0, min(self.marks.get(area, 0), self._many(area) - 1))

    def _move(self, by: int) -> None:
        self.marks[self.area] = max(0, min(self._at(self.area) + by, self._many(self.area) - 1))
        self.draw_all()

    def do_row_before(self) -> None:
        """Up."""
        self._move(-1)

    def do_row_after(self) -> None:
        """Down."""
        self._move(1)

    def do_page_before(self) -> None:
        """A page up."""
        self._move(-self._page())

    def do_page_after(self) -> None:
        """A page down."""
        self._move(self._page())

    def do_first_row(self) -> None:
        """Home."""
        self._move(-self._many(self.area))

    def do_last_row(self) -> None:
        """End."""
        self._move(self._many(self.area))

    def do_next_area(self) -> None:
        """Tab; attitudes are there only where they are drawn."""
        super().do_next_area()
        if self.area == ATTITUDES and not self.wide:
            super().do_next_area()

    def do_area_before(self) -> None:
        """Shift-Tab."""
        super().do_area_before()
        if self.area == ATTITUDES and not self.wide:
            super().do_area_before()

    def take_enter(self) -> None:
        """The row under the mark at length."""
        self.do_say_row()

    def do_say_row(self) -> None:
        """The row under the mark at length."""
        found, comparison, at = self.compared, self.comparison, self._at(self.area)
        if found is None or at >= self._many(self.area):
            self.say("", "there is no row here")
            return
        sign = "LOOK" if self.area == UNFIT else ""
        words = self._row_words(found, comparison, at)
        self.say(sign, words)
        if not fits(words, self.app.size.width):
            self.app.push_screen(ListScreen(self.area.upper(), ((sign, words),)))

    def _row_words(self, found: IterationsView, comparison: Comparison | None, at: int) -> str:
        if self.area == HISTORY or comparison is None:
            return moment_words(found.history[at])
        if self.area == PARTS:
            return part_words(comparison.mass.parts[at], found.display)
        if self.area == UNFIT:
            return unfit_words(comparison.no_longer_fits[at], wide=self.wide)
        if self.area == ATTITUDES and comparison.fuel is not None:
            return attitude_words(comparison.fuel.whole.attitudes[at], found.display)
        row = figure_rows(comparison, found.display)[at]
        return f"{row.name.strip()}: {row.a or '-'} in {comparison.a}, {row.b or '-'} in {comparison.b}"

    # -- built pieces

    @property
    def unfit(self) -> UnfitPiece | None:
        """The piece under the mark of those that no longer fit."""
        comparison = self.comparison
        if comparison is None or self.area != UNFIT or not comparison.no_longer_fits:
            return None
        return comparison.no_longer_fits[self._at(UNFIT)]

    def thing_in_hand(self) -> FoundThing | None:
        """The piece or part under the mark, so that a word such as weigh or trace begins with it."""
        comparison = self.comparison
        if self.unfit is not None:
            return self.ledger_app.find(self.unfit.piece)
        if comparison is not None and self.area == PARTS and comparison.mass.parts:
            return self.ledger_app.find(comparison.mass.parts[self._at(PARTS)].part)
        return None

    def take_thing(self, thing: FoundThing) -> bool:
        """A piece or part that was scanned gets the mark, where it is among what changed."""
        comparison = self.comparison
        if comparison is None:
            return False
        pieces = [one.piece for one in comparison.no_longer_fits]
        parts = [part.part for part in comparison.mass.parts]
        part = thing.name.rpartition("/")[0] or thing.name
        if thing.name in pieces:
            self._mark(UNFIT, pieces.index(thing.name))
        elif part in parts:
            self._mark(PARTS, parts.index(part))
        else:
            return False
        self.say("ok", thing.says)
        return True

    def _mark(self, area: str, at: int) -> None:
        self.marks[area] = at
        self.go_to_area(area)
        self.draw_all()

    def do_choose_again(self) -> None:
        """The word."""
        self._choose("cut again")

    def do_choose_accept(self) -> None:
        """The word."""
        self._choose("accept")

    def do_choose_keep(self) -> None:
        """The word."""
        self._choose("keep for stock")

    def do_open_accept(self) -> None:
        """`accept` with the mark on a piece that no longer fits is about that."""
        self._choose_or_open("accept", "accept")

    def do_open_cut(self) -> None:
        """`cut` likewise."""
        self._choose_or_open("cut again", "cut")

    def _choose_or_open(self, choice: str, kind: str) -> None:
        if self.unfit is not None:
            self._choose(choice)
        else:
            self.ledger_app.open_slip(kind, self.thing_in_hand())

    def _choose(self, word: str) -> None:
        one, comparison = self.unfit, self.comparison
        if one is None or comparison is None:
            self.refuse("Tab to the built pieces that no longer fit and put the mark on one first")
            return
        if not comparison.adopted:
            self.refuse(f"{comparison.b} is only a preview: what is built is dealt with once it is adopted")
            return
        if comparison.b != self.names[-1]:
            self.refuse(f"{comparison.b} is not the current iteration: type latest, then choose")
            return
        chosen = next((choice for choice in one.choices if choice.choice == word), None)
        if chosen is None:
            offered = ", ".join(choice.choice for choice in one.choices)
            self.refuse(f"{one.piece}: choose {offered}")
            return
        self.ledger_app.open_entries(chosen.entries)

    # -- room

    def _room(self, width: int, height: int, area: str = "") -> Room:
        return Room(
            width=max(1, width), height=height, signs=self.signs, lines=self.lines, here=self.area == area
        )

    def _left(self) -> int:
        return self.app.size.width - _SIDE - 1 if self.wide else self.app.size.width

    def _figures_height(self) -> int:
        return _WIDE_FIGURES if self.wide else _FIGURES

    def _history_height(self) -> int:
        return _WIDE_HISTORY if self.wide else _HISTORY

    def _parts_height(self) -> int:
        return max(1, self.app.size.height - 5 - 4 - self._figures_height() - self._history_height())

    def _side_height(self) -> int:
        return max(1, self.app.size.height - 5 - 3 - 2 * _PLAN)

    def _page(self) -> int:
        heights = {FIGURES: self._figures_height(), HISTORY: self._history_height()}
        return max(1, heights.get(self.area, self._parts_height()) - 1)
