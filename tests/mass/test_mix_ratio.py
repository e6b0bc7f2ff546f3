"""What the readings of a mix prove, and what to pour."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from ledger.mass.mix_ratio import (
    Component,
    Interval,
    Measured,
    Verdict,
    Wanted,
    bring_back,
    measured,
    ratio_interval,
    scale_bound,
    second_pour,
    smallest_provable_kg,
    verdict,
)
from ledger.model.acts import Instrument, Mix
from ledger.model.things import Measure

FOUR_TO_ONE = Wanted(ratio=0.25, tolerance=0.03)


def scale(resolution_g: float, accuracy_g: float | None = None) -> Instrument:
    accuracy = None if accuracy_g is None else Measure(value=accuracy_g / 1000, unit="kg")
    return Instrument(
        instrument="W",
        what="scale",
        resolution=Measure(value=resolution_g / 1000, unit="kg"),
        accuracy=accuracy,
    )


def exact(resin: float, hardener: float) -> Measured:
    return Measured(resin_kg=resin, hardener_kg=hardener, resin_bound_kg=0.0, hardener_bound_kg=0.0)


def read(interval: Interval | None) -> Interval:
    assert interval is not None
    return interval


@pytest.mark.parametrize(
    ("resin", "hardener", "ratio", "expected"),
    [(101, 24.5, 4.122, Verdict.OUT), (99, 25.5, 3.882, Verdict.IN)],
)
def test_a_four_to_one_mix_is_judged_as_the_trade_does(
    resin: float, hardener: float, ratio: float, expected: Verdict
) -> None:
    # checks: builders' arithmetic (read, recomputed): 101:24.5 is 4.122, 99:25.5 is 3.882, tolerance 3 %
    interval = read(ratio_interval(exact(resin, hardener)))
    assert 1 / interval.low == pytest.approx(ratio, abs=5e-4)
    assert verdict(interval, FOUR_TO_ONE) is expected


@pytest.mark.parametrize(
    ("accuracy", "low", "high"),
    # checks: builders' arithmetic (read, recomputed): 125 g on a 1 g display alone 3.902 to 4.102;
    # with 1 g accuracy 3.717 to 4.319
    [(None, 3.902, 4.102), (1.0, 3.717, 4.319)],
)
def test_a_cup_of_125_g_on_a_1_g_display_spans_what_builders_reckon(
    accuracy: float | None, low: float, high: float
) -> None:
    mix = Mix(resin_lot="R", hardener_lot="H", resin_kg=(0.1,), hardener_kg=(0.025,), method="scale")
    interval = read(ratio_interval(measured(mix, scale(1.0, accuracy))))
    assert 1 / interval.high == pytest.approx(low, abs=5e-4)
    assert 1 / interval.low == pytest.approx(high, abs=5e-4)


def test_a_cup_that_may_be_in_or_out_cannot_be_told() -> None:
    mix = Mix(resin_lot="R", hardener_lot="H", resin_kg=(0.1,), hardener_kg=(0.025,), method="scale")
    assert verdict(ratio_interval(measured(mix, scale(1.0, 1.0))), FOUR_TO_ONE) is Verdict.CANNOT_TELL
    assert verdict(ratio_interval(measured(mix, scale(0.1, 0.1))), FOUR_TO_ONE) is Verdict.IN


@pytest.mark.parametrize(("bound_g", "smallest_g"), [(1.5, 312.5), (0.15, 31.25)])
def test_the_smallest_batch_that_proves_four_to_one(bound_g: float, smallest_g: float) -> None:
    # checks: computed, e (1/hardener + 1/resin) <= 3 %
    assert smallest_provable_kg(FOUR_TO_ONE, bound_g / 1000) * 1000 == pytest.approx(smallest_g, rel=1e-12)


def test_without_a_tolerance_nothing_is_proved() -> None:
    assert verdict(ratio_interval(exact(100, 60)), None) is Verdict.CANNOT_TELL


def test_a_ratio_with_no_resin_to_speak_of_has_no_interval() -> None:
    assert ratio_interval(Measured(resin_kg=1, hardener_kg=1, resin_bound_kg=1, hardener_bound_kg=0)) is None


def test_several_tared_pours_add_up_and_each_brings_its_own_bound() -> None:
    mix = Mix(resin_lot="R", hardener_lot="H", resin_kg=(0.1, 0.02), hardener_kg=(0.03,), method="scale")
    cup = measured(mix, scale(1.0))
    assert (cup.resin_kg, cup.hardener_kg) == pytest.approx((0.12, 0.03))
    assert (cup.resin_bound_kg, cup.hardener_bound_kg) == pytest.approx((0.001, 0.0005))


def test_a_running_total_gives_the_hardener_as_what_the_display_rose_by() -> None:
    mix = Mix(
        resin_lot="R", hardener_lot="H", resin_kg=(0.05, 0.1), hardener_kg=(0.127,), method="running total"
    )
    cup = measured(mix, scale(1.0))
    assert cup.resin_kg == 0.1
    assert cup.hardener_kg == pytest.approx(0.027)
    assert cup.hardener_bound_kg == pytest.approx(2 * cup.resin_bound_kg)


def test_a_mix_on_no_named_scale_is_only_as_good_as_a_kitchen_scale() -> None:
    assert scale_bound(None) == 0.001


@given(
    resin=st.floats(0.02, 5.0),
    ratio=st.floats(0.05, 1.0),
    tolerance=st.floats(0.01, 0.1),
    bound=st.floats(1e-5, 2e-3),
    first=st.sampled_from(list(Component)),
)
def test_every_reading_in_a_provable_window_proves_the_mix_and_none_outside_it_does(
    resin: float, ratio: float, tolerance: float, bound: float, first: Component
) -> None:
    wanted = Wanted(ratio=ratio, tolerance=tolerance)
    pour = second_pour(first, resin, wanted, bound)
    assert pour.low_kg <= pour.high_kg
    if not pour.provable:
        return

    def judged(second: float) -> Verdict:
        pair = (resin, second) if first is Component.RESIN else (second, resin)
        cup = Measured(resin_kg=pair[0], hardener_kg=pair[1], resin_bound_kg=bound, hardener_bound_kg=bound)
        return verdict(ratio_interval(cup), wanted)

    inside = 1e-9 * pour.high_kg
    if pour.high_kg - pour.low_kg > 4 * inside:
        assert judged(pour.low_kg + inside) is Verdict.IN
        assert judged(pour.high_kg - inside) is Verdict.IN
    assert judged(pour.low_kg - inside) is not Verdict.IN
    assert judged(pour.high_kg + inside) is not Verdict.IN


@given(resin=st.floats(0.01, 5.0), hardener=st.floats(0.01, 5.0), ratio=st.floats(0.05, 1.0))
def test_bringing_back_ends_at_the_ratio_wanted(resin: float, hardener: float, ratio: float) -> None:
    more = bring_back(resin, hardener, Wanted(ratio=ratio, tolerance=0.03))
    assert more.mass_kg >= 0
    if more.component is Component.RESIN:
        resin += more.mass_kg
    else:
        hardener += more.mass_kg
    assert hardener / resin == pytest.approx(ratio, rel=1e-9)


def test_too_much_hardener_is_brought_back_by_resin() -> None:
    more = bring_back(0.1, 0.03, FOUR_TO_ONE)
    assert more.component is Component.RESIN
    assert more.mass_kg == pytest.approx(0.02)
