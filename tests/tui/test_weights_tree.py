"""The assembly tree as text: what shows, what is drawn, and that thousands of rows cost nothing."""

from __future__ import annotations

import time
from dataclasses import replace

import pytest
from hypothesis import given
from hypothesis import strategies as st

from ledger.mass.report import CauseMass, TotalMass
from ledger.operations.look_at_weights import WeightRow, WeightsView
from ledger.tui.room import Room
from ledger.tui.themes import SIGNS, Signs
from ledger.tui.weights_figures import causes_text, headline_text, known_text
from ledger.tui.weights_tree import bar_of, branches_to, first_shown, head_text, seen_rows, tree_text
from ledger.units import Display

PLAIN_SIGNS = Signs()


def row(key: str, depth: int, end: int, **more: object) -> WeightRow:
    figures: dict[str, object] = {
        "key": key,
        "name": key.rpartition("/")[2] if depth < 2 else key,
        "title": "",
        "kind": "assembly" if depth < 2 else "part",
        "depth": depth,
        "end": end,
        "begun": 1,
        "planned": 2,
        "state": "",
        "estimated_kg": 2.0,
        "best_kg": 2.5,
        "best_u_kg": 0.01,
        "known_by": "AE",
        "off_plan": (CauseMass(cause="resin", mass_kg=0.5),),
    }
    return WeightRow(**{**figures, **more})  # type: ignore[arg-type]


ROWS = (
    row("WING", 0, 5),
    row("WING/LEFT", 1, 4, inside="LOOK"),
    row("RIB.01-L", 2, 3, off_plan=(CauseMass(cause="stock", mass_kg=-0.25),), best_kg=1.75),
    row("SKIN.LWR-L", 2, 4, flag="LOOK"),
    row("WING/RIGHT", 1, 5, off_plan=(), best_kg=2.0),
)


def view(rows: tuple[WeightRow, ...] = ROWS, *, best: float = 47.9, u: float = 0.4) -> WeightsView:
    return WeightsView(
        display=Display.METRIC,
        total=TotalMass(
            estimated_kg=47.0,
            calculated_kg=None,
            actual_kg=None,
            best_kg=best,
            best_u_kg=u,
            built_kg=30.0,
            share_actual=0.61,
            share_calculated=0.17,
            share_estimated=0.22,
            cg_m=None,
            inertia_kg_m2=None,
        ),
        off_kg=best - 47.0,
        by_chance=abs(best - 47.0) <= 2 * u,
        off_plan=(CauseMass(cause="stock", mass_kg=0.41), CauseMass(cause="resin", mass_kg=-0.52)),
        rows=rows,
        widest_off_kg=0.5,
        findings={},
        readings={},
    )


def room(width: int = 80, height: int = 5) -> Room:
    return Room(width=width, height=height, signs=PLAIN_SIGNS)


def test_a_closed_branch_hides_all_that_is_inside_it() -> None:
    assert seen_rows(ROWS, frozenset()) == (0,)
    assert seen_rows(ROWS, {"WING"}) == (0, 1, 4)
    assert seen_rows(ROWS, {"WING", "WING/LEFT"}) == (0, 1, 2, 3, 4)
    assert seen_rows(ROWS, {"WING/LEFT"}) == (0,)


def test_branches_to_a_row_are_those_it_stands_in() -> None:
    assert branches_to(ROWS, "SKIN.LWR-L") == ("WING", "WING/LEFT")
    assert branches_to(ROWS, "WING") == ()
    assert branches_to(ROWS, "no such part") == ()


def test_the_tree_is_drawn_row_by_row() -> None:
    opened = {"WING", "WING/LEFT"}
    drawn = tree_text(view(), seen_rows(ROWS, opened), 3, opened, room())
    assert [line.rstrip() for line in drawn.plain.split("\n")] == [
        " - WING                  1/2    2.000    2.500 0.010  AE  +0.500          |>>>>>",
        "  - LEFT                 1/2    2.000    2.500 0.010  AE  +0.500          |>>>>>",
        "   + RIB.01-L            1/2    2.000    1.750 0.010  AE  -0.250        <<|",
        ">  + SKIN.LWR-L          1/2    2.000    2.500 0.010  AE  +0.500 LOOK     |>>>>>",
        "  + RIGHT                1/2    2.000    2.000 0.010  AE   0.000          |",
    ]
    assert head_text(room()).plain.rstrip() == (
        "                       built estimated     now    +-  by off plan    light|heavy"
    )


def test_a_closed_branch_says_what_is_flagged_inside() -> None:
    drawn = tree_text(view(), (0, 1, 4), 0, {"WING"}, room(height=3))
    assert "LOOK" in drawn.plain.split("\n")[1]
    assert "LOOK" not in tree_text(view(), (0, 1, 2), 0, {"WING", "WING/LEFT"}, room(height=3)).plain


def test_a_name_of_the_user_is_never_markup_and_never_leaves_its_column() -> None:
    nasty = (row("PART", 0, 1, name="[bold red]A very long name\x1b[31m indeed[/]"),)
    drawn = tree_text(view(nasty), (0,), 0, frozenset(), room(height=1))
    assert drawn.plain == (">+ [bold red]A ver..     1/2    2.000    2.500 0.010  AE  +0.500          |>>>>>")
    code = (row("PART", 0, 1, name="\x1b[31mA"),)
    drawn = tree_text(view(code), (0,), 0, frozenset(), room(height=1))
    assert "\x1b" not in drawn.plain


def test_what_is_unknown_is_a_dash_and_not_nought() -> None:
    unknown = (row("A", 0, 1, best_kg=None, best_u_kg=None, estimated_kg=None, off_plan=()),)
    drawn = tree_text(view(unknown), (0,), 0, frozenset(), room(height=1)).plain
    assert drawn.split() == [">+", "A", "1/2", "-", "-", "-", "AE", "-", "|"]
    assert "0.000" not in drawn


@given(
    off=st.floats(-10, 10, allow_nan=False),
    widest=st.floats(0.001, 10, allow_nan=False),
    half=st.integers(1, 20),
)
def test_a_bar_never_changes_its_width_and_shows_its_sign(off: float, widest: float, half: int) -> None:
    bar = bar_of(off, widest, half)
    assert len(bar) == 2 * half + 1
    assert bar[half] == "|"
    shows = float(f"{off:.3f}")
    assert ("<" in bar) == (shows < 0)
    assert (">" in bar) == (shows > 0)


def test_the_widest_bar_fills_its_side_and_half_as_much_half_of_it() -> None:
    assert bar_of(-0.8, 0.8, 6) == "<<<<<<|      "
    assert bar_of(0.4, 0.8, 6) == "      |>>>   "
    assert bar_of(0.001, 0.8, 6) == "      |>     "
    assert bar_of(0.0004, 0.8, 6) == "      |      "


@given(many=st.integers(1, 3000), at=st.integers(0, 2999), height=st.integers(1, 40))
def test_the_mark_is_always_inside_the_window(many: int, at: int, height: int) -> None:
    at = min(at, many - 1)
    first = first_shown(many, at, height)
    assert first <= at < first + height
    assert first == 0 or first + height <= many


def test_five_thousand_rows_are_drawn_as_fast_as_five() -> None:
    rows = (row("WING", 0, 5001), *(row(f"RIB.{place:04}", 2, place + 2) for place in range(5000)))
    large, opened = view(rows), {"WING"}
    seen = seen_rows(rows, opened)
    assert len(seen) == 5001

    def seconds(of: WeightsView, places: tuple[int, ...], at: int) -> float:
        times = []
        for _ in range(7):
            start = time.perf_counter()
            tree_text(of, places, at, opened, room(height=9))
            times.append(time.perf_counter() - start)
        return min(times)

    # The window has nine rows either way; only its place in the tree differs.
    assert seconds(large, seen, 4000) < 4 * seconds(large, seen[:9], 5)


def test_the_headline_says_whether_chance_explains_it() -> None:
    assert headline_text(view(u=0.4), room()).plain.rstrip() == (
        "FINISHED 47.90 kg +-0.40 kg   estimated 47.00 kg   HEAVY 0.90 kg, not chance"
    )
    assert "heavy 0.90 kg, may be chance" in headline_text(view(u=0.5), room()).plain
    assert "LIGHT 1.00 kg, not chance" in headline_text(view(best=46.0, u=0.1), room()).plain
    assert "on plan" in headline_text(view(best=47.0), room()).plain


def test_what_is_truly_weighed_is_a_bar_of_its_own_letters() -> None:
    text = known_text(view().total, room(60)).plain
    assert text == "known by   A AAAAAAAAAAAAA 61 %  C CCCC 17 %  E EEEEE 22 %  "


@given(cuts=st.tuples(st.floats(0, 1), st.floats(0, 1)), width=st.integers(50, 200))
def test_the_bars_of_what_is_weighed_add_up_to_the_same_length_whatever_the_shares(
    cuts: tuple[float, float], width: int
) -> None:
    first, second = sorted(cuts)
    shares = (first, second - first, 1.0 - second)
    total = replace(
        view().total,
        share_actual=shares[0],
        share_calculated=shares[1],
        share_estimated=shares[2],
    )
    text = known_text(total, room(width)).plain
    assert len(text) == width
    for letter, share in zip("ACE", shares, strict=True):
        marks = text.count(letter) - 1
        words = sum(
            len(f"{letter}  {100 * share:.0f} %  ") for letter, share in zip("ACE", shares, strict=True)
        )
        assert marks == 0 if share == 0.0 else marks >= 1
        assert abs(marks - share * (width - len("known by   ") - words)) < 3.0


def test_causes_stand_light_to_the_left_and_heavy_to_the_right() -> None:
    lines = causes_text(view().off_plan, Display.METRIC, room(40, 3)).plain.split("\n")
    assert [line.rstrip() for line in lines] == [
        "OFF PLAN BY CAUSE kg      light|heavy",
        "stock           +0.410         |>>>>>>",
        "resin           -0.520 <<<<<<<<|",
    ]


def test_a_piece_number_of_12_characters_is_read_whole_in_80_columns() -> None:
    deep = (row("SKIN.LWR-L/1", 4, 1, kind="piece"),)
    assert "SKIN.LWR-L/1 " in tree_text(view(deep), (0,), 0, frozenset(), room(height=1)).plain


@pytest.mark.parametrize("state", ["scrapped", "spare"])
def test_a_piece_that_counts_nothing_says_why_in_its_column(state: str) -> None:
    gone = (row("A/1", 3, 1, kind="piece", begun=0, planned=0, state=state),)
    drawn = tree_text(view(gone), (0,), 0, frozenset(), room(height=1)).plain
    assert drawn[:30].split()[-1] == {"scrapped": "scrap", "spare": "spare"}[state]
    assert drawn.index("|") == tree_text(view(), (0,), 0, frozenset(), room(height=1)).plain.index("|")


def test_with_every_colour_gone_the_same_words_stand() -> None:
    words = {
        name: tree_text(view(), (0, 1, 4), 1, {"WING"}, Room(width=80, height=5, signs=signs)).plain
        for name, signs in SIGNS.items()
    }
    assert len(set(words.values())) == 1
