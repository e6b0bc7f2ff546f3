"""How long the commands take on the sample, in starts of the bare interpreter and in seconds."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import pytest

from ledger.operations.lay_out_demo import lay_out_demo
from ledger.operations.open_build import open_build
from ledger.operations.reckon_fuel import reckon_build


@pytest.fixture(scope="module")
def sample(tmp_path_factory: pytest.TempPathFactory) -> Path:
    return lay_out_demo(tmp_path_factory.mktemp("demo") / "demo")


def test_the_version_costs_less_than_five_bare_interpreters(race: Any, say: Any) -> None:
    bare, version = race.bests(race.child("-c", "pass"), race.child("-m", "ledger", "--version"), times=9)
    say(
        [
            ("bare Python: ms", 1e3 * bare, None),
            ("wingledger --version, in bare Pythons", version / bare, 5.0),
        ]
    )
    assert version < 5.0 * bare


def test_weights_of_the_sample_come_within_a_second(race: Any, say: Any, sample: Path) -> None:
    weights = race.child("-m", "ledger", "weights", sample)
    bare, whole = race.bests(race.child("-c", "pass"), weights)
    seconds = race.processor_seconds(weights)
    say([("weights of the sample: s", seconds, 1.0), ("  in bare Pythons", whole / bare, None)])
    assert seconds < 1.0


def test_the_complete_fuel_report_of_the_sample_comes_within_a_second(
    race: Any, say: Any, sample: Path
) -> None:
    import trimesh

    build = open_build(sample)
    (first,) = race.bests(lambda: reckon_build(build), times=1)
    report = reckon_build(build)
    plan = build.snapshot.plan
    meshes = [trimesh.Trimesh(cell.vertices_m, cell.faces, process=False) for cell in build.cells().values()]

    def cut_each_cell_once_an_attitude() -> None:
        for mesh in meshes * len(plan.attitudes):
            mesh.slice_plane(mesh.bounds.mean(axis=0), [0.02, 0.01, -1.0], cap=True)

    again, cuts = race.processor_bests(lambda: reckon_build(build), cut_each_cell_once_an_attitude)
    seconds = race.processor_seconds(lambda: reckon_build(build))
    shown = len(plan.attitudes)
    in_cuts = again / cuts
    assert all(len(tank.attitudes) == shown for tank in report.tanks)
    assert all(len(one.table) == 101 for tank in report.tanks for one in tank.attitudes)
    say(
        [
            (f"fuel of the sample, {len(meshes)} cells at {shown} attitudes, first: s", first, None),
            ("  again: s", seconds, 1.0),
            ("  in capped cuts, one a cell and attitude", in_cuts, 3.0),
        ]
    )
    # A second core at work makes every second of this one longer, and the cuts taken in turn with it too.
    assert seconds < 1.0 or in_cuts < 3.0
