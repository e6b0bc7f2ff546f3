"""The Fuel screen's own actions: what the arrows move depends on the area Tab is on."""

from __future__ import annotations

from ledger.tui.actions import Action

FUEL_ACTIONS: tuple[Action, ...] = (
    Action(name="nose_up", word="nose up", key="up", tip="Tab on tilt: nose 1 degree up", areas=("tilt",)),
    Action(
        name="nose_down", word="nose down", key="down", tip="Tab on tilt: nose 1 degree down", areas=("tilt",)
    ),
    Action(
        name="roll_right",
        word="roll right",
        key="right",
        tip="Tab on tilt: right wing 1 degree down",
        areas=("tilt",),
    ),
    Action(
        name="roll_left",
        word="roll left",
        key="left",
        tip="Tab on tilt: left wing 1 degree down",
        areas=("tilt",),
    ),
    Action(
        name="add_fuel",
        word="add fuel",
        key="up",
        tip="Tab on fuel: 1 L or 0.25 US gal more",
        areas=("fuel",),
    ),
    Action(
        name="take_fuel",
        word="take fuel",
        key="down",
        tip="Tab on fuel: 1 L or 0.25 US gal less",
        areas=("fuel",),
    ),
    Action(
        name="add_little",
        word="add a little",
        key="right",
        tip="Tab on fuel: a tenth of that more",
        areas=("fuel",),
    ),
    Action(
        name="take_little",
        word="take a little",
        key="left",
        tip="Tab on fuel: a tenth of that less",
        areas=("fuel",),
    ),
    Action(
        name="cut_right", word="cut right", key="right", tip="Tab on cut: cut farther right", areas=("cut",)
    ),
    Action(name="cut_left", word="cut left", key="left", tip="Tab on cut: cut farther left", areas=("cut",)),
    Action(
        name="cut_fore",
        word="cut forward",
        key="up",
        tip="Tab on cut: cut across, farther forward",
        areas=("cut",),
    ),
    Action(
        name="cut_aft", word="cut aft", key="down", tip="Tab on cut: cut across, farther aft", areas=("cut",)
    ),
    Action(
        name="cell_fore", word="cell before", key="up", tip="Tab on cell: the cell in front", areas=("cell",)
    ),
    Action(
        name="cell_aft", word="cell behind", key="down", tip="Tab on cell: the cell behind", areas=("cell",)
    ),
    Action(
        name="cell_right",
        word="cell right",
        key="right",
        tip="Tab on cell: the cell to the right",
        areas=("cell",),
    ),
    Action(
        name="cell_left",
        word="cell left",
        key="left",
        tip="Tab on cell: the cell to the left",
        areas=("cell",),
    ),
    Action(name="more_fuel", word="more", key="pageup", tip="1 L or 0.25 US gal more in the tank"),
    Action(name="less_fuel", word="less", key="pagedown", tip="1 L or 0.25 US gal less in the tank"),
    Action(name="set_level", word="level", key="home", tip="nose and wings level"),
    Action(name="next_attitude", word="next attitude", key="end", tip="the plan's next attitude"),
    Action(name="next_tank", word="tank", key="shift+right", tip="the next tank; or type its name"),
    Action(
        name="show_gains", word="openings", key="enter", tip="on an empty line: openings by litres gained"
    ),
    Action(name="show_map", word="map", key="space", tip="what stays in the tank over nose and roll"),
    Action(name="show_drawing", word="drawing", tip="back to the drawing"),
)
