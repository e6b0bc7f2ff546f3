"""Coordinate files in the forms they come in, against the section they were written from."""

from __future__ import annotations

from collections.abc import Iterable

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from ledger.errors import Severity
from ledger.exchange.problems import Problems
from ledger.exchange.profile_file import read_profile
from ledger.loft.section import naca_section

ROUND = naca_section("4415", 40)
NOSE = len(ROUND) // 2
TOLERANCE = 1e-9


def rows(points: Iterable[Iterable[float]], between: str = " ") -> str:
    return "\n".join(between.join(f"{value:.12f}" for value in point) for point in points)


def read(text: str) -> tuple[np.ndarray, list[str]]:
    """The outline and what is told, as code and place."""
    problems = Problems()
    outline = read_profile("root.dat", text.encode(), problems)
    return np.array(outline), [f"{one.code} {one.where}" for one in problems.findings()]


UPPER, LOWER = ROUND[NOSE::-1], ROUND[NOSE:]
IN_TWO = f"{rows(UPPER)}\n\n{rows(LOWER)}"


@pytest.mark.parametrize(
    "text",
    [
        rows(ROUND),
        "A SECTION OF MINE\n" + rows(ROUND),
        "12\n" + rows(ROUND),
        rows(ROUND, ", "),
        rows(ROUND, "\t"),
        "title, of two words\r\n" + rows(ROUND).replace("\n", "\r\n"),
        rows(850.0 * ROUND),
        rows(850.0 * ROUND + 0.0),
        IN_TWO,
        "title\n" + IN_TWO,
        f"title\n  {len(UPPER)}.  {len(LOWER)}.\n\n{IN_TWO}",
        f"{rows(UPPER)}\n{rows(LOWER)}",
        f"{rows(UPPER)}\n{rows(LOWER[1:])}",
    ],
    ids=[
        "once round",
        "with a title",
        "with a number for a title",
        "commas",
        "tabs",
        "lines of another system",
        "in millimetres",
        "nose at nothing",
        "two blocks",
        "two blocks and a title",
        "two blocks and their counts",
        "two blocks without an empty line",
        "two blocks, the nose once",
    ],
)
def test_every_usual_form_gives_the_same_outline(text: str) -> None:
    outline, told = read(text)
    assert told == []
    assert outline == pytest.approx(ROUND, abs=TOLERANCE)


def test_a_section_moved_and_scaled_is_brought_back_by_its_foremost_point() -> None:
    symmetric = naca_section("0012", 40)
    outline, told = read(rows(0.3 * symmetric + np.array([2.5, -0.4])))
    assert told == []
    assert outline == pytest.approx(symmetric, abs=TOLERANCE)


@pytest.mark.parametrize(
    "text", [rows(ROUND[::-1]), f"{rows(LOWER)}\n\n{rows(UPPER)}"], ids=["once round", "in two blocks"]
)
def test_the_lower_surface_first_is_turned_round_and_noted(text: str) -> None:
    outline, told = read(text)
    assert told == ["profile-turned root.dat:1"]
    assert outline == pytest.approx(ROUND, abs=TOLERANCE)


def test_doubled_points_are_left_out_and_their_lines_noted() -> None:
    doubled = np.insert(ROUND, [5, 20], ROUND[[5, 20]], axis=0)
    problems = Problems()
    outline = read_profile("root.dat", rows(doubled).encode(), problems)
    assert np.array(outline) == pytest.approx(ROUND, abs=TOLERANCE)
    (note,) = problems.findings()
    assert (note.severity, note.code, str(note.where)) == (
        Severity.NOTE,
        "profile-doubled-points",
        "root.dat:7",
    )
    assert "line 7, 23" in note.what


def test_a_closed_trailing_edge_keeps_both_of_its_ends() -> None:
    closed = ROUND.copy()
    closed[0] = closed[-1] = (1.0, 0.0)
    outline, told = read(rows(closed))
    assert told == []
    assert len(outline) == len(ROUND)
    assert (tuple(outline[0]), tuple(outline[-1])) == ((1.0, 0.0), (1.0, 0.0))


def crossed() -> str:
    points = ROUND.copy()
    points[[12, 13]] = points[[13, 12]]
    return rows(points)


def pinched() -> str:
    points = ROUND.copy()
    points[8, 1] = -0.5
    return rows(points)


@pytest.mark.parametrize(
    ("text", "told"),
    [
        ("", ["profile-too-few-points root.dat"]),
        ("only a title\n", ["profile-too-few-points root.dat"]),
        (rows(ROUND[:9]), ["profile-too-few-points root.dat:9"]),
        (rows(naca_section("0012", 1200)), ["profile-too-many-points root.dat:1201"]),
        (rows(ROUND).replace("\n", "\nhalf way\n", 1), ["profile-broken root.dat:2"]),
        (rows(ROUND) + "\n0.5\n", ["profile-broken root.dat:42"]),
        (rows(ROUND) + "\n1 2 3\n0,5 0,1\n", ["profile-broken root.dat:42", "profile-broken root.dat:43"]),
        (rows(ROUND) + "\nnan 0\n", ["profile-broken root.dat:42"]),
        (rows(ROUND) + "\n1.0 inf\n", ["profile-broken root.dat:42"]),
        (f"20 20\n{IN_TWO}", ["profile-counts-wrong root.dat:1"]),
        (crossed(), ["profile-crosses root.dat:14"]),
        (rows(np.column_stack((ROUND[:, 0], 0.0 * ROUND[:, 1]))), ["profile-flat root.dat:1"]),
        (rows(ROUND[5:]), ["profile-open root.dat:36"]),
        (rows(np.roll(ROUND, NOSE, axis=0)), ["profile-order root.dat:1"]),
        (rows(ROUND[:NOSE]), ["profile-order root.dat:1"]),
        (rows(-ROUND), ["profile-order root.dat:1"]),
        ("\n".join(["0.5 0.5"] * 12), ["profile-order root.dat:1"]),
    ],
)
def test_what_is_no_section_is_told_with_its_line(text: str, told: list[str]) -> None:
    outline, said = read(text)
    assert said == told
    assert len(outline) == 0


def test_surfaces_that_meet_before_the_tail_are_told() -> None:
    outline, told = read(pinched())
    assert [one.split()[0] for one in told] == ["profile-crosses"]
    assert len(outline) == 0


def test_a_file_that_is_no_text_is_told() -> None:
    problems = Problems()
    assert read_profile("root.dat", b"\xff\xfe1 0\n", problems) == ()
    assert [one.code for one in problems.findings()] == ["file-not-utf8"]


LINES = st.one_of(
    st.tuples(st.floats(width=32), st.floats(width=32)).map(lambda pair: f"{pair[0]} {pair[1]}"),
    st.text(alphabet="0123456789.,- eEnaif", max_size=12),
)


@given(st.lists(LINES, max_size=40).map("\n".join))
def test_any_text_gives_an_outline_or_says_why_not(text: str) -> None:
    problems = Problems()
    outline = read_profile("root.dat", text.encode(), problems)
    assert (len(outline) == 0) is problems.stopped
    if outline:
        area = sum(
            a[0] * b[1] - b[0] * a[1] for a, b in zip(outline, (*outline[1:], outline[0]), strict=True)
        )
        assert area > 0.0
        assert outline[0][0] + outline[-1][0] == pytest.approx(2.0)
