"""Figures as a build shows them: the build's units, and rounding that never flatters."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from ledger.units import Dimension, Display, Rounding, show, show_small_mass, shown_number, shown_unit


@pytest.mark.parametrize(
    ("value", "dimension", "metric", "us"),
    [
        (4.536, Dimension.MASS, "4.54 kg", "10.00 lb"),
        (0.0254, Dimension.LENGTH, "25.4 mm", "1.00 in"),
        (0.0378541, Dimension.VOLUME, "37.9 L", "10.00 US gal"),
        (0.2, Dimension.AREAL_MASS, "200 g/m2", "5.90 oz/yd2"),
        (0.05, Dimension.FRACTION, "5.0 %", "5.0 %"),
        (294.15, Dimension.TEMPERATURE, "21.0 C", "69.8 F"),
        (None, Dimension.MASS, "-", "-"),
    ],
)
def test_both_displays(value: float | None, dimension: Dimension, metric: str, us: str) -> None:
    assert show(value, dimension, Display.METRIC) == metric
    assert show(value, dimension, Display.US) == us


def test_usable_goes_down_and_trapped_up() -> None:
    assert shown_number(0.0581999, Dimension.VOLUME, Display.METRIC, rounding=Rounding.DOWN) == "58.1"
    assert shown_number(0.0218001, Dimension.VOLUME, Display.METRIC, rounding=Rounding.UP) == "21.9"


def test_a_round_figure_stays_that_whichever_way_it_may_err() -> None:
    # 0.0003 m3 is 0.29999999999999993 L in binary.
    for rounding in Rounding:
        assert shown_number(0.0003, Dimension.VOLUME, Display.METRIC, rounding=rounding) == "0.3"


def test_zero_has_no_sign() -> None:
    assert shown_number(-1e-9, Dimension.MASS, Display.METRIC) == "0.00"


def test_a_small_mass_is_shown_as_a_bench_scale_does() -> None:
    assert show_small_mass(0.4123, Display.METRIC) == "412.3 g"
    assert show_small_mass(0.45359237, Display.US) == "16.00 oz"
    assert show_small_mass(None, Display.METRIC) == "-"


@given(
    st.floats(min_value=0, max_value=1e3),
    st.sampled_from(Display),
    st.sampled_from([Dimension.VOLUME, Dimension.MASS]),
)
def test_down_is_never_above_and_up_never_below(value: float, display: Display, dimension: Dimension) -> None:
    from ledger.units import from_si

    number = from_si(value, shown_unit(dimension, display), dimension)
    down = float(shown_number(value, dimension, display, rounding=Rounding.DOWN))
    up = float(shown_number(value, dimension, display, rounding=Rounding.UP))
    slack = 1e-9 * max(1.0, number * 100)
    assert down <= number + slack
    assert up >= number - slack
