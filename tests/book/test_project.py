"""The look-up tables are what the entries say, after any sequence of them."""

from __future__ import annotations

import itertools
from collections.abc import Callable
from typing import Any

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from ledger.book.checking import look_through
from ledger.book.names import Known
from ledger.book.opening import open_for_reading, open_for_writing
from ledger.book.possible import impossible
from ledger.book.project import rebuild, replay, stored_tables
from ledger.book.reading import read_logged
from ledger.book.resolving import resolve
from ledger.errors import Where
from ledger.model.acts import Act, Cut, Fit, Hold, Lay, Mix, Receive, Release, Scrap, Sheet, Weigh, Withdraw
from ledger.model.gather import gather
from ledger.model.snapshot import PieceState
from ledger.model.things import KeptOffcut, Measure, Share

KILO = Measure(value=5.0, unit="kg")
PARTS = st.sampled_from(["RIB.01-L", "RIB.01-R", "CLIP", "CLIP/1", "SKIN-L", "BOLT"])
LOTS = st.sampled_from(["A", "B"])
ACTS: st.SearchStrategy[tuple[str, Act]] = st.one_of(
    st.builds(lambda lot: ("receive", Receive(material="epoxy", quantity=KILO, lot=lot)), LOTS),
    st.just(("receive", Receive(material="slow", quantity=KILO))),
    st.just(("sheet", Sheet(laminate="SANDWICH", length_m=1.0, width_m=1.0, sheet="S"))),
    st.builds(
        lambda lot: ("mix", Mix(resin_lot=lot, resin_kg=(0.1,), hardener_lot="A", hardener_kg=(0.1,))), LOTS
    ),
    st.builds(
        lambda part, kept: (
            "cut",
            Cut(pieces=(part,), sheet="S", offcut=KeptOffcut(length_m=0.1, width_m=0.1) if kept else None),
        ),
        PARTS,
        st.booleans(),
    ),
    st.builds(lambda step, lot: ("lay", Lay(piece="SKIN-L", step=step, lots=(Share(what=lot),))),
              st.integers(1, 3), LOTS),
    st.builds(
        lambda part, state: ("weigh", Weigh(what=part, reading_kg=(0.1,), state=state)),
        PARTS,
        st.sampled_from([None, "finished"]),
    ),
    st.builds(
        lambda part, into: ("fit", Fit(piece=part, into=into)), PARTS, st.sampled_from(["skins", "CLIP"])
    ),
    st.builds(lambda part: ("fit", Fit(piece=part, out_of="skins")), PARTS),
    st.builds(lambda what: ("scrap", Scrap(what=what, why="x")), st.one_of(PARTS, LOTS)),
    st.builds(lambda what: ("hold", Hold(what=what, why="x")), st.one_of(PARTS, LOTS)),
    st.builds(lambda what: ("release", Release(what=what, why="x")), st.one_of(PARTS, LOTS)),
    st.builds(lambda seq: ("withdraw", Withdraw(seq=seq, why="x")), st.integers(2, 15)),
)  # fmt: skip

_books = itertools.count()


def _enter_if_possible(shop: Any, kind: str, act: Act) -> None:
    with open_for_reading(shop.book) as connection:
        known = Known(connection, shop.plan)
        resolved = resolve(kind, act, known, where=Where())
        refused = resolved.findings or impossible(kind, resolved.act, known, where=Where())
    if not refused:
        shop.enter(kind, act)


@settings(max_examples=25, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture])
@given(acts=st.lists(ACTS, min_size=5, max_size=25))
def test_a_replay_gives_the_same_tables_and_the_snapshot_agrees_with_them(
    make_shop: Callable[[str], Any], acts: list[tuple[str, Act]]
) -> None:
    shop = make_shop(f"{next(_books)}.book")
    for kind, act in acts:
        _enter_if_possible(shop, kind, act)
    with open_for_reading(shop.book) as connection:
        state = look_through(connection)
        stored = stored_tables(connection)
    assert state.findings == ()
    snapshot = gather(state.logged, lambda _: shop.plan, now=state.logged[-1].at)
    pieces = {
        (piece.name, piece.number, piece.part, piece.running, piece.begun_seq, piece.fitted_into)
        for piece in snapshot.pieces.values()
    }
    assert {(*row[:5], row[6]) for row in stored["piece"]} == pieces
    scrapped = {name for name, piece in snapshot.pieces.items() if piece.state is PieceState.SCRAPPED}
    assert {row[0] for row in stored["piece"] if row[7]} == scrapped
    assert dict(stored["held"]) == snapshot.held
    assert dict(stored["gone"]) == snapshot.gone
    numbers = {row[2] for row in stored["thing"]}
    assert numbers == {
        *snapshot.lots,
        *snapshot.sheets,
        *snapshot.offcuts,
        *snapshot.batches,
        *(piece.number for piece in snapshot.pieces.values()),
    }


def test_a_rebuild_changes_nothing(shop: Any) -> None:
    shop.enter("receive", Receive(material="epoxy", quantity=KILO, lot="A"))
    shop.enter("weigh", Weigh(what="CLIP", reading_kg=(0.1,), state="finished"))
    with open_for_writing(shop.book) as connection:
        before = stored_tables(connection)
        rebuild(connection, read_logged(connection))
        assert stored_tables(connection) == before
        assert {
            name: set(rows.values()) for name, rows in replay(read_logged(connection)).rows.items()
        } == before


def test_a_release_ends_the_hold_in_the_tables_too(shop: Any) -> None:
    shop.enter("receive", Receive(material="epoxy", quantity=KILO, lot="A"))
    shop.enter("hold", Hold(what="A", why="x"))
    shop.enter("release", Release(what="A", why="x"))
    with open_for_reading(shop.book) as connection:
        assert stored_tables(connection)["held"] == set()
        assert look_through(connection).findings == ()


def test_a_piece_outlives_the_withdrawal_of_the_entry_that_began_it(shop: Any) -> None:
    shop.enter("sheet", Sheet(laminate="SANDWICH", length_m=1.0, width_m=1.0, sheet="S"))
    cut = shop.enter("cut", Cut(pieces=("RIB.01-L",), sheet="S"))
    weigh = shop.enter("weigh", Weigh(what="RIB.01-L", reading_kg=(0.1,)))
    with open_for_reading(shop.book) as connection:
        tag = Known(connection, shop.plan).piece("RIB.01-L/1")
    shop.enter("withdraw", Withdraw(seq=cut.seq, why="wrong sheet"))
    with open_for_reading(shop.book) as connection:
        assert Known(connection, shop.plan).piece("RIB.01-L/1") == tag
    shop.enter("withdraw", Withdraw(seq=weigh.seq, why="also wrong"))
    with open_for_reading(shop.book) as connection:
        assert Known(connection, shop.plan).piece("RIB.01-L/1") is None


@pytest.mark.parametrize("kind", ["receive", "cut", "fit", "scrap", "hold", "release"])
def test_withdrawing_an_entry_leaves_the_tables_as_if_it_had_never_counted(
    make_shop: Callable[[str], Any], kind: str
) -> None:
    acts: list[tuple[str, Act]] = [
        ("sheet", Sheet(laminate="SANDWICH", length_m=1.0, width_m=1.0, sheet="S")),
        ("receive", Receive(material="epoxy", quantity=KILO, lot="A")),
        ("cut", Cut(pieces=("CLIP",), sheet="S")),
        ("hold", Hold(what="S", why="x")),
        ("release", Release(what="S", why="x")),
        ("fit", Fit(piece="CLIP", into="skins")),
        ("scrap", Scrap(what="S", why="x")),
    ]
    shop, without = make_shop("with.book"), make_shop("without.book")
    seq = 0
    for this, act in acts:
        entry = shop.enter(this, act)
        seq = entry.seq if this == kind else seq
        if this != kind and not (kind == "hold" and this == "release"):
            without.enter(this, act)
    shop.enter("withdraw", Withdraw(seq=seq, why="x"))
    held = []
    for one in (shop, without):
        with open_for_reading(one.book) as connection:
            tables = stored_tables(connection)
        held.append(
            {
                "thing": {row[1:4] for row in tables["thing"]},
                "piece": {row[:1] + row[2:4] + row[5:] for row in tables["piece"]},
                "held": {row[0] for row in tables["held"]},
                "gone": {row[0] for row in tables["gone"]},
            }
        )
    if kind == "cut":
        # The clip was fitted all the same: it began with that, on the tag it has.
        assert {row[0] for row in held[0]["piece"]} == {"CLIP/1"}
    assert held[0] == held[1]
