"""Everything inside the lofted box is one thing, once: by the account, and by random points."""

from __future__ import annotations

import random
from dataclasses import replace
from typing import Any

import numpy as np
import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st
from numpy.typing import NDArray

from ledger.loft.accounting import account, is_proved
from ledger.loft.bays import filled_space, tank_bays
from ledger.loft.bodies import mesh_of
from ledger.loft.division import Division, divide
from ledger.loft.layout import NOSE, TAIL, Layout, Surface
from ledger.loft.loft import loft
from ledger.loft.lofted import Lofted, Mesh
from ledger.loft.panels import FlatPanel, flat_panels
from ledger.loft.ribs import rib_planes
from ledger.loft.shell import Shell, build_shell, skin_solids, tail_solids
from ledger.loft.webs import web_lines

Floats = NDArray[np.float64]

# What somebody may write, and is told of. The account that does not come out even is not among them.
TOLD = {
    "cap-too-thick",
    "caps-overlap",
    "gap-too-wide",
    "hole-larger-than-wall",
    "rib-meets-no-web",
    "rib-outside-wing",
    "skin-too-thick",
    "wall-in-pieces",
    "walls-cross",
    "web-outside-section",
    "port-outside-bay",
}


def idle() -> None:
    """Nobody waits."""


def check(layout: Layout) -> bool:
    """Whether it was lofted; proved then, or told of."""
    found, findings = loft(layout)
    if found is None:
        assert {finding.code for finding in findings} <= TOLD, findings
        assert findings
        return False
    least = 1e-6 * found.account.box_m3
    assert abs(found.account.apart_m3) <= least
    assert abs(found.account.shared_m3) <= least
    return True


@given(st.randoms(use_true_random=False))
@settings(max_examples=25, suppress_health_check=[HealthCheck.too_slow, HealthCheck.data_too_large])
def test_any_wing_is_lofted_and_proved_or_told_of(any_wing: Any, chance: random.Random) -> None:
    check(any_wing(chance).layout())


def test_most_wings_at_random_can_be_lofted(any_wing: Any) -> None:
    built = [check(any_wing(random.Random(seed)).layout()) for seed in range(16)]
    assert sum(built) >= 8


def full(wings: Any, **changed: Any) -> Layout:
    """A swept, kinked, twisted wing with two rows and a nose, canted and leaning ribs, one run through."""
    ribs = (
        wings.rib("1", 0.1, rows=("N", "R", "S")),
        wings.rib("2", points_m=((1.2, 0.7), (1.9, 0.8)), rows=("R", "S"), through=("B",)),
        wings.rib("3", 1.5, rows=("R", "S"), lean_deg=8.0),
        wings.rib("4", 1.9, rows=("R",)),
    )
    said: dict[str, Any] = {
        "sections": (
            wings.section(0.0, profile="2415"),
            wings.section(1.0, leading_edge_m=1.1, chord_m=0.9, water_line_m=0.05, profile="2415"),
            wings.section(
                2.0, leading_edge_m=1.4, chord_m=0.6, water_line_m=0.2, twist_deg=-3.0, profile="0012"
            ),
        ),
        "skins": (
            wings.skin("NOSE", Surface.BOTH, (0.0, 0.08), 1.2),
            wings.skin("UPR.IN", Surface.UPPER, (0.08, 0.6), 3.0, between_m=(0.0, 1.2)),
            wings.skin("UPR.OUT", Surface.UPPER, (0.08, 0.6), 2.0, between_m=(1.2, 2.0)),
            wings.skin("UPR.AFT", Surface.UPPER, (0.6, 1.0), 1.0),
            wings.skin("LWR", Surface.LOWER, (0.08, 1.0), 2.0),
        ),
        "webs": (
            wings.web("A", 0.2, splices_m=(1.0,)),
            wings.web("B", 0.5, splices_m=(1.0,), thickness_m=0.006),
            wings.web("C", 0.7, splices_m=(1.0,)),
        ),
        "rows": (wings.row("N", NOSE, "A"), wings.row("R", "A", "B"), wings.row("S", "B", "C")),
        "ribs": ribs,
        "caps": (wings.cap("B", Surface.UPPER), wings.cap("B", Surface.LOWER, between_m=(0.0, 1.4))),
        "tanks": (wings.tank(("R", "S")),),
        "fills": (wings.fill("FOAM", ("N",)),),
        "gap_m": 0.0005,
        **changed,
    }
    layout = wings.plain(**said)
    assert isinstance(layout, Layout)
    return layout


def parts_of(layout: Layout) -> dict[str, list[Mesh]]:
    """Every part as closed meshes, by kind."""
    found, findings = loft(layout)
    assert found is not None, findings
    shell, division, panels = built(layout)
    cells, _ = tank_bays(layout, division)
    fills, _ = filled_space(layout, division, cells)
    walls = (*division.ribs, *division.webs)
    spaces = [cell.space for cell in cells]
    dry = division.free
    for body in (*spaces, *(body for _, body in fills)):
        dry -= body
    return {
        "skins": list(skin_solids(shell)),
        "tail": list(tail_solids(shell)),
        "caps": [mesh_of(cap.solid) for cap in division.caps],
        "walls": [mesh_of(wall.solid) for wall in walls],
        "cells": [cell.mesh for cell in found.cells],
        "fills": [mesh_of(body) for _, body in fills],
        "dry": [mesh_of(dry)],
        "panels": [mesh_of(panel.solid) for panel in panels],
    }


def built(layout: Layout) -> tuple[Shell, Division, tuple[FlatPanel, ...]]:
    shell, _ = build_shell(layout)
    assert shell is not None
    lines, _ = web_lines(layout, shell)
    by_name = {line.web.name: line for line in lines}
    planes, _ = rib_planes(layout, shell, by_name)
    division, _ = divide(layout, shell, lines, planes, idle)
    assert division is not None
    panels, _ = flat_panels(layout, (*division.ribs, *division.webs), by_name, idle)
    return shell, division, panels


def how_often_inside(mesh: Mesh, points: Floats) -> NDArray[np.intp]:
    """How often a closed mesh encloses points, (n,): faces above that look up, less those that look down."""
    count = np.zeros(len(points), dtype=np.intp)
    for a, b, c in mesh.vertices_m[mesh.faces]:
        ab, ac = b - a, c - a
        twice = ab[0] * ac[1] - ab[1] * ac[0]
        if twice == 0.0:
            continue
        away = points - a
        u = (away[:, 0] * ac[1] - away[:, 1] * ac[0]) / twice
        v = (ab[0] * away[:, 1] - ab[1] * away[:, 0]) / twice
        above = (u > 0.0) & (v > 0.0) & (u + v < 1.0) & (u * ab[2] + v * ac[2] > away[:, 2])
        count += np.where(above, 1 if twice > 0.0 else -1, 0)
    return count


def test_every_point_of_the_box_is_in_exactly_one_thing(wings: Any) -> None:
    layout = full(wings)
    parts = parts_of(layout)
    shell, _ = build_shell(layout)
    assert shell is not None
    box = shell.box()
    rng = np.random.default_rng(20)
    low, high = box.vertices_m.min(axis=0), box.vertices_m.max(axis=0)
    points = low + (high - low) * rng.random((12000, 3))
    within = how_often_inside(box, points)
    assert set(within) == {0, 1}
    assert within.sum() > 2500
    counts = {
        kind: np.sum(
            [how_often_inside(mesh, points) for mesh in meshes] or [np.zeros(len(points), dtype=np.intp)],
            axis=0,
        )
        for kind, meshes in parts.items()
    }
    assert sum(counts[kind] for kind in counts if kind != "panels").tolist() == within.tolist()
    # A panel lies in the room of its wall; what is left there is paste.
    assert (counts["panels"] <= counts["walls"]).all()
    assert (counts["panels"] >= 0).all()
    for kind in ("skins", "caps", "walls", "cells", "fills", "dry"):
        assert counts[kind].sum() > 0, kind


def test_the_account_agrees_with_points_thrown_at_the_box(wings: Any) -> None:
    layout = full(wings)
    found, _ = loft(layout)
    assert found is not None
    parts = parts_of(layout)
    rng = np.random.default_rng(21)
    shell, _ = build_shell(layout)
    assert shell is not None
    low, high = shell.outer_m.min(axis=(0, 1)), shell.outer_m.max(axis=(0, 1))
    points = low + (high - low) * rng.random((12000, 3))
    whole = float(np.prod(high - low))
    for kind, figure in (
        ("skins", found.account.skins_m3),
        ("panels", found.account.panels_m3),
        ("cells", found.account.cells_m3),
        ("dry", found.account.dry_m3),
    ):
        share = sum(how_often_inside(mesh, points).sum() for mesh in parts[kind]) / len(points)
        # Three and a half times the scatter of so many throws.
        scatter = np.sqrt(share * (1.0 - share) / len(points))
        assert share * whole == pytest.approx(figure, abs=3.5 * scatter * whole), kind


def test_walls_of_cells_lie_on_faces_of_panels(wings: Any) -> None:
    # Without caps and without steps of the skins, which have upright faces of their own.
    layout = full(wings, caps=(), skins=(wings.skin("SKIN", Surface.BOTH, (0.0, 1.0), 2.0),))
    found, findings = loft(layout)
    assert found is not None, findings
    _, _, panels = built(layout)
    faces = [
        (panel, np.asarray(panel.wall.slab.axes[2]), side * 0.5 * panel.wall.slab.thickness_m)
        for panel in panels
        for side in (1.0, -1.0)
    ]
    touched = set()
    for cell in found.cells:
        corners = cell.mesh.vertices_m[cell.mesh.faces]
        normals = np.cross(corners[:, 1] - corners[:, 0], corners[:, 2] - corners[:, 0])
        areas = np.linalg.norm(normals, axis=1)
        normals /= np.maximum(areas, 1e-300)[:, None]
        upright = np.zeros(len(corners), dtype=bool)
        for panel, normal, height in faces:
            local = panel.wall.slab.local(corners.reshape(-1, 3)).reshape(-1, 3, 3)
            here = (np.abs(local[:, :, 2] - height) < 1e-9).all(axis=1)
            # Seen from the cell its wall's face looks into it: outward of the cell is into the panel.
            into = -np.sign(height) * (normals @ normal)
            here &= into > 0.999
            upright |= here
            if areas[here].sum() > 1e-4:
                touched.add((panel.part, cell.bay))
        # Two lengths of a web that meet at an angle leave a step of their end faces, here at BL 1.
        ends = (np.abs(corners[:, :, 1] - 1.0) < 1e-9).all(axis=1)
        # What is left of its faces are skins, which lie nearly level.
        level = np.abs(normals[:, 2]) > 0.6
        assert (upright | ends | level | (areas < 1e-12)).all()
        assert areas[ends].sum() < 1e-3
    assert {("RIB.R1", "R1"), ("RIB.RS2", "R1"), ("RIB.RS2", "R2"), ("RIB.S3", "S2")} <= touched


def test_the_proof_speaks_when_a_cell_is_counted_twice_or_left_out(wings: Any) -> None:
    layout = wings.plain()
    shell, division, panels = built(layout)
    cells, _ = tank_bays(layout, division)
    assert is_proved(account(shell, division, panels, cells, (), tick=idle))
    twice = account(shell, division, panels, (*cells, cells[0]), (), tick=idle)
    assert not is_proved(twice)
    assert twice.shared_m3 == pytest.approx(cells[0].space.volume(), rel=1e-6)
    grown = replace(panels[0], outline=1.5 * panels[0].outline)
    beyond = account(shell, division, (grown, *panels[1:]), cells, (), tick=idle)
    assert not is_proved(beyond)
    assert beyond.shared_m3 > 1e-6


def test_half_round_figures_that_meet_at_one_place(wings: Any) -> None:
    # Section, skin step, splice, cap end and rib at one butt line; a skin's edge at a web's middle.
    layout = full(
        wings,
        sections=(
            wings.section(0.0),
            wings.section(1.0, leading_edge_m=1.2, chord_m=0.8),
            wings.section(2.0, leading_edge_m=1.5, chord_m=0.5),
        ),
        skins=(
            wings.skin("UPR.IN", Surface.UPPER, (0.0, 0.5), 3.0, between_m=(0.0, 1.0)),
            wings.skin("UPR.OUT", Surface.UPPER, (0.0, 0.5), 2.0, between_m=(1.0, 2.0)),
            wings.skin("UPR.AFT", Surface.UPPER, (0.5, 1.0), 1.0),
            wings.skin("LWR", Surface.LOWER, (0.0, 1.0), 2.0),
        ),
        ribs=(
            wings.rib("1", 0.1, rows=("N", "R", "S")),
            wings.rib("2", 1.0, rows=("R", "S"), through=("B",)),
            wings.rib("3", 1.9, rows=("R", "S")),
        ),
        caps=(wings.cap("B", Surface.UPPER, between_m=(0.0, 1.0)), wings.cap("B", Surface.LOWER)),
    )
    assert check(layout)


@pytest.mark.parametrize("front", [NOSE, "A"])
@pytest.mark.parametrize("rear", ["B", TAIL])
def test_cells_reach_from_wall_to_wall_or_to_the_ends_of_the_wing(wings: Any, front: str, rear: str) -> None:
    found, _ = loft(wings.plain(rows=(wings.row("R", front, rear),), webs=webs_for(wings, front, rear)))
    assert isinstance(found, Lofted)
    x = found.cells[0].mesh.vertices_m[:, 0]
    assert (x.min() < 1.01) == (front == NOSE)
    assert (x.max() > 1.9) == (rear == TAIL)


def webs_for(wings: Any, front: str, rear: str) -> tuple[Any, ...]:
    return tuple(wings.web(name, at) for name, at in (("A", 0.2), ("B", 0.6)) if name in (front, rear))
