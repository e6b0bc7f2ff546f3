"""Every layout that is wrong in one way is told of at the record that says it."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from typing import Any

import pytest

from ledger.errors import Severity, Where
from ledger.loft.layout import TAIL, Along, Axis, Edge, Height, Layout, Surface, Walls
from ledger.loft.loft import loft
from ledger.model.tanks import Outside

Wrong = Callable[[Any], Layout]


def with_rows(wings: Any, **changed: Any) -> Layout:
    """The plain wing with a second row behind, to the tail, and its ribs in both."""
    ribs = tuple(replace(rib, rows=("R", "S")) for rib in wings.plain().ribs)
    said = {"rows": (wings.row("R", "A", "B"), wings.row("S", "B", TAIL)), "ribs": ribs, **changed}
    plain = wings.plain(**said)
    assert isinstance(plain, Layout)
    return plain


def ribs_of(wings: Any, *last: Any) -> tuple[Any, ...]:
    return (*wings.plain().ribs[:-1], *last)


WRONG: dict[str, tuple[str, str, Wrong]] = {
    "a web ahead of the nose": (
        "web-outside-section",
        "web A",
        lambda w: w.plain(webs=(w.web("A", points_m=((0.9, 0.0), (1.2, 2.0))), w.web("B", 0.6))),
    ),
    "a web behind the tail at the tip": (
        "web-outside-section",
        "web B",
        lambda w: w.plain(webs=(w.web("A", 0.2), w.web("B", points_m=((1.6, 0.0), (2.1, 2.0))))),
    ),
    "a web beyond the tip": (
        "web-outside-section",
        "web B",
        lambda w: w.plain(webs=(w.web("A", 0.2), w.web("B", points_m=((1.6, 0.0), (1.6, 2.4))))),
    ),
    "a web where the skins meet": (
        "web-outside-section",
        "web C",
        lambda w: w.plain(webs=(*w.plain().webs, w.web("C", 0.999))),
    ),
    "webs that cross": (
        "walls-cross",
        "web B",
        lambda w: w.plain(webs=(w.web("A", (0.2, 0.6)), w.web("B", (0.6, 0.3)))),
    ),
    "webs that touch": (
        "walls-cross",
        "web B",
        lambda w: w.plain(webs=(w.web("A", 0.5), w.web("B", 0.509))),
    ),
    "ribs that touch": (
        "walls-cross",
        "rib 3",
        lambda w: w.plain(ribs=ribs_of(w, w.rib("3", 1.004))),
    ),
    "ribs that cross": (
        "walls-cross",
        "rib 3",
        lambda w: w.plain(ribs=ribs_of(w, w.rib("3", points_m=((1.1, 1.2), (1.7, 0.8))))),
    ),
    "ribs that cross only where one leans": (
        "walls-cross",
        "rib 3",
        lambda w: w.plain(ribs=ribs_of(w, w.rib("3", 1.02, lean_deg=-45.0))),
    ),
    "a web that runs along the chord": (
        "web-across",
        "web A",
        lambda w: w.plain(webs=(w.web("A", points_m=((1.1, 1.0), (1.5, 1.1))), w.web("B", 0.6))),
    ),
    "a web at one butt line": (
        "web-across",
        "web A",
        lambda w: w.plain(webs=(w.web("A", points_m=((1.1, 1.0), (1.5, 1.0))), w.web("B", 0.6))),
    ),
    "a web that bends at a section": (
        "web-bends",
        "web A",
        lambda w: w.plain(
            sections=(w.section(0.0), w.section(1.0, leading_edge_m=1.1), w.section(2.0, leading_edge_m=1.4)),
            webs=(w.web("A", 0.2), w.web("B", 0.6, splices_m=(1.0,))),
            ribs=(w.rib("1", 0.1), w.rib("2", 0.9), w.rib("3", 1.9)),
        ),
    ),
    "a rib along the span": (
        "rib-along",
        "rib 3",
        lambda w: w.plain(ribs=ribs_of(w, w.rib("3", points_m=((1.4, 1.2), (1.4, 1.9))))),
    ),
    "a rib beyond the root": (
        "rib-outside-wing",
        "rib 1",
        lambda w: w.plain(ribs=(w.rib("1", 0.002), w.rib("3", 1.9)), tanks=(), ports=()),
    ),
    "a rib that leans out of the tip": (
        "rib-outside-wing",
        "rib 3",
        lambda w: w.plain(ribs=ribs_of(w, w.rib("3", 1.99, lean_deg=30.0))),
    ),
    "a rib in two rows beyond the tip": (
        "rib-outside-wing",
        "rib 4",
        lambda w: with_rows(w, ribs=(*with_rows(w).ribs, w.rib("4", 2.5, rows=("R", "S")))),
    ),
    "a canted rib beyond the tip": (
        "rib-outside-wing",
        "rib 3",
        lambda w: w.plain(ribs=ribs_of(w, w.rib("3", points_m=((1.1, 2.1), (1.7, 2.3))))),
    ),
    "a gap wider than the wing is deep": (
        "gap-too-wide",
        "bond",
        lambda w: w.plain(gap_m=0.2, gap_place=Where(thing="bond")),
    ),
    "a rib where a web is not": (
        "rib-meets-no-web",
        "rib 3",
        lambda w: w.plain(webs=(w.web("A", 0.2, between_m=(0.0, 1.5)), w.web("B", 0.6))),
    ),
    "a rib through the web it ends at": (
        "rib-ends-at-web",
        "rib 3",
        lambda w: w.plain(ribs=ribs_of(w, w.rib("3", 1.9, through=("B",)))),
    ),
    "a cap thicker than the wing": (
        "cap-too-thick",
        "CAP.A.upper",
        lambda w: w.plain(caps=(w.cap("A", Surface.UPPER, thickness_m=1.0, between_m=(0.0, 0.5)),)),
    ),
    "caps side by side that overlap": (
        "caps-overlap",
        "CAP.B.upper",
        lambda w: w.plain(
            webs=(w.web("A", 0.5), w.web("B", 0.53)),
            caps=(w.cap("A", Surface.UPPER, width_m=0.04), w.cap("B", Surface.UPPER, width_m=0.03)),
        ),
    ),
    "caps one over the other that overlap": (
        "caps-overlap",
        "CAP.A.lower",
        lambda w: w.plain(
            caps=(
                w.cap("A", Surface.UPPER, thickness_m=0.07, between_m=(0.0, 0.5)),
                w.cap("A", Surface.LOWER, thickness_m=0.07, between_m=(0.0, 0.5)),
            )
        ),
    ),
    "a rib parted by a web in the middle of its row": (
        "wall-in-pieces",
        "rib 1",
        lambda w: w.plain(
            webs=(*w.plain().webs, w.web("C", 0.4, between_m=(0.0, 0.5))),
        ),
    ),
    "a skin too thick for the tail": (
        "skin-too-thick",
        "SKIN",
        lambda w: w.plain(skins=(w.skin("SKIN", Surface.BOTH, (0.0, 1.0), 70.0),)),
    ),
    "a skin too thick for the nose": (
        "skin-too-thick",
        "NOSE",
        lambda w: w.plain(
            skins=(
                w.skin("NOSE", Surface.BOTH, (0.0, 0.08), 40.0),
                w.skin("UPR", Surface.UPPER, (0.08, 1.0), 2.0),
                w.skin("LWR", Surface.LOWER, (0.08, 1.0), 2.0),
            )
        ),
    ),
    "a hole larger than its wall": (
        "hole-larger-than-wall",
        "hole drain",
        lambda w: w.plain(holes=(w.hole(walls=("R2",), diameter_m=0.2),)),
    ),
    "a hole too near the web": (
        "hole-larger-than-wall",
        "hole drain",
        lambda w: w.plain(holes=(w.hole(along=Along(from_start_m=0.005)),)),
    ),
    "a hole off the end of its wall": (
        "hole-larger-than-wall",
        "hole drain",
        lambda w: w.plain(holes=(w.hole(along=Along(from_end_m=0.9)),)),
    ),
    "holes that meet": (
        "hole-overlaps",
        "hole vent",
        lambda w: w.plain(holes=(w.hole(), w.hole("vent", along=Along(share=0.51)))),
    ),
    "a hole out of the tank": (
        "hole-opens-tank",
        "hole drain",
        lambda w: w.plain(holes=(w.hole(walls=("R1",)),)),
    ),
    "a hole from tank to tank": (
        "hole-joins-tanks",
        "hole drain",
        lambda w: w.plain(
            tanks=(w.tank(("R",), ("1", "2"), "a"), w.tank(("R",), ("2", "3"), "b")),
            ports=(*w.ports("R1"), *w.ports("R2")),
            holes=(w.hole(walls=("R2",)),),
        ),
    ),
    "foam in a tank": (
        "fill-in-tank",
        "FOAM",
        lambda w: w.plain(fills=(w.fill("FOAM", ("R",), ("1", "3")),)),
    ),
    "foam with nothing to fill": (
        "fill-empty",
        "MORE",
        lambda w: w.plain(fills=(w.fill("FOAM", ("R",)), w.fill("MORE", ("R",)))),
    ),
    "a joint of nothing": (
        "joint-empty",
        "JNT",
        lambda w: w.plain(joints=(w.joint("JNT", ("R9",), (Edge.UPPER,)),)),
    ),
    "a joint of free edges": (
        "joint-empty",
        "JNT",
        lambda w: w.plain(joints=(w.joint("JNT", Walls.RIBS, (Edge.FREE,)),)),
    ),
    "a joint of two sheets": (
        "joint-of-several-sheets",
        "JNT",
        lambda w: w.plain(
            ribs=ribs_of(w, w.rib("3", 1.9, thickness_m=0.01)),
            joints=(w.joint("JNT", Walls.RIBS, (Edge.UPPER,)),),
        ),
    ),
    "a tank without its rib": (
        "tank-rib-missing",
        "tank ",
        lambda w: with_rows(
            w,
            ribs=(
                w.rib("1", 0.1, rows=("R", "S")),
                w.rib("2", 1.0, rows=("R", "S")),
                w.rib("3", 1.9, rows=("R",)),
            ),
            tanks=(w.tank(("R", "S")),),
        ),
    ),
    "a port in a bay that is not there": (
        "bay-unknown",
        "drain R7",
        lambda w: w.plain(ports=(*w.ports("R1"), w.port(Outside.DRAIN, "R7"))),
    ),
    "a port in a dry bay": (
        "bay-unknown",
        "drain R3",
        lambda w: w.plain(ports=(*w.ports("R1"), w.port(Outside.DRAIN, "R3"))),
    ),
    "a port beyond its bay along the span": (
        "port-outside-bay",
        "drain R1",
        lambda w: w.plain(
            ports=(*w.ports("R1"), w.port(Outside.DRAIN, "R1", along_span=Along(from_start_m=1.2)))
        ),
    ),
    "a port beyond its bay along the chord": (
        "port-outside-bay",
        "drain R1",
        lambda w: w.plain(
            ports=(*w.ports("R1"), w.port(Outside.DRAIN, "R1", along_chord=Along(from_end_m=0.5)))
        ),
    ),
    "an upright rim higher than its bay": (
        "port-outside-bay",
        "drain R1",
        lambda w: w.plain(
            ports=(
                *w.ports("R1"),
                w.port(
                    Outside.DRAIN,
                    "R1",
                    axis=Axis.FORE_AFT,
                    diameter_m=0.3,
                    height=Height(above_lower_m=0.0),
                ),
            )
        ),
    ),
    "a hole in a wall that is not there": (
        "wall-unknown",
        "hole drain",
        lambda w: w.plain(holes=(w.hole(walls=("R2", "R8")),)),
    ),
    "a wall left out that is not there": (
        "wall-unknown",
        "hole drain",
        lambda w: w.plain(holes=(w.hole(leaving_out=("R8",)),)),
    ),
    "no outlet": (
        "bay-without-outlet",
        "tank ",
        lambda w: w.plain(ports=w.ports("R1")[1:]),
    ),
    "no vent": (
        "bay-without-vent",
        "tank ",
        lambda w: w.plain(ports=(w.ports("R1")[0], w.ports("R1")[2])),
    ),
}


@pytest.mark.parametrize("name", WRONG)
def test_a_layout_wrong_in_one_way_is_told_of_at_its_record(wings: Any, name: str) -> None:
    code, thing, wrong = WRONG[name]
    found, findings = loft(wrong(wings))
    assert found is None
    assert {(finding.code, finding.where.thing) for finding in findings} == {(code, thing)}
    for finding in findings:
        assert finding.severity is Severity.STOP
        assert finding.what
        assert finding.do


def test_the_plain_wing_and_the_one_with_two_rows_have_no_findings(wings: Any) -> None:
    for layout in (wings.plain(), with_rows(wings), with_rows(wings, holes=(wings.hole(),))):
        found, findings = loft(layout)
        assert findings == ()
        assert found is not None


def test_every_finding_of_one_kind_of_fault_is_told_at_once(wings: Any) -> None:
    layout = wings.plain(
        holes=(wings.hole(diameter_m=0.3), wings.hole("vent", walls=("R9",))),
        ports=(),
        joints=(wings.joint("JNT", ("R9",), (Edge.UPPER,)),),
    )
    _, findings = loft(layout)
    assert {finding.code for finding in findings} == {
        "hole-larger-than-wall",
        "wall-unknown",
        "bay-without-outlet",
        "bay-without-vent",
        "bay-without-filler",
        "joint-empty",
    }


def test_a_rib_outside_the_wing_is_told_once_with_where_the_wing_ends(wings: Any) -> None:
    beyond = with_rows(wings, ribs=(*with_rows(wings).ribs, wings.rib("4", 2.5, rows=("R", "S"))))
    (finding,) = loft(beyond)[1]
    assert finding.what == "rib 4 stands outside the wing, which ends at BL 2000.0 mm"
    sections = tuple(replace(one, butt_line_m=one.butt_line_m + 0.5) for one in wings.plain().sections)
    (finding,) = loft(wings.plain(sections=sections, ribs=(wings.rib("1", 0.1), wings.rib("3", 1.9))))[1]
    assert finding.what == "rib 1 stands outside the wing, which begins at BL 500.0 mm"


def test_a_gap_that_leaves_no_panel_is_told_once_and_by_its_size(wings: Any) -> None:
    (finding,) = loft(wings.plain(gap_m=0.2))[1]
    assert finding.what.startswith("a gap of 200.0 mm at each edge leaves nothing of RIB.R")
    assert finding.do.startswith("write a smaller gap")
    # Without the place of the bond it stands at the first wall.
    assert finding.where.thing == "rib 1"


def test_a_web_that_bends_is_told_every_splice_and_to_name_the_lengths(wings: Any) -> None:
    noses = ((0.0, 1.0), (0.6, 1.1), (1.0, 1.1), (2.0, 1.4))
    sections = tuple(wings.section(line, leading_edge_m=nose) for line, nose in noses)
    web = wings.web("A", 0.2, splices_m=(1.0,), lengths=("IN", "OUT"))
    bent = wings.plain(sections=sections, webs=(web, wings.web("B", 0.6, splices_m=(0.6, 1.0))))
    (finding,) = loft(bent)[1]
    assert finding.what == "web A bends at BL 600.0 mm and a panel is flat"
    assert finding.do == (
        'add splices = ["600 mm", "1000 mm"] and a name for each length in lengths, or give it two points'
    )
