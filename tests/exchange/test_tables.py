"""materials.csv, laminates.csv and parts.csv: records, and problems by file, row and column."""

from __future__ import annotations

from collections.abc import Callable, Mapping

import pytest

from ledger.exchange.plan_folder import ReadPlan
from ledger.model.plan import Laminate, Material, MaterialKind, Step
from ledger.units import Dimension, to_si

Read = Callable[..., ReadPlan]
Told = Callable[[ReadPlan], list[str]]

HEAD = (
    "part,class,side,assembly,form,made_of,geometry,geometry_unit,origin [m],"
    "planned_mass,quantity,mirror_of\n"
)


def test_every_column_of_a_material_is_kept_in_si(read_with: Read) -> None:
    table = (
        "lot_spread [%],pot_life [min],ratio_tolerance [%],ratio,fibre_density [g/cm3],resin_uptake [g/m2],"
        "linear_mass [g/m],thickness [mm],density [kg/m3],areal_mass [oz/yd2],kind,material\n"
        "10,25,4,100:27,1.77,90,34,6,75,1,core,odd\n"
    )
    plan = read_with({"materials.csv": table, "laminates.csv": None}).plan
    assert plan is not None
    (material,) = plan.materials
    assert material == Material(
        name="odd",
        kind=MaterialKind.CORE,
        areal_mass_kg_m2=to_si(1.0, "oz/yd2", Dimension.AREAL_MASS),
        density_kg_m3=75.0,
        thickness_m=0.006,
        linear_mass_kg_m=0.034,
        resin_uptake_kg_m2=0.09,
        fibre_density_kg_m3=1770.0,
        ratio=0.27,
        ratio_tolerance=0.04,
        pot_life_s=1500.0,
        lot_spread=0.1,
    )


def test_a_cell_may_carry_its_own_unit(read_with: Read) -> None:
    table = "material,kind,density,thickness [mm]\nfoam,core,4.7 lb/ft3,0.25 in\n"
    plan = read_with({"materials.csv": table, "laminates.csv": None}).plan
    assert plan is not None
    assert plan.materials[0].density_kg_m3 == pytest.approx(4.7 * 16.018463, rel=1e-7)
    assert plan.materials[0].thickness_m == 0.00635


def test_laminates_by_steps_and_by_plain_areal_mass(read_with: Read) -> None:
    table = (
        "laminate,areal_mass [g/m2],step,material,orientation [deg],coverage [%],resin_fraction [%]\n"
        "TWO,,2,foam,,72,\nTWO,,1,cloth,-45,,50\nPLATE,2000,,,,,\n"
    )
    plan = read_with({"laminates.csv": table}).plan
    assert plan is not None
    steps = (
        Step(number=1, material="cloth", orientation_deg=-45.0, resin_fraction=0.5),
        Step(number=2, material="foam", coverage=0.72),
    )
    assert plan.laminates == (Laminate(name="TWO", steps=steps), Laminate(name="PLATE", areal_mass_kg_m2=2.0))


def laminates(*rows: str) -> Mapping[str, str]:
    head = "laminate,areal_mass [g/m2],step,material,orientation [deg],coverage [%],resin_fraction [%]"
    return {"laminates.csv": "\n".join([head, *rows]) + "\n"}


@pytest.mark.parametrize(
    ("rows", "lines"),
    [
        (
            ["A,,1,cloth,0,,50", "A,,1,cloth,0,,50"],
            ["3:step  step 1 is in row 2 already; number the steps anew"],
        ),
        (["A,,0,cloth,0,,50"], ["2:step  '0' is not a whole number; write for example 2"]),
        (
            ["A,,,cloth,0,,50"],
            ["2:step  step is empty; write the number of the step, or an areal_mass for the whole laminate"],
        ),
        (["A,,1,cloth,0,120,50"], ["2:coverage  '120' is too much; write at most 100 %"]),
        (["A,,1,cloth,0,0,50"], ["2:coverage  '0' is zero; write a number above zero or leave it empty"]),
        (
            ["A,,1,cloth,0,,100"],
            [
                "2:resin_fraction  '100' leaves no fibre; write "
                "the share of resin in the whole ply, below 100 %"
            ],
        ),
        (
            ["A,,1,cloth,0,,fifty"],
            ["2:resin_fraction  'fifty' is not a share; write a number and a unit, for example 42 %"],
        ),
        (
            ["A,,1,cloth,0,,50", "B,5,,,,,", "A,,2,cloth,0,,50"],
            [
                "4:laminate  'A' is above already, with other laminates "
                "between; put its rows together, or give it its own name"
            ],
        ),
        (["A,,1,cloth,0,,50", "a,,2,cloth,0,,50"], ["3:laminate  'a' is spelt 'A' above; write A"]),
        (
            ["A,5,,,,,", "A,,1,cloth,0,,50"],
            ["2:areal_mass  'A' has other rows as well; give it either an areal mass on one row, or steps"],
        ),
        (
            ["A,,1,alloy,0,,"],
            [
                "2:material  'alloy' has no areal_mass, and not both density and thickness; "
                "give it one or the other in materials.csv"
            ],
        ),
        ([",,1,cloth,0,,50"], ["2:laminate  laminate is empty; write the name of the laminate"]),
    ],
)
def test_laminates_that_cannot_be(read_with: Read, told: Told, rows: list[str], lines: list[str]) -> None:
    assert told(read_with(laminates(*rows))) == [f"laminates.csv:{line}" for line in lines]


@pytest.mark.parametrize(
    ("row", "lines"),
    [
        ("cloth,fabric,200,,,", []),
        ("foam,core,,0,,", ["density  '0' is zero; write a number above zero or leave it empty"]),
        ("foam,core,,-5,,", ["density  '-5' is below zero; write a number above zero"]),
        (
            "foam,core,,nan,,",
            ["density  'nan' is not a density; write a number and a unit, for example 75 kg/m3"],
        ),
        (
            'foam,core,,"1,250",,',
            ["density  '1,250' can be read as 1250 or as 1.250; write 1250 kg/m3 or 1.250 kg/m3"],
        ),
        (
            "resin,resin,,,27:0,",
            ["ratio  '27:0' has a part that is not above zero; write for example 100:27"],
        ),
        (
            "resin,resin,,,27,",
            ["ratio  '27' is not a mix ratio; write resin to hardener by mass, for example 100:27"],
        ),
        ("resin,resin,,,,200", ["lot_spread  '200' is too much; write at most 100 %"]),
        (",resin,,,,", ["material  material is empty; write the name of the material"]),
        (
            "resin,,,,,",
            [
                "kind  kind is empty; write one of fabric, prepreg, resin, "
                "hardener, core, film, paste, sealant, finish, solid, process"
            ],
        ),
    ],
)
def test_materials_that_cannot_be(read_with: Read, told: Told, row: str, lines: list[str]) -> None:
    head = "material,kind,areal_mass [g/m2],density [kg/m3],ratio,lot_spread [%]\n"
    read = read_with({"materials.csv": head + row + "\n", "laminates.csv": None})
    assert told(read) == [f"materials.csv:2:{line}" for line in lines]


@pytest.mark.parametrize(
    ("head", "line"),
    [
        (
            "material,kind,density [mm]",
            "density  'mm' is not a unit of density; write one of "
            "kg/m3, g/cm3, g/mL, kg/L, lb/ft3, lb/in3, lb/US gal, lb/imp gal",
        ),
        ("material,kind [g]", "kind  column kind takes no unit; write kind as the head"),
        ("material,kind,", "a column has no head; write its head or remove the column"),
        ("material", "there is no column kind; add a column kind"),
        ("material,kind,kind", "kind  column kind is there twice; remove one"),
        ("material,kind,Density", "Density  'Density' is not a column of materials.csv; write density"),
    ],
)
def test_heads_that_cannot_be(read_with: Read, told: Told, head: str, line: str) -> None:
    (found,) = told(read_with({"materials.csv": head + "\n", "laminates.csv": None}))
    assert found in (f"materials.csv:1:{line}", f"materials.csv:1  {line}")


def test_rows_keep_their_line_past_empty_ones_and_line_breaks(read_with: Read, told: Told) -> None:
    table = 'material,kind\n\n"two\nlines",core\n,,\nx,metal\n'
    (line,) = told(read_with({"materials.csv": table, "laminates.csv": None}))
    assert line.startswith("materials.csv:6:kind  'metal' is not a kind; write one of fabric,")


def test_a_comma_without_quotation_marks_is_told(read_with: Read, told: Told) -> None:
    assert told(read_with({"materials.csv": "material,kind\nfoam, white,core\n", "laminates.csv": None})) == [
        "materials.csv:2  the row has 3 columns and the "
        "head 2; put text that holds a comma in quotation marks"
    ]


@pytest.mark.parametrize(
    ("rows", "lines"),
    [
        (
            ["A,fitting,L,W,item,,,,,1 g,1,"],
            ["2:origin  an item has no origin; write where its centre of gravity is"],
        ),
        (
            ["A,fitting,L,W,item,,,,0 0 0,,1,"],
            ["2:planned_mass  an item has no planned mass; write what it weighs, for example 120 g"],
        ),
        (
            ["A,fitting,L,W,item,,g/x.obj,,0 0 0,1 g,1,"],
            ["2:geometry  an item has no geometry; leave it empty, or give the part another form"],
        ),
        (
            ["A,fitting,L,W,item,,,,0 0 0,1 g,1,A"],
            ["2:mirror_of  a part cannot mirror itself; name the part on the other side"],
        ),
        (
            ["A,fitting,L,W,item,,,,0 0 0,1 g,1,B", "B,fitting,L,W,item,,,,0 0 0,1 g,1,"],
            ["2:mirror_of  B is on side L too; correct one of the two sides"],
        ),
        (
            ["A,fitting,L,W,item,,,,,1 g,1,B", "B,fitting,R,W,item,,,,,1 g,1,A"],
            [
                "2:mirror_of  B has no origin of its own to mirror; give one of the two its origin",
                "3:mirror_of  A has no origin of its own to mirror; give one of the two its origin",
            ],
        ),
        (
            ["A,fitting,L,W,item,,,,,1 g,1,B", "B,cap,R,W,run,bead,g/x.obj,m,,,1,"],
            ["2:mirror_of  B is a run, this part an item; give both the same form"],
        ),
        (
            ["A,cap,L,W,run,,g/x.obj,m,,,1,"],
            ["2:made_of  made_of is empty; write the material the part is made of"],
        ),
        (
            ["A,cap,L,W,run,alloy,g/x.obj,m,,,1,"],
            ["2:made_of  'alloy' has no linear_mass, which a run needs; give it one in materials.csv"],
        ),
        (
            ["A,cap,L,W,solid,bead,g/x.obj,m,,,1,"],
            ["2:made_of  'bead' has no density, which a solid needs; give it one in materials.csv"],
        ),
        (
            ["A,cap,L,W,run,bead,,,,,1,"],
            ["2:geometry  a run has no geometry; write the path of its file, for example geometry/rib.dxf"],
        ),
        (
            ["A,cap,L,W,run,bead,g/x.obj,,,,1,"],
            [
                "2:geometry_unit  neither the plan nor g/x.obj says the "
                "unit of its coordinates; write the unit, for example mm"
            ],
        ),
        (
            ["A,cap,L,W,run,bead,g/x.obj,furlong,,,1,"],
            ["2:geometry_unit  'furlong' is not a unit of length; write one of m, mm, cm, um, in, ft, yd"],
        ),
        (
            ["A,cap,L,W,run,bead,g/x.obj,m,,,1.5,"],
            ["2:quantity  '1.5' is not a number of pieces; write a whole number, 1 or more"],
        ),
        (["A,cap,X,W,run,bead,g/x.obj,m,,,1,"], ["2:side  'X' is not a side; write one of L, R, C"]),
        (
            ["A,cap,L,W,panel,PLATE,g/x.obj,m,0 0 0,,1,"],
            [
                "2:across  across is empty and the part's place "
                "cannot be told; write where its X runs, for example 1 0 0",
                "2:up_axis  up_axis is empty and the part's place "
                "cannot be told; write where its Y runs, for example 0 0 1",
            ],
        ),
    ],
)
def test_parts_that_cannot_be(read_with: Read, told: Told, rows: list[str], lines: list[str]) -> None:
    table = HEAD + "\n".join(rows) + "\n"
    read = read_with({"parts.csv": table, "g/x.obj": "v 0 0 0\nv 1 0 0\nl 1 2\n"})
    assert told(read) == [f"parts.csv:{line}" for line in lines]


def test_an_unreadable_table_does_not_cast_doubt_on_the_others(read_with: Read, told: Told) -> None:
    files = {"materials.csv": "stuff,kind\nx,core\n"}
    assert [line.split("  ")[0] for line in told(read_with(files))] == [
        "materials.csv:1:stuff",
        "materials.csv:1",
    ]
