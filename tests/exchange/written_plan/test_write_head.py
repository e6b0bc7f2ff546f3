"""plan.toml written as a person writes it, and any text and number in TOML read back as the same."""

from __future__ import annotations

from dataclasses import replace
from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st

from ledger.exchange.plan_toml import PlanHead, read_plan_head
from ledger.exchange.problems import Problems
from ledger.exchange.toml_lines import toml_text, toml_value
from ledger.exchange.write_plan import head_file
from ledger.model.attitude import Attitude, Seen
from ledger.model.plan import FuelGrade, PartClass
from ledger.units import Display

FULL = """format = "plan-1"
name = "r1"
title = "a \\"box\\" of a wing"
display = "us"

[fuel]
grade = "avgas"
density_15C = "6 lb/US gal"
feed_flow = "12.5 US gal/h"

[[attitude]]
name = "ground"
pitch_deg = 3.0
roll_deg = 0.0
fill = true
flight = false

[[attitude]]
name = "slip"
pitch_deg = 1.5
roll_deg = -2.0
ay_g = 0.1
seen = "true"

[[attitude]]
name = "bubble"
pitch_deg = 1.5
roll_deg = -2.0
seen = "apparent"

[tolerance]
rib = "8 %"

[growth]
rib = "2.5 %"
"""


def head_of(content: bytes) -> PlanHead:
    problems = Problems()
    head = read_plan_head(content, problems)
    assert problems.findings() == ()
    assert head is not None
    return head


def test_plan_toml_is_written_as_a_person_writes_it() -> None:
    assert head_file(head_of(FULL.encode())).decode() == FULL.replace(
        'ay_g = 0.1\nseen = "true"', "ay_g = 0.1"
    )


ANGLE = st.floats(-60.0, 60.0, allow_subnormal=False)
NAMES = st.text(st.characters(exclude_categories=["Cs"]), min_size=1, max_size=30).map(str.strip).filter(bool)
ATTITUDES = st.builds(
    Attitude,
    name=NAMES.filter(lambda name: name.casefold() != "asked"),
    pitch_deg=ANGLE,
    roll_deg=ANGLE,
    ax_g=st.floats(-0.2, 0.2, allow_subnormal=False),
    fill=st.just(False),
    flight=st.booleans(),
)
SHARE = st.integers(1, 500).map(lambda tenths: tenths / 1000.0)


@given(
    title=NAMES,
    display=st.sampled_from(Display),
    attitudes=st.lists(ATTITUDES, max_size=4, unique_by=lambda attitude: attitude.name.casefold()),
    density=st.one_of(st.none(), st.integers(6000, 9000).map(lambda tenths: tenths / 10.0)),
    tolerance=SHARE,
)
def test_a_head_of_any_names_and_figures_reads_back(
    *,
    wing: Any,
    title: str,
    display: Display,
    attitudes: list[Attitude],
    density: float | None,
    tolerance: float,
) -> None:
    head = replace(
        wing.HEAD,
        title=title,
        display=display,
        attitudes=tuple(attitudes),
        fuel=FuelGrade(grade="jet", density_15c_kg_m3=density),
        tolerances=((PartClass.WEB, tolerance),),
        says_where_filled=False,
    )
    again = head_of(head_file(head))
    assert again.fuel is not None
    assert again.fuel.density_15c_kg_m3 == (None if density is None else pytest.approx(density, rel=1e-11))
    assert again.tolerances[0][1] == pytest.approx(tolerance, rel=1e-15)
    assert replace(again, fuel=head.fuel, tolerances=head.tolerances) == head


@given(st.text(st.characters(exclude_categories=["Cs"])))
def test_any_text_reads_back_from_toml(text: str) -> None:
    import tomllib

    written = toml_text(text)
    assert tomllib.loads(f"a = {written}") == {"a": text}
    assert len(written.splitlines()) == 1


@given(st.floats(allow_nan=False, allow_infinity=False))
def test_any_number_reads_back_from_toml_as_the_same_float(number: float) -> None:
    import tomllib

    (again,) = tomllib.loads(f"a = {toml_value(number)}").values()
    assert isinstance(again, float)
    assert again == number


def test_an_apparent_attitude_stays_apparent(wing: Any) -> None:
    bubble = Attitude(name="bubble", pitch_deg=2.0, seen=Seen.APPARENT)
    assert (
        head_of(head_file(replace(wing.HEAD, attitudes=(*wing.HEAD.attitudes, bubble)))).attitudes[1]
        == bubble
    )
