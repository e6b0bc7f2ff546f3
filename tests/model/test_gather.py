"""What a run of entries says about the build."""

from __future__ import annotations

from datetime import UTC, datetime, timedelta

import pytest

from ledger.model.acts import (
    Act,
    Adopt,
    Cut,
    Fit,
    Hold,
    Instrument,
    Lay,
    Mix,
    Note,
    Receive,
    Release,
    Scrap,
    Sheet,
    Weigh,
    Withdraw,
)
from ledger.model.entry import Logged
from ledger.model.gather import gather, split_piece_name, what_counts
from ledger.model.plan import Plan
from ledger.model.snapshot import PieceState, Snapshot
from ledger.model.things import KeptOffcut, Measure, Minted, Share, ThingKind
from ledger.units import Display

NOON = datetime(2026, 3, 4, 12, 0, tzinfo=UTC)
KILO = Measure(value=5.0, unit="kg")


def _plan(name: str) -> Plan:
    return Plan(
        name=name, title=name, display=Display.METRIC, materials=(), laminates=(), parts=(), shapes=()
    )


def _logged(*acts: tuple[str, Act]) -> list[Logged]:
    return [
        Logged(seq=seq, at=NOON + timedelta(minutes=seq), logged_at=NOON, by="JK", kind=kind, act=act)
        for seq, (kind, act) in enumerate(acts, start=1)
    ]


def _plan_of(entry: Logged) -> Plan:
    assert isinstance(entry.act, Adopt)
    return _plan(entry.act.plan)


def _gather(*acts: tuple[str, Act]) -> Snapshot:
    return gather(_logged(*acts), _plan_of, now=NOON)


def _tag(number: str, name: str) -> Minted:
    return Minted(kind=ThingKind.PIECE, number=number, name=name)


ADOPT = ("adopt", Adopt(plan="r1", title="t"))
CUT = (
    "cut",
    Cut(
        pieces=("RIB/1",),
        sheet="S",
        offcut=KeptOffcut(length_m=0.5, width_m=0.4),
        minted=(_tag("P0016", "RIB/1"), Minted(kind=ThingKind.OFFCUT, number="F001I", name="F001I")),
    ),
)


@pytest.mark.parametrize(
    ("name", "split"),
    [
        ("RIB.03-L/1", ("RIB.03-L", 1)),
        ("A/B/12", ("A/B", 12)),
        ("RIB.03-L", None),
        ("WING/LEFT", None),
        ("X/0", None),
        ("X/01", None),
    ],
)
def test_a_piece_name_is_a_part_and_a_running_number(name: str, split: tuple[str, int] | None) -> None:
    assert split_piece_name(name) == split


def test_things_in_stock_are_found_by_their_numbers() -> None:
    snapshot = _gather(
        ADOPT,
        ("receive", Receive(material="m", quantity=KILO, lot="L")),
        ("sheet", Sheet(laminate="m", length_m=1.0, width_m=1.0, sheet="S")),
        ("mix", Mix(resin_lot="L", resin_kg=(0.1,), hardener_lot="L", hardener_kg=(0.1,), batch="B")),
        ("instrument", Instrument(instrument="W", what="scale", resolution=KILO)),
        CUT,
    )
    assert [iteration.name for iteration in snapshot.iterations] == ["r1"]
    assert snapshot.lots["L"].seq == 2
    assert snapshot.sheets["S"].sheet.length_m == 1.0
    assert snapshot.batches["B"].at == NOON + timedelta(minutes=4)
    assert snapshot.scales["W"].instrument.what == "scale"
    piece = snapshot.pieces["RIB/1"]
    assert (piece.number, piece.part, piece.running, piece.begun_seq, piece.iteration) == (
        "P0016", "RIB", 1, 6, "r1",
    )  # fmt: skip
    offcut = snapshot.offcuts["F001I"]
    assert (offcut.source, offcut.sheet, offcut.length_m, offcut.width_m) == ("S", "S", 0.5, 0.4)
    assert snapshot.last_seq == 6


def test_an_offcut_of_an_offcut_knows_its_sheet() -> None:
    second = Cut(
        pieces=("WEB/1",),
        sheet="F001I",
        offcut=KeptOffcut(length_m=0.1, width_m=0.1),
        minted=(_tag("P0024", "WEB/1"), Minted(kind=ThingKind.OFFCUT, number="F002G", name="F002G")),
    )
    snapshot = _gather(ADOPT, CUT, ("cut", second))
    assert (snapshot.offcuts["F002G"].source, snapshot.offcuts["F002G"].sheet) == ("F001I", "S")


def test_a_piece_is_finished_when_weighed_so_or_while_fitted() -> None:
    fit = ("fit", Fit(piece="RIB/1", into="WING"))
    out = ("fit", Fit(piece="RIB/1", out_of="WING"))
    weigh = ("weigh", Weigh(what="RIB/1", reading_kg=(0.1,), state="finished"))
    before = ("weigh", Weigh(what="RIB/1", reading_kg=(0.1,), state="before trim"))
    states = [
        _gather(ADOPT, CUT, *more).pieces["RIB/1"].state
        for more in ((), (before,), (fit,), (fit, out), (weigh,), (weigh, fit, out))
    ]
    opened, finished = PieceState.OPEN, PieceState.FINISHED
    assert states == [opened, opened, finished, opened, finished, finished]
    assert _gather(ADOPT, CUT, fit).pieces["RIB/1"].fitted_into == "WING"
    assert _gather(ADOPT, CUT, fit, out).pieces["RIB/1"].fitted_into is None


def test_a_scrapped_piece_stays_scrapped() -> None:
    snapshot = _gather(
        ADOPT,
        CUT,
        ("scrap", Scrap(what="RIB/1", why="x")),
        ("weigh", Weigh(what="RIB/1", reading_kg=(0.1,), state="finished")),
    )
    assert snapshot.pieces["RIB/1"].state is PieceState.SCRAPPED
    assert snapshot.gone == {"RIB/1": 3}


def test_a_hold_ends_with_its_release() -> None:
    hold, release = ("hold", Hold(what="S", why="x")), ("release", Release(what="S", why="x"))
    assert _gather(ADOPT, hold).held == {"S": 2}
    assert _gather(ADOPT, hold, release).held == {}
    assert _gather(ADOPT, hold, release, hold).held == {"S": 4}


def test_what_is_withdrawn_does_not_count_and_the_withdrawal_stays() -> None:
    snapshot = _gather(
        ADOPT,
        ("receive", Receive(material="m", quantity=KILO, lot="L")),
        ("withdraw", Withdraw(seq=2, why="x")),
    )
    assert snapshot.lots == {}
    assert [entry.seq for entry in snapshot.logged] == [1, 3]


def test_withdrawing_the_last_plan_brings_back_the_earlier_one() -> None:
    later = ("adopt", Adopt(plan="r2", title="t"))
    assert _gather(ADOPT, later).plan.name == "r2"
    assert _gather(ADOPT, later, ("withdraw", Withdraw(seq=2, why="x"))).plan.name == "r1"
    assert _gather(ADOPT, later, ("withdraw", Withdraw(seq=1, why="x"))).plan.name == "r2"


def test_a_plan_that_does_not_count_is_never_read() -> None:
    asked = []

    def plan_of(entry: Logged) -> Plan:
        asked.append(entry.seq)
        return _plan_of(entry)

    later = ("adopt", Adopt(plan="r2", title="t"))
    gather(_logged(ADOPT, later, ("withdraw", Withdraw(seq=2, why="x"))), plan_of, now=NOON)
    assert asked == [1]


def test_a_correction_counts_in_the_place_of_what_it_corrects() -> None:
    logged = _logged(
        ADOPT,
        ("note", Note(text="first")),
        ("note", Note(text="second")),
        ("withdraw", Withdraw(seq=2, why="corrected")),
        ("note", Note(text="put right", corrects=2)),
        ("withdraw", Withdraw(seq=5, why="corrected")),
        ("note", Note(text="put right again", corrects=5)),
    )
    texts = [entry.act.text for entry in what_counts(logged) if isinstance(entry.act, Note)]
    assert texts == ["put right again", "second"]


def test_a_piece_outlives_the_entry_that_began_it_on_its_own_tag() -> None:
    lay = ("lay", Lay(piece="RIB/1", step=1, lots=(Share(what="L"),)))
    snapshot = _gather(ADOPT, CUT, lay, ("withdraw", Withdraw(seq=2, why="x")))
    piece = snapshot.pieces["RIB/1"]
    assert (piece.number, piece.begun_seq) == ("P0016", 3)
    assert snapshot.offcuts == {}


def test_a_piece_that_nothing_is_left_of_is_gone() -> None:
    assert _gather(ADOPT, CUT, ("withdraw", Withdraw(seq=2, why="x"))).pieces == {}


def test_an_assembly_weighed_is_no_piece() -> None:
    assert _gather(ADOPT, ("weigh", Weigh(what="WING/LEFT", reading_kg=(9.0,)))).pieces == {}
