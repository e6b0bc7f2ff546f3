"""Bodies read back to the acts they were made from."""

from __future__ import annotations

import dataclasses
import json
import types
import typing
from datetime import date
from enum import Enum
from typing import Any, get_args, get_origin, get_type_hints

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from ledger.model.acts import Act, Adopt, Lay, PlanFile, Receive
from ledger.model.body import UnreadableBody, act_from_body, body_of, plain_of, record_from
from ledger.model.declare import KINDS
from ledger.model.tanks import Circle, Opening, Outside, Pipe, Polygon
from ledger.model.things import Measure, Minted, Share, ThingKind

TEXT = st.text(st.characters(exclude_categories=["Cs"]), max_size=20)
FLOAT = st.floats(allow_nan=False, allow_infinity=False)


def _values(hint: Any) -> st.SearchStrategy[Any]:
    simple: dict[Any, st.SearchStrategy[Any]] = {
        str: TEXT,
        float: FLOAT,
        int: st.integers(-(2**53) + 1, 2**53 - 1),
        bool: st.booleans(),
        date: st.dates(),
        type(None): st.none(),
    }
    if hint in simple:
        return simple[hint]
    if get_origin(hint) in (typing.Union, types.UnionType):
        return st.one_of(*(_values(choice) for choice in get_args(hint)))
    if get_origin(hint) is tuple:
        items = get_args(hint)
        if items[-1] is Ellipsis:
            return st.lists(_values(items[0]), max_size=3).map(tuple)
        return st.tuples(*(_values(item) for item in items))
    if isinstance(hint, type) and issubclass(hint, Enum):
        return st.sampled_from(list(hint))
    return _records(hint)


def _records(record: Any) -> st.SearchStrategy[Any]:
    hints = get_type_hints(record)
    fields = {field.name: _values(hints[field.name]) for field in dataclasses.fields(record)}
    if "typed" in fields:
        fields["typed"] = st.dictionaries(TEXT, TEXT, max_size=3).map(
            lambda typed: tuple(sorted(typed.items()))
        )
    return st.builds(record, **fields)


@pytest.mark.parametrize("kind", list(KINDS))
@settings(max_examples=25, deadline=None)
@given(data=st.data())
def test_an_act_of_any_kind_comes_back_from_its_json_text(kind: str, data: st.DataObject) -> None:
    act: Act = data.draw(_records(KINDS[kind].record))
    assert act_from_body(kind, json.loads(json.dumps(body_of(act)))) == act


def test_what_is_empty_is_left_out_and_units_stand_in_the_keys() -> None:
    act = Lay(
        piece="SKIN-L/1",
        step=2,
        lots=(Share(what="L001X", mass_kg=0.25), Share(what="L002V")),
        orientation_deg=45.0,
        with_others=("AB",),
        minted=(Minted(kind=ThingKind.PIECE, number="P0016", name="SKIN-L/1"),),
        typed=(("orientation", "45 deg"),),
    )
    assert body_of(act) == {
        "piece": "SKIN-L/1",
        "step": 2,
        "lots": [{"what": "L001X", "mass_kg": 0.25}, {"what": "L002V"}],
        "orientation_deg": 45.0,
        "with": ["AB"],
        "minted": [{"kind": "piece", "number": "P0016", "name": "SKIN-L/1"}],
        "typed": {"orientation": "45 deg"},
    }


def test_a_whole_number_in_the_text_is_read_as_the_measure_it_is() -> None:
    act = act_from_body("receive", {"material": "epoxy", "quantity": {"value": 5, "unit": "kg"}})
    assert isinstance(act, Receive)
    assert act.quantity == Measure(value=5.0, unit="kg")
    assert type(act.quantity.value) is float


@pytest.mark.parametrize(
    ("kind", "body"),
    [
        ("dance", {}),
        ("note", {}),
        ("note", {"text": "x", "txt": "y"}),
        ("note", {"text": 5}),
        ("weigh", {"what": "x", "reading_kg": "0.1"}),
        ("weigh", {"what": "x", "reading_kg": [True]}),
        ("lay", {"piece": "x", "step": 1.5, "lots": []}),
        ("receive", {"material": "x", "quantity": {"value": 1.0, "unit": "kg"}, "expiry": "03/04/26"}),
        ("note", {"text": "x", "minted": [{"kind": "planet", "number": "1", "name": "1"}]}),
    ],
)
def test_a_body_that_is_not_of_its_kind_is_refused(kind: str, body: dict[str, Any]) -> None:
    with pytest.raises(UnreadableBody):
        act_from_body(kind, body)


@pytest.mark.parametrize(
    "rim",
    [
        Circle(centre_m=(0.0, 1.0, 2.0), diameter_m=0.02, normal=(0.0, 1.0, 0.0)),
        Polygon(points_m=((0.0, 0.0, 0.0), (1.0, 0.0, 0.0), (0.0, 1.0, 0.0))),
        Pipe(points_m=((0.0, 0.0, 0.0), (1.0, 0.0, 0.0)), bore_m=0.01),
    ],
)
def test_alternatives_are_told_apart_by_their_fields(rim: Circle | Polygon | Pipe) -> None:
    for outside in (None, Outside.OUTLET):
        opening = Opening(name="a", cells=("L1",), outside=outside, rim=rim)
        assert record_from(Opening, json.loads(json.dumps(plain_of(opening)))) == opening


def test_a_plan_file_list_comes_back() -> None:
    act = Adopt(plan="r1", title="t", files=(PlanFile(path="plan.toml", sha256="00"),))
    assert act_from_body("adopt", body_of(act)) == act
