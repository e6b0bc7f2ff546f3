"""The Iterations screen's own actions. Words that take a path or two names are heard as a line as well."""

from __future__ import annotations

from ledger.tui.actions import Action

FIGURES, PARTS, UNFIT, HISTORY, ATTITUDES = "figures", "parts", "no longer fits", "over time", "attitudes"

ITERATION_ACTIONS: tuple[Action, ...] = (
    Action(name="row_before", word="row before", key="up", tip="the mark to the row above"),
    Action(name="row_after", word="row after", key="down", tip="the mark to the row below"),
    Action(name="page_before", word="page before", key="pageup", tip="a page up"),
    Action(name="page_after", word="page after", key="pagedown", tip="a page down"),
    Action(name="first_row", word="first", key="home", tip="the mark to the first row"),
    Action(name="last_row", word="last", key="end", tip="the mark to the last row"),
    Action(name="say_row", word="say", tip="the row under the mark at length; also Enter"),
    Action(
        name="compare_older",
        word="older",
        key="left",
        tip="compare the two iterations before; or type two names, for example: r1 r3",
    ),
    Action(name="compare_newer", word="newer", key="right", tip="compare the two iterations after"),
    Action(name="compare_latest", word="latest", tip="compare the current iteration with the one before"),
    Action(name="compare_anew", word="compare", tip="reckon what is compared once more"),
    Action(
        name="preview",
        word="preview",
        tip="compare a plan folder with the current plan, nothing is written: preview FOLDER",
    ),
    Action(
        name="adopt",
        word="adopt",
        tip="take a plan folder into the book as the next iteration, after a preview: adopt FOLDER",
    ),
    Action(
        name="loft",
        word="loft",
        tip="make a plan folder from a layout file: loft LAYOUT OUT",
    ),
    Action(
        name="choose_again",
        word="cut again",
        tip="the marked piece is made again: its slips open on the bench",
        also=("make again",),
    ),
    Action(
        name="choose_accept",
        word="accept it",
        tip="the marked piece stays as it is: its slip opens on the bench",
    ),
    Action(
        name="choose_keep",
        word="keep for stock",
        tip="another piece is made and the marked one kept: its slips open on the bench",
    ),
)
