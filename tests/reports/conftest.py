"""Reports made by hand, small enough to check by eye."""

from __future__ import annotations

import pytest

from ledger.fuel.report import (
    AttitudeFuel,
    DrainedCell,
    DrainedRow,
    FeedFuel,
    FilledCell,
    FuelReport,
    TableRow,
    TankFuel,
)
from ledger.mass.report import CauseMass, PartMass, PieceMass, TotalMass, WeightReport
from ledger.mass.trace import Trace, TraceLink
from ledger.model.plan import PartClass, Side

RIB_MADE = PieceMass(
    piece="RIB.03-L/1",
    number="P0015",
    state="finished",
    known_by="A",
    estimated_kg=0.4,
    calculated_kg=0.405,
    actual_kg=0.413,
    built_kg=0.413,
    best_kg=0.413,
    best_u_kg=0.001,
    expected_kg=0.405,
    expected_u_kg=0.004,
    off_plan=(),
)
RIB = PartMass(
    part="RIB.03-L",
    title="third rib",
    part_class=PartClass.RIB,
    side=Side.LEFT,
    assembly="WING/LEFT/ribs",
    quantity=1,
    estimated_kg=0.4,
    calculated_kg=0.405,
    actual_kg=0.413,
    built_kg=0.413,
    best_kg=0.413,
    best_u_kg=0.001,
    state="finished",
    cg_m=(1.2, -0.65, 0.02),
    area_m2=0.15,
    pieces=(RIB_MADE,),
    off_plan=(CauseMass(cause="stock", mass_kg=0.005), CauseMass(cause="unexplained", mass_kg=0.008)),
)
SKIN = PartMass(
    part="SKIN.UPR-L",
    title="upper skin",
    part_class=PartClass.SKIN,
    side=Side.LEFT,
    assembly="WING/LEFT/skins",
    quantity=1,
    estimated_kg=None,
    calculated_kg=None,
    actual_kg=None,
    built_kg=0.0,
    best_kg=None,
    best_u_kg=None,
    state="planned",
    cg_m=None,
    area_m2=None,
    pieces=(),
    off_plan=(),
)
TOTAL = TotalMass(
    estimated_kg=0.4,
    calculated_kg=0.405,
    actual_kg=0.413,
    best_kg=0.413,
    best_u_kg=0.001,
    built_kg=0.413,
    share_actual=1.0,
    share_calculated=0.0,
    share_estimated=0.0,
    cg_m=(1.2, -0.65, 0.02),
    inertia_kg_m2=((1.0, 0.0, 0.0), (0.0, 2.0, 0.0), (0.0, 0.0, 3.0)),
)
CLIMB = AttitudeFuel(
    attitude="best climb",
    pitch_deg=12.0,
    roll_deg=0.0,
    up=(-0.2079, 0.0, 0.9781),
    flight=True,
    trapped_m3=0.00101,
    lost_m3=0.0,
    cells=(
        DrainedCell(
            cell="L6",
            trapped_m3=0.00073,
            level_m=0.041,
            trapped_by="drain L4-L6",
            frees_lower_1mm_m3=0.000038,
            frees_wider_10pc_m3=0.0001,
            pockets=0,
        ),
        DrainedCell(
            cell="L8",
            trapped_m3=0.00028,
            level_m=None,
            trapped_by="no way out",
            frees_lower_1mm_m3=None,
            frees_wider_10pc_m3=None,
            pockets=0,
        ),
    ),
    table=(
        TableRow(level_m=-0.01, volume_m3=0.0, surface_m2=0.0, cg_m=None),
        TableRow(level_m=0.2, volume_m3=0.06027, surface_m2=0.3, cg_m=(2.9, -0.8, 0.1)),
    ),
    drained=(DrainedRow(quantity_m3=0.06, usable_m3=0.05899, mass_kg=None, cg_m=(2.9, -0.8, 0.1)),),
)
LEFT = TankFuel(
    tank="left",
    gross_m3=0.0615,
    capacity_m3=0.06027,
    capacity_limit="expansion",
    caught_air_m3=0.00021,
    usable_m3=0.0592599,
    usable_u_m3=None,
    governing_attitude="best climb",
    cells=(
        FilledCell(
            cell="L6", gross_m3=0.06, filled_m3=0.059, caught_air_m3=0.00021, air_caught_by="vent L6-L8"
        ),
    ),
    attitudes=(CLIMB,),
)
ENGINE = FeedFuel(feed="engine", join="select", usable_m3=0.0592599, governing_attitude="best climb")


@pytest.fixture
def weights() -> WeightReport:
    """One rib weighed 13 g heavy, and one skin nobody has begun."""
    return WeightReport(
        iteration="r2",
        total=TOTAL,
        parts=(RIB, SKIN),
        assemblies=(),
        off_plan=RIB.off_plan,
        batches=(),
    )


@pytest.fixture
def fuel() -> FuelReport:
    """One tank of 60.27 L that traps 1.01 L nose up, so 59.26 L less a hair are usable."""
    return FuelReport(tanks=(LEFT,), feeds=(ENGINE,))


@pytest.fixture
def trace_of_a_cup() -> Trace:
    """A cup of 269 g: 258 g in one skin, 11 g nobody can account for."""
    return Trace(
        what="B0279",
        kind="batch",
        state="on hold",
        made_from=(
            TraceLink(
                what="L0096",
                kind="lot",
                mass_kg=0.205,
                how="resin",
                state="in stock",
                made_from=(
                    TraceLink(what="EPX", kind="material", mass_kg=5.0, how="received", state="in the plan"),
                ),
            ),
        ),
        went_into=(
            TraceLink(
                what="SKIN.LWR-L/1",
                kind="piece",
                mass_kg=0.258,
                how="ply 5",
                state="fitted",
                went_into=(
                    TraceLink(
                        what="WING/LEFT", kind="assembly", mass_kg=None, how="fitted", state="in the plan"
                    ),
                ),
            ),
            TraceLink(
                what="not accounted for", kind="unaccounted", mass_kg=0.011, how="by the record", state=""
            ),
        ),
        entries=(12, 14),
    )
