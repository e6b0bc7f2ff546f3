"""The one table of actions: it feeds words, keys, tags, tooltips and the list of all actions."""

from __future__ import annotations

from dataclasses import dataclass

from ledger.model import acts  # noqa: F401  the kinds are declared when this is imported
from ledger.model.declare import KINDS

# Made by its own command, which reads a folder: not a thing logged at the bench.
NOT_AT_THE_BENCH = frozenset({"adopt"})

# Letters and a space only: every keyboard layout a reader can be set to sends these alike.
TAG_HEAD = "TAG "


@dataclass(frozen=True, slots=True, kw_only=True)
class Action:
    """Something a person can do. `areas` limits the key to those areas of the screen.

    `lone` is a printable key into an empty line. `tag` is what the action's printed code says.
    """

    name: str
    word: str
    tip: str
    key: str | None = None
    lone: str | None = None
    tag: str | None = None
    also: tuple[str, ...] = ()
    areas: tuple[str, ...] = ()

    @property
    def keys(self) -> str:
        """Its keys as a person reads them."""
        lone = "Space" if self.lone == "space" else self.lone
        shown = [key for key in (lone, None if self.key is None else key_name(self.key)) if key]
        return " or ".join(shown)


def key_name(key: str) -> str:
    """A key as it is printed on the keyboard."""
    names = {"escape": "Esc", "pageup": "PgUp", "pagedown": "PgDn", "shift+tab": "Shift-Tab"}
    return names.get(key, key.upper() if key.startswith("f") and key[1:].isdigit() else key.capitalize())


# The loading screen has its place kept: 4 and F5.
SCREENS: tuple[Action, ...] = (
    Action(name="go_bench", word="bench", key="f2", lone="1", tip="the slip in hand, cups, next jobs, today"),
    Action(name="go_weights", word="weights", key="f3", lone="2", tip="what the wing weighs and why"),
    Action(name="go_fuel", word="fuel", key="f4", lone="3", tip="what the tanks hold at any attitude"),
    Action(name="go_trace", word="trace", key="f6", lone="5", tip="what a number is and where it went"),
    Action(
        name="go_iterations",
        word="iterations",
        key="f7",
        lone="6",
        tip="what a change of design does to mass, CG, fuel and built work",
    ),
)

SHELL: tuple[Action, ...] = (
    *SCREENS,
    Action(name="next_area", word="next area", key="tab", tip="move to the next area of the screen"),
    Action(name="area_before", word="area before", key="shift+tab", tip="move to the area before"),
    Action(name="leave_slip", word="put away", key="escape", tip="leave what is open; a draft is kept"),
    Action(
        name="large_print",
        word="large",
        key="f8",
        tip="large print, to be read at 3 m",
        also=("large print",),
    ),
    Action(
        name="correct_last", word="correct", key="f9", tip="correct the last entry; its effect is shown first"
    ),
    Action(name="lock", word="lock", key="f12", tip="lock the screen for wiping; a badge unlocks it"),
    Action(name="show_actions", word="actions", tip="the list of all actions"),
    Action(name="show_help", word="help", tip="how this screen is used"),
    Action(name="show_findings", word="findings", tip="every STOP, LOOK and note, with what to do"),
    Action(name="change_theme", word="theme", tip="dark, light, or none: no colour at all"),
    Action(name="set_with", word="with", tip="who else is present, for example: with AB MT; with nobody"),
    Action(
        name="clock_right",
        word="clock right",
        tag="TAG CLOCK RIGHT",
        tip="the computer's time is right, though the program doubts it",
    ),
    Action(name="leave", word="leave", tip="end the program; drafts are kept", also=("quit", "exit")),
)

BENCH: tuple[Action, ...] = (
    Action(name="next_ply", word="next ply", tag="TAG NEXT PLY", tip="open a lay slip for the next step"),
    Action(name="new_cup", word="new cup", tag="TAG NEW CUP", tip="open a mix slip with the lots as last"),
    Action(
        name="undo",
        word="undo",
        tag="TAG UNDO",
        tip="empty the field filled last; with no slip, offer to withdraw the last entry",
    ),
    Action(name="stop", word="stop", tag="TAG STOP", tip="put the slip away, its draft kept"),
    Action(name="log", word="log", tag="TAG LOG", tip="log the slip"),
    Action(name="pour", word="pour", tag="TAG POUR", tip="stamp the moment the second component goes in"),
    Action(
        name="looked", word="looked", tag="TAG LOOKED", tip="you have looked at what changed under the slip"
    ),
    Action(name="keep", word="keep", tag="TAG KEEP", tip="keep a reading outside what was expected"),
    Action(name="repeat", word="same", tag="TAG SAME", tip="the slip as it was logged last"),
    Action(name="throw_away", word="throw away", tip="throw the open draft away"),
    Action(
        name="field_before",
        word="field before",
        key="up",
        tag="TAG BACK",
        tip="the field above",
        areas=("slip",),
    ),
    Action(
        name="field_after",
        word="field after",
        key="down",
        tag="TAG FORWARD",
        tip="the field below",
        areas=("slip",),
    ),
    Action(
        name="mark_before",
        word="mark before",
        key="up",
        tip="the row above; Enter takes it",
        areas=("next", "today"),
    ),
    Action(
        name="mark_after",
        word="mark after",
        key="down",
        tip="the row below; Enter takes it",
        areas=("next", "today"),
    ),
    Action(
        name="complete",
        word="complete",
        key="right",
        tip="complete what is typed from what is open",
        areas=("slip",),
    ),
    Action(
        name="empty_field",
        word="empty",
        key="delete",
        tag="TAG EMPTY",
        tip="empty this field",
        areas=("slip",),
    ),
    Action(name="page_before", word="page before", key="pageup", tip="the list's page before"),
    Action(name="page_after", word="page after", key="pagedown", tip="the list's next page"),
)


def kind_actions() -> tuple[Action, ...]:
    """One action for each kind that is logged at the bench: its word opens its slip."""
    return tuple(
        Action(name=f"open_{kind.word}", word=kind.word, tip=kind.tip)
        for kind in KINDS.values()
        if kind.word not in NOT_AT_THE_BENCH
    )


def action_for_word(text: str, table: tuple[Action, ...]) -> Action | None:
    """The action of that word; case and spacing do not matter."""
    wanted = " ".join(text.split()).casefold()
    return next(
        (
            action
            for action in table
            if wanted in (action.word.casefold(), *(word.casefold() for word in action.also))
        ),
        None,
    )


def action_for_tag(code: str, table: tuple[Action, ...]) -> Action | None:
    """The action of a printed tag."""
    wanted = " ".join(code.split()).upper()
    return next((action for action in table if action.tag == wanted), None)


def action_for_key(key: str, area: str | None, table: tuple[Action, ...]) -> Action | None:
    """The action of that key in that area; one bound to the area comes before one bound to none."""
    fitting = [action for action in table if key in (action.key, action.lone)]
    return next(
        (action for action in fitting if area in action.areas),
        next((action for action in fitting if not action.areas), None),
    )
