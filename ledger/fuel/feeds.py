"""What each feed can draw from all the tanks it is joined to."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from ledger.fuel.capacity import Filled
from ledger.fuel.layout import pulls_of_feed
from ledger.fuel.report import FeedFuel
from ledger.fuel.stood import Stood, System
from ledger.fuel.worst import worst_of
from ledger.model.tanks import Feed, Join, Outside, Tank


def feed_rows(
    system: System, filled: Mapping[str, Filled | None], flights: Sequence[Stood]
) -> tuple[FeedFuel, ...]:
    """Usable of every declared feed, drawing alone."""
    return tuple(_feed_row(system, feed, filled, flights) for feed in system.tanks.feeds)


def _feed_row(
    system: System, feed: Feed, filled: Mapping[str, Filled | None], flights: Sequence[Stood]
) -> FeedFuel:
    wanted = set(feed.outlets)
    tanks = [
        tank
        for group in system.groups
        if wanted.intersection(group.named(Outside.OUTLET))
        for tank in group.tanks
    ]
    pulls = pulls_of_feed(feed.outlets, feed.join)
    kept = {stood.attitude.name: stood.kept_from(pulls) for stood in flights}
    worst = worst_of(tanks, flights, kept)
    # A tee empties its tanks in one attitude; a selector may meet each tank in its own worst one.
    parts: list[list[Tank]] = [tanks] if feed.join is Join.TEE else [[tank] for tank in tanks]
    usable: float | None = 0.0 if tanks else None
    for part in parts:
        trapped = worst_of(part, flights, kept).trapped_m3
        capacities = [one.capacity_m3 for tank in part if (one := filled[tank.name]) is not None]
        if usable is None or trapped is None or len(capacities) < len(part):
            usable = None
        else:
            usable += max(0.0, sum(capacities) - trapped)
    return FeedFuel(
        feed=feed.name,
        join=feed.join.value,
        usable_m3=usable,
        governing_attitude=worst.attitude if tanks else None,
    )
