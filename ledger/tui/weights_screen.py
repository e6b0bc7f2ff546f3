"""Weights: what the wing weighs against its plan, how much of that is weighed, and what moved it."""

from __future__ import annotations

from datetime import datetime
from typing import ClassVar

from textual.app import ComposeResult
from textual.containers import Horizontal, Vertical

from ledger.model.things import ThingKind
from ledger.operations.find_thing import FoundThing
from ledger.operations.look_at_weights import WeightRow, WeightsView, look_at_weights
from ledger.operations.open_build import Build
from ledger.reports.plain import clean, shortened
from ledger.tui.actions import Action
from ledger.tui.area import Area
from ledger.tui.bench_drawing import rule
from ledger.tui.room import Room
from ledger.tui.weights_figures import causes_text, chosen_text, headline_text, known_text
from ledger.tui.weights_tree import branches_to, head_text, seen_rows, tree_text
from ledger.tui.work_screen import WorkScreen

_CAUSES = 5
_SIDE = 62
_TITLE = 24
_FIXED_ROWS = 5


class WeightsScreen(WorkScreen[WeightsView]):
    """The tree of assemblies, parts and pieces with a mark that goes along it."""

    WORD = "weights"
    AREAS = ("causes of the wing", "causes of the row")
    ACTIONS: ClassVar[tuple[Action, ...]] = (
        Action(name="row_before", word="row before", key="up", tip="the mark to the row above"),
        Action(name="row_after", word="row after", key="down", tip="the mark to the row below"),
        Action(name="page_before", word="page before", key="pageup", tip="a page up the tree"),
        Action(name="page_after", word="page after", key="pagedown", tip="a page down the tree"),
        Action(name="first_row", word="first", key="home", tip="the mark to the first row"),
        Action(name="last_row", word="last", key="end", tip="the mark to the last row"),
        Action(name="open_branch", word="open", key="right", tip="open the branch under the mark"),
        Action(name="close_branch", word="close branch", key="left", tip="close the branch the mark is in"),
        Action(name="unfold_all", word="open all", tip="open every branch"),
        Action(name="fold_all", word="close all", tip="close every branch"),
        Action(
            name="next_flag",
            word="next look",
            key="space",
            tip="the mark to the next row with STOP or LOOK of its own",
        ),
    )
    DEFAULT_CSS = f"""
    WeightsScreen .one-row {{ height: 1; }}
    WeightsScreen #weights-tree {{ height: 1fr; }}
    WeightsScreen #weights-causes {{ height: {_CAUSES}; }}
    WeightsScreen .wide-only {{ display: none; }}
    WeightsScreen.-wide .wide-only {{ display: block; }}
    WeightsScreen .bar {{ width: 1; }}
    WeightsScreen #weights-chosen {{ width: {_SIDE}; }}
    """

    def __init__(self) -> None:
        super().__init__()
        self.opened: set[str] = set()
        self.at = 0
        self.seen: tuple[int, ...] = ()
        self._key: str | None = None

    def compose_body(self) -> ComposeResult:
        """Headline and bar, the tree, causes below; the chosen row beside them where there is room."""
        yield Area(id="weights-headline", classes="one-row")
        yield Area(id="weights-known", classes="one-row")
        yield Area(id="weights-rule-top", classes="one-row")
        with Horizontal():
            with Vertical():
                yield Area(id="weights-head", classes="one-row")
                yield Area(id="weights-tree")
                yield Area(id="weights-rule-middle", classes="one-row")
                yield Area(id="weights-causes")
            yield Area(classes="bar wide-only", id="weights-bar")
            yield Area(id="weights-chosen", classes="wide-only")

    def look(self, build: Build, now: datetime) -> WeightsView:  # noqa: ARG002
        """In a thread: the stock was taken together with the build."""
        stock = self.ledger_app.stock
        return look_at_weights(build.book if stock is None else stock)

    def show(self, view: WeightsView) -> None:
        """The new view; the mark stays on the thing it was on."""
        if self._key is None:
            self.opened = {row.key for row in view.rows if row.kind == "assembly" and row.depth < 2}
        self.seen = seen_rows(view.rows, self.opened)
        self._put_mark_on(self._key)
        self.draw_all()

    def area_changed(self) -> None:
        """Tab: what moved the whole wing, or only the row under the mark."""
        if self.view is not None:
            self._draw_causes(self.view)

    def draw_all(self) -> None:
        """Every area."""
        view = self.view
        if view is None or not self.is_mounted:
            return
        width = self.app.size.width
        self.query_one("#weights-headline", Area).draw(headline_text(view, self._room(width, 1)))
        self.query_one("#weights-known", Area).draw(known_text(view.total, self._room(width, 1)))
        bars = [(self._tree_width(), self.lines.tee_down)] if self.wide else []
        self.query_one("#weights-rule-top", Area).draw(rule(width, self.lines, bars))
        self.query_one("#weights-rule-middle", Area).draw(rule(self._tree_width(), self.lines))
        self.query_one("#weights-bar", Area).draw("\n".join([self.lines.v] * self.app.size.height))
        self.query_one("#weights-head", Area).draw(head_text(self._room(self._tree_width(), 1)))
        self._draw_tree(view)

    def _draw_tree(self, view: WeightsView) -> None:
        row = self.chosen
        self._key = None if row is None else row.key
        room = self._room(self._tree_width(), self._tree_height())
        self.query_one("#weights-tree", Area).draw(tree_text(view, self.seen, self.at, self.opened, room))
        if self.wide:
            beside = self._room(_SIDE, self._tree_height() + _CAUSES + 2)
            self.query_one("#weights-chosen", Area).draw(chosen_text(view, row, beside))

        self._draw_causes(view)

    def _draw_causes(self, view: WeightsView) -> None:
        row = self.chosen if self.area == self.AREAS[1] else None
        if not self.is_mounted:
            return
        room = self._room(self._tree_width(), _CAUSES)
        off_plan, title = view.off_plan, ""
        if row is not None:
            off_plan, title = row.off_plan, f"{shortened(clean(row.name), _TITLE)} "
        causes = causes_text(off_plan, view.display, room, title=title)
        self.query_one("#weights-causes", Area).draw(causes)

    @property
    def chosen(self) -> WeightRow | None:
        """The row under the mark."""
        if self.view is None or not self.seen:
            return None
        return self.view.rows[self.seen[min(self.at, len(self.seen) - 1)]]

    def thing_in_hand(self) -> FoundThing | None:
        """The row under the mark, so that a word such as trace or weigh begins with it."""
        row = self.chosen
        if row is None:
            return None
        kind = {"assembly": ThingKind.ASSEMBLY, "piece": ThingKind.PIECE}.get(row.kind, ThingKind.PART)
        if row.kind == "piece" and row.key != row.thing:
            kind = ThingKind.PART
        name = row.thing or row.key
        return FoundThing(kind=kind, number=None, name=name, says=f"{kind.value} {name}")

    def take_thing(self, thing: FoundThing) -> bool:
        """A piece, part or assembly that was scanned gets the mark."""
        if self.view is None:
            return False
        if all(row.key != thing.name for row in self.view.rows):
            return False
        self.opened.update(branches_to(self.view.rows, thing.name))
        self._fold_anew(thing.name)
        self.say("ok", thing.says)
        return True

    def take_enter(self) -> None:
        """Open or close the branch under the mark."""
        row = self.chosen
        if row is not None and row.key in self.opened:
            self.do_close_branch()
        else:
            self.do_open_branch()

    def large_lines(self) -> tuple[str, ...]:
        """The finished mass and how far off it is."""
        if self.view is None:
            return super().large_lines()
        row, total = self.chosen, self.view.total
        about = "" if row is None or row.best_kg is None else f"{row.name} {row.best_kg:.2f}"
        word = "heavy" if self.view.off_kg > 0.0 else "light"
        return (f"{total.best_kg:.1f} kg", f"{word} {abs(self.view.off_kg):.1f}", about)

    # -- what actions do

    def do_row_before(self) -> None:
        """Up."""
        self._move(-1)

    def do_row_after(self) -> None:
        """Down."""
        self._move(1)

    def do_page_before(self) -> None:
        """A page up."""
        self._move(-self._tree_height())

    def do_page_after(self) -> None:
        """A page down."""
        self._move(self._tree_height())

    def do_first_row(self) -> None:
        """To the first row."""
        self._move(-len(self.seen))

    def do_last_row(self) -> None:
        """To the last row."""
        self._move(len(self.seen))

    def do_open_branch(self) -> None:
        """Show what is inside the row."""
        row = self.chosen
        if row is not None and row.kind != "piece":
            self.opened.add(row.key)
            self._fold_anew(row.key)

    def do_close_branch(self) -> None:
        """Hide what is inside the row; on a closed row, go to the branch it is in."""
        row = self.chosen
        if self.view is None or row is None:
            return
        if row.key in self.opened:
            self.opened.discard(row.key)
            self._fold_anew(row.key)
            return
        above = branches_to(self.view.rows, row.key)
        if above:
            self._put_mark_on(above[-1])
            self._draw_tree(self.view)

    def do_unfold_all(self) -> None:
        """Every branch open."""
        if self.view is not None:
            self.opened = {row.key for row in self.view.rows if row.kind != "piece"}
            self._fold_anew(self._key)

    def do_fold_all(self) -> None:
        """Every branch closed."""
        self.opened = set()
        self._fold_anew(None)

    def do_next_flag(self) -> None:
        """Go round the rows with a STOP or LOOK of their own, opening what hides them."""
        if self.view is None or not self.seen:
            return
        rows = self.view.rows
        here = self.seen[self.at]
        for place in (*range(here + 1, len(rows)), *range(here + 1)):
            if rows[place].flag:
                self.opened.update(branches_to(rows, rows[place].key))
                self._fold_anew(rows[place].key)
                self._say_flag(rows[place])
                return
        self.say("ok", "no row has STOP or LOOK")

    def _say_flag(self, row: WeightRow) -> None:
        findings = () if self.view is None else self.view.findings.get(row.key, ())
        grave = [finding for finding in findings if finding.severity.value.upper() == row.flag]
        if grave:
            self.say(row.flag, f"{row.key}: {grave[0].what}; {grave[0].do}")

    def _move(self, by: int) -> None:
        if self.view is not None and self.seen:
            self.at = max(0, min(len(self.seen) - 1, self.at + by))
            self._draw_tree(self.view)

    def _fold_anew(self, key: str | None) -> None:
        if self.view is not None:
            self.seen = seen_rows(self.view.rows, self.opened)
            self._put_mark_on(key)
            self._draw_tree(self.view)

    def _put_mark_on(self, key: str | None) -> None:
        self.at = max(0, min(self.at, len(self.seen) - 1))
        if self.view is None or key is None:
            return
        for place, at in enumerate(self.seen):
            if self.view.rows[at].key == key:
                self.at = place
                return

    def _room(self, width: int, height: int) -> Room:
        return Room(width=width, height=height, signs=self.signs, lines=self.lines, here=True)

    def _tree_width(self) -> int:
        return self.app.size.width - _SIDE - 1 if self.wide else self.app.size.width

    def _tree_height(self) -> int:
        return max(1, self.app.size.height - 5 - _FIXED_ROWS - _CAUSES)
