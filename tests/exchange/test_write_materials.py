"""A row for each bead of paste, in a table that is otherwise left as it is."""

from __future__ import annotations

import math

import numpy as np
import pytest

from ledger.errors import Where
from ledger.exchange.materials_table import read_materials
from ledger.exchange.problems import Problems
from ledger.exchange.write_materials import WithBeads, add_beads, bead_of
from ledger.loft.layout import Edge, FilletShape, Joint, Layout, Walls
from ledger.loft.lofted import BondRun
from ledger.model.plan import Material, MaterialKind

TABLE = (
    "material,kind,density [kg/m3],linear_mass [g/m],ratio,ratio_tolerance [%],pot_life [min],"
    "areal_mass [g/m2]\n"
    "bond base,paste,1150,,100:44,5,40,\n"
    "strip 30 x 6,solid,,288,,,,\n"
)
LINE = np.array([(0.0, 0.0, 0.0), (1.0, 0.0, 0.0)])
CONCAVE = 1.0 - math.pi / 4.0


def bond(section_m2: float, part: str = "JNT.UPR", paste: str = "bond base") -> BondRun:
    return BondRun(part=part, title="bond", paste=paste, section_m2=section_m2, lines_m=(LINE,))


def layout(*joints: Joint, gap_m: float = 0.0005) -> Layout:
    return Layout(place=Where(file="wing.toml"), sections=(), skins=(), joints=joints, gap_m=gap_m)


def joint(fillet_m: float, part: str = "JNT.UPR", shape: FilletShape = FilletShape.CONCAVE) -> Joint:
    return Joint(
        place=Where(),
        part=part,
        title="bond",
        walls=Walls.WEBS,
        edges=(Edge.UPPER,),
        paste="bond base",
        fillet_m=fillet_m,
        fillet_shape=shape,
    )


def written(
    *bonds: BondRun, joints: tuple[Joint, ...] = (), table: str | bytes = TABLE, gap_m: float = 0.0005
) -> WithBeads:
    """The table with the beads, which has no trouble."""
    problems = Problems()
    content = table.encode() if isinstance(table, str) else table
    made = add_beads(content, layout(*joints, gap_m=gap_m), bonds, problems)
    assert problems.findings() == ()
    return made


def materials(made: WithBeads) -> dict[str, Material]:
    problems = Problems()
    read = read_materials(made.content, problems)
    assert problems.findings() == ()
    return dict(read.records)


@pytest.mark.parametrize(
    ("section_m2", "grams"),
    # Computed from the cross-section: a concave and a flat fillet of 6 mm, and a bond line 25 x 0.5 mm.
    [(CONCAVE * 0.006**2, 8.88), (0.5 * 0.006**2, 20.7), (0.025 * 0.0005, 14.4)],
)
def test_a_bead_weighs_its_cross_section_of_paste(section_m2: float, grams: float) -> None:
    made = written(bond(section_m2))
    (name,) = made.names.values()
    assert materials(made)[name].linear_mass_kg_m == pytest.approx(
        grams / 1000.0, abs=5e-5 if grams > 10 else 5e-6
    )


def test_a_bead_is_named_by_what_it_is() -> None:
    concave, flat = 2.0 * CONCAVE * 0.004**2, 0.006**2
    made = written(
        bond(0.0106 * 0.0005 + concave),
        bond(0.0066 * 0.0005 + flat, "JNT.RIB"),
        bond(0.03 * 0.0005, "JNT.CAP"),
        joints=(joint(0.004), joint(0.006, "JNT.RIB", FilletShape.FLAT), joint(0.0, "JNT.CAP")),
    )
    assert list(made.names.values()) == [
        "bond base, 10.6 x 0.5 gap, fillet 4",
        "bond base, 6.6 x 0.5 gap, flat fillet 6",
        "bond base, 30 x 0.5 gap",
    ]


def test_a_bead_without_a_gap_is_named_by_its_fillet() -> None:
    made = written(bond(2.0 * CONCAVE * 0.004**2), joints=(joint(0.004),), gap_m=0.0)
    assert list(made.names.values()) == ["bond base, fillet 4"]


def test_a_bead_is_mixed_as_its_paste_and_the_rest_of_the_table_stays() -> None:
    made = written(bond(1e-5))
    assert made.content.startswith(TABLE.encode())
    (name,) = made.names.values()
    bead, paste = materials(made)[name], materials(made)["bond base"]
    assert bead.kind is MaterialKind.PASTE
    assert bead.linear_mass_kg_m == pytest.approx(0.0115, rel=1e-12)
    assert (bead.ratio, bead.ratio_tolerance, bead.pot_life_s, bead.density_kg_m3) == (
        paste.ratio,
        paste.ratio_tolerance,
        paste.pot_life_s,
        paste.density_kg_m3,
    )
    assert bead.areal_mass_kg_m2 is None


def test_bonds_of_one_cross_section_share_a_row() -> None:
    made = written(bond(1e-5), bond(1e-5, "JNT.LWR"), bond(2e-5, "JNT.RIB"))
    assert len(made.names) == 2
    assert bead_of(bond(1e-5)) == bead_of(bond(1e-5, "JNT.LWR"))
    assert len(materials(made)) == 4


def test_two_beads_of_one_name_are_told_apart() -> None:
    # The same joint on panels whose thicknesses round alike.
    made = written(bond(0.0106 * 0.0005), bond(0.0106 * 0.0005 * 1.00001), joints=(joint(0.0),))
    assert len(set(made.names.values())) == 2
    assert set(made.names.values()) <= set(materials(made))


def test_a_row_that_is_there_already_is_used() -> None:
    first = written(bond(1e-5))
    again = written(bond(1e-5), table=first.content)
    assert again == first


def test_a_row_of_that_name_and_another_mass_is_left_alone() -> None:
    first = written(bond(1e-5))
    other = first.content.replace(b",11.5,", b",99,")
    assert other != first.content
    again = written(bond(1e-5), table=other)
    assert list(again.names.values()) == ["bond base, 10 mm2, 11.5 g/m"]
    assert again.content.startswith(other)


def test_a_column_for_the_mass_per_length_is_added_where_there_is_none() -> None:
    table = 'material,kind,density [kg/m3]\n"a, b",solid,80\nbond base,paste,1150\n'
    made = written(bond(1e-5), table=table)
    assert made.content.splitlines()[:2] == [
        b"material,kind,density [kg/m3],linear_mass [g/m]",
        b'"a, b",solid,80,',
    ]
    (name,) = made.names.values()
    assert materials(made)[name].linear_mass_kg_m == pytest.approx(0.0115, rel=1e-12)


@pytest.mark.parametrize(
    ("head", "cell"),
    [("linear_mass [lb/ft]", "0.00772764"), ("linear_mass [kg/m]", "0.0115"), ("linear_mass", "11.5 g/m")],
)
def test_the_mass_is_in_the_unit_of_its_column(head: str, cell: str) -> None:
    made = written(bond(1e-5), table=f"material,{head},kind,density\nbond base,,paste,1.15 g/cm3\n")
    assert made.content.decode().splitlines()[-1] == f'"bond base, 10 mm2",{cell},paste,1.15 g/cm3'
    (name,) = made.names.values()
    assert materials(made)[name].linear_mass_kg_m == pytest.approx(0.0115, rel=1e-5)


def test_the_mark_and_the_ends_of_lines_stay() -> None:
    table = b"\xef\xbb\xbf" + TABLE.rstrip("\n").replace("\n", "\r\n").encode()
    made = written(bond(1e-5), table=table)
    assert made.content.startswith(table + b"\r\n")
    assert made.content.count(b"\r\n") == made.content.count(b"\n")
    assert len(materials(made)) == 3


def test_without_bonds_the_table_is_the_same() -> None:
    assert written().content == TABLE.encode()


@pytest.mark.parametrize("paste", ["bond base", "glue"])
def test_a_paste_whose_density_is_not_known_is_named(paste: str) -> None:
    problems = Problems()
    table = TABLE.replace("1150", "").encode()
    made = add_beads(table, layout(), (bond(1e-5, paste=paste),), problems)
    assert made.names == {}
    assert [str(finding) for finding in problems.findings()] == [
        f"materials.csv:{paste}:density  joint JNT.UPR is made with {paste!r}, whose density is not known;"
        " give it one in materials.csv"
    ]
