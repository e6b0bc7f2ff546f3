"""What sealant takes off what a cell holds, and never off what it traps."""

from __future__ import annotations

import math
from typing import Any

import pytest

from ledger.model.attitude import Attitude


def test_sealant_is_off_what_is_held_and_never_off_what_is_trapped(build: Any, ground: Any) -> None:
    cells = {"A": build.box((0.0, 0.0, 0.0), (1.0, 0.5, 0.2))}
    attitudes = (ground, build.pitched(-5.0), Attitude(name="level"))
    plain = build.report(cells, build.one_box(), attitudes).tanks[0]
    coated = build.report(cells, build.one_box(), attitudes, sealant_thickness_m=0.0004).tanks[0]
    assert plain.gross_m3 - coated.gross_m3 == pytest.approx(0.0004 * (2 * 0.5 + 3.0 * 0.2), rel=1e-9)
    assert plain.capacity_m3 - coated.capacity_m3 == pytest.approx(0.0004 * (0.5 + 3.0 * 0.19), rel=1e-9)
    assert build.at(coated, "pitch -5").trapped_m3 == build.at(plain, "pitch -5").trapped_m3
    for row in build.at(coated).table[1:-1]:
        assert row.volume_m3 == pytest.approx(
            0.5 * row.level_m - 0.0004 * (0.5 + 3.0 * row.level_m), rel=1e-9
        )
    assert build.at(coated).table[-1].volume_m3 == pytest.approx(coated.gross_m3, rel=1e-12)


def test_a_fillet_takes_the_square_less_the_quarter_round_along_every_inner_corner(build: Any) -> None:
    cells = {"A": build.box((0.0, 0.0, 0.0), (1.0, 0.5, 0.2))}
    plain = build.report(cells, build.one_box()).tanks[0]
    filleted = build.report(cells, build.one_box(), sealant_fillet_m=0.006).tanks[0]
    # checks: concave fillet 0.2146 r^2
    section = (1.0 - math.pi / 4.0) * 0.006**2
    assert section == pytest.approx(0.2146 * 0.006**2, rel=2e-4)
    assert plain.gross_m3 - filleted.gross_m3 == pytest.approx(4.0 * (1.0 + 0.5 + 0.2) * section, rel=1e-9)


def test_an_edge_that_stands_into_the_cell_gets_no_fillet(build: Any) -> None:
    # An L of three quarters of a square: six edges along it, the fourth of which stands into the cell.
    cells = {"A": build.prism([(0.0, 0.5), (0.5, 0.5), (0.5, 0.0), (1.0, 0.0), (1.0, 1.0), (0.0, 1.0)])}
    plain, filleted = (
        build.report(cells, build.one_box(), sealant_fillet_m=radius).tanks[0] for radius in (None, 0.006)
    )
    section = (1.0 - math.pi / 4.0) * 0.006**2
    assert plain.gross_m3 - filleted.gross_m3 == pytest.approx((5.0 + 2.0 * 4.0) * section, rel=1e-9)
