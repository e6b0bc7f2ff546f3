"""Fuel: where the fuel is at any tilt, what stays behind which hole. Every figure here is computed."""

from __future__ import annotations

from datetime import datetime

from rich.text import Text
from textual.app import ComposeResult
from textual.containers import Horizontal, Vertical

from ledger.operations.look_at_tank import TankDrawn, TankNow, TanksView, look_at_tanks
from ledger.operations.open_build import Build
from ledger.reports.fuel_lines import CAUTION
from ledger.reports.plain import clean, shortened
from ledger.tui.area import Area
from ledger.tui.bench_drawing import rule
from ledger.tui.fuel_asking import PITCHES_DEG, ROLLS_DEG
from ledger.tui.fuel_figures import curve_text, figures_text, gains_text, map_text, small_volume, tilt_words
from ledger.tui.fuel_outline import OUTLET, outline_text
from ledger.tui.fuel_plan_view import plan_text
from ledger.tui.fuel_section import scale_of, section_text
from ledger.tui.fuel_turning import NO_TANK, FuelTurning
from ledger.tui.room import Room
from ledger.units import Dimension, Display, show

_LEFT, _WIDE_LEFT = 51, 104
_PLAN, _WIDE_PLAN, _WIDE_OUTLINE = 7, 10, 9
_FIGURES = 14
_MAP = 12
_MOVES = {
    "tilt": "arrows tilt 1 deg",
    "fuel": "arrows {step} or a tenth",
    "cut": "arrows move the cut",
    "cell": "arrows choose a cell",
}
_KEYS = "Home level  End next attitude  Enter openings by litres  Space map  tank: next"
_WIDE_KEYS = "Home level  End next attitude  Space map or curve  tank: next"
_HOLES = "d v hole low, high  p pipe  V vent  D drain  F filler  out outlet"
_BACK = "Esc or Enter back to the drawing  Space map  openings"


class FuelScreen(FuelTurning):
    """One tank at a time: from above, cut, and in figures."""

    DEFAULT_CSS = f"""
    FuelScreen .one-row {{ height: 1; }}
    FuelScreen .bar {{ width: 1; }}
    FuelScreen #fuel-left {{ width: {_LEFT}; }}
    FuelScreen.-wide #fuel-left {{ width: {_WIDE_LEFT}; }}
    FuelScreen #fuel-plan {{ height: {_PLAN}; }}
    FuelScreen.-wide #fuel-plan {{ height: {_WIDE_PLAN}; }}
    FuelScreen #fuel-outline {{ height: {_WIDE_OUTLINE}; }}
    FuelScreen #fuel-cut {{ height: 1fr; }}
    FuelScreen #fuel-figures {{ height: {_FIGURES}; }}
    FuelScreen #fuel-keys {{ height: 2; }}
    FuelScreen .wide-only {{ display: none; }}
    FuelScreen.-wide .wide-only {{ display: block; }}
    FuelScreen #fuel-listed {{ display: none; height: 1fr; }}
    FuelScreen.-listed #fuel-listed {{ display: block; }}
    FuelScreen.-listed .drawing {{ display: none; }}
    FuelScreen #fuel-map {{ height: {_MAP}; }}
    """

    def compose_body(self) -> ComposeResult:
        """Drawing on the left, figures on the right, keys below."""
        yield Area(id="fuel-headline", classes="one-row")
        yield Area(id="fuel-rule-top", classes="one-row")
        with Horizontal():
            with Vertical(id="fuel-left"):
                yield Area(id="fuel-listed")
                yield Area(id="fuel-above", classes="one-row drawing")
                yield Area(id="fuel-ends", classes="one-row drawing")
                yield Area(id="fuel-plan", classes="drawing")
                yield Area(id="fuel-outline-title", classes="one-row drawing wide-only")
                yield Area(id="fuel-outline", classes="drawing wide-only")
                yield Area(id="fuel-cut-title", classes="one-row drawing")
                yield Area(id="fuel-cut", classes="drawing")
            yield Area(classes="bar", id="fuel-bar")
            with Vertical():
                yield Area(id="fuel-figures")
                yield Area(id="fuel-rule-gains", classes="one-row wide-only")
                yield Area(id="fuel-gains", classes="wide-only")
                yield Area(id="fuel-rule-map", classes="one-row wide-only")
                yield Area(id="fuel-map", classes="wide-only")
        yield Area(id="fuel-rule-bottom", classes="one-row")
        yield Area(id="fuel-keys")

    def look(self, build: Build, now: datetime) -> TanksView:  # noqa: ARG002
        """In a thread: proved cells and the report, kept as long as the plan stands."""
        stock = self.ledger_app.stock
        view = look_at_tanks(build if stock is None else stock)
        if self.wide:
            # Slow the first time, and kept: here it holds up no key.
            for drawn in view.tanks:
                _ = drawn.outlines
        return view

    def show(self, view: TanksView) -> None:
        """The same tank as before where it is still there, at the same tilt and quantity."""
        self.tank_at = min(self.tank_at, max(0, len(view.tanks) - 1))
        self.map = {drawn: found for drawn, found in self.map.items() if drawn in view.tanks}
        self.gains, self.curve = (), ()
        if view.tanks:
            self.take_tank(keep=self.asked is not None)
        self.draw_still()

    # -- drawing

    def area_changed(self) -> None:
        """Tab says what the arrows move now."""
        self.draw_still()

    def draw_still(self) -> None:
        """What no key but Tab changes."""
        if not self.is_mounted:
            return
        width, left = self.app.size.width, self._left_width()
        drawn, many = self.drawn, 0 if self.view is None else len(self.view.tanks)
        words = NO_TANK
        if drawn is not None:
            words = f"{clean(drawn.tank.name).upper()} tank, {self.tank_at + 1} of {many}"
            words += f"   {CAUTION}   measured: none yet"
        headline = clean(words)
        self.query_one("#fuel-headline", Area).draw(shortened(headline, width))
        if drawn is None:
            for name in ("plan", "outline", "outline-title", "cut", "cut-title", "figures", "gains", "map"):
                self.query_one(f"#fuel-{name}", Area).draw("")
        self.query_one("#fuel-rule-top", Area).draw(rule(width, self.lines, [(left, self.lines.tee_down)]))
        self.query_one("#fuel-rule-bottom", Area).draw(self._rule_of_holes(width, left))
        self.query_one("#fuel-bar", Area).draw("\n".join([self.lines.v] * self.app.size.height))
        for name in ("gains", "map"):
            self.query_one(f"#fuel-rule-{name}", Area).draw(rule(width - left - 1, self.lines))
        step = "0.25 gal" if self.shown_in is Display.US else "1 L"
        keys = f"{_MOVES[self.area].format(step=step)}   PgUp PgDn {step}   Tab next: tilt, fuel, cut, cell"
        self.query_one("#fuel-keys", Area).draw(
            f"{keys}\n{_WIDE_KEYS if self.wide else _BACK if self.listed else _KEYS}"
        )
        moves = f"arrows move: {self.area.upper()}"
        head = f"FROM ABOVE, nose to the top{moves:>{left - 28}}"
        self.query_one("#fuel-above", Area).draw(head)
        self.query_one("#fuel-ends", Area).draw(self._ends(left))
        if self.wide and drawn is not None:
            outline, stretch = outline_text(drawn.outlines, drawn.marks, self._room(left, _WIDE_OUTLINE))
            title = f"TRUE OUTLINE, holes where they are, {OUTLET} outlet{_stretched('length', stretch)}"
            self.query_one("#fuel-outline-title", Area).draw(title)
            self.query_one("#fuel-outline", Area).draw(outline)
        self.draw_beside()

    def _ends(self, width: int) -> str:
        """Which end is the tip: the one farther from the middle of the aircraft."""
        drawn = self.drawn
        if drawn is None:
            return ""
        low, high = drawn.low_m[1], drawn.high_m[1]
        first, last = ("tip", "root") if high <= abs(low) and high <= 0.0 else ("root", "tip")
        if low < 0.0 < high:
            first, last = "left", "right"
        legend = "# trapped  = feeds  o air  > chosen"
        return f"{first}{legend:^{max(0, width - len(first) - len(last))}}{last}"

    def _rule_of_holes(self, width: int, left: int) -> Text:
        """The rule below the drawing, with what the letters of its holes mean: no row is free for them."""
        bottom = rule(width, self.lines, [(left, self.lines.tee_up)])
        if self.drawn is None or (self.listed and not self.wide):
            return bottom
        return Text(f"{self.lines.h} {_HOLES} ") + bottom[len(_HOLES) + 3 :]

    def draw_tank(self) -> None:
        """All that changes with tilt, quantity, cut or cell."""
        drawn, now, arrangement = self.drawn, self.now_stands, self.arrangement
        if drawn is None or now is None or arrangement is None or not self.is_mounted:
            return
        if now.cells[0].cell not in drawn.tank.cells:
            return
        left = self._left_width()
        room = self._room(left, _WIDE_PLAN if self.wide else _PLAN)
        plan = plan_text(arrangement, drawn, now, chosen=self.cell, room=room)
        self.query_one("#fuel-plan", Area).draw(plan)
        cut = self._room(left, self._cut_height())
        self.query_one("#fuel-cut", Area).draw(section_text(now.cut, cut))
        self.query_one("#fuel-cut-title", Area).draw(self._cut_title(now, cut))
        figures = self._room(self.app.size.width - left - 1, _FIGURES)
        self.query_one("#fuel-figures", Area).draw(figures_text(drawn, now, self.shown_in, figures))
        if self.wide:
            self.draw_beside()

    def _cut_title(self, now: TankNow, room: Room) -> str:
        cut = now.cut
        through = " ".join(cell.cell for cell in cut.cells) or "no cell"
        place = f"{'BL' if cut.axis == 1 else 'FS'} {show(cut.at_m, Dimension.LENGTH, self.shown_in)}"
        ends = "front, rear" if cut.axis == 1 else "left, right"
        stretch = scale_of(cut, room.width, room.height).stretch
        # The names come last: what does not fit of them stands in the drawing above.
        return shortened(f"CUT {place} ({ends}{_stretched('height', stretch)}) {through}", room.width)

    def draw_beside(self) -> None:
        """Openings and map: beside the drawing where there is room, else in its place."""
        drawn = self.drawn
        if drawn is None or not self.is_mounted:
            return
        now = self.now_stands
        if self.wide:
            side, height = self.app.size.width - self._left_width() - 1, self.app.size.height
            gains = gains_text(
                self.gains, self.shown_in, self._room(side, height - 5 - 5 - _FIGURES - 2 - _MAP)
            )
            self.query_one("#fuel-gains", Area).draw(gains)
            beside = self._room(side, _MAP)
            curve = "" if now is None else curve_text(self.curve, now, self.shown_in, beside)
            self.query_one("#fuel-map", Area).draw(
                self._map_text(drawn, beside) if self.listed == "map" else curve
            )
            return
        if self.listed == "openings":
            listed = self._room(self._left_width(), self.app.size.height - 10)
            self.query_one("#fuel-listed", Area).draw(gains_text(self.gains, self.shown_in, listed))
        elif self.listed == "map":
            listed = self._room(self._left_width(), self.app.size.height - 10)
            self.query_one("#fuel-listed", Area).draw(self._map_text(drawn, listed))

    def _map_text(self, drawn: TankDrawn, room: Room) -> Text:
        found = self.map.get(drawn)
        if found is None:
            return Text("reckoning the map")
        return map_text(
            PITCHES_DEG, ROLLS_DEG, found, most_m3=drawn.most_m3, display=self.shown_in, room=room
        )

    def _left_width(self) -> int:
        return _WIDE_LEFT if self.wide else _LEFT

    def _cut_height(self) -> int:
        rows = self.app.size.height - 5 - 5 - 3
        return max(1, rows - (_WIDE_PLAN + _WIDE_OUTLINE + 1 if self.wide else _PLAN))

    def _room(self, width: int, height: int) -> Room:
        return Room(width=max(1, width), height=max(1, height), signs=self.signs, lines=self.lines)

    def large_lines(self) -> tuple[str, ...]:
        """Tilt, what is in the tank, what stays."""
        now = self.now_stands
        if now is None:
            return super().large_lines()
        nose, roll = tilt_words(now.asked.attitude.pitch_deg, now.asked.attitude.roll_deg)
        worst = now.worst
        return (
            f"{nose.lower()} {roll.lower()}",
            f"in {show(now.asked.quantity_m3, Dimension.VOLUME, self.shown_in)}",
            "" if now.trapped_m3 is None else f"trapped {small_volume(now.trapped_m3, self.shown_in)}",
            "" if worst is None else worst.cell,
        )


def _stretched(what: str, times: float) -> str:
    return f", {what} x{times:.1f}" if abs(times - 1.0) > 0.05 else ""
