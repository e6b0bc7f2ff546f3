"""What the Fuel screen draws, without a book: boxes, signs, sections and windows."""

from __future__ import annotations

from dataclasses import dataclass
from typing import cast

from hypothesis import given
from hypothesis import strategies as st

from ledger.model.attitude import Attitude
from ledger.operations.cut_tank import Cut, CutCell
from ledger.operations.look_at_tank import Asked, CellNow, Footprint, HoleMark, TankDrawn, TankNow
from ledger.tui.fuel_figures import map_text, small_volume, tilt_words
from ledger.tui.fuel_outline import outline_text
from ledger.tui.fuel_plan_view import arranged, neighbour, plan_text
from ledger.tui.fuel_section import crossings, scale_of, section_text
from ledger.tui.room import Room
from ledger.tui.themes import SIGNS, Signs
from ledger.units import Display

LEVEL = Attitude(name="level")


@dataclass(frozen=True)
class Shown:
    """As much of a tank as is drawn."""

    footprints: tuple[Footprint, ...]
    marks: tuple[HoleMark, ...] = ()


def foot(cell: str, fs: float, bl: float, size: float = 1.0) -> Footprint:
    return Footprint(
        cell=cell,
        low_m=(fs, bl, 0.0),
        high_m=(fs + size, bl + size, 0.2),
        gross_m3=0.2,
        caught_air_m3=0.0,
    )


def cell(name: str, share: float | None, trapped: float | None = 0.0, air: float = 0.0) -> CellNow:
    return CellNow(
        cell=name,
        share=share,
        trapped_share=trapped,
        air_share=air,
        trapped_m3=trapped,
        trapped_by="drain",
        opening=None,
        pockets=1,
    )


def standing(*cells: CellNow, attitude: Attitude = LEVEL) -> TankNow:
    return TankNow(
        asked=Asked(attitude=attitude, quantity_m3=0.1, axis=1, at_m=0.5),
        attitude=None,
        mass_kg=None,
        cg_m=None,
        outlet_wl_m=None,
        trapped_m3=0.0,
        cells=cells,
        cut=Cut(axis=1, at_m=0.5, up=attitude.up, cells=()),
        frees_lower_1mm_m3=None,
        frees_wider_10pc_m3=None,
    )


def drawn_plan(
    shown: Shown,
    now: TankNow,
    *,
    width: int = 41,
    height: int = 7,
    chosen: str = "",
    signs: Signs | None = None,
) -> list[str]:
    room = Room(width=width, height=height, signs=signs or Signs())
    text = plan_text(arranged(shown.footprints), cast("TankDrawn", shown), now, chosen=chosen, room=room)
    return text.plain.split("\n")


FOUR = Shown((foot("F1", 0, 0), foot("F2", 0, 1), foot("R1", 1, 0), foot("R2", 1, 1)))


def test_cells_stand_as_they_lie_nose_to_the_top_and_right_to_the_right() -> None:
    rows = drawn_plan(FOUR, standing(*(cell(name, 0.0) for name in ("F1", "F2", "R1", "R2"))))
    assert rows == [
        "+-------------------+-------------------+",
        "|F1                 |F2                 |",
        "|                0 %|                0 %|",
        "+-------------------+-------------------+",
        "|R1                 |R2                 |",
        "|                0 %|                0 %|",
        "+-------------------+-------------------+",
    ]


def test_feeding_trapped_and_caught_air_each_have_their_sign_and_their_share() -> None:
    one = Shown((foot("A", 0, 0),))
    rows = drawn_plan(one, standing(cell("A", 0.6, 0.2, air=0.1)), width=52, height=4)
    inside = "".join(row[1:-1] for row in rows[1:-1])
    places = 2 * 50 - len("A") - len("60 %")
    for sign, share in (("#", 0.2), ("=", 0.4), ("o", 0.1)):
        assert abs(inside.count(sign) - share * places) <= 1, sign


def test_a_cell_whose_share_nobody_knows_says_so() -> None:
    one = Shown((foot("A", 0, 0),))
    rows = drawn_plan(one, standing(cell("A", None, None)), width=20, height=4)
    assert "? %" in "\n".join(rows)
    assert "".join(rows).count("?") > 10


@given(share=st.floats(0, 1), kept=st.floats(0, 1), air=st.floats(0, 1), width=st.integers(8, 104))
def test_whatever_is_in_a_cell_the_drawing_keeps_its_shape(
    share: float, kept: float, air: float, width: int
) -> None:
    one = Shown((foot("A", 0, 0),))
    rows = drawn_plan(one, standing(cell("A", share, min(share, kept), air)), width=width, height=5)
    assert [len(row) for row in rows] == [width] * 5
    assert rows[0] == rows[-1] == f"+{'-' * (width - 2)}+"
    inside = "".join(row[1:-1] for row in rows[1:-1])
    if share < 0.004:
        assert "=" not in inside
        assert "#" not in inside
    if kept < 0.004:
        assert "#" not in inside


def test_fuel_lies_where_it_is_low() -> None:
    one = Shown((foot("A", 0, 0),))
    for attitude, low in (
        (Attitude(name="up", pitch_deg=10.0), (-1, 0)),
        (Attitude(name="down", pitch_deg=-10.0), (0, -1)),
    ):
        rows = drawn_plan(one, standing(cell("A", 0.4), attitude=attitude), width=40, height=9)[1:-1]
        assert rows[low[0]].count("=") > rows[low[1]].count("=")
    right = standing(cell("A", 0.4), attitude=Attitude(name="right", roll_deg=10.0))
    columns = [row[1:-1] for row in drawn_plan(one, right, width=40, height=9)[1:-1]]
    assert sum(row[20:].count("=") for row in columns) > sum(row[:18].count("=") for row in columns)


def test_the_same_words_stand_in_every_theme() -> None:
    now = standing(*(cell(name, 0.5, 0.2) for name in ("F1", "F2", "R1", "R2")))
    drawings = {tuple(drawn_plan(FOUR, now, chosen="R1", signs=signs)) for signs in SIGNS.values()}
    assert len(drawings) == 1
    assert ">R1" in "".join(drawings.pop())


def test_a_name_of_the_user_is_never_markup_nor_a_control_code() -> None:
    one = Shown((foot("[b]X\x1b[0m", 0, 0),))
    rows = drawn_plan(one, standing(cell("[b]X\x1b[0m", 0.0)), width=30, height=4)
    assert rows[1].startswith("|[b]X\\x1b[0m")


def test_holes_lie_on_the_wall_they_go_through() -> None:
    marks = (
        HoleMark(name="low", cells=("F1", "F2"), at_m=(0.5, 1.0, 0.02), sign="d"),
        HoleMark(name="high", cells=("F1", "R1"), at_m=(1.0, 0.5, 0.18), sign="v"),
        HoleMark(name="outlet", cells=("R2",), at_m=(1.95, 1.5, 0.0), sign="out"),
    )
    now = standing(*(cell(name, 0.0) for name in ("F1", "F2", "R1", "R2")))
    rows = drawn_plan(Shown(FOUR.footprints, marks), now)
    assert "d" in (rows[1][20], rows[2][20])
    assert "v" in rows[3][:20]
    assert "out" in rows[6][20:]


def test_more_cells_than_fit_are_windowed_about_the_chosen_one_with_arrows() -> None:
    row = Shown(tuple(foot(f"C{number:02}", 0, number) for number in range(30)))
    now = standing(*(cell(f"C{number:02}", 0.0) for number in range(30)))
    rows = drawn_plan(row, now, width=41, height=4, chosen="C15")
    text = "\n".join(rows)
    assert ">C15" in text
    assert "C00" not in text
    assert "<" in text
    assert max(map(len, rows)) == 41


def test_a_step_goes_to_the_cell_beside_and_stays_at_the_edge() -> None:
    arrangement = arranged(FOUR.footprints)
    assert neighbour(arrangement, "F1", 1, 0) == "F2"
    assert neighbour(arrangement, "F1", 0, 1) == "R1"
    assert neighbour(arrangement, "R2", -1, 0) == "R1"
    assert neighbour(arrangement, "F1", -1, 0) == "F1"
    assert neighbour(arrangement, "R1", 0, 1) == "R1"


def test_on_the_true_outline_an_outlet_has_not_the_sign_of_air() -> None:
    marks = (
        HoleMark(name="outlet", cells=("A",), at_m=(0.5, 0.5, 0.0), sign="out"),
        HoleMark(name="vent", cells=("A",), at_m=(0.2, 0.2, 0.2), sign="V"),
        HoleMark(name="drain beside it", cells=("A",), at_m=(0.5, 0.5, 0.0), sign="d"),
    )
    outline = {"A": ((0.0, 0.0), (1.0, 0.0), (1.0, 1.0), (0.0, 1.0))}
    text, _ = outline_text(outline, marks, Room(width=40, height=9, signs=Signs()))
    assert text.plain.count("X") == text.plain.count("V") == 1
    assert "o" not in text.plain


# -- section

SQUARE = ((0.0, 0.0, 1.0, 0.0), (1.0, 0.0, 1.0, 0.5), (1.0, 0.5, 0.0, 0.5), (0.0, 0.5, 0.0, 0.0))


def cut_at(level: float, kept: float, attitude: Attitude = LEVEL) -> Cut:
    return Cut(
        axis=1,
        at_m=0.0,
        up=attitude.up,
        cells=(CutCell(cell="A", segments=SQUARE, level_m=level, kept_level_m=kept),),
    )


def section(cut: Cut, width: int = 40, height: int = 10) -> list[str]:
    return section_text(cut, Room(width=width, height=height, signs=Signs())).plain.split("\n")


def test_a_section_half_full_is_half_signs_and_what_is_kept_lies_lowest() -> None:
    rows = section(cut_at(0.25, 0.1))
    signs = [{sign for sign in row if sign in "=#"} for row in rows]
    assert signs[0] == signs[1] == set()
    assert signs[-1] == {"#"}
    assert {"="} in signs
    filled = sum(row.count("=") + row.count("#") for row in rows)
    assert 0.4 < filled / (40 * 9.5) < 0.62


def test_a_surface_tilted_nose_up_stands_higher_aft() -> None:
    tilted = Attitude(name="up", pitch_deg=10.0)
    level = 0.25 * tilted.up[2] + 0.5 * tilted.up[0]
    rows = section(cut_at(level, -1.0, tilted))
    front = sum(row[:20].count("=") for row in rows)
    rear = sum(row[20:].count("=") for row in rows)
    assert rear > front > 0


def test_nothing_cut_says_so() -> None:
    rows = section(Cut(axis=0, at_m=9.0, up=LEVEL.up, cells=()))
    assert "no cell of this tank is cut here" in "\n".join(rows)


def test_flat_things_are_stretched_and_the_scale_says_how_far() -> None:
    flat = tuple((u0, 0.1 * w0, u1, 0.1 * w1) for u0, w0, u1, w1 in SQUARE)
    cut = Cut(
        axis=1,
        at_m=0.0,
        up=LEVEL.up,
        cells=(CutCell(cell="A", segments=flat, level_m=0.0, kept_level_m=0.0),),
    )
    assert 1.0 < scale_of(cut, 40, 10).stretch <= 6.0
    assert scale_of(cut_at(0.0, 0.0), 40, 10).stretch < 1.5


@given(u=st.floats(0.01, 0.99))
def test_an_upright_line_crosses_a_square_at_its_floor_and_its_roof(u: float) -> None:
    assert crossings(SQUARE, u) == [0.0, 0.5]


# -- words


def test_level_is_a_word_and_every_direction_is_named() -> None:
    assert tilt_words(0.0, 0.0) == ("NOSE level", "ROLL level")
    assert tilt_words(12.0, -3.0) == ("NOSE UP 12", "ROLL LEFT 3")
    assert tilt_words(-1.5, 2.0) == ("NOSE DOWN 1.5", "ROLL RIGHT 2")


def test_a_small_volume_is_in_millilitres_or_fluid_ounces() -> None:
    assert small_volume(38e-6, Display.METRIC) == "38 mL"
    # 1 US fl oz is 29.5735 mL (from memory: 231 in3 / 128)
    assert small_volume(29.5735e-6, Display.US) == "1.00 fl oz"
    assert small_volume(None, Display.METRIC) == "-"


def test_the_map_says_all_where_nothing_can_leave_and_marks_the_worst() -> None:
    room = Room(width=51, height=12, signs=Signs())
    text = map_text(
        (0.0, 4.0),
        (-3.0, 3.0),
        ((0.08, 0.001), (None, 0.002)),
        most_m3=0.076,
        display=Display.METRIC,
        room=room,
    ).plain.split("\n")
    assert text[2].split() == ["level", "all", "#", "1.0"]
    assert text[3].split() == ["up", "4", "pockets", "2.0"]
