"""Lofted bays against closed forms, from the areas of their own inner rings."""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest
from numpy.typing import NDArray

from ledger.loft.layout import TAIL, Surface
from ledger.loft.loft import loft
from ledger.loft.lofted import Lofted
from ledger.loft.shell import build_shell

Floats = NDArray[np.float64]

FIRST, LAST, RIB = 0.1, 1.9, 0.006


def lofted(layout: Any) -> Lofted:
    found, findings = loft(layout)
    assert found is not None, findings
    return found


def prismatoid(length: float, near: float, far: float) -> tuple[float, float]:
    """Volume between similar sections, and how far along it lies: sides run straight, areas as squares."""
    a, b = np.sqrt(near), np.sqrt(far)
    volume = length * (near + a * b + far) / 3.0
    return volume, length**2 * (a * a + 2.0 * a * b + 3.0 * b * b) / 12.0 / volume


def test_the_closed_form_itself() -> None:
    # checks: taper bay, areas 1 and 0.25 over 1: 0.583333 at 0.392857 (computed)
    assert prismatoid(1.0, 1.0, 0.25) == pytest.approx((0.583333, 0.392857), abs=1e-6)


def one_bay(wings: Any, tip_chord: float, tip_nose: float = 1.0) -> Any:
    # Skin as thin as paper, so that the sections inside stay similar to those outside.
    sections = (wings.section(0.0), wings.section(2.0, chord_m=tip_chord, leading_edge_m=tip_nose))
    ribs = (wings.rib("1", FIRST), wings.rib("3", LAST))
    return wings.plain(
        sections=sections,
        skins=(wings.skin("SKIN", Surface.BOTH, (0.0, 1.0), 1e-6),),
        ribs=ribs,
        webs=(wings.web("A", 0.25, thickness_m=1e-6), wings.web("B", 0.65, thickness_m=1e-6)),
    )


@pytest.mark.parametrize(("tip_chord", "tip_nose"), [(1.0, 1.0), (0.5, 1.0), (0.7, 1.4)])
def test_a_tapered_bay_between_webs_of_next_to_no_thickness(
    wings: Any, measured: Any, polygon_moments: Any, tip_chord: float, tip_nose: float
) -> None:
    layout = one_bay(wings, tip_chord, tip_nose)
    cell = lofted(layout).cells[0]
    volume, middle = measured(cell.mesh.vertices_m, cell.mesh.faces)
    shell, _ = build_shell(layout)
    assert shell is not None
    root, _ = polygon_moments(between(shell.outer_m[0][:, [0, 2]], 1.25, 1.65))
    low, high = FIRST + 0.5 * RIB, LAST - 0.5 * RIB
    scale = [1.0 + (tip_chord - 1.0) * line / 2.0 for line in (low, high)]
    expected, along = prismatoid(high - low, root * scale[0] ** 2, root * scale[1] ** 2)
    # Both webs take half a micrometre each of 0.4 m, a little more at the tip.
    assert volume == pytest.approx(expected, rel=6e-6)
    assert middle[1] - low == pytest.approx(along, abs=1e-6)


def between(ring: Floats, low: float, high: float) -> Floats:
    """A section's polygon cut at two stations, which lie on no corner of it by more than a hair."""
    half = len(ring) // 2
    rows = []
    for side, order in ((ring[: half + 1], -1), (ring[half:], 1)):
        x, z = side[::order].T
        inner = np.column_stack((x, z))[(x > low) & (x < high)]
        ends = [(at, float(np.interp(at, x, z))) for at in (low, high)]
        rows.append(np.array([ends[0], *inner, ends[1]]))
    upper, lower = rows
    return np.concatenate((upper[::-1], lower))


@pytest.mark.parametrize("tip_chord", [1.0, 0.6])
@pytest.mark.parametrize("profile", ["2412", "23018"])
def test_a_straight_or_tapered_bay_is_the_prismatoid_of_its_own_end_faces(
    wings: Any, measured: Any, polygon_moments: Any, profile: str, tip_chord: float
) -> None:
    # The whole row from web to web with skins and webs of true thickness: no similar sections now, but
    # the sides still run straight, so three sections give the volume exactly.
    layout = wings.plain(
        sections=(
            wings.section(0.0, profile=profile),
            wings.section(2.0, chord_m=tip_chord, leading_edge_m=1.2, water_line_m=0.1, profile=profile),
        ),
        ribs=(wings.rib("1", FIRST), wings.rib("3", LAST)),
    )
    cell = lofted(layout).cells[0]
    volume, middle = measured(cell.mesh.vertices_m, cell.mesh.faces)
    low, high = FIRST + 0.5 * RIB, LAST - 0.5 * RIB
    shell, _ = build_shell(layout)
    assert shell is not None
    (inner, _) = shell.inner_rings((0, 1))
    webs = [faces(layout, line) for line in (low, 0.5 * (low + high), high)]
    areas = []
    for line, (front, rear) in zip((low, 0.5 * (low + high), high), webs, strict=True):
        ring = inner[0] * (1.0 - line / 2.0) + inner[1] * line / 2.0
        areas.append(polygon_moments(between(ring[:, [0, 2]], front, rear))[0])
    length = high - low
    assert volume == pytest.approx(length * (areas[0] + 4.0 * areas[1] + areas[2]) / 6.0, rel=1e-6)
    moment = length**2 * (2.0 * areas[1] + areas[2]) / 6.0
    assert middle[1] - low == pytest.approx(moment / volume, abs=1e-6)


def faces(layout: Any, line: float) -> tuple[float, float]:
    """Stations of the rear face of web A and of the front face of web B at a butt line."""
    share = line / 2.0
    nose = 1.0 + (layout.sections[1].leading_edge_m - 1.0) * share
    chord = 1.0 + (layout.sections[1].chord_m - 1.0) * share
    found = []
    for web, side in zip(layout.webs, (0.5, -0.5), strict=True):
        at = web.chord_shares[0]
        sweep = (layout.sections[1].leading_edge_m - 1.0 + at * (layout.sections[1].chord_m - 1.0)) / 2.0
        found.append(nose + at * chord + side * web.thickness_m * np.hypot(1.0, sweep))
    return found[0], found[1]


def test_a_straight_cell_has_its_middle_half_way(wings: Any, measured: Any) -> None:
    cell = lofted(wings.plain()).cells[0]
    _, middle = measured(cell.mesh.vertices_m, cell.mesh.faces)
    assert middle[1] == pytest.approx(0.5 * (0.1 + 1.0), abs=1e-12)


def test_cells_are_numbered_from_the_root_and_named_by_row_and_rib(wings: Any) -> None:
    layout = wings.plain(
        rows=(wings.row("R", "A", "B"), wings.row("S", "B", TAIL)),
        ribs=tuple(
            wings.rib(name, line, rows=("R", "S")) for name, line in (("1", 0.1), ("2", 1.0), ("3", 1.9))
        ),
        tanks=(wings.tank(("R", "S")),),
    )
    assert [(cell.number, cell.bay) for cell in lofted(layout).cells] == [
        (1, "R1"),
        (2, "S1"),
        (3, "R2"),
        (4, "S2"),
    ]
