"""Badges, company, and the half hour after which a badge is wanted again."""

from __future__ import annotations

from datetime import UTC, datetime, timedelta

import pytest

from ledger.tui.crew import Crew, read_badge

NOW = datetime(2026, 11, 3, 9, 0, tzinfo=UTC)


@pytest.mark.parametrize(
    ("code", "initials"),
    [("BADGE JK", "JK"), ("badge-mt", "MT"), ("+ab", "AB"), ("+JK2", "JK2"), ("  BADGE   JK ", "JK")],
)
def test_a_badge_is_read(code: str, initials: str) -> None:
    assert read_badge(code) == initials


@pytest.mark.parametrize("code", ["L014K", "+ 412.3 g", "+412", "BADGE", "+", "JK", "BADGE J K", "+JKLMNOP"])
def test_what_is_no_badge_is_not_read_as_one(code: str) -> None:
    assert read_badge(code) is None


def test_nobody_logs_before_a_badge() -> None:
    assert Crew().needs_badge(NOW)


@pytest.mark.parametrize(("minutes", "wanted"), [(29.99, False), (30, True), (600, True)])
def test_a_badge_is_wanted_after_thirty_idle_minutes(minutes: float, wanted: bool) -> None:
    crew = Crew().badged("JK", NOW)
    assert crew.needs_badge(NOW + timedelta(minutes=minutes)) is wanted


def test_a_key_inside_the_half_hour_begins_it_anew_and_one_after_it_does_not() -> None:
    crew = Crew().badged("JK", NOW).seen_active(NOW + timedelta(minutes=20))
    assert not crew.needs_badge(NOW + timedelta(minutes=45))
    late = crew.seen_active(NOW + timedelta(minutes=51))
    assert late.needs_badge(NOW + timedelta(minutes=51))


def test_who_logs_is_not_with_themselves() -> None:
    crew = Crew().badged("JK", NOW).joined_by(("JK", "AB", "AB", "MT"))
    assert crew.others == ("AB", "MT")
    assert crew.badged("AB", NOW).others == ("MT",)
