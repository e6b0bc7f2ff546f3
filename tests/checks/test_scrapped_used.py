"""Something scrapped and used afterwards is noticed; use before it was scrapped is not."""

from __future__ import annotations

from datetime import UTC, datetime, timedelta
from typing import cast

import pytest

from ledger.checks.facts import Facts
from ledger.checks.scrapped_used import scrapped_used
from ledger.errors import Severity
from ledger.mass.report import WeightReport
from ledger.model.acts import Act, Fit, Lay, Note, Scrap, Weigh
from ledger.model.entry import Logged
from ledger.model.snapshot import Snapshot
from ledger.model.things import Share

BEGAN = datetime(2026, 10, 2, 8, 0, tzinfo=UTC)


def facts_of(*logged: tuple[str, Act, int]) -> Facts:
    """A build in which each act was done so many minutes after eight, logged in this order."""
    entries = tuple(
        Logged(
            seq=seq,
            at=BEGAN + timedelta(minutes=minute),
            logged_at=BEGAN + timedelta(hours=9),
            by="JK",
            kind=kind,
            act=act,
        )
        for seq, (kind, act, minute) in enumerate(logged, start=1)
    )
    snapshot = Snapshot(
        iterations=(),
        logged=entries,
        pieces={},
        lots={},
        sheets={},
        offcuts={},
        batches={},
        scales={},
        held={},
        gone={},
        last_seq=len(entries),
        last_digest="",
        now=BEGAN,
    )
    return Facts(snapshot=snapshot, weights=cast(WeightReport, None), fuel=None)


SCRAP = Scrap(what="B0014", why="past its pot life")
LAY = Lay(piece="SKIN-L/1", step=3, lots=(Share(what="L0016"),), batches=(Share(what="B0014"),))


def test_a_cup_laid_after_it_was_scrapped_stops() -> None:
    (found,) = scrapped_used(facts_of(("scrap", SCRAP, 10), ("lay", LAY, 20)))
    assert (found.code, found.severity, str(found.where)) == (
        "scrapped-used",
        Severity.STOP,
        "entry 2 B0014",
    )


def test_a_cup_laid_before_it_was_scrapped_is_in_order() -> None:
    assert scrapped_used(facts_of(("lay", LAY, 5), ("scrap", SCRAP, 10))) == ()


def test_a_slip_entered_late_counts_by_the_time_of_the_work() -> None:
    assert scrapped_used(facts_of(("scrap", SCRAP, 10), ("lay", LAY, 5))) == ()


def test_the_work_counts_even_when_its_entry_comes_before_the_scrap() -> None:
    assert len(scrapped_used(facts_of(("lay", LAY, 30), ("scrap", SCRAP, 10)))) == 1


def test_a_scrapped_piece_that_is_fitted_stops() -> None:
    scrap = Scrap(what="RIB.03-L/1", why="cut on the wrong side")
    fit = Fit(piece="RIB.03-L/1", into="WING/LEFT/ribs")
    (found,) = scrapped_used(facts_of(("scrap", scrap, 10), ("fit", fit, 20)))
    assert found.where.thing == "RIB.03-L/1"


@pytest.mark.parametrize(
    ("kind", "act"),
    [
        ("note", Note(text="shown to the inspector", about="B0014")),
        ("weigh", Weigh(what="B0014", reading_kg=(0.1,))),
    ],
)
def test_weighing_or_writing_about_a_scrapped_thing_is_no_use_of_it(kind: str, act: Act) -> None:
    assert scrapped_used(facts_of(("scrap", SCRAP, 10), (kind, act, 20))) == ()
