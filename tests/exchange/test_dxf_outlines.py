"""Outlines drawn by a drawing library, against closed forms."""

from __future__ import annotations

import io
import math
from collections.abc import Callable
from typing import Any

import ezdxf
import pytest
from ezdxf import units

from ledger.errors import Severity
from ledger.exchange.figures import Figures
from ledger.exchange.geometry_cache import MemoryCache
from ledger.exchange.geometry_files import GeometryFiles, GeometryRefused
from ledger.exchange.plan_files import StoredFiles

Draw = Callable[[Any, Any], object]


def drawn(draw: Draw, *, code: int = units.MM, version: str = "R2010") -> bytes:
    """The bytes of a drawing whose model space and document `draw` fills."""
    document = ezdxf.new(version)
    if version != "R12":
        document.header["$INSUNITS"] = code
    draw(document.modelspace(), document)
    stream = io.StringIO()
    document.write(stream)
    return stream.getvalue().encode("utf-8")


def panel(content: bytes, picked: str = "", unit: str | None = "mm", kind: str = "panel") -> Figures:
    """Figures of a drawing as a panel or run."""
    files = StoredFiles({"a.dxf": content})
    return GeometryFiles(files, MemoryCache()).figures(kind, f"a.dxf{picked}", unit)


def area_mm2(content: bytes, picked: str = "", unit: str | None = "mm") -> float:
    return panel(content, picked, unit).measure * 1e6


def test_a_circle_has_the_area_of_a_circle() -> None:
    figures = panel(drawn(lambda space, _: space.add_circle((30, 20), 10)))
    assert figures.measure == pytest.approx(math.pi * 1e-4, rel=1e-13)
    assert figures.centroid == pytest.approx((0.030, 0.020), abs=1e-15)
    assert figures.second[0][0] == pytest.approx(math.pi / 4 * 1e-8, rel=1e-12)


def test_a_bulged_polyline_is_taken_by_its_arcs() -> None:
    # A stadium: 100 x 40 and two half circles of radius 20; the tangent of a quarter of 180 deg is 1.
    corners = [(0, 0, 0, 0, 0), (100, 0, 0, 0, 1), (100, 40, 0, 0, 0), (0, 40, 0, 0, 1)]
    content = drawn(lambda space, _: space.add_lwpolyline(corners, close=True))
    figures = panel(content)
    assert figures.measure * 1e6 == pytest.approx(4000 + math.pi * 400, rel=1e-13)
    assert figures.centroid == pytest.approx((0.050, 0.020), abs=1e-14)


def test_an_old_polyline_with_bulges_is_the_same() -> None:
    corners = [(0, 0, 0, 0, 0), (100, 0, 0, 0, 1), (100, 40, 0, 0, 0), (0, 40, 0, 0, 1)]
    content = drawn(lambda space, _: space.add_polyline2d(corners, format="xyseb", close=True), version="R12")
    assert area_mm2(content) == pytest.approx(4000 + math.pi * 400, rel=1e-13)


def test_a_flat_three_dimensional_polyline_counts_and_a_tilted_one_is_refused() -> None:
    flat = [(0, 0, 5), (10, 0, 5), (10, 10, 5)]
    assert area_mm2(drawn(lambda space, _: space.add_polyline3d(flat, close=True))) == pytest.approx(50)
    tilted = [(0, 0, 0), (10, 0, 5), (10, 10, 0)]
    with pytest.raises(GeometryRefused, match="does not lie in X and Y") as refused:
        panel(drawn(lambda space, _: space.add_polyline3d(tilted, close=True)))
    assert refused.value.code == "outline-not-flat"


def test_loose_lines_and_arcs_in_any_order_make_one_loop() -> None:
    def draw(space: Any, _: Any) -> None:
        space.add_line((100, 40), (0, 40))
        space.add_arc((0, 20), 20, 90, 270)
        space.add_line((100, 0), (0, 0))
        space.add_arc((100, 20), 20, 270, 90)

    assert area_mm2(drawn(draw)) == pytest.approx(4000 + math.pi * 400, rel=1e-13)


def test_an_ellipse_and_half_an_ellipse() -> None:
    whole = drawn(lambda space, _: space.add_ellipse((5, 5), major_axis=(30, 10), ratio=0.4))
    a = math.hypot(30, 10)
    assert area_mm2(whole) == pytest.approx(math.pi * a * 0.4 * a, rel=1e-13)

    def half(space: Any, _: Any) -> None:
        space.add_ellipse((0, 0), major_axis=(20, 0), ratio=0.5, start_param=0, end_param=math.pi)
        space.add_line((-20, 0), (20, 0))

    figures = panel(drawn(half))
    assert figures.measure * 1e6 == pytest.approx(math.pi * 20 * 10 / 2, rel=1e-13)
    # The centroid of a half ellipse is 4 b / (3 pi) up.
    assert figures.centroid == pytest.approx((0.0, 4 * 0.010 / (3 * math.pi)), abs=1e-14)


def test_a_rational_spline_that_is_a_circle_has_its_area() -> None:
    w = math.sqrt(0.5)
    square = [(1, 0), (1, 1), (0, 1), (-1, 1), (-1, 0), (-1, -1), (0, -1), (1, -1), (1, 0)]
    points = [(10 * x, 10 * y, 0) for x, y in square]

    def draw(space: Any, _: Any) -> None:
        spline = space.add_rational_spline(points, [1, w, 1, w, 1, w, 1, w, 1], degree=2)
        spline.knots = [0, 0, 0, 1, 1, 2, 2, 3, 3, 4, 4, 4]

    assert area_mm2(drawn(draw)) == pytest.approx(100 * math.pi, rel=1e-12)


def test_a_polynomial_spline_closed_by_a_line_has_its_closed_form() -> None:
    # The Bezier of (0,0) (0,3) (3,3) (3,0) encloses with its chord 3/20 (b x a + ...) = 5.4.
    def draw(space: Any, _: Any) -> None:
        space.add_open_spline([(0, 0), (0, 3), (3, 3), (3, 0)], degree=3)
        space.add_line((3, 0), (0, 0))

    assert area_mm2(drawn(draw)) == pytest.approx(5.4, rel=1e-13)


def test_a_spline_by_fit_points_passes_through_them() -> None:
    points = [(10 * math.cos(t), 10 * math.sin(t)) for t in [k * math.pi / 24 for k in range(25)]]

    def draw(space: Any, _: Any) -> None:
        space.add_spline(fit_points=points)
        space.add_line(points[-1], points[0])

    assert area_mm2(drawn(draw)) == pytest.approx(50 * math.pi, rel=2e-4)


def test_holes_are_told_by_nesting_whatever_their_direction() -> None:
    def draw(space: Any, _: Any) -> None:
        space.add_lwpolyline([(0, 0), (100, 0), (100, 100), (0, 100)], close=True)
        space.add_lwpolyline([(10, 10), (90, 10), (90, 90), (10, 90)], close=True)
        space.add_circle((50, 50), 20)
        space.add_circle((50, 50), 5)

    expected = 10000 - 6400 + math.pi * (400 - 25)
    assert area_mm2(drawn(draw)) == pytest.approx(expected, rel=1e-13)


def nested(**attributes: Any) -> Draw:
    """A half disc of radius 10 in a block, in a block at (5, 0), placed with the attributes."""

    def draw(space: Any, document: Any) -> None:
        inner = document.blocks.new("INNER")
        inner.add_arc((0, 0), 10, 0, 180)
        inner.add_line((-10, 0), (10, 0))
        document.blocks.new("OUTER").add_blockref("INNER", (5, 0))
        space.add_blockref("OUTER", (100, 50), dxfattribs=attributes)

    return draw


UP = 4 * 10 / (3 * math.pi)


@pytest.mark.parametrize(
    ("attributes", "area", "centre"),
    [
        ({}, 50 * math.pi, (105, 50 + UP)),
        ({"xscale": 2, "yscale": 2}, 200 * math.pi, (110, 50 + 2 * UP)),
        ({"xscale": 3, "yscale": 1}, 150 * math.pi, (115, 50 + UP)),
        ({"xscale": -1}, 50 * math.pi, (95, 50 + UP)),
        ({"yscale": -2}, 100 * math.pi, (105, 50 - 2 * UP)),
        ({"rotation": 90}, 50 * math.pi, (100 - UP, 55)),
        ({"xscale": 2, "yscale": -1, "rotation": 90}, 100 * math.pi, (100 + UP, 60)),
    ],
)
def test_nested_blocks_scaled_turned_and_mirrored(
    attributes: dict[str, Any], area: float, centre: tuple[float, float]
) -> None:
    figures = panel(drawn(nested(**attributes)))
    assert figures.measure * 1e6 == pytest.approx(area, rel=1e-12)
    assert [1e3 * value for value in figures.centroid] == pytest.approx(centre, rel=1e-12)


def test_a_bulged_polyline_in_a_block_stretched_one_way_becomes_ellipses() -> None:
    def draw(space: Any, document: Any) -> None:
        block = document.blocks.new("B")
        block.add_lwpolyline([(0, 0, 0, 0, 1), (20, 0, 0, 0, 1)], close=True)
        space.add_blockref("B", (0, 0), dxfattribs={"xscale": 2, "yscale": 0.5})

    assert area_mm2(drawn(draw)) == pytest.approx(math.pi * 20 * 5, rel=1e-12)


def test_a_spline_in_a_mirrored_block_keeps_its_area() -> None:
    def draw(space: Any, document: Any) -> None:
        block = document.blocks.new("B")
        block.add_open_spline([(0, 0), (0, 3), (3, 3), (3, 0)], degree=3)
        block.add_line((3, 0), (0, 0))
        space.add_blockref("B", (0, 0), dxfattribs={"xscale": -2})

    assert area_mm2(drawn(draw)) == pytest.approx(10.8, rel=1e-12)


def test_rows_and_columns_of_a_block_all_count() -> None:
    def draw(space: Any, document: Any) -> None:
        document.blocks.new("B").add_circle((0, 0), 1)
        attributes = {"row_count": 2, "column_count": 3, "row_spacing": 5, "column_spacing": 5}
        space.add_blockref("B", (0, 0), dxfattribs=attributes)

    assert area_mm2(drawn(draw)) == pytest.approx(6 * math.pi, rel=1e-12)


def test_seen_from_below_arcs_run_the_other_way() -> None:
    def draw(space: Any, _: Any) -> None:
        below = {"extrusion": (0, 0, -1)}
        space.add_arc((0, 0), 10, 0, 180, dxfattribs=below)
        space.add_line((-10, 0), (10, 0))
        space.add_lwpolyline([(30, 0, 0, 0, 1), (50, 0, 0, 0, 0)], close=True, dxfattribs=below)

    figures = panel(drawn(draw))
    # The second half disc lies about x = -40 and still below its chord.
    assert figures.measure * 1e6 == pytest.approx(100 * math.pi, rel=1e-12)
    assert figures.centroid == pytest.approx((-0.020, 0.0), abs=1e-14)


def test_a_layer_is_picked_and_blocks_on_layer_0_take_that_of_their_insert() -> None:
    def draw(space: Any, document: Any) -> None:
        document.layers.add("CUT")
        block = document.blocks.new("B")
        block.add_circle((0, 0), 1)
        block.add_circle((0, 10), 3, dxfattribs={"layer": "OTHER"})
        space.add_blockref("B", (0, 0), dxfattribs={"layer": "CUT"})
        space.add_line((0, 0), (7, 7), dxfattribs={"layer": "OTHER"})

    content = drawn(draw)
    assert area_mm2(content, "#cut") == pytest.approx(math.pi, rel=1e-12)
    with pytest.raises(GeometryRefused, match="ends meet no other") as refused:
        panel(content)
    assert "pick the outline's layer with #, one of CUT, OTHER" in refused.value.do
    with pytest.raises(GeometryRefused, match="nothing on layer 'NONE'") as refused:
        panel(content, "#NONE")
    assert refused.value.do == "its layers are CUT, OTHER"


def test_writing_is_left_out_with_a_note() -> None:
    def draw(space: Any, _: Any) -> None:
        space.add_circle((0, 0), 10)
        space.add_text("RIB 3")
        space.add_point((0, 0))
        space.add_linear_dim((0, 20), (0, 0), (10, 0)).render()

    (remark,) = panel(drawn(draw)).remarks
    assert (remark.code, remark.severity) == ("drawing-left-out", Severity.NOTE)
    assert "1 DIMENSION, 1 POINT, 1 TEXT" in remark.what


@pytest.mark.parametrize(
    ("draw", "code"),
    [
        (lambda space, _: space.add_line((0, 0), (5, 0)), "outline-open"),
        (lambda space, _: space.add_text("only words"), "outline-empty"),
        (
            lambda space, _: space.add_lwpolyline([(0, 0), (10, 10), (10, 0), (0, 10)], close=True),
            "outline-crosses",
        ),
        (lambda space, _: [space.add_circle((0, 0), 5) for _ in range(2)], "outline-doubled"),
        (lambda space, _: [space.add_circle((x, 0), 5) for x in (0, 6)], "outline-crosses"),
        (
            lambda space, _: space.add_lwpolyline([(0, 0), (10, 0), (10, 10), (0, 10)], close=False),
            "outline-open",
        ),
    ],
)
def test_what_is_no_outline_is_refused_by_name(draw: Draw, code: str) -> None:
    with pytest.raises(GeometryRefused) as refused:
        panel(drawn(draw))
    assert refused.value.code == code


@pytest.mark.parametrize(
    ("code", "unit", "metres"),
    [(4, None, 1e-3), (1, None, 0.0254), (6, None, 1.0), (5, None, 0.01), (0, "in", 0.0254), (4, "mm", 1e-3)],
)
def test_the_unit_is_the_plans_or_else_the_drawings(code: int, unit: str | None, metres: float) -> None:
    figures = panel(drawn(lambda space, _: space.add_circle((0, 0), 1), code=code), unit=unit)
    assert figures.measure == pytest.approx(math.pi * metres**2, rel=1e-12)


@pytest.mark.parametrize(("code", "unit", "said"), [(4, "in", "mm"), (1, "mm", "in"), (6, "mm", "m")])
def test_a_unit_that_contradicts_the_plan_is_refused(code: int, unit: str, said: str) -> None:
    content = drawn(lambda space, _: space.add_circle((0, 0), 1), code=code)
    with pytest.raises(GeometryRefused) as refused:
        panel(content, unit=unit)
    assert refused.value.code == "unit-contradicts"
    assert refused.value.what == f"a.dxf says its unit is {said} and the plan says {unit}"


def test_no_unit_anywhere_asks_for_one() -> None:
    for version in ("R12", "R2010"):
        content = drawn(lambda space, _: space.add_circle((0, 0), 1), code=0, version=version)
        with pytest.raises(GeometryRefused) as refused:
            panel(content, unit=None)
        assert (refused.value.code, refused.value.do) == ("unit-missing", "write the unit, for example mm")


def test_a_drawing_without_a_header_says_no_unit() -> None:
    corners = [(0, 0), (10, 0), (0, 10)]
    tags = ["0", "SECTION", "2", "ENTITIES", "0", "POLYLINE", "8", "0", "66", "1", "70", "1"]
    for x, y in corners:
        tags += ["0", "VERTEX", "8", "0", "10", f"{x:.1f}", "20", f"{y:.1f}"]
    content = "\n".join([*tags, "0", "SEQEND", "0", "ENDSEC", "0", "EOF", ""]).encode()
    assert area_mm2(content) == pytest.approx(50.0)
    with pytest.raises(GeometryRefused, match="neither the plan nor"):
        panel(content, unit=None)


def test_a_drawing_cut_short_after_its_outline_is_opened_by_recovery_and_says_so() -> None:
    content = drawn(lambda space, _: space.add_circle((0, 0), 10))
    cut = content[: content.rindex(b"\nOBJECTS\n") + 400]
    (remark, *_) = panel(cut).remarks
    assert (remark.code, remark.severity) == ("drawing-recovered", Severity.LOOK)
    assert remark.what == "the drawing is damaged and was opened by recovery: it is cut short"
    assert panel(cut).measure == pytest.approx(math.pi * 1e-4, rel=1e-12)


def test_a_drawing_cut_short_in_its_outline_is_refused() -> None:
    content = drawn(lambda space, _: [space.add_circle((at, 0), 0.1) for at in range(40)])
    with pytest.raises(GeometryRefused, match=r"nothing in the drawing can be read \(it is cut short\)"):
        panel(content[: content.rindex(b"\nCIRCLE\n") + 40])


@pytest.mark.parametrize("content", [b"", b"not a drawing", b"\x00\x01\x02" * 50, b"0\nSECTION\n2\nHEA"])
def test_what_is_no_drawing_is_refused(content: bytes) -> None:
    with pytest.raises(GeometryRefused) as refused:
        panel(content)
    assert refused.value.code == "drawing-broken"


def test_a_binary_drawing_is_read() -> None:
    document = ezdxf.new("R2010")
    document.header["$INSUNITS"] = 4
    document.modelspace().add_circle((0, 0), 10)
    stream = io.BytesIO()
    document.write(stream, fmt="bin")
    figures = panel(stream.getvalue())
    assert figures.measure == pytest.approx(math.pi * 1e-4, rel=1e-12)
    assert figures.remarks == ()


def test_a_run_is_the_length_of_its_curves() -> None:
    def draw(space: Any, _: Any) -> None:
        space.add_line((0, 0), (30, 40))
        space.add_arc((0, 0), 10, 0, 180)

    figures = panel(drawn(draw), kind="run")
    assert figures.measure * 1e3 == pytest.approx(50 + 10 * math.pi, rel=1e-6)


def test_the_name_of_a_geometry_does_not_hang_on_how_it_was_drawn() -> None:
    corners = [(0, 0), (10, 0), (10, 5), (0, 5)]
    one = drawn(lambda space, _: space.add_lwpolyline(corners, close=True))

    def loose(space: Any, _: Any) -> None:
        space.add_text("other")
        for at in (2, 0, 3, 1):
            space.add_line(corners[(at + 1) % 4], corners[at])

    assert panel(one).digest == panel(drawn(loose)).digest
    bigger = drawn(lambda space, _: space.add_lwpolyline([*corners[:3], (0, 5.1)], close=True))
    assert panel(bigger).digest != panel(one).digest
