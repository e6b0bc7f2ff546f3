"""Weights that take in further entries are those of the whole build weighed up again."""

from __future__ import annotations

from dataclasses import fields, is_dataclass, replace
from typing import Any

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from ledger.mass.report import WeightReport
from ledger.mass.running import RunningWeights
from ledger.mass.weigh_up import weigh_up
from ledger.model.acts import Bond, BuildUp, Coat, Cut, Fit, Hold, Lay, Scrap, Trim, Weigh
from ledger.model.things import Share

_WORDS = ["lay", "lay", "lay", "trim", "area", "build", "weigh", "two", "coat", "cell", "cut", "fit"]
_WORDS += ["bond", "out", "scrap", "whole", "mix", "hold", "into"]


def act(word: str, number: int, cup: str) -> Any:
    amount = 0.001 * (number + 1)
    piece = ("SKIN/1", "RIB.1/1", "RIB.2/1", "PIN/1", "JOINT/1")[number % 5]
    skin_or_rib = ("SKIN/1", "RIB.1/1")[number % 2]
    return {
        "lay": Lay(
            piece="SKIN/1",
            step=number % 7 + 1,
            lots=(Share(what="LT"),),
            batches=(Share(what=cup, mass_kg=None if number % 3 else 0.25),),
        ),
        "trim": Trim(piece=piece, mass_kg=amount, why="sand"),
        "area": Trim(piece=skin_or_rib, area_m2=amount, why="edge"),
        "build": BuildUp(piece="RIB.1/1", mass_kg=amount, batch=cup),
        "weigh": Weigh(what=piece, reading_kg=(0.3 + amount,), scale="W1"),
        "two": Weigh(what="SKIN/1", reading_kg=(3.6, 3.6 + amount), scale="W1"),
        "coat": Coat(piece="RIB.2/1", batch=cup, areal_mass_kg_m2=0.1),
        "cell": Coat(cell="L1", batch=cup, areal_mass_kg_m2=0.1),
        "cut": Cut(pieces=("RIB.1/1", "RIB.2/1"), sheet="S1"),
        "fit": Fit(piece=piece, into="WING/LEFT/ribs"),
        "out": Fit(piece=piece, out_of="WING/LEFT/ribs"),
        "into": Fit(piece="RIB.2/1", into="RIB.1/1"),
        "bond": Bond(pieces=(("JOINT/1", "RIB.1/1")[number % 2], "RIB.2/1"), batches=(Share(what=cup),)),
        "scrap": Scrap(what="RIB.1/1", why="dropped"),
        "whole": Weigh(what="WING/LEFT/ribs", reading_kg=(0.5 + amount,), scale="W1"),
        "hold": Hold(what=cup, why="cloudy"),
    }[word]


def assert_alike(one: Any, other: Any, where: str = "report") -> None:
    """Every figure of two reports agrees to rounding, and every name exactly."""
    if isinstance(one, WeightReport):
        # Which open question is named first does not matter.
        assert set(one.unknowns) == set(other.unknowns)
        one, other = replace(one, unknowns=()), replace(other, unknowns=())
    if is_dataclass(one):
        assert type(one) is type(other), where
        for field in fields(one):
            name = f"{where}.{field.name}"
            assert_alike(getattr(one, field.name), getattr(other, field.name), name)
    elif isinstance(one, tuple):
        assert len(one) == len(other), where
        for number, (left, right) in enumerate(zip(one, other, strict=True)):
            assert_alike(left, right, f"{where}[{number}]")
    elif isinstance(one, float):
        assert one == pytest.approx(other, rel=1e-9, abs=1e-12), where
    else:
        assert one == other, where


@settings(max_examples=60, deadline=None)
@given(words=st.lists(st.tuples(st.sampled_from(_WORDS), st.integers(0, 40)), max_size=25))
def test_taking_entries_in_one_by_one_is_weighing_up_the_whole(make: Any, words: Any) -> None:
    shop = make.shop(make.plan(*make.standard_parts()))
    shop.receive("LT", "twill")
    shop.receive("LR", "resin")
    shop.receive("LH", "hardener")
    shop.scale("W1", 0.001, 0.002)
    shop.sheet("S1", "bought", 2.0, 1.0, mass_kg=3.2)
    shop.mix("B0", 0.9, 0.225, residue_kg=0.05)
    cups = 1
    running = RunningWeights(shop.snapshot())
    for word, number in words:
        if word == "mix":
            shop.mix(f"B{cups}", 0.9, 0.225, residue_kg=(None, 0.1)[number % 2])
            cups += 1
        else:
            shop.log(act(word, number, f"B{number % cups}"))
        assert_alike(running.take(shop.snapshot()), weigh_up(shop.snapshot()))


def test_an_entry_with_an_earlier_time_and_one_taken_away_are_weighed_up_whole(shop: Any) -> None:
    running = RunningWeights(shop.snapshot())
    shop.log(Weigh(what="SKIN/1", reading_kg=(3.7,), scale="W1"), minute=100)
    running.take(shop.snapshot())
    shop.log(Trim(piece="SKIN/1", mass_kg=0.1, why="sand"), minute=50)
    assert_alike(running.take(shop.snapshot()), weigh_up(shop.snapshot()))
    shop.logged.pop(-2)
    report: WeightReport = running.take(shop.snapshot())
    assert_alike(report, weigh_up(shop.snapshot()))


def test_one_more_entry_leaves_what_it_does_not_touch_as_it_was(shop: Any) -> None:
    running = RunningWeights(shop.snapshot())
    before = running.report
    shop.log(Trim(piece="SKIN/1", mass_kg=0.1, why="sand"))
    after = running.take(shop.snapshot())
    assert after.parts[0] is not before.parts[0]
    assert all(one is other for one, other in zip(after.parts[1:], before.parts[1:], strict=True))
