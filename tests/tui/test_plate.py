"""The data plate on rows 1 and 2 of every screen."""

from __future__ import annotations

from datetime import UTC, datetime

import pytest

from ledger.operations.take_stock import Plate
from ledger.tui.crew import Crew
from ledger.tui.plate import plate_rows
from ledger.tui.themes import Signs
from ledger.units import Display


@pytest.mark.parametrize("display", list(Display))
def test_the_counts_on_the_plate_are_never_what_is_cut(display: Display) -> None:
    plate = Plate(
        iteration="r2",
        title="a long title of an aeroplane that goes on",
        display=display,
        best_kg=547.9,
        best_u_kg=10.4,
        cg_fs_m=12.913,
        usable_m3=0.4475,
        share_actual=1.0,
        stops=12,
        looks=34,
        last_seq=1,
        last_at=None,
    )
    _, second = plate_rows("fuel", plate, Crew(by="JK"), datetime.now(UTC), width=80, signs=Signs())
    assert len(second.plain) == 80
    assert second.plain.endswith("STOP 12  LOOK 34")
