"""What a person asks of the Fuel screen by key, word or scan: a tank, a tilt, a quantity, a cut, a cell."""

from __future__ import annotations

from dataclasses import replace

from ledger.model.attitude import Attitude
from ledger.model.things import ThingKind
from ledger.operations.find_thing import FoundThing
from ledger.tui.actions import Action
from ledger.tui.fuel_asking import FuelAsking
from ledger.tui.fuel_plan_view import neighbour
from ledger.units import Dimension, UnitError, read_number, read_quantity, show

_CUTS = 40
NO_TANK = "no tank in the plan: add tanks.toml to it, then wingledger adopt BOOK PLAN"


class FuelTurning(FuelAsking):
    """Turns what is typed, scanned and pressed into what is asked for."""

    def perform(self, action: Action) -> None:
        """Without a tank the screen's own actions say what to do first."""
        if action in self.ACTIONS and self.view is not None and self.drawn is None:
            self.refuse(NO_TANK)
            return
        super().perform(action)

    # -- what is typed and scanned

    def take_thing(self, thing: FoundThing) -> bool:
        """A cell, or an opening of one, is chosen, with its tank."""
        if self.view is None or thing.kind not in (ThingKind.CELL, ThingKind.OPENING):
            return False
        for place, drawn in enumerate(self.view.tanks):
            cells = [foot.cell for foot in drawn.footprints if foot.cell == thing.name]
            cells += [mark.cells[0] for mark in drawn.marks if mark.name == thing.name]
            if cells:
                if place != self.tank_at:
                    self._go_to_tank(place)
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
                    self.ask(replace(self.asked, attitude=attitude))
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
        if self.asked is not None:
            self.ask(replace(self.asked, attitude=Attitude(name="level")))

    def do_next_attitude(self) -> None:
        """The plan's next."""
        drawn = self.drawn
        if drawn is None or self.asked is None or not drawn.attitudes:
            self.refuse("the plan has no attitude")
            return
        self.attitude_at = (self.attitude_at + 1) % len(drawn.attitudes)
        self.ask(replace(self.asked, attitude=drawn.attitudes[self.attitude_at]))

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
        """A list in place of the drawing; where there is room for both it stands beside it already."""
        self.listed = "" if self.wide and what == "openings" else what
        self.set_class(bool(self.listed) and not self.wide, "-listed")
        self.draw_still()
        self.draw_beside()
        self.ask_gains()

    def _tilt_by(self, pitch_deg: float, roll_deg: float) -> None:
        if self.asked is not None:
            now = self.asked.attitude
            self._tilt(now.pitch_deg + pitch_deg, now.roll_deg + roll_deg)

    def _tilt(self, pitch_deg: float, roll_deg: float) -> None:
        if self.asked is not None:
            # An attitude with a push keeps it: one degree must not jump by what the push was worth.
            tilted = replace(self.asked.attitude, name="this tilt", pitch_deg=pitch_deg, roll_deg=roll_deg)
            self.ask(replace(self.asked, attitude=tilted))

    def _pour(self, steps: float) -> None:
        if self.asked is not None:
            self._pour_to(self.asked.quantity_m3 + steps * self.step_m3())

    def _pour_to(self, quantity_m3: float) -> None:
        drawn = self.drawn
        if drawn is None or self.asked is None:
            return
        if quantity_m3 > drawn.most_m3 + 1e-12:
            self.say("", f"full: it holds {show(drawn.most_m3, Dimension.VOLUME, self.shown_in)}")
        self.ask(replace(self.asked, quantity_m3=max(0.0, min(quantity_m3, drawn.most_m3))))

    def _cut_by(self, axis: int, steps: int) -> None:
        drawn = self.drawn
        if drawn is None or self.asked is None:
            return
        if self.asked.axis != axis:
            self.ask(replace(self.asked, axis=axis, at_m=self.middle(axis)))
            return
        low, high = drawn.low_m[axis], drawn.high_m[axis]
        # Never quite on an end wall, where there is nothing to see.
        room = (high - low) / 1000.0
        at = self.asked.at_m + steps * (high - low) / _CUTS
        self.ask(replace(self.asked, at_m=max(low + room, min(high - room, at))))

    def _step_cell(self, across: int, down: int) -> None:
        if self.arrangement is not None:
            self._choose(neighbour(self.arrangement, self.cell, across, down))

    def _choose(self, cell: str) -> None:
        self.cell = cell
        self.go_to_area("cell")
        if self.asked is not None:
            self.ask(replace(self.asked, at_m=self.middle(self.asked.axis)))

    def _go_to_tank(self, place: int) -> None:
        self.tank_at = place
        self.gains, self.curve = (), ()
        self.now_stands = None
        self.take_tank(keep=True)
        self.draw_still()
