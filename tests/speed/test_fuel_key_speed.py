"""How long a key of tilt, of fuel and of cut takes on the sample's Fuel screen, from key to drawn text.

The limit is 50 ms on a machine that does `plain_work` in 10 ms; elsewhere both sides move together.
"""

from __future__ import annotations

import statistics
import time
from collections.abc import Callable
from dataclasses import replace
from pathlib import Path

import pytest

from ledger.model.attitude import Attitude
from ledger.operations.lay_out_demo import lay_out_demo
from ledger.operations.look_at_tank import Asked, TankDrawn, look_at_tank, look_at_tanks
from ledger.operations.take_stock import take_stock
from ledger.tui.fuel_figures import figures_text
from ledger.tui.fuel_plan_view import arranged, plan_text
from ledger.tui.fuel_section import section_text
from ledger.tui.room import Room
from ledger.tui.themes import Signs
from ledger.units import Display

TIMES = 15
# 50 ms in units of `plain_work`, which is what a key mostly is: calls, small dicts and floats.
LIMIT = 5.0
_STEPS = 26_000


def plain_work() -> float:
    """Calls, a dict and floats, nothing of ours: about 10 ms on the machine the limit was set on."""
    kept: dict[int, float] = {}
    for step in range(_STEPS):
        kept[step % 97] = kept.get(step % 97, 0.0) + abs(step * 0.5 - 3.0) / (1.0 + float(step))
        if step % 3 == 0:
            sorted((step % 7, step % 5, step % 11))
    return sum(kept.values())


@pytest.fixture(scope="module")
def drawn(tmp_path_factory: pytest.TempPathFactory) -> TankDrawn:
    book = lay_out_demo(Path(tmp_path_factory.mktemp("speed")) / "demo")
    return look_at_tanks(take_stock(book)).tanks[0]


def medians(*works: Callable[[int], object]) -> list[float]:
    """Median seconds of each, turn by turn so that a disturbance falls on all."""
    taken: list[list[float]] = [[] for _ in works]
    for turn in range(TIMES):
        for work, row in zip(works, taken, strict=True):
            start = time.perf_counter()
            work(turn)
            row.append(time.perf_counter() - start)
    return [statistics.median(row) for row in taken]


def test_each_key_is_reckoned_and_drawn_within_the_limit(
    drawn: TankDrawn, capsys: pytest.CaptureFixture[str]
) -> None:
    arrangement = arranged(drawn.footprints)
    level = Asked(attitude=Attitude(name="level"), quantity_m3=0.008, axis=1, at_m=-0.775)

    def key(asked: Asked) -> None:
        now = look_at_tank(drawn, asked)
        plan_text(arrangement, drawn, now, chosen="L1", room=Room(width=51, height=7, signs=Signs()))
        section_text(now.cut, Room(width=51, height=4, signs=Signs()))
        figures_text(drawn, now, Display.METRIC, Room(width=28, height=14, signs=Signs()))

    def tilt(turn: int) -> None:
        # Never the same tilt twice, so that nothing is remembered.
        attitude = Attitude(name="tilt", pitch_deg=1.03 * turn - 5.0, roll_deg=0.37 * turn - 2.0)
        key(replace(level, attitude=attitude))

    def fuel(turn: int) -> None:
        key(replace(level, quantity_m3=0.008 + 0.001 * turn))

    def cut(turn: int) -> None:
        key(replace(level, at_m=-0.775 - 0.1 * turn))

    key(level)
    plain, *taken = medians(lambda _turn: plain_work(), tilt, fuel, cut)
    with capsys.disabled():
        print(f"\n{'plain work: ms':<58}{1e3 * plain:>10.1f}")
        for name, seconds in zip(("tilt", "fuel", "cut"), taken, strict=True):
            print(f"a key of {name}: ms, in plain work, limit".ljust(58), end="")
            print(f"{1e3 * seconds:>10.1f}{seconds / plain:>10.2f}{LIMIT:>10.1f}")
    assert max(taken) < LIMIT * plain
