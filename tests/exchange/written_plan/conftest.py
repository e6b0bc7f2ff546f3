"""A small wing as the loft leaves it, to be written as a plan folder."""

from __future__ import annotations

import math
from typing import Any

import numpy as np
import pytest

from ledger.errors import Severity, Where
from ledger.exchange.plan_folder import ReadPlan, read_plan_files
from ledger.exchange.plan_toml import PlanHead
from ledger.exchange.problems import Problems
from ledger.exchange.write_plan import plan_files
from ledger.loft.layout import Edge, Item, Joint, Layout, LayoutFeed, TankBays, Walls
from ledger.loft.lofted import (
    Account,
    BondRun,
    Lofted,
    LoftedCell,
    LoftedOpening,
    LoftedSkin,
    Mesh,
    Panel,
    RoundHole,
    Solid,
    Strip,
)
from ledger.model.attitude import Attitude
from ledger.model.plan import FuelGrade, Part, PartClass, Placement, Plan, Shape
from ledger.model.tanks import Circle, Join, Outside, Pipe
from ledger.units import Display

MATERIALS = b"""material,kind,areal_mass [g/m2],density [kg/m3],thickness [mm],linear_mass [g/m]
glass,fabric,200,,,
foam,solid,,80,,
strip,solid,,,,288
bond base,paste,,1150,,
sealant,sealant,,1550,,
"""
LAMINATES = b"""laminate,areal_mass [g/m2],step,material,orientation [deg],resin_fraction [%]
PANEL,2000,,,,
SKIN,1500,,,,
PAINT,150,,,,
"""
LEAN = math.radians(7.0)
ACROSS = (math.cos(LEAN), math.sin(LEAN), 0.0)
HOLE = RoundHole(x_m=0.2, y_m=0.03, diameter_m=0.016)
TANK = TankBays(
    place=Where(),
    name="",
    rows=("F",),
    ribs=("1", "3"),
    expansion=0.02,
    sealant_thickness_m=0.0004,
    sealant_material="sealant",
)
DRAIN = Circle(centre_m=(1.2, 1.0, 0.03), diameter_m=0.016, normal=(ACROSS[1], ACROSS[0], 0.0))
PIPE = Pipe(points_m=((1.3, 1.9, 0.15), (1.3, 1.95, 0.3)), bore_m=0.006)


def box(low: tuple[float, float, float], high: tuple[float, float, float]) -> Mesh:
    (x0, y0, z0), (x1, y1, z1) = low, high
    corners = [(x, y, z) for z in (z0, z1) for x, y in ((x0, y0), (x1, y0), (x1, y1), (x0, y1))]
    quads = ((0, 3, 2, 1), (4, 5, 6, 7), (0, 1, 5, 4), (1, 2, 6, 5), (2, 3, 7, 6), (3, 0, 4, 7))
    faces = [triangle for a, b, c, d in quads for triangle in ((a, b, c), (a, c, d))]
    return Mesh(vertices_m=np.array(corners), faces=np.array(faces))


def rib(part: str, butt_line_m: float) -> Panel:
    """A rib of 0.5 x 0.2 m turned 7 degrees in plan, with one hole."""
    return Panel(
        part=part,
        title=f'rib, "at" {butt_line_m}',
        part_class=PartClass.RIB,
        laminate="PANEL",
        thickness_m=0.0066,
        placement=Placement(origin_m=(1.0, butt_line_m, -0.01), across=ACROSS, up_axis=(0.0, 0.0, 1.0)),
        outline_m=np.array([(0.0, 0.0), (0.5, 0.0), (0.5, 0.2), (0.0, 0.2)]),
        holes=(HOLE,),
        edges=(),
    )


SKIN = LoftedSkin(
    part="SKIN.UPR",
    title="upper skin",
    laminate="SKIN",
    surface=Mesh(
        vertices_m=np.array([(1.0, 0.5, 0.2), (1.5, 0.5, 0.2), (1.5, 2.0, 0.2), (1.0, 2.0, 0.2)]),
        faces=np.array([(0, 1, 2), (0, 2, 3)]),
    ),
    finish="PAINT",
    finish_part="FIN.UPR",
)
ITEM = Item(
    place=Where(),
    part="FIT.PIN",
    title="pin",
    part_class=PartClass.FITTING,
    mass_kg=0.148,
    at_m=(1.1, 0.55, 1e-20),
    quantity=3,
)
JOINT = Joint(
    place=Where(),
    part="JNT.RIB",
    title="ribs",
    walls=Walls.RIBS,
    edges=(Edge.UPPER,),
    paste="bond base",
    fillet_m=0.004,
)
SECTION = 0.0066 * 0.0005 + 2.0 * (1.0 - math.pi / 4.0) * 0.004**2


def opening(name: str, cells: tuple[int, ...], outside: Outside | None, rim: Any) -> LoftedOpening:
    return LoftedOpening(
        name=name, cells=cells, outside=outside, rim=rim, depth_m=0.0066 if not outside else None
    )


OPENINGS = (
    opening("drain", (1, 2), None, DRAIN),
    opening(
        "outlet", (1,), Outside.OUTLET, Circle(centre_m=(1.1, 0.6, 0.008), diameter_m=0.012, normal=(1, 0, 0))
    ),
    opening(
        "filler", (2,), Outside.FILLER, Circle(centre_m=(1.3, 1.8, 0.19), diameter_m=0.04, normal=(0, 0, 1))
    ),
    opening("vent", (2,), Outside.VENT, PIPE),
)
CELLS = (
    LoftedCell(
        number=1, bay="F1", tank=TANK, mesh=box((1.01, 0.51, 0.0), (1.49, 0.99, 0.19)), displaced_m3=2.5e-5
    ),
    LoftedCell(
        number=2, bay="F2", tank=TANK, mesh=box((1.01, 1.01, 0.0), (1.49, 1.99, 0.19)), displaced_m3=0.0
    ),
)
LOFTED = Lofted(
    panels=(rib("RIB.F1", 0.5), rib("RIB.F2", 1.0)),
    skins=(SKIN,),
    solids=(
        Solid(
            part="CLO.TIP",
            title="tip block",
            part_class=PartClass.CLOSEOUT,
            material="foam",
            mesh=box((1.0, 2.0, 0.0), (1.5, 2.06, 0.2)),
        ),
    ),
    bonds=(
        BondRun(
            part="JNT.RIB",
            title="ribs",
            paste="bond base",
            section_m2=SECTION,
            lines_m=(
                np.array([(1.0, 0.5, 0.0), (1.5, 0.5, 0.0)]),
                np.array([(1.0, 1.0, 0.0), (1.5, 1.0, 0.0)]),
            ),
        ),
    ),
    strips=(
        Strip(
            part="CAP.UPR",
            title="upper cap",
            material="strip",
            line_m=np.array([(1.2, 0.5, 0.19), (1.2, 1.2, 0.19), (1.2, 2.0, 0.19)]),
        ),
    ),
    cells=CELLS,
    openings=OPENINGS,
    items=(ITEM,),
    feeds=(LayoutFeed(place=Where(), name="engine", join=Join.SELECT),),
    account=Account(
        box_m3=1.0,
        skins_m3=0.1,
        panels_m3=0.1,
        paste_m3=0.1,
        solids_m3=0.1,
        cells_m3=0.3,
        dry_m3=0.3,
        apart_m3=0.0,
        shared_m3=0.0,
    ),
)
LAYOUT = Layout(
    place=Where(file="wing.toml"),
    sections=(),
    skins=(),
    joints=(JOINT,),
    planned_kg=(("SKIN.UPR", 1.1234), ("RIB.F2", 0.0275)),
    gap_m=0.0005,
)
HEAD = PlanHead(
    name="r1",
    title="a box of a wing",
    display=Display.METRIC,
    attitudes=(Attitude(name="ground", pitch_deg=3.0, fill=True, flight=False),),
    fuel=FuelGrade(grade="avgas", density_15c_kg_m3=715.0),
    tolerances=((PartClass.RIB, 0.08),),
    growths=((PartClass.RIB, 0.02),),
    says_where_filled=True,
)


class Wing:
    """The records of that wing, and the folder they are written to."""

    ACROSS, SECTION_M2, HOLE = ACROSS, SECTION, HOLE
    MATERIALS, LAMINATES = MATERIALS, LAMINATES
    TANK, CELLS, OPENINGS = TANK, CELLS, OPENINGS
    LOFTED, LAYOUT, HEAD = LOFTED, LAYOUT, HEAD
    rib = staticmethod(rib)

    @staticmethod
    def files(lofted: Lofted = LOFTED, layout: Layout = LAYOUT) -> dict[str, bytes]:
        """The files written, of which nothing is found wrong."""
        problems = Problems()
        files = plan_files(HEAD, layout, lofted, materials=MATERIALS, laminates=LAMINATES, problems=problems)
        assert problems.findings() == ()
        return dict(files)

    @staticmethod
    def read(lofted: Lofted = LOFTED, layout: Layout = LAYOUT) -> ReadPlan:
        """What is read back from them."""
        return read_plan_files(Wing.files(lofted, layout))

    @staticmethod
    def plan(lofted: Lofted = LOFTED, layout: Layout = LAYOUT) -> Plan:
        """The plan read back, which nothing stops."""
        found = Wing.read(lofted, layout)
        assert [str(each) for each in found.findings if each.severity is Severity.STOP] == []
        assert found.plan is not None
        return found.plan

    @staticmethod
    def named(plan: Plan, name: str) -> tuple[Part, Shape]:
        """A part of a plan, with its shape."""
        return next(
            (part, shape) for part, shape in zip(plan.parts, plan.shapes, strict=True) if part.name == name
        )


@pytest.fixture(scope="session")
def wing() -> type[Wing]:
    return Wing


@pytest.fixture(scope="module")
def plan() -> Plan:
    return Wing.plan()
