"""Layouts at their limits: whatever the reader lets through is lofted or told of, never an exception."""

from __future__ import annotations

import random
from collections.abc import Callable
from dataclasses import replace
from typing import Any

import numpy as np
import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from ledger.errors import Severity
from ledger.loft.layout import Along, Axis, Height, Layout
from ledger.loft.loft import loft
from ledger.model.progress import Progress

LENGTHS = st.sampled_from([1e-6, 1e-4, 0.001, 0.01, 0.05, 0.2, 1.0, 10.0])
SHARES = st.sampled_from([0.0, 0.001, 0.3, 0.5, 0.999, 1.0])
ALONG = st.one_of(
    SHARES.map(lambda share: Along(share=share)),
    LENGTHS.map(lambda length: Along(from_start_m=length)),
    LENGTHS.map(lambda length: Along(from_end_m=length)),
)
HEIGHTS = st.one_of(
    SHARES.map(lambda share: Height(share=share)),
    LENGTHS.map(lambda length: Height(above_lower_m=length)),
    LENGTHS.map(lambda length: Height(below_upper_m=length)),
)
STATIONS = st.floats(-1.0, 4.0)
POINTS = st.tuples(st.tuples(STATIONS, STATIONS), st.tuples(STATIONS, STATIONS))

# A table of a layout, a field of its records, and what may stand there.
EXTREMES: list[tuple[str, dict[str, st.SearchStrategy[Any]]]] = [
    ("skins", {"thickness_m": LENGTHS}),
    ("webs", {"thickness_m": LENGTHS}),
    ("webs", {"chord_shares": st.none(), "points_m": POINTS, "splices_m": st.just(())}),
    ("webs", {"chord_shares": st.tuples(SHARES, SHARES), "points_m": st.none()}),
    ("ribs", {"thickness_m": LENGTHS}),
    ("ribs", {"lean_deg": st.sampled_from([-60.0, 60.0, 45.0, -30.0])}),
    ("ribs", {"butt_line_m": st.none(), "points_m": POINTS}),
    ("caps", {"thickness_m": LENGTHS, "width_m": LENGTHS}),
    ("sections", {"chord_m": LENGTHS}),
    ("sections", {"twist_deg": st.floats(-10.0, 10.0)}),
    ("sections", {"water_line_m": st.floats(-10.0, 10.0)}),
    ("sections", {"leading_edge_m": st.floats(-10.0, 10.0)}),
    ("holes", {"along": ALONG, "height": HEIGHTS, "diameter_m": LENGTHS}),
    ("ports", {"along_chord": ALONG, "along_span": ALONG, "height": HEIGHTS}),
    ("ports", {"axis": st.sampled_from(Axis), "diameter_m": LENGTHS}),
]


@st.composite
def extreme(draw: Any, layout: Layout) -> Layout:
    """The layout with one record of one table taken to a limit."""
    table, fields = draw(st.sampled_from([one for one in EXTREMES if getattr(layout, one[0])]))
    records = list(getattr(layout, table))
    number = draw(st.integers(0, len(records) - 1))
    records[number] = replace(records[number], **{key: draw(kind) for key, kind in fields.items()})
    changed: dict[str, Any] = {table: tuple(records)}
    return replace(layout, **changed)


@given(st.randoms(use_true_random=False), st.data())
@settings(max_examples=20, suppress_health_check=[HealthCheck.too_slow, HealthCheck.data_too_large])
def test_a_limit_is_lofted_or_told_of(any_wing: Any, chance: random.Random, data: st.DataObject) -> None:
    layout = data.draw(extreme(replace(any_wing(chance).layout(), corners=8)))
    found, findings = loft(layout)
    assert (found is None) == any(finding.severity is Severity.STOP for finding in findings)
    assert all(finding.where.thing for finding in findings)


def test_an_outline_that_crosses_itself_is_told_of(wings: Any) -> None:
    zigzag = ((1.0, 0.01), (0.6, -0.2), (0.3, 0.2), (0.0, 0.0), (0.3, -0.05), (0.6, 0.1), (1.0, -0.01))
    layout = wings.bare((wings.section(0.0, coordinates=zigzag, profile="zigzag.dat"), wings.section(2.0)))
    found, findings = loft(layout)
    assert found is None
    assert [(one.code, one.where.thing) for one in findings] == [("section-crossed", "section 0")]


class Counted:
    """A progress that notes what it is told, and ends the work at one of the calls."""

    def __init__(self, end_at: int | None = None) -> None:
        self.told: list[tuple[str, int, int]] = []
        self.end_at = end_at

    def __call__(self, what: str, done: int, of: int) -> None:
        self.told.append((what, done, of))
        if len(self.told) == self.end_at:
            raise InterruptedError


def test_progress_never_goes_back_and_ends_at_the_whole(wings: Any) -> None:
    watched = Counted()
    loft(wings.plain(), watched)
    done = [step for _, step, _ in watched.told]
    assert done == sorted(done)
    assert watched.told[-1][1:] == (6, 6)
    # At each wall three times over, so that a large wing can be stopped at any second.
    assert len(watched.told) >= 3 * 5


@pytest.mark.parametrize("at", [1, 2, 9, 15])
def test_what_progress_raises_goes_through(wings: Any, at: int) -> None:
    watcher: Progress = Counted(at)
    with pytest.raises(InterruptedError):
        loft(wings.plain(), watcher)


def test_the_same_layout_gives_the_same_wing_to_the_last_bit(wings: Any) -> None:
    def figures(make: Callable[[], Layout]) -> list[Any]:
        found, _ = loft(make())
        assert found is not None
        return [*(cell.mesh.vertices_m for cell in found.cells), *(panel.outline_m for panel in found.panels)]

    for one, other in zip(figures(wings.plain), figures(wings.plain), strict=True):
        assert np.array_equal(one, other)
