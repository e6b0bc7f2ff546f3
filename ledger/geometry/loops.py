"""Closed loops of curves: made of loose pieces, and what is wrong with them."""

from __future__ import annotations

import math
from collections.abc import Iterable, Sequence
from dataclasses import dataclass

from ledger.errors import Unplaced
from ledger.geometry.curves import Curve, Line
from ledger.geometry.named_place import named_place
from ledger.geometry.sectors import Point

NAMED = 3


class OutlineRefused(Unplaced):
    """An outline that encloses no area that can be told. Codes: outline-open, -crosses, -doubled, -empty."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Loop:
    """Curves that follow one another and come back to the first."""

    curves: tuple[Curve, ...]

    def __post_init__(self) -> None:
        if not self.curves:
            raise ValueError("a loop needs a curve")


def polygon(points_m: Iterable[Iterable[float]]) -> Loop:
    """The loop of straight lines through points, closed from the last to the first."""
    corners = [(float(x), float(y)) for x, y in points_m]
    if len(corners) > 1 and corners[0] == corners[-1]:
        corners.pop()
    following = corners[1:] + corners[:1]
    return Loop(curves=tuple(Line(start=a, end=b) for a, b in zip(corners, following, strict=True)))


def chain(curves: Sequence[Curve], gap_m: float) -> tuple[Loop, ...]:
    """Loops of loose curves drawn in any order and direction.

    gap_m : float
        Ends no farther apart than this belong together, the nearest first. Lines are drawn on to close
        what is left between them; between two arcs a short line is laid.
    Raises OutlineRefused
        outline-open, naming the first ends that meet no other; outline-doubled where a curve is
        drawn twice.
    """
    if not gap_m >= 0.0:
        raise ValueError("gap_m must not be below 0")
    whole = [curve for curve in curves if _apart(curve.start, curve.end) <= gap_m and _is_round(curve, gap_m)]
    loose = [curve for curve in curves if curve not in whole and _apart(curve.start, curve.end) > 0.0]
    _refuse_doubled(loose, gap_m)
    partner = _partners(loose, gap_m)
    free = [end for end in range(2 * len(loose)) if end not in partner]
    if free:
        named = ", ".join(named_place(_end_of(loose, end)) for end in free[:NAMED])
        rest = f" and {len(free) - NAMED} more" if len(free) > NAMED else ""
        raise OutlineRefused(
            "outline-open",
            f"the outline is open: {len(free)} ends meet no other within {1000.0 * gap_m:g} mm,"
            f" at {named}{rest}",
            "join the ends there or remove the loose piece",
        )
    loops = [Loop(curves=_bridged([curve])) for curve in whole]
    left = set(range(len(loose)))
    while left:
        loops.append(Loop(curves=_bridged(_followed(loose, partner, left))))
    return tuple(loops)


def _followed(loose: list[Curve], partner: dict[int, int], left: set[int]) -> list[Curve]:
    """One loop, from the first curve not yet used, each turned to run on from the one before."""
    first = min(left)
    at, backward, run = first, False, []
    while True:
        left.discard(at)
        run.append(loose[at].reversed() if backward else loose[at])
        leaving = 2 * at + (0 if backward else 1)
        entered = partner[leaving]
        at, backward = entered // 2, entered % 2 == 1
        if at == first:
            return run


def _partners(loose: list[Curve], gap_m: float) -> dict[int, int]:
    """Which end meets which: end 2 i is the start of curve i, 2 i + 1 its end; nearest pairs first."""
    import numpy as np

    if not loose:
        return {}
    ends = np.array([_end_of(loose, end) for end in range(2 * len(loose))])
    pairs: list[tuple[float, int, int]] = []
    for end in range(len(ends) - 1):
        apart = np.hypot(*(ends[end + 1 :] - ends[end]).T)
        pairs.extend((float(apart[i]), end, end + 1 + int(i)) for i in np.flatnonzero(apart <= gap_m))
    partner: dict[int, int] = {}
    # A short curve's own ends may be nearer to one another than to its neighbours'.
    for _, one, two in sorted(pair for pair in pairs if pair[1] // 2 != pair[2] // 2):
        if one not in partner and two not in partner:
            partner[one], partner[two] = two, one
    return partner


def _end_of(loose: list[Curve], end: int) -> Point:
    curve = loose[end // 2]
    return curve.end if end % 2 else curve.start


def _apart(a: Point, b: Point) -> float:
    return math.hypot(b[0] - a[0], b[1] - a[1])


def _middle(curve: Curve) -> Point:
    if isinstance(curve, Line):
        return (0.5 * (curve.start[0] + curve.end[0]), 0.5 * (curve.start[1] + curve.end[1]))
    points = curve.points(1.0)
    return points[len(points) // 2]


def _is_round(curve: Curve, gap_m: float) -> bool:
    """Whether a curve whose ends meet goes somewhere in between, and is not just short."""
    return not isinstance(curve, Line) and _apart(curve.start, _middle(curve)) > gap_m


def _refuse_doubled(loose: list[Curve], gap_m: float) -> None:
    near = max(gap_m, 1e-12)
    seen: dict[tuple[int, int], list[Curve]] = {}
    for curve in loose:
        middle = _middle(curve)
        at = (math.floor(middle[0] / near), math.floor(middle[1] / near))
        around = [c for i in (-1, 0, 1) for j in (-1, 0, 1) for c in seen.get((at[0] + i, at[1] + j), [])]
        for other in around:
            same = _apart(curve.start, other.start) <= near and _apart(curve.end, other.end) <= near
            turned = _apart(curve.start, other.end) <= near and _apart(curve.end, other.start) <= near
            if (same or turned) and _apart(middle, _middle(other)) <= near:
                raise OutlineRefused(
                    "outline-doubled",
                    f"a curve is drawn twice from {named_place(curve.start)} to {named_place(curve.end)}",
                    "remove the copy",
                )
        seen.setdefault(at, []).append(curve)


def _bridged(run: list[Curve]) -> tuple[Curve, ...]:
    """The curves with the gaps between them closed.

    A line is drawn on to its neighbour, or back where it runs past it; only between two curves that
    cannot move is a short line laid.
    """
    whole = list(run)
    bridges: dict[int, Line] = {}
    for at in range(len(whole)):
        following = (at + 1) % len(whole)
        end, start = whole[at].end, whole[following].start
        if end == start:
            continue
        if isinstance(whole[at], Line):
            whole[at] = Line(start=whole[at].start, end=start)
        elif isinstance(whole[following], Line):
            whole[following] = Line(start=end, end=whole[following].end)
        else:
            bridges[at] = Line(start=end, end=start)
    return tuple(piece for at, curve in enumerate(whole) for piece in (curve, bridges.get(at)) if piece)
