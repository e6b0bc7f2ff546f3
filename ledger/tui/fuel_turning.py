"""What the Fuel screen is asked for: a tank, a tilt, a quantity, a cut, a cell; by key, word or scan."""

from __future__ import annotations

from dataclasses import replace
from typing import ClassVar

from ledger.errors import LedgerError
from ledger.model.attitude import Attitude
from ledger.model.things import ThingKind
from ledger.operations.find_thing import FoundThing
from ledger.operations.look_at_tank import (
    Asked,
    Gain,
    TankDrawn,
    TankNow,
    TanksView,
    gains_of,
    look_at_tank,
    trapped_over,
)
from ledger.tui.actions import Action
from ledger.tui.fuel_actions import FUEL_ACTIONS
from ledger.tui.fuel_figures import cell_line
from ledger.tui.fuel_plan_view import Arrangement, arranged, neighbour
from ledger.tui.work_screen import WorkScreen
from ledger.units import Dimension, Display, UnitError, read_number, read_quantity, show, to_si

PITCHES_DEG = (-12.0, -8.0, -4.0, 0.0, 4.0, 8.0, 12.0, 16.0)
ROLLS_DEG = (-6.0, -3.0, 0.0, 3.0, 6.0)
_CUTS = 40


class FuelTurning(WorkScreen[TanksView]):
    """Knows what is asked for, and has it reckoned in a thread; how it is drawn is the screen's."""

    WORD = "fuel"
    AREAS = ("tilt", "fuel", "cut", "cell")
    ACTIONS: ClassVar[tuple[Action, ...]] = FUEL_ACTIONS

    def __init__(self) -> None:
        super().__init__()
        self.tank_at = 0
        self.now_stands: TankNow | None = None
        self.asked: Asked | None = None
        self.cell = ""
        self.listed = ""
        self.gains: tuple[Gain, ...] = ()
        self.map: dict[str, tuple[tuple[float | None, ...], ...]] = {}
        self.arrangement: Arrangement | None = None
        self._attitude_at = 0
        self._cell_said = ""

    def draw_still(self) -> None:
        """Draw what no key but Tab changes."""

    def draw_tank(self) -> None:
        """Draw what changes with tilt, quantity, cut or cell."""

    def draw_beside(self) -> None:
        """Draw openings and map."""

    # -- what is asked

    @property
    def drawn(self) -> TankDrawn | None:
        """The tank that is up."""
        return None if self.view is None or not self.view.tanks else self.view.tanks[self.tank_at]

    @property
    def shown_in(self) -> Display:
        """The build's own units."""
        return self.units if self.view is None else self.view.display

    def take_tank(self, *, keep: bool) -> None:
        drawn = self.drawn
        if drawn is None:
            return
        self.arrangement = arranged(drawn.footprints)
        names = [foot.cell for foot in drawn.footprints]
        self.cell = self.cell if self.cell in names else names[0]
        if keep and self.asked is not None:
            self.asked = replace(self.asked, quantity_m3=min(self.asked.quantity_m3, drawn.most_m3))
            if not drawn.low_m[self.asked.axis] <= self.asked.at_m <= drawn.high_m[self.asked.axis]:
                self.asked = replace(self.asked, axis=1, at_m=self._middle(1))
        else:
            self.asked = Asked(
                attitude=self._first_attitude(drawn),
                quantity_m3=self._first_quantity(drawn),
                axis=1,
                at_m=self._middle(1),
            )
        self._stand()

    def _first_attitude(self, drawn: TankDrawn) -> Attitude:
        """The one that decides what is usable: there the trapped fuel is to be seen."""
        for place, attitude in enumerate(drawn.attitudes):
            if attitude.name == drawn.fuel.governing_attitude:
                self._attitude_at = place
                return attitude
        return drawn.attitudes[0] if drawn.attitudes else Attitude(name="level")

    def _first_quantity(self, drawn: TankDrawn) -> float:
        """A tenth of the tank: low enough that what is trapped can be told from what feeds."""
        step = self._step_m3()
        return min(drawn.most_m3, max(step, step * round(0.1 * drawn.most_m3 / step)))

    def _middle(self, axis: int) -> float:
        """Through the middle of the chosen cell."""
        drawn = self.drawn
        foot = (
            None if drawn is None else next((one for one in drawn.footprints if one.cell == self.cell), None)
        )
        return 0.0 if foot is None else foot.middle_m[axis]

    def _step_m3(self) -> float:
        return to_si(0.25, "US gal", Dimension.VOLUME) if self.shown_in is Display.US else 0.001

    def _ask(self, asked: Asked) -> None:
        try:
            _ = asked.attitude.up
        except LedgerError:
            self.refuse("the tank would stand on its side: no farther")
            return
        self.asked = asked
        self._stand()

    def _stand(self) -> None:
        drawn, asked = self.drawn, self.asked
        if drawn is not None and asked is not None:
            self.in_thread(lambda: look_at_tank(drawn, asked), self._stands, about="tank")

    def _stands(self, now: TankNow) -> None:
        tilted = self.now_stands is None or self.now_stands.asked.attitude.up != now.asked.attitude.up
        self.now_stands = now
        self.draw_tank()
        words = cell_line(now, self.cell, self.shown_in) if self.area == "cell" else ""
        if words and words != self._cell_said:
            self._cell_said = words
            self.say("", words)
        if tilted or not self.gains:
            self._ask_gains()

    def _ask_gains(self) -> None:
        drawn, asked = self.drawn, self.asked
        if drawn is None or asked is None:
            return
        if self.wide or self.listed == "openings":
            self.in_thread(lambda: gains_of(drawn, asked.attitude), self._have_gains, about="gains")
        name = drawn.tank.name
        if (self.wide or self.listed == "map") and name not in self.map:
            self.in_thread(
                lambda: (name, trapped_over(drawn, PITCHES_DEG, ROLLS_DEG)), self._have_map, about="map"
            )

    def _have_gains(self, gains: tuple[Gain, ...]) -> None:
        self.gains = gains
        self.draw_beside()

    def _have_map(self, found: tuple[str, tuple[tuple[float | None, ...], ...]]) -> None:
        self.map[found[0]] = found[1]
        self.draw_beside()

    # -- what is typed and scanned

    def take_thing(self, thing: FoundThing) -> bool:
        """A cell, or an opening of one, is chosen, with its tank."""
        if self.view is None or thing.kind not in (ThingKind.CELL, ThingKind.OPENING):
            return False
        for place, drawn in enumerate(self.view.tanks):
            cells = [foot.cell for foot in drawn.footprints if foot.cell == thing.name]
            cells += [mark.cells[0] for mark in drawn.marks if mark.name == thing.name]
            if cells:
                moved, self.tank_at, self.cell = place != self.tank_at, place, cells[0]
                if moved:
                    self.take_tank(keep=True)
                    self.draw_still()
                self._choose(cells[0])
                return True
        return False

    def take_line(self, text: str) -> bool:
        """`20 L`, `nose 12`, `roll -3`, the name of a tank or of an attitude."""
        words = text.split()
        if self.asked is None or self.view is None or not words:
            return False
        if len(words) == 2 and words[0].casefold() in ("nose", "pitch", "roll"):
            return self._take_angle(words[0].casefold(), words[1])
        wanted = " ".join(words).casefold()
        for place, drawn in enumerate(self.view.tanks):
            if drawn.tank.name.casefold() == wanted:
                self._go_to_tank(place)
                return True
            for attitude in drawn.attitudes:
                if attitude.name.casefold() == wanted:
                    self._ask(replace(self.asked, attitude=attitude))
                    return True
        return self._take_quantity(text)

    def _take_angle(self, word: str, number: str) -> bool:
        if self.asked is None:
            return False
        try:
            degrees = read_number(number)
        except UnitError as error:
            self.refuse(str(error))
            return True
        attitude = self.asked.attitude
        pitch, roll = attitude.pitch_deg, attitude.roll_deg
        self._tilt(degrees if word != "roll" else pitch, degrees if word == "roll" else roll)
        return True

    def _take_quantity(self, text: str) -> bool:
        if not any(character.isdigit() for character in text):
            return False
        try:
            self._pour_to(read_quantity(text, Dimension.VOLUME))
        except UnitError as error:
            # A number that is nobody's: the shell has more to say about a code than about a quantity.
            if text.strip()[:1].isdigit():
                self.refuse(str(error))
                return True
            return False
        return True

    def take_enter(self) -> None:
        """Openings by litres gained, and back."""
        self.list_instead("" if self.listed else "openings")

    # -- what actions do

    def do_nose_up(self) -> None:
        """One degree."""
        self._tilt_by(1.0, 0.0)

    def do_nose_down(self) -> None:
        """One degree."""
        self._tilt_by(-1.0, 0.0)

    def do_roll_right(self) -> None:
        """One degree."""
        self._tilt_by(0.0, 1.0)

    def do_roll_left(self) -> None:
        """One degree."""
        self._tilt_by(0.0, -1.0)

    def do_set_level(self) -> None:
        """Nose and wings level, nothing pushing."""
        self._tilt(0.0, 0.0)

    def do_next_attitude(self) -> None:
        """The plan's next."""
        drawn = self.drawn
        if drawn is None or self.asked is None or not drawn.attitudes:
            self.refuse("the plan has no attitude")
            return
        self._attitude_at = (self._attitude_at + 1) % len(drawn.attitudes)
        self._ask(replace(self.asked, attitude=drawn.attitudes[self._attitude_at]))

    def do_more_fuel(self) -> None:
        """A step more."""
        self._pour(1.0)

    def do_less_fuel(self) -> None:
        """A step less."""
        self._pour(-1.0)

    do_add_fuel = do_more_fuel
    do_take_fuel = do_less_fuel

    def do_add_little(self) -> None:
        """A tenth of a step more."""
        self._pour(0.1)

    def do_take_little(self) -> None:
        """A tenth of a step less."""
        self._pour(-0.1)

    def do_cut_right(self) -> None:
        """Along the span."""
        self._cut_by(1, 1)

    def do_cut_left(self) -> None:
        """Along the span."""
        self._cut_by(1, -1)

    def do_cut_fore(self) -> None:
        """Along the length."""
        self._cut_by(0, -1)

    def do_cut_aft(self) -> None:
        """Along the length."""
        self._cut_by(0, 1)

    def do_cell_fore(self) -> None:
        """The cell in front."""
        self._step_cell(0, -1)

    def do_cell_aft(self) -> None:
        """The cell behind."""
        self._step_cell(0, 1)

    def do_cell_right(self) -> None:
        """The cell to the right."""
        self._step_cell(1, 0)

    def do_cell_left(self) -> None:
        """The cell to the left."""
        self._step_cell(-1, 0)

    def do_next_tank(self) -> None:
        """The next of the plan."""
        if self.view is not None and self.view.tanks:
            self._go_to_tank((self.tank_at + 1) % len(self.view.tanks))

    def do_show_gains(self) -> None:
        """Openings by litres gained."""
        self.list_instead("openings")

    def do_show_map(self) -> None:
        """The map, and back."""
        self.list_instead("" if self.listed == "map" else "map")

    def do_show_drawing(self) -> None:
        """The drawing."""
        self.list_instead("")

    def do_leave_slip(self) -> None:
        """Esc puts a list away."""
        self.list_instead("")
        super().do_leave_slip()

    def list_instead(self, what: str) -> None:
        self.listed = "" if self.wide else what
        self.set_class(bool(self.listed), "-listed")
        if self.listed == "map":
            self.draw_beside()
        self._ask_gains()

    def _tilt_by(self, pitch_deg: float, roll_deg: float) -> None:
        if self.asked is not None:
            now = self.asked.attitude
            self._tilt(now.pitch_deg + pitch_deg, now.roll_deg + roll_deg)

    def _tilt(self, pitch_deg: float, roll_deg: float) -> None:
        if self.asked is not None:
            attitude = Attitude(name="this tilt", pitch_deg=pitch_deg, roll_deg=roll_deg)
            self._ask(replace(self.asked, attitude=attitude))

    def _pour(self, steps: float) -> None:
        if self.asked is not None:
            self._pour_to(self.asked.quantity_m3 + steps * self._step_m3())

    def _pour_to(self, quantity_m3: float) -> None:
        drawn = self.drawn
        if drawn is None or self.asked is None:
            return
        if quantity_m3 > drawn.most_m3 + 1e-12:
            self.say("", f"full: it holds {show(drawn.most_m3, Dimension.VOLUME, self.shown_in)}")
        self._ask(replace(self.asked, quantity_m3=max(0.0, min(quantity_m3, drawn.most_m3))))

    def _cut_by(self, axis: int, steps: int) -> None:
        drawn = self.drawn
        if drawn is None or self.asked is None:
            return
        if self.asked.axis != axis:
            self._ask(replace(self.asked, axis=axis, at_m=self._middle(axis)))
            return
        low, high = drawn.low_m[axis], drawn.high_m[axis]
        # Never quite on an end wall, where there is nothing to see.
        room = (high - low) / 1000.0
        at = self.asked.at_m + steps * (high - low) / _CUTS
        self._ask(replace(self.asked, at_m=max(low + room, min(high - room, at))))

    def _step_cell(self, across: int, down: int) -> None:
        if self.arrangement is not None:
            self._choose(neighbour(self.arrangement, self.cell, across, down))

    def _choose(self, cell: str) -> None:
        self.cell = cell
        self.go_to_area("cell")
        if self.asked is not None:
            self._ask(replace(self.asked, at_m=self._middle(self.asked.axis)))

    def _go_to_tank(self, place: int) -> None:
        self.tank_at = place
        self.gains = ()
        self.now_stands = None
        self.take_tank(keep=True)
        self.draw_still()
