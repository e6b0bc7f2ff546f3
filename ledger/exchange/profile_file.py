"""A section by its coordinates: two columns, once round or as two blocks, made one outline of unit chord."""

from __future__ import annotations

import math
import re
from dataclasses import dataclass
from itertools import pairwise

from ledger.errors import Where
from ledger.exchange.problems import Problems
from ledger.exchange.texts import read_text
from ledger.loft.layout import PlanPoint

_LEAST_POINTS, _MOST_POINTS = 10, 1000
# Shares of the chord: two points this near are one, and a point this near to 0, 0 is the nose.
_SAME = 1e-7
_DO_ORDER = (
    "list it from the upper trailing edge round the nose, or the upper and then the lower from the nose"
)


@dataclass(frozen=True, slots=True)
class _Point:
    """A point as the file gives it, with its line."""

    row: int
    x: float
    z: float


def read_profile(file: str, content: bytes, problems: Problems) -> tuple[PlanPoint, ...]:
    """The outline of a coordinate file.

    Returns
        Points of unit chord, nose at (0, 0), x aft and z up: from the upper trailing edge forward
        round the nose to the lower trailing edge. Empty where a finding says why.
    """
    before = problems.stops
    text = read_text(file, content, problems)
    if text is None:
        return ()
    points, breaks = _points(file, text, problems)
    if problems.stops != before:
        return ()
    points = _without_counts(file, points, problems)
    if problems.stops != before or not _enough(file, points, problems):
        return ()
    loop = _once_round(file, points, breaks, problems)
    if problems.stops != before:
        return ()
    loop = _without_doubles(file, loop, problems)
    if problems.stops != before or not _enough(file, loop, problems):
        return ()
    scaled = _scaled(file, loop, problems)
    if problems.stops != before:
        return ()
    return _facing_up(file, loop, scaled, problems)


def _points(file: str, text: str, problems: Problems) -> tuple[list[_Point], set[int]]:
    """The points, and the lines before which an empty line stands."""
    points: list[_Point] = []
    breaks: set[int] = set()
    empty = False
    title = _first_row(text)
    for row, line in enumerate(text.splitlines(), start=1):
        words = [word for word in re.split(r"[\s,;]+", line.strip()) if word]
        if not words:
            empty = True
            continue
        numbers = [_number(word) for word in words]
        if not points and (None in numbers or len(numbers) != 2) and row == title:
            continue
        x, z = (*numbers, None, None)[:2]
        if len(numbers) != 2 or x is None or z is None:
            what, do = f"{line.strip()[:40]!r} is not two numbers", "write x and z with a blank between"
            problems.stop("profile-broken", Where(file=file, row=row), what, do)
            continue
        if not (math.isfinite(x) and math.isfinite(z)) or max(abs(x), abs(z)) > 1e9:
            what, do = f"{line.strip()[:40]!r} is not a point", "write finite numbers"
            problems.stop("profile-broken", Where(file=file, row=row), what, do)
            continue
        if empty and points:
            breaks.add(row)
        empty = False
        points.append(_Point(row, x, z))
    return points, breaks


def _first_row(text: str) -> int:
    """The first line that is not empty: it may be a title."""
    return next((row for row, line in enumerate(text.splitlines(), start=1) if line.strip()), 0)


def _number(word: str) -> float | None:
    try:
        return float(word)
    except ValueError:
        return None


def _without_counts(file: str, points: list[_Point], problems: Problems) -> list[_Point]:
    """Without the line of two whole numbers that says how many points each surface has."""
    if not points:
        return points
    first, rest = points[0], points[1:]
    whole = first.x.is_integer() and first.z.is_integer() and min(first.x, first.z) >= 2.0
    if not whole:
        return points
    if first.x + first.z == len(rest):
        return rest
    if rest and max(max(abs(point.x), abs(point.z)) for point in rest) <= 0.5 * min(first.x, first.z):
        problems.stop(
            "profile-counts-wrong",
            Where(file=file, row=first.row),
            f"{first.x:g} and {first.z:g} points are announced, and {len(rest)} follow",
            "correct the counts, or add the missing points",
        )
    return points


def _enough(file: str, points: list[_Point], problems: Problems) -> bool:
    row = points[-1].row if points else None
    if len(points) < _LEAST_POINTS:
        what = f"there are {len(points)} points, and a section needs {_LEAST_POINTS}"
        problems.stop("profile-too-few-points", Where(file=file, row=row), what, "give more points")
    elif len(points) > _MOST_POINTS:
        what = f"there are {len(points)} points, more than {_MOST_POINTS}"
        problems.stop("profile-too-many-points", Where(file=file, row=row), what, "leave out most of them")
    return _LEAST_POINTS <= len(points) <= _MOST_POINTS


def _once_round(file: str, points: list[_Point], breaks: set[int], problems: Problems) -> list[_Point]:
    """From one trailing edge round the nose to the other, whichever way the file lists it."""
    xs = [point.x for point in points]
    middle = 0.5 * (min(xs) + max(xs))
    if points[0].x > middle and points[-1].x > middle:
        return points
    split = _split(points, breaks, middle)
    if split is None:
        problems.stop(
            "profile-order",
            Where(file=file, row=points[0].row),
            "the points run neither once round from the trailing edge, nor from the nose twice",
            _DO_ORDER,
        )
        return points
    first, second = points[:split], points[split:]
    # The nose stands at the head of both blocks in most files.
    if _near(first[0], second[0], max(xs) - min(xs)):
        second = second[1:]
    return [*reversed(first), *second]


def _split(points: list[_Point], breaks: set[int], middle: float) -> int | None:
    """Where the second of two blocks begins, each from nose to tail."""
    falls = [
        number
        for number in range(1, len(points))
        if points[number - 1].x > middle > points[number].x and (not breaks or points[number].row in breaks)
    ]
    if points[0].x > middle or points[-1].x < middle or len(falls) != 1:
        return None
    return falls[0]


def _near(one: _Point, other: _Point, chord: float) -> bool:
    return math.hypot(one.x - other.x, one.z - other.z) <= _SAME * chord


def _without_doubles(file: str, points: list[_Point], problems: Problems) -> list[_Point]:
    """Without points that repeat the one before; a closed trailing edge keeps both of its ends."""
    chord = max(point.x for point in points) - min(point.x for point in points)
    kept = [points[0]]
    doubled = []
    for point in points[1:]:
        if _near(kept[-1], point, chord):
            doubled.append(point.row)
        else:
            kept.append(point)
    if doubled:
        rows = ", ".join(str(row) for row in sorted(doubled)[:5])
        more = f" and {len(doubled) - 5} more" if len(doubled) > 5 else ""
        where = Where(file=file, row=min(doubled))
        what = f"points that repeat the one before were left out: line {rows}{more}"
        problems.note("profile-doubled-points", where, what, "nothing need be done")
    return kept


def _scaled(file: str, points: list[_Point], problems: Problems) -> list[PlanPoint]:
    """Of unit chord with the nose at (0, 0): the point that is there already, else the foremost."""
    size = max(point.x for point in points) - min(point.x for point in points)
    ends = (points[0], points[-1])
    foremost = min(points[1:-1], key=lambda point: point.x)
    given = [point for point in points[1:-1] if math.hypot(point.x, point.z) <= _SAME * size]
    nose = given[0] if given else foremost
    chord = 0.5 * (ends[0].x + ends[1].x) - nose.x
    gap = math.hypot(ends[0].x - ends[1].x, ends[0].z - ends[1].z)
    if chord <= 0.9 * size:
        problems.stop(
            "profile-order",
            Where(file=file, row=ends[0].row),
            "the first and the last point are not the trailing edge",
            _DO_ORDER,
        )
    elif gap > 0.1 * chord:
        problems.stop(
            "profile-open",
            Where(file=file, row=ends[1].row),
            f"the trailing edge is open by {gap / chord * 100:.3g} % of the chord",
            "carry both surfaces on to the trailing edge",
        )
    if chord <= 0.0:
        return []
    return [((point.x - nose.x) / chord, (point.z - nose.z) / chord) for point in points]


def _facing_up(
    file: str, points: list[_Point], scaled: list[PlanPoint], problems: Problems
) -> tuple[PlanPoint, ...]:
    """The upper surface first; empty where the outline crosses itself or encloses nothing."""
    first = Where(file=file, row=min(point.row for point in points))
    closed = [*scaled, scaled[0]]
    area = 0.5 * sum(ax * bz - bx * az for (ax, az), (bx, bz) in pairwise(closed))
    if abs(area) < 1e-4:
        problems.stop("profile-flat", first, "the outline encloses no area", "give both surfaces")
        return ()
    crossing = _crossing(scaled)
    if crossing is not None:
        one, other = (points[number] for number in crossing)
        problems.stop(
            "profile-crosses",
            Where(file=file, row=other.row),
            f"the outline after line {other.row} crosses itself after line {one.row}",
            "correct the points there",
        )
        return ()
    if area < 0.0:
        what = "the lower surface is listed first, and was taken as such"
        problems.note("profile-turned", first, what, "nothing need be done")
        scaled = scaled[::-1]
    return tuple(scaled)


def _crossing(points: list[PlanPoint]) -> tuple[int, int] | None:
    """Two sides that meet other than at a shared corner, each by its first corner."""
    sides = list(pairwise([*points, points[0]])) if points[0] != points[-1] else list(pairwise(points))
    for first, (a, b) in enumerate(sides):
        for second in range(first + 2, len(sides)):
            if first == 0 and second == len(sides) - 1:
                continue
            if _meet(a, b, *sides[second]):
                return first, second
    return None


def _meet(a: PlanPoint, b: PlanPoint, c: PlanPoint, d: PlanPoint) -> bool:
    if max(a[0], b[0]) < min(c[0], d[0]) or max(c[0], d[0]) < min(a[0], b[0]):
        return False
    return _turn(a, b, c) * _turn(a, b, d) <= 0.0 and _turn(c, d, a) * _turn(c, d, b) <= 0.0


def _turn(a: PlanPoint, b: PlanPoint, c: PlanPoint) -> float:
    return (b[0] - a[0]) * (c[1] - a[1]) - (b[1] - a[1]) * (c[0] - a[0])
