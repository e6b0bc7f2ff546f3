"""Rules as a whole: all are listed, gravest first; what was accepted stays away until it changes."""

from __future__ import annotations

import dataclasses
import importlib
import pkgutil
from datetime import UTC, datetime
from typing import Any

import pytest

from ledger import checks
from ledger.checks.run import RULES, facts_to_accept, gravest_first, still_open
from ledger.errors import Finding, Severity, Where
from ledger.model.acts import Accept
from ledger.model.entry import Logged
from ledger.model.snapshot import Piece, PieceState, Snapshot

NOW = datetime(2026, 10, 2, 12, 0, tzinfo=UTC)
RIB = Piece(
    number="P0015",
    name="RIB.03-L/1",
    part="RIB.03-L",
    running=1,
    begun_seq=2,
    iteration="r1",
    state=PieceState.OPEN,
    fitted_into=None,
)


def snapshot_with(*acts: Accept) -> Snapshot:
    """A build that is nothing but one rib and some acceptances."""
    logged = tuple(
        Logged(seq=seq, at=NOW, logged_at=NOW, by="JK", kind="accept", act=act)
        for seq, act in enumerate(acts, start=1)
    )
    return Snapshot(
        iterations=(),
        logged=logged,
        pieces={RIB.name: RIB},
        lots={},
        sheets={},
        offcuts={},
        batches={},
        scales={},
        held={},
        gone={},
        last_seq=len(logged),
        last_digest="0" * 64,
        now=NOW,
    )


def finding(what: str = "ply 3 is missing", *, severity: Severity = Severity.STOP) -> Finding:
    """A finding about the rib."""
    return Finding(
        code="ply-missing", severity=severity, where=Where(thing="RIB.03-L/1"), what=what, do="lay it"
    )


def accept(what: str, facts: str | None = "ply 3 is missing", code: str = "ply-missing") -> Accept:
    """An acceptance of it."""
    return Accept(finding=code, what=what, why="seen by the inspector", facts=facts)


def test_every_module_of_a_rule_is_listed_and_named_as_its_code() -> None:
    modules = {module.name for module in pkgutil.iter_modules(checks.__path__)} - {"run", "facts"}
    rules = {module for module in modules if hasattr(_module(module), "CODE")}
    assert {rule.__module__.rpartition(".")[2] for rule in RULES} == rules
    for name in rules:
        assert name.replace("_", "-") == _module(name).CODE


def test_rules_are_listed_once_and_in_order_of_name() -> None:
    names = [rule.__module__ for rule in RULES]
    assert names == sorted(set(names))


@pytest.mark.parametrize("what", ["RIB.03-L/1", "P0015", "p0015", "rib.03-l/1"])
def test_an_accepted_finding_stays_away_by_any_name_of_the_thing(what: str) -> None:
    assert still_open(snapshot_with(accept(what)), (finding(),)) == ()


@pytest.mark.parametrize(
    "act",
    [
        accept("RIB.03-L/1", facts="ply 2 is missing"),
        accept("RIB.03-L/1", facts=None),
        accept("RIB.03-L/1", code="ply-twice"),
        accept("RIB.04-L/1"),
        accept(""),
    ],
)
def test_an_acceptance_of_other_facts_another_code_or_another_thing_covers_nothing(act: Accept) -> None:
    assert still_open(snapshot_with(act), (finding(),)) == (finding(),)


def test_an_acceptance_lapses_when_the_facts_change_and_covers_again_when_they_change_back() -> None:
    snapshot = snapshot_with(accept("RIB.03-L/1"))
    changed = finding("plies 3 and 4 are missing")
    assert still_open(snapshot, (changed,)) == (changed,)
    assert still_open(snapshot, (finding(),)) == ()


def test_the_facts_kept_cover_every_finding_of_that_code_about_the_thing() -> None:
    both = (finding("ply 3 is missing"), finding("ply 5 is missing"))
    other = dataclasses.replace(finding(), where=Where(thing="RIB.04-L/1"))
    facts = facts_to_accept(snapshot_with(), (*both, other), "ply-missing", "P0015")
    assert facts is not None
    assert still_open(snapshot_with(accept("P0015", facts=facts)), (*both, other)) == (other,)


def test_there_are_no_facts_to_accept_where_nothing_was_found() -> None:
    assert facts_to_accept(snapshot_with(), (finding(),), "sheet-over-cut", "P0015") is None


@pytest.mark.parametrize("what", ["entry 12", "12", "entry 12 S0015", "S0015"])
def test_a_finding_about_an_entry_is_accepted_by_its_number_or_its_thing(what: str) -> None:
    about = dataclasses.replace(finding(), where=Where(entry=12, thing="S0015"))
    assert still_open(snapshot_with(accept(what)), (about,)) == ()


def test_the_gravest_comes_first_and_equals_keep_their_order() -> None:
    note, look, stop = (finding(severity=severity) for severity in reversed(Severity))
    second = finding("ply 4 is missing")
    assert gravest_first((note, stop, look, second)) == (stop, second, look, note)


def _module(name: str) -> Any:
    return importlib.import_module(f"ledger.checks.{name}")
