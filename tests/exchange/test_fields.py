"""The fields of an entry as a person types them."""

from __future__ import annotations

from datetime import date, datetime, timedelta, timezone

import pytest
from hypothesis import given
from hypothesis import strategies as st

from ledger.errors import Where
from ledger.exchange.field_texts import split_names, split_quantities
from ledger.exchange.fields import ReadAct, read_act
from ledger.model import acts
from ledger.model.acts import Act
from ledger.model.declare import KINDS
from ledger.model.things import KeptOffcut, Measure, Share

NOW = datetime(2026, 9, 14, 10, 0, tzinfo=timezone(timedelta(hours=2)))
HERE = Where(file="log.csv", row=7)


def read(kind: str, **fields: object) -> ReadAct:
    """Read with the word `with` written `with_`."""
    given_fields = {word.rstrip("_"): value for word, value in fields.items()}
    return read_act(kind, given_fields, now=NOW, where=HERE)


def act_of(kind: str, **fields: object) -> Act:
    got = read(kind, **fields)
    assert got.findings == ()
    assert got.act is not None
    return got.act


def told(kind: str, **fields: object) -> list[str]:
    got = read(kind, **fields)
    assert got.act is None
    return [str(finding).removeprefix("log.csv:7:") for finding in got.findings]


def test_a_weighing_with_everything() -> None:
    got = read(
        "weigh",
        what=" RIB.03-L ",
        reading="+  412.3 g; 412,5 g",
        scale="W2",
        tare="0 g",
        state="Before  Trim",
        present="peel ply 85 40 g; bag 20 g",
        missing="RIB.01-L, RIB.02-L",
        by="JK",
        with_="AB; CD",
        at="09:15",
        remark="after lunch",
    )
    assert got.findings == ()
    assert (got.by, got.at) == ("JK", NOW.replace(hour=9, minute=15))
    assert got.act == acts.Weigh(
        what="RIB.03-L",
        reading_kg=(0.4123, 0.4125),
        scale="W2",
        tare_kg=0.0,
        state="before trim",
        present=(Share(what="peel ply 85", mass_kg=0.04), Share(what="bag", mass_kg=0.02)),
        missing=("RIB.01-L", "RIB.02-L"),
        with_others=("AB", "CD"),
        remark="after lunch",
        typed=(
            ("present", "peel ply 85 40 g; bag 20 g"),
            ("reading", "+  412.3 g; 412,5 g"),
            ("tare", "0 g"),
        ),
    )


@pytest.mark.parametrize(
    ("text", "kg"),
    [
        ("205 g; 64 g", (0.205, 0.064)),
        ("205 g + 64 g", (0.205, 0.064)),
        ("205g+64g", (0.205, 0.064)),
        ("205 g, 64,5 g", (0.205, 0.0645)),
        ("205,5 g", (0.2055,)),
        ("+ 205 g", (0.205,)),
        (["205 g", "64 g"], (0.205, 0.064)),
    ],
)
def test_several_pours_add_up_in_order(text: object, kg: tuple[float, ...]) -> None:
    act = act_of("mix", resin_lot="L1", resin=text, hardener_lot="L2", hardener="20 g")
    assert isinstance(act, acts.Mix)
    assert act.resin_kg == kg


def test_the_unit_of_a_head_counts_and_is_kept_beside_the_text() -> None:
    fields = {"resin_lot": "L1", "resin [g]": "205; 64,5", "hardener_lot": "L2", "hardener [oz]": "1 + 2 g"}
    act = read_act("mix", fields, now=NOW, where=HERE).act
    assert isinstance(act, acts.Mix)
    assert act.resin_kg == (0.205, 0.0645)
    assert act.hardener_kg == (0.028349523125, 0.002)
    assert dict(act.typed) == {"resin": "205 g; 64,5 g", "hardener": "1 oz; 2 g"}


@pytest.mark.parametrize(
    ("text", "shares"),
    [
        ("B001K 120 g; B002L 80 g", (("B001K", 0.12), ("B002L", 0.08))),
        ("B001K 120 g, B002L 80,5 g", (("B001K", 0.12), ("B002L", 0.0805))),
        ("B001K 120 g B002L 80 g", (("B001K", 0.12), ("B002L", 0.08))),
        ("B001K; B002L", (("B001K", None), ("B002L", None))),
        ("B001K B002L", (("B001K", None), ("B002L", None))),
        ("B001K, B002L split unknown", (("B001K", None), ("B002L", None))),
        ("B001K,B002L", (("B001K", None), ("B002L", None))),
        ("B001K 0.12 kg", (("B001K", 0.12),)),
        (["B001K 120 g", "B002L"], (("B001K", 0.12), ("B002L", None))),
    ],
)
def test_shares_with_grams_or_with_the_split_unknown(
    text: object, shares: tuple[tuple[str, float | None], ...]
) -> None:
    act = act_of("lay", piece="RIB.03-L", step="2", lots=text)
    assert isinstance(act, acts.Lay)
    assert tuple((share.what, share.mass_kg) for share in act.lots) == shares


@pytest.mark.parametrize(
    "text",
    [
        "RIB.01-L; RIB.02-L",
        "RIB.01-L, RIB.02-L",
        "RIB.01-L,RIB.02-L",
        "RIB.01-L  RIB.02-L",
        "RIB.01-L;RIB.02-L;",
    ],
)
def test_several_names_by_any_mark(text: str) -> None:
    assert split_names(text) == ("RIB.01-L", "RIB.02-L")


@pytest.mark.parametrize(
    ("text", "kept"),
    [
        ("600 mm x 400 mm", KeptOffcut(length_m=0.6, width_m=0.4)),
        ("600 x 400 mm", KeptOffcut(length_m=0.6, width_m=0.4)),
        ("0.6 m \N{MULTIPLICATION SIGN} 40 cm", KeptOffcut(length_m=0.6, width_m=0.4)),
        ("none, 2 strips thrown away", KeptOffcut(fate="none, 2 strips thrown away")),
        ("box of scraps", KeptOffcut(fate="box of scraps")),
    ],
)
def test_an_offcut_is_a_size_or_what_became_of_it(text: str, kept: KeptOffcut) -> None:
    act = act_of("cut", pieces="RIB.03-L", sheet="S001K", offcut=text)
    assert isinstance(act, acts.Cut)
    assert act.offcut == kept


def test_a_delivery_is_counted_in_what_suits_it() -> None:
    for text, measure in (
        ("25 m2", Measure(value=25.0, unit="m2")),
        ("5 kg", Measure(value=5.0, unit="kg")),
        ("10 m", Measure(value=10.0, unit="m")),
        ("2 L", Measure(value=0.002, unit="m3")),
    ):
        act = act_of("receive", material="lam resin", quantity=text, ratio="100:27", expiry="2027-05-01")
        assert isinstance(act, acts.Receive)
        assert (act.quantity, act.ratio, act.expiry) == (measure, 0.27, date(2027, 5, 1))


def test_a_step_of_a_thermometer_is_a_difference() -> None:
    act = act_of("instrument", instrument="T1", what="thermometer", resolution="0.1 C", accuracy="0.9 F")
    assert isinstance(act, acts.Instrument)
    assert act.resolution == Measure(value=0.1, unit="K")
    assert act.accuracy == Measure(value=0.5, unit="K")


def test_values_of_json_may_be_lists_and_truth_values_but_no_bare_numbers() -> None:
    act = act_of("bond", pieces=["A", "B"], batches=["B001K"], peel_ply_removed=True)
    assert isinstance(act, acts.Bond)
    assert (act.pieces, act.peel_ply_removed) == (("A", "B"), True)
    assert told("weigh", what="A", reading=412.3) == [
        'reading  412.3 has no unit; write it as text with its unit, for example "412.3 g"'
    ]
    assert told("weigh", what="A", reading=True) == ["reading  true is not what reading takes; write 412.3 g"]
    assert told("cut", pieces="A", sheet=["S1", "S2"]) == [
        "sheet  sheet takes one value, not a list; write text"
    ]
    lay = act_of("lay", piece="A", step=3, lots="L1")
    assert isinstance(lay, acts.Lay)
    assert lay.step == 3


@pytest.mark.parametrize(
    ("kind", "fields", "lines"),
    [
        ("weihg", {}, ["kind  'weihg' is not a kind of entry; write weigh"]),
        (
            "weigh",
            {"what": "A", "reading": "1 g", "scael": "W2"},
            ["scael  weigh has no field 'scael'; write scale"],
        ),
        ("weigh", {"what": "A"}, ["reading  weigh needs reading; give every reading"]),
        ("weigh", {"what": "A", "reading": "  "}, ["reading  weigh needs reading; give every reading"]),
        ("weigh", {"what": "A", "reading": ";"}, ["reading  reading is empty; give every reading"]),
        (
            "weigh",
            {"what": "A", "reading": "412.3"},
            ["reading  '412.3' has no unit; write 412.3 g or 412.3 lb"],
        ),
        (
            "weigh",
            {"what": "A", "reading": "1,250 g"},
            ["reading  '1,250 g' can be read as 1250 or as 1.250; write 1250 g or 1.250 g"],
        ),
        (
            "weigh",
            {"what": "A", "reading": "1 g", "state": "done"},
            ["state  'done' is none of the choices; write before trim or after trim or finished"],
        ),
        (
            "weigh",
            {"what": "A", "reading": "-3 g"},
            ["reading  '-3 g' is below zero; write the reading as a number above zero"],
        ),
        (
            "receive",
            {"material": "resin", "quantity": "5 kg", "expiry": "03/04/26"},
            ["expiry  '03/04/26' can be read as 2026-04-03 or as 2026-03-04; write 2026-04-03 or 2026-03-04"],
        ),
        (
            "receive",
            {"material": "resin", "quantity": "0 kg"},
            ["quantity  '0 kg' is zero; write the quantity as a number above zero"],
        ),
        (
            "lay",
            {"piece": "A", "step": "two", "lots": "L"},
            ["step  'two' is not a whole number; write for example 2"],
        ),
        (
            "bond",
            {"pieces": "A", "batches": "B", "peel_ply_removed": "maybe"},
            ["peel_ply_removed  'maybe' is neither yes nor no; write yes or no"],
        ),
        (
            "coat",
            {"piece": "A", "cell": "L1", "mass": "5 g"},
            [
                "cell  piece and cell cannot both be given; give one of them",
                "batch  coat needs batch or lot; give one of them",
            ],
        ),
        (
            "mix",
            {"resin_lot": "A", "resin": "5 g", "hardener_lot": "B", "hardener": "1 g", "humidity": "450 %"},
            ["humidity  '450 %' is more than the whole; write at most 100 %"],
        ),
        (
            "lay",
            {"piece": "A", "step": "1", "lots": "B001K 120"},
            ["lots  '120' has no unit; write 120 g or 120 lb"],
        ),
        (
            "note",
            {"text": "x", "at": "yesterday"},
            ["at  'yesterday' is not a date; write year-month-day, for example 2026-04-03"],
        ),
        ("note", {"text": "x", "text [g]": "y"}, ["text  text is given twice; give it once"]),
        ("note", {"text [g]": "y"}, ["text  text takes no unit; write text as the head"]),
        (
            "weigh",
            {"what": "A", "reading [mm]": "4"},
            ["reading  'mm' is not a unit of mass; write one of kg, g, mg, t, lb, oz"],
        ),
    ],
)
def test_what_cannot_be_read_is_told_at_its_field(
    kind: str, fields: dict[str, object], lines: list[str]
) -> None:
    got = read_act(kind, fields, now=NOW, where=HERE)
    assert got.act is None
    assert [str(finding).removeprefix("log.csv:7:") for finding in got.findings] == lines


def test_every_problem_of_an_entry_is_told_at_once() -> None:
    assert len(told("mix", resin="heavy", hardener="x", scael="W2", at="soon")) == 6


def test_codes_tell_wrong_use_from_refusal() -> None:
    codes = [
        read_act(kind, fields, now=NOW, where=HERE).findings[0].code
        for kind, fields in (("x", {}), ("note", {"words": "x"}), ("note", {}))
    ]
    assert codes == ["unknown-kind", "unknown-field", "field-missing"]


SAMPLES = {
    "name": "A",
    "text": "words",
    "share": "A 5 g",
    "whole number": "2",
    "date": "2026-04-03",
    "ratio": "100:27",
    "yes or no": "yes",
    "offcut": "5 mm x 5 mm",
}
UNITS = {
    "mass": "g",
    "length": "mm",
    "area": "m2",
    "volume": "L",
    "density": "kg/m3",
    "areal mass": "g/m2",
    "duration": "min",
    "temperature": "C",
    "share": "%",
    "angle": "deg",
}


def test_every_declared_kind_can_be_read_from_texts() -> None:
    for kind in KINDS.values():
        fields: dict[str, object] = {}
        for field in kind.fields:
            if any(field.word in group[1:] for group in kind.one_of):
                continue
            if field.dimensions:
                fields[field.word] = f"5 {UNITS[field.dimensions[0].value]}"
            else:
                fields[field.word] = field.choices[0] if field.choices else SAMPLES[field.takes.value]
        got = read_act(kind.word, fields, now=NOW, where=HERE)
        assert got.findings == (), kind.word
        assert isinstance(got.act, kind.record)


@given(st.text(max_size=30))
def test_no_text_makes_the_reader_fail(text: str) -> None:
    for kind in ("weigh", "lay", "cut", "mix", "receive"):
        fields = {field.word: text for field in KINDS[kind].fields}
        got = read_act(kind, {**fields, "at": text, "with": text}, now=NOW, where=HERE)
        assert got.act is not None or got.findings


@given(st.lists(st.integers(1, 9999).map(lambda grams: f"{grams / 10} g"), min_size=1, max_size=5))
def test_quantities_come_apart_as_they_were_put_together(items: list[str]) -> None:
    for mark in ("; ", " + ", ", ", ";", "+"):
        assert split_quantities(mark.join(items)) == tuple(items)
