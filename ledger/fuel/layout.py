"""How tanks, cells, openings and feeds hang together, whatever the attitude."""

from __future__ import annotations

from dataclasses import dataclass

from ledger.model.tanks import Join, Opening, Outside, Tank, Tanks


@dataclass(frozen=True, slots=True, kw_only=True)
class Group:
    """Tanks joined by crossfeed, with all their cells and openings: one network when filling."""

    tanks: tuple[Tank, ...]
    cells: tuple[str, ...]
    openings: tuple[Opening, ...]

    def named(self, kind: Outside) -> tuple[str, ...]:
        """Names of the openings that lead to that place outside."""
        return tuple(opening.name for opening in self.openings if opening.outside is kind)


def groups_of(tanks: Tanks) -> tuple[Group, ...]:
    """The tanks of a plan, those with an opening between them taken together."""
    home = {cell: tank.name for tank in tanks.tanks for cell in tank.cells}
    label = {tank.name: tank.name for tank in tanks.tanks}
    for opening in tanks.openings:
        joined = {label[home[cell]] for cell in opening.cells if cell in home}
        if len(joined) == 2:
            one, two = sorted(joined)
            label = {tank: one if name == two else name for tank, name in label.items()}
    groups = []
    for name in dict.fromkeys(label[tank.name] for tank in tanks.tanks):
        members = tuple(tank for tank in tanks.tanks if label[tank.name] == name)
        cells = tuple(cell for tank in members for cell in tank.cells)
        openings = tuple(opening for opening in tanks.openings if set(opening.cells) <= set(cells))
        groups.append(Group(tanks=members, cells=cells, openings=openings))
    return tuple(groups)


def pulls_of_feed(outlets: tuple[str, ...], join: Join) -> tuple[tuple[str, ...], ...]:
    """Sets of outlets that draw together: all of a tee's at once, a selector's one after another."""
    if join is Join.TEE:
        return (outlets,)
    return tuple((outlet,) for outlet in outlets)


def all_pulls(tanks: Tanks, groups: tuple[Group, ...]) -> tuple[tuple[str, ...], ...]:
    """Every set of outlets that draw together. Outlets of one network that no feed names are a tee."""
    pulls = [pull for feed in tanks.feeds for pull in pulls_of_feed(feed.outlets, feed.join)]
    fed = {outlet for feed in tanks.feeds for outlet in feed.outlets}
    for group in groups:
        left = tuple(name for name in group.named(Outside.OUTLET) if name not in fed)
        if left:
            pulls.append(left)
    return tuple(pulls)
