"""The sample is of the scale of a real small wing. Every bound here is common practice, no source."""

from __future__ import annotations

from datetime import UTC, datetime
from pathlib import Path

import numpy as np
import pytest

from ledger.exchange.layout_toml import read_layout
from ledger.exchange.plan_folder import read_plan
from ledger.mass.report import WeightReport
from ledger.model.plan import PartClass, Plan
from ledger.operations.lay_out_demo import lay_out_demo
from ledger.operations.loft_wing import loft_wing
from ledger.operations.weigh_up_build import weigh_up_build

SAMPLES = Path(__file__).resolve().parents[2] / "sample_builds"
LB_KG = 0.45359237
US_GAL_M3 = 3.785411784e-3


@pytest.fixture(scope="module")
def weights(tmp_path_factory: pytest.TempPathFactory) -> WeightReport:
    folder = tmp_path_factory.mktemp("demo") / "demo"
    return weigh_up_build(lay_out_demo(folder, datetime(2027, 3, 14, 9, 30, tzinfo=UTC))).report


@pytest.fixture(scope="module", params=["r0", "r1", "r2", "foam"])
def plan(request: pytest.FixtureRequest, tmp_path_factory: pytest.TempPathFactory) -> tuple[Path, Plan]:
    """The plan of each concept, with its folder."""
    folder = SAMPLES / "two_seater" / "plans" / request.param
    if request.param == "foam":
        folder = tmp_path_factory.mktemp("foam") / "plan"
        loft_wing(SAMPLES / "foam_core" / "layout.toml", folder)
    read = read_plan(folder).plan
    assert read is not None
    return folder, read


def test_the_wing_weighs_about_a_hundred_pounds_and_a_tenth_of_it_about_ten(weights: WeightReport) -> None:
    pounds = weights.total.best_kg / LB_KG
    assert pounds == pytest.approx(100.0, rel=0.35)
    assert 0.1 * pounds == pytest.approx(10.0, abs=3.5)


def test_five_us_gallons_of_its_fuel_weigh_about_thirty_pounds(plan: tuple[Path, Plan]) -> None:
    fuel = plan[1].fuel
    if fuel is None or fuel.density_15c_kg_m3 is None:
        assert plan[1].tanks.tanks == ()
        return
    assert 5.0 * US_GAL_M3 * fuel.density_15c_kg_m3 / LB_KG == pytest.approx(30.0, rel=0.02)


def test_shear_webs_carry_their_plies_at_plus_and_minus_45_degrees(plan: tuple[Path, Plan]) -> None:
    read = plan[1]
    webs = {part.made_of for part in read.parts if part.part_class is PartClass.WEB}
    assert webs
    kinds = {material.name: material.kind for material in read.materials}
    for laminate in read.laminates:
        if laminate.name in webs:
            turned = [step.orientation_deg for step in laminate.steps if kinds[step.material] == "fabric"]
            # One ply of twill at 45 has threads both ways.
            assert [abs(one) for one in turned if one is not None] == [45.0] * len(turned) != []


def test_caps_run_along_the_span(plan: tuple[Path, Plan]) -> None:
    folder, read = plan
    caps = [part.name for part in read.parts if part.part_class is PartClass.CAP and part.mirror_of is None]
    assert len(caps) == 2
    for name in caps:
        text = (folder / "geometry" / f"{name.removesuffix('-R')}.obj").read_text(encoding="utf-8")
        corners = np.array(
            [[float(one) for one in line.split()[1:]] for line in text.splitlines() if line[0] == "v"]
        )
        across, along, up = np.ptp(corners, axis=0)
        assert along > 10.0 * max(across, up)


def test_all_concepts_have_the_same_sections() -> None:
    layouts = [
        *sorted((SAMPLES / "two_seater" / "layouts").glob("*.toml")),
        SAMPLES / "foam_core" / "layout.toml",
    ]
    shapes = []
    for path in layouts:
        layout = read_layout(path).layout
        assert layout is not None
        shapes.append(
            [
                (one.butt_line_m, one.leading_edge_m, one.water_line_m, one.chord_m, one.profile)
                for one in layout.sections
            ]
        )
    assert len(shapes) == 4
    assert all(shape == shapes[0] for shape in shapes)
