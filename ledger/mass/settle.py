"""Weighings settled against entries: what each piece weighs now, and how sure that is.

A weighing of several pieces at once says nothing of any one of them. Its difference from their sum
is spread over those not weighed themselves; their errors are then bound to one another, which is
kept as links to the difference instead of a list of every other piece's sources in each of them.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from itertools import pairwise
from math import sqrt

from ledger.mass.composition import Composition
from ledger.mass.report import Disagreement, WeighedAssembly
from ledger.mass.spread import Spread, add_sources, add_spread, shared_part, u_of
from ledger.mass.weighings import Weighing, Weighings

NOW = 1 << 60


@dataclass(slots=True, kw_only=True)
class Settled:
    """One piece or cell with its last weighing alone and its part of what weighed groups left unexplained.

    `links` are pairs of (share, number of the group's difference). `breaks` are the ranks in time of
    the weighings that hold it.
    """

    composition: Composition
    alone: Weighing | None = None
    weighed_as_host: Weighing | None = None
    in_group: bool = False
    correction_kg: float = 0.0
    links: list[tuple[float, int]] = field(default_factory=list)
    breaks: tuple[int, ...] = ()
    _sources: dict[int, Spread] = field(default_factory=dict)

    @property
    def weighed_itself(self) -> bool:
        """Alone, or with its contents."""
        return self.alone is not None or self.weighed_as_host is not None

    def kg_at(self, place: int) -> float:
        """What was there at that rank in time, by the last weighing alone and the entries between."""
        composition = self.composition
        if self.alone is None:
            return composition.built_at(place) + self.correction_kg
        between = composition.built_at(place) - composition.built_at(self.alone.place)
        return self.alone.net_kg + between + self.correction_kg

    @property
    def best_kg(self) -> float | None:
        """The mass to use today; None where nothing says what the piece weighs."""
        if self.weighed_itself:
            return self.kg_at(NOW)
        calculated = self.composition.calculated_kg
        if calculated is None:
            return self.kg_at(NOW) if self.links else self.composition.estimated_kg
        return calculated + self.correction_kg

    @property
    def actual_kg(self) -> float | None:
        """As last weighed itself."""
        latest = self._latest()
        if latest is None:
            return None
        return latest.net_kg if latest is self.alone else self.kg_at(latest.place)

    @property
    def unexplained_kg(self) -> float:
        """What the weighings say beyond the entries, computed on its own; 0 for a piece not weighed."""
        composition = self.composition
        if not self.weighed_itself:
            return self.correction_kg
        found = self.correction_kg - composition.pending_kg
        if self.alone is not None:
            found += self.alone.net_kg - composition.built_at(self.alone.place)
        return found

    def sources_at(self, place: int) -> Spread:
        """How unsure `kg_at` is, the links left out. Kept: not to be changed by who asks."""
        if place not in self._sources:
            self._sources[place] = self._read_sources(place)
        return self._sources[place]

    def sources_now(self) -> Spread:
        """How unsure `best_kg` is, the links left out. Kept: not to be changed by who asks."""
        spread = self.sources_at(NOW)
        if self.composition.pending and not self.weighed_itself:
            spread = dict(spread)
            add_sources(spread, self.composition.pending)
        return spread

    def follows(self, before: Settled) -> bool:
        """Take over what weighed groups said before; False where they would now say something else.

        What happened after a group was weighed leaves its difference and how it was spread as they were.
        """
        self.breaks = before.breaks
        if self.alone is not before.alone or self.composition.is_known != before.composition.is_known:
            return False
        for place in self.breaks:
            if self.composition.built_at(place) != before.composition.built_at(place):
                return False
            if self.sources_at(place) != before.sources_at(place):
                return False
        self.weighed_as_host = before.weighed_as_host
        self.in_group, self.correction_kg, self.links = before.in_group, before.correction_kg, before.links
        return True

    def _read_sources(self, place: int) -> Spread:
        spread: Spread = {}
        add_between = self.composition.add_between
        if self.alone is None:
            add_between(spread, -1, place, self.breaks, 1.0)
            return spread
        add_sources(spread, self.alone.sources)
        if place >= self.alone.place:
            add_between(spread, self.alone.place, place, self.breaks, 1.0)
        else:
            add_between(spread, place, self.alone.place, self.breaks, -1.0)
        return spread

    def _latest(self) -> Weighing | None:
        known = [one for one in (self.alone, self.weighed_as_host) if one is not None]
        return max(known, key=lambda one: one.place) if known else None


@dataclass(slots=True)
class Differences:
    """How unsure each weighed group's difference from its sum is, and how two of them hang together."""

    spreads: list[Spread] = field(default_factory=list)
    _shared: dict[tuple[int, int], float] = field(default_factory=dict)

    def u_with(self, spread: Spread, links: dict[int, float], own_variance: float = 0.0) -> float:
        """The uncertainty of a figure made of sources, shares of differences and what nothing else shares."""
        variance = own_variance + sum(value * value for value in spread.values())
        for number, share in links.items():
            variance += 2.0 * share * shared_part(spread, self.spreads[number])
            for other, another in links.items():
                variance += share * another * self._between(number, other)
        return sqrt(max(variance, 0.0))

    def _between(self, number: int, other: int) -> float:
        key = (min(number, other), max(number, other))
        if key not in self._shared:
            self._shared[key] = shared_part(self.spreads[number], self.spreads[other])
        return self._shared[key]


@dataclass(frozen=True, slots=True, kw_only=True)
class Settlement:
    """Every piece and cell settled."""

    things: dict[str, Settled]
    differences: Differences
    weighed: tuple[WeighedAssembly, ...]


def settle(compositions: dict[str, Composition], weighings: Weighings) -> Settlement:
    """Bring entries and weighings together. Smaller groups first, so that the outermost has the last word."""
    things = {name: Settled(composition=one) for name, one in compositions.items()}
    for name, alone in weighings.alone.items():
        if name in things:
            things[name].alone = alone[-1]
    for name, group in weighings.groups.items():
        if name in things:
            things[name].weighed_as_host = group
    differences = Differences()
    weighed = []
    groups = sorted(weighings.groups.values(), key=lambda one: (len(one.contents), one.place))
    _set_breaks(things, groups)
    for group in groups:
        contents = [things[name] for name in group.contents if name in things]
        if contents:
            weighed.append(_spread_difference(group, contents, differences))
    return Settlement(things=things, differences=differences, weighed=tuple(weighed))


def _set_breaks(things: dict[str, Settled], groups: list[Weighing]) -> None:
    places: dict[str, set[int]] = {}
    for group in groups:
        for name in group.contents:
            places.setdefault(name, set()).add(group.place)
    for name, found in places.items():
        if name in things:
            alone = things[name].alone
            things[name].breaks = tuple(sorted(found if alone is None else found | {alone.place}))


def _spread_difference(group: Weighing, contents: list[Settled], differences: Differences) -> WeighedAssembly:
    total = sum(one.kg_at(group.place) for one in contents)
    difference = group.net_kg - total
    own = [one.sources_at(group.place) for one in contents]
    spread: Spread = {}
    add_sources(spread, group.sources)
    for one, sources in zip(contents, own, strict=True):
        add_spread(spread, sources, -1.0)
        for share, number in one.links:
            add_spread(spread, differences.spreads[number], -share)
    takers = _takers(group, contents)
    shares = _shares([u_of(own[number]) for number in takers])
    mark = len(differences.spreads)
    differences.spreads.append(spread)
    for number, share in zip(takers, shares, strict=True):
        contents[number].correction_kg += share * difference
        contents[number].links.append((share, mark))
    for one in contents:
        one.in_group = True
    u_net: Spread = {}
    add_sources(u_net, group.sources)
    return WeighedAssembly(
        what=group.what,
        seq=group.seq,
        net_kg=group.net_kg,
        sum_kg=total,
        unexplained_kg=difference,
        u_kg=u_of(u_net),
        contents=group.contents,
        spread_over=tuple(contents[number].composition.name for number in takers),
        presumed=group.presumed,
    )


def _takers(group: Weighing, contents: list[Settled]) -> list[int]:
    """Who takes the difference: those never weighed; else what holds the rest; else those weighed before.

    A thing weighed alone after the group is known better than the group knows it.
    """
    never = [number for number, one in enumerate(contents) if one.alone is None and not one.in_group]
    if never:
        # Of which nothing says what it weighs is less sure than any that something does.
        return [number for number in never if not contents[number].composition.is_known] or never
    earlier = [
        number for number, one in enumerate(contents) if one.alone is None or one.alone.place < group.place
    ]
    host = [number for number in earlier if contents[number].composition.name == group.what]
    return host or earlier


def _shares(us: list[float]) -> list[float]:
    total = sum(us)
    if us and total <= 0.0:
        return [1.0 / len(us)] * len(us)
    return [u / total for u in us]


def disagreements(thing: Settled, alone: list[Weighing]) -> tuple[Disagreement, ...]:
    """Weighings of a piece alone that differ from the one before and the entries between by more than chance.

    Two readings can differ by a step of the display with nothing changed.
    """
    found = []
    composition = thing.composition
    for earlier, later in pairwise(alone):
        between = composition.built_at(later.place) - composition.built_at(earlier.place)
        difference = later.net_kg - earlier.net_kg - between
        spread: Spread = {}
        add_sources(spread, later.sources)
        add_sources(spread, earlier.sources, -1.0)
        composition.add_between(spread, earlier.place, later.place, (), -1.0)
        allowed = 2.0 * u_of(spread) + max(earlier.step_kg, later.step_kg)
        if abs(difference) > allowed:
            found.append(
                Disagreement(
                    piece=composition.name,
                    seq=later.seq,
                    earlier_seq=earlier.seq,
                    difference_kg=difference,
                    allowed_kg=allowed,
                )
            )
    return tuple(found)
