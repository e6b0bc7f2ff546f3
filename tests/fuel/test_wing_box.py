"""A real open wing box of 22 bays as one tank, against a mesh library that cuts and caps."""

from __future__ import annotations

import time
from itertools import pairwise
from pathlib import Path
from typing import Any

import numpy as np
import pytest
import trimesh
from scipy.optimize import brentq

from ledger.fuel.reckon import reckon
from ledger.fuel.report import FuelReport
from ledger.geometry.closed_cell import ClosedCell
from ledger.model.attitude import Attitude
from ledger.model.plan import FuelGrade
from ledger.model.tanks import Cell, Circle, Opening, Outside, Tank, Tanks

ATTITUDES = (
    Attitude(name="ground", fill=True, flight=False),
    Attitude(name="climb", pitch_deg=8.0),
    Attitude(name="slip", pitch_deg=1.0, roll_deg=-5.0),
    Attitude(name="descent", pitch_deg=-4.0, roll_deg=2.0),
)


@pytest.fixture(scope="module")
def bays(wing_box: Path) -> dict[str, ClosedCell]:
    cells = {}
    for path in sorted((wing_box / "cells").glob("bay_*.obj")):
        mesh = trimesh.load(path, process=False)
        cells[path.stem] = ClosedCell.from_mesh(mesh.vertices, mesh.faces)
    return cells


@pytest.fixture(scope="module")
def tanks(bays: dict[str, ClosedCell]) -> Tanks:
    """All bays as one tank: a low and a high hole in each rib, the outlet inboard, the rest at the tip."""
    names = tuple(bays)
    openings = []
    for inner, outer in pairwise(names):
        wall = bays[outer].vertices_m
        y = wall[:, 1].min()
        rib = wall[np.abs(wall[:, 1] - y) < 0.02]
        lowest, highest = rib[np.argmin(rib[:, 2])], rib[np.argmax(rib[:, 2])]
        for word, corner, shift in (("drain", lowest, 0.03), ("vent", highest, -0.03)):
            centre = (float(corner[0]), float(corner[1]), float(corner[2]) + shift)
            openings.append(
                Opening(
                    name=f"{word} {inner}-{outer}",
                    cells=(inner, outer),
                    outside=None,
                    rim=Circle(centre_m=centre, diameter_m=0.05, normal=(0.0, 1.0, 0.0)),
                )
            )
    for outside, cell, pick in (
        (Outside.OUTLET, names[0], np.argmin),
        (Outside.FILLER, names[-1], np.argmax),
        (Outside.VENT, names[-1], np.argmax),
    ):
        corners = bays[cell].vertices_m
        x, y, z = corners[pick(corners[:, 2])].tolist()
        openings.append(
            Opening(
                name=outside.value,
                cells=(cell,),
                outside=outside,
                rim=Circle(centre_m=(x, y, z), diameter_m=0.02, normal=(0.0, 0.0, 1.0)),
            )
        )
    return Tanks(
        tanks=(Tank(name="left", cells=names, expansion=0.02),),
        cells=tuple(Cell(name=name, mesh=name) for name in names),
        openings=tuple(openings),
    )


@pytest.fixture(scope="module")
def report(bays: dict[str, ClosedCell], tanks: Tanks) -> FuelReport:
    fuel = FuelGrade(grade="jet", density_15c_kg_m3=800.0)
    return reckon(tanks, bays, {}, ATTITUDES, fuel, levels=20)


def capped(cell: ClosedCell, up: Any, level: float) -> Any:
    mesh = trimesh.Trimesh(cell.vertices_m, cell.faces, process=False)
    heights = cell.vertices_m @ np.array(up)
    if level <= heights.min():
        return None
    if level >= heights.max():
        return mesh
    return mesh.slice_plane(np.array(up) * level, -np.array(up), cap=True)


def test_the_22_bays_hold_what_the_authors_of_the_data_computed(report: FuelReport) -> None:
    # the data's own reference.csv: closed bays, sum of 22, from general mesh libraries
    assert report.tanks[0].gross_m3 == pytest.approx(8.726432, abs=5e-7)
    assert report.overlaps == ()


@pytest.mark.parametrize("attitude", [one.name for one in ATTITUDES])
def test_tables_agree_with_capped_cuts_of_every_bay(
    report: FuelReport, bays: dict[str, ClosedCell], attitude: str
) -> None:
    shown = next(one for one in report.tanks[0].attitudes if one.attitude == attitude)
    for row in (shown.table[3], shown.table[10], shown.table[17]):
        cut = [capped(cell, shown.up, row.level_m) for cell in bays.values()]
        cut = [mesh for mesh in cut if mesh is not None and len(mesh.faces)]
        volume = sum(mesh.volume for mesh in cut)
        centre = sum(mesh.volume * mesh.center_mass for mesh in cut) / volume
        assert row.volume_m3 == pytest.approx(volume, rel=1e-9)
        assert row.cg_m == pytest.approx(centre, abs=1e-8)


@pytest.mark.parametrize(("attitude", "rows"), [("slip", (0, 12)), ("descent", (0, 9))])
def test_a_drained_row_agrees_with_capped_cuts_at_the_levels_of_its_cells(
    report: FuelReport, bays: dict[str, ClosedCell], attitude: str, rows: tuple[int, ...]
) -> None:
    shown = next(one for one in report.tanks[0].attitudes if one.attitude == attitude)
    kept = {cell.cell: cell for cell in shown.cells}

    def lying(level: float) -> tuple[float, Any]:
        held, moment = 0.0, np.zeros(3)
        for name, cell in bays.items():
            own = kept[name]
            full = own.level_m is None and own.trapped_m3
            mesh = capped(cell, shown.up, 99.0 if full else max(level, own.level_m or -99.0))
            if mesh is not None and len(mesh.faces):
                held += mesh.volume
                moment += mesh.volume * mesh.center_mass
        return held, moment

    for index in rows:
        row = shown.drained[index]
        wanted = row.quantity_m3
        level = brentq(lambda at: lying(at)[0] - wanted, -9.0, 9.0, xtol=1e-11) if index else -9.0  # noqa: B023
        held, moment = lying(level)
        assert held == pytest.approx(wanted, abs=1e-8)
        assert row.cg_m == pytest.approx(moment / held, abs=1e-8)
        assert row.mass_kg == pytest.approx(800.0 * wanted)


def test_what_each_bay_keeps_is_a_capped_cut_at_its_level(
    report: FuelReport, bays: dict[str, ClosedCell]
) -> None:
    partly = 0
    for shown in report.tanks[0].attitudes:
        for cell in shown.cells:
            if cell.level_m is not None:
                mesh = capped(bays[cell.cell], shown.up, cell.level_m)
                assert cell.trapped_m3 == pytest.approx(mesh.volume, rel=1e-8)
                partly += 1
    assert partly > 10


def test_the_whole_report_costs_less_than_three_capped_cuts_per_bay_and_attitude(
    bays: dict[str, ClosedCell], tanks: Tanks
) -> None:
    attitudes = (
        ATTITUDES[0],
        *(
            Attitude(name=f"{pitch} {roll}", pitch_deg=pitch, roll_deg=roll)
            for pitch in (-3.0, 4.0, 7.0)
            for roll in (-4.0, 3.0)
        ),
        Attitude(name="run", ax_g=0.2),
    )
    began = time.perf_counter()
    whole = reckon(tanks, bays, {}, attitudes, None, levels=100)
    reckoned = time.perf_counter() - began
    began = time.perf_counter()
    for one in whole.tanks[0].attitudes:
        for cell in bays.values():
            heights = cell.vertices_m @ np.array(one.up)
            capped(cell, one.up, float(0.5 * (heights.min() + heights.max())))
    cut = time.perf_counter() - began
    assert len(whole.tanks[0].attitudes[3].table) == 101
    assert reckoned < 3.0 * cut
