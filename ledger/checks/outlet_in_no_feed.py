"""An outlet of which the plan does not say how it joins the others."""

from __future__ import annotations

from ledger.checks.facts import Facts
from ledger.errors import Finding, Severity, Where
from ledger.fuel.layout import groups_of
from ledger.model.tanks import Outside

CODE = "outlet-in-no-feed"


def outlet_in_no_feed(facts: Facts) -> tuple[Finding, ...]:
    """Each outlet in no feed, where tanks apart from one another have outlets.

    Their figures then hold for each drawn from alone: on a tee, air in one stops the other.
    """
    tanks = facts.snapshot.plan.tanks
    outlets = [group.named(Outside.OUTLET) for group in groups_of(tanks)]
    if len([names for names in outlets if names]) < 2:
        return ()
    fed = {name for feed in tanks.feeds for name in feed.outlets}
    return tuple(
        Finding(
            code=CODE,
            severity=Severity.LOOK,
            where=Where(file="tanks.toml", thing=name),
            what="no feed names this outlet, so its tank is reckoned as drawn from alone",
            do="add a [[feed]] with the outlets of one engine and join = tee or select",
        )
        for names in outlets
        for name in names
        if name not in fed
    )
