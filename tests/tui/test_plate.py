"""The data plate on rows 1 and 2 of every screen."""

from __future__ import annotations

from datetime import UTC, datetime

import pytest

from ledger.operations.take_stock import Plate
from ledger.tui.crew import Crew
from ledger.tui.plate import plate_rows
from ledger.tui.themes import Signs
from ledger.units import Display


def plate_of(display: Display, best_kg: float, spread_kg: float) -> Plate:
    return Plate(
        iteration="r2",
        title="a long title of an aeroplane that goes on",
        display=display,
        best_kg=best_kg,
        best_u_kg=spread_kg,
        cg_fs_m=12.913,
        usable_m3=0.4475,
        share_actual=1.0,
        stops=12,
        looks=34,
        last_seq=1,
        last_at=None,
    )


@pytest.mark.parametrize("display", list(Display))
def test_the_counts_on_the_plate_are_never_what_is_cut(display: Display) -> None:
    plate = plate_of(display, 547.9, 10.4)
    _, second = plate_rows("fuel", plate, Crew(by="JK"), datetime.now(UTC), width=80, signs=Signs())
    assert len(second.plain) == 80
    assert second.plain.endswith("STOP 12  LOOK 34")


@pytest.mark.parametrize(
    ("best_kg", "spread_kg", "shown"),
    [(0.71, 0.009, "now 0.71 +-0.01 kg"), (33.21, 0.22, "now 33.2 +-0.3 kg"), (33.21, 0.04, "33.21 +-0.04")],
)
def test_the_spread_on_the_plate_is_not_coarser_than_it_needs_to_be(
    best_kg: float, spread_kg: float, shown: str
) -> None:
    plate = plate_of(Display.METRIC, best_kg, spread_kg)
    _, second = plate_rows("bench", plate, Crew(by="JK"), datetime.now(UTC), width=80, signs=Signs())
    assert shown in second.plain
