"""What the Fuel screen has reckoned: one tank at the tilt, quantity and cut that are asked for."""

from __future__ import annotations

from dataclasses import replace
from typing import ClassVar

from ledger.model.attitude import Attitude, NotUpward
from ledger.operations.look_at_tank import (
    Asked,
    TankDrawn,
    TankNow,
    TanksView,
    look_at_tank,
)
from ledger.operations.survey_tank import Gain, Rung, curve_of, gains_of, trapped_over
from ledger.tui.actions import Action
from ledger.tui.fuel_actions import FUEL_ACTIONS
from ledger.tui.fuel_figures import cell_line
from ledger.tui.fuel_plan_view import Arrangement, arranged
from ledger.tui.work_screen import WorkScreen
from ledger.units import Dimension, Display, to_si

PITCHES_DEG = (-12.0, -8.0, -4.0, 0.0, 4.0, 8.0, 12.0, 16.0)
ROLLS_DEG = (-6.0, -3.0, 0.0, 3.0, 6.0)
RUNGS = 10


class FuelAsking(WorkScreen[TanksView]):
    """Has reckoned in a thread what is asked for, newest first; how it is drawn is the screen's."""

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
        self.curve: tuple[Rung, ...] = ()
        self.map: dict[TankDrawn, tuple[tuple[float | None, ...], ...]] = {}
        self.arrangement: Arrangement | None = None
        self.attitude_at = 0
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
        """Stand the tank that is up as the one before, or where what it traps is to be seen."""
        drawn = self.drawn
        if drawn is None:
            return
        self.arrangement = arranged(drawn.footprints)
        names = [foot.cell for foot in drawn.footprints]
        self.cell = self.cell if self.cell in names else names[0]
        if keep and self.asked is not None:
            self.asked = replace(self.asked, quantity_m3=min(self.asked.quantity_m3, drawn.most_m3))
            if not drawn.low_m[self.asked.axis] <= self.asked.at_m <= drawn.high_m[self.asked.axis]:
                self.asked = replace(self.asked, axis=1, at_m=self.middle(1))
        else:
            self.asked = Asked(
                attitude=self._first_attitude(drawn),
                quantity_m3=self._first_quantity(drawn),
                axis=1,
                at_m=self.middle(1),
            )
        self._stand()

    def _first_attitude(self, drawn: TankDrawn) -> Attitude:
        """The one that decides what is usable: there the trapped fuel is to be seen."""
        for place, attitude in enumerate(drawn.attitudes):
            if attitude.name == drawn.fuel.governing_attitude:
                self.attitude_at = place
                return attitude
        return drawn.attitudes[0] if drawn.attitudes else Attitude(name="level")

    def _first_quantity(self, drawn: TankDrawn) -> float:
        """A tenth of the tank: low enough that what is trapped can be told from what feeds."""
        step = self.step_m3()
        return min(drawn.most_m3, max(step, step * round(0.1 * drawn.most_m3 / step)))

    def middle(self, axis: int) -> float:
        """Where a cut goes through the middle of the chosen cell."""
        drawn = self.drawn
        foot = (
            None if drawn is None else next((one for one in drawn.footprints if one.cell == self.cell), None)
        )
        return 0.0 if foot is None else foot.middle_m[axis]

    def step_m3(self) -> float:
        """One press of a key: 1 L, or a quarter of a US gallon."""
        return to_si(0.25, "US gal", Dimension.VOLUME) if self.shown_in is Display.US else 0.001

    def ask(self, asked: Asked) -> None:
        """Ask for another tilt, quantity or cut; what has no upper side is refused."""
        try:
            _ = asked.attitude.up
        except NotUpward:
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
            self.ask_gains()

    def ask_gains(self) -> None:
        """Openings and map, where they show."""
        drawn, asked = self.drawn, self.asked
        if drawn is None or asked is None:
            return
        if self.wide or self.listed == "openings":
            self.in_thread(lambda: gains_of(drawn, asked.attitude), self._have_gains, about="gains")
        if self.wide:
            self.in_thread(lambda: curve_of(drawn, asked.attitude, RUNGS), self._have_curve, about="curve")
        if self.listed == "map" and drawn not in self.map:
            self.in_thread(
                lambda: (drawn, trapped_over(drawn, PITCHES_DEG, ROLLS_DEG)), self._have_map, about="map"
            )

    def _have_gains(self, gains: tuple[Gain, ...]) -> None:
        self.gains = gains
        self.draw_beside()

    def _have_curve(self, curve: tuple[Rung, ...]) -> None:
        self.curve = curve
        self.draw_beside()

    def _have_map(self, found: tuple[TankDrawn, tuple[tuple[float | None, ...], ...]]) -> None:
        self.map[found[0]] = found[1]
        self.draw_beside()
