"""The sample with a core of foam: what is not skin, web, paste or cap of its box is foam, and weighs that."""

from __future__ import annotations

from pathlib import Path

import pytest

from ledger.exchange.plan_folder import read_plan
from ledger.loft.lofted_plan import LoftedPlan
from ledger.model.plan import Part, PartClass, Plan, Side
from ledger.operations.loft_wing import loft_wing

LAYOUT = Path(__file__).resolve().parents[2] / "sample_builds" / "foam_core" / "layout.toml"
FOAM_KG_M3 = 30.0
STRIP_KG_M3 = 1600.0


@pytest.fixture(scope="module")
def folder(tmp_path_factory: pytest.TempPathFactory) -> Path:
    return tmp_path_factory.mktemp("foam") / "plan"


@pytest.fixture(scope="module")
def lofted(folder: Path) -> LoftedPlan:
    return loft_wing(LAYOUT, folder)


@pytest.fixture(scope="module")
def plan(lofted: LoftedPlan) -> Plan:
    read = read_plan(lofted.folder).plan
    assert read is not None
    return read


def volume_m3(plan: Plan, *names: str) -> float:
    """The volume of some solids of the plan."""
    measures = {part.name: shape.measure for part, shape in zip(plan.parts, plan.shapes, strict=True)}
    return sum(measures[name] for name in names)


def test_it_lofts_with_nothing_to_tell(lofted: LoftedPlan) -> None:
    assert lofted.findings == ()
    assert lofted.cells == lofted.openings == 0


def test_foam_and_caps_are_all_of_the_box_that_is_no_skin_no_panel_and_no_paste(
    lofted: LoftedPlan, plan: Plan
) -> None:
    account = lofted.account
    rest = account.box_m3 - account.skins_m3 - account.panels_m3 - account.paste_m3
    solids = volume_m3(plan, "COR.N-R", "COR.T-R", "CAP.UPR-R", "CAP.LWR-R")
    assert solids == pytest.approx(rest, rel=1e-9)
    assert account.cells_m3 == 0.0
    assert account.dry_m3 == pytest.approx(0.0, abs=1e-12)
    # A strip of 60 x 3 mm along a web of which the ends are cut square: some 3.83 m of it.
    strip = volume_m3(plan, "CAP.UPR-R") / (0.060 * 0.003)
    assert strip == pytest.approx(3.83, rel=5e-3)


def test_the_foam_weighs_its_volume_times_its_density(lofted: LoftedPlan, plan: Plan) -> None:
    account = lofted.account
    caps = volume_m3(plan, "CAP.UPR-R", "CAP.LWR-R")
    core = account.box_m3 - account.skins_m3 - account.panels_m3 - account.paste_m3 - caps
    closeouts = next(one for one in lofted.classes if one.part_class is PartClass.CLOSEOUT)
    tip = volume_m3(plan, "CLO.TIP-R")
    assert closeouts.estimated_kg == pytest.approx(2 * FOAM_KG_M3 * (core + tip), rel=1e-9)
    strips = next(one for one in lofted.classes if one.part_class is PartClass.CAP)
    assert strips.estimated_kg == pytest.approx(2 * STRIP_KG_M3 * caps, rel=1e-9)


def test_the_left_wing_has_every_part_of_the_right(plan: Plan) -> None:
    def on(side: Side) -> set[str]:
        parts: tuple[Part, ...] = plan.parts
        return {part.name.removesuffix(f"-{side.value}") for part in parts if part.side is side}

    assert on(Side.LEFT) == on(Side.RIGHT) != set()
