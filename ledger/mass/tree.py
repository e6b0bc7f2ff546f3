"""The assembly tree: what each assembly weighs, where it balances and how sure that is."""

from __future__ import annotations

from dataclasses import dataclass, field

from ledger.mass.pieces import NO_CAUSES, PieceFigures, named_causes
from ledger.mass.plan_index import PlanIndex
from ledger.mass.report import AssemblyMass, CauseMass, TotalMass
from ledger.mass.roll_up import Gathered
from ledger.mass.settle import Differences
from ledger.mass.spread import Spread, add_spread
from ledger.model.plan import Shape

_LETTERS = "ACE"
_OWN = frozenset({"own", "drawing", "reading", "present"})


@dataclass(slots=True)
class _Node:
    gathered: Gathered = field(default_factory=Gathered)
    estimated_kg: float = 0.0
    built_kg: float = 0.0
    calculated_kg: float | None = None
    weighed_kg: float | None = None
    known: dict[str, float] = field(default_factory=dict)
    begun: int = 0
    planned: int = 0
    causes: tuple[float, ...] = NO_CAUSES
    spread: Spread = field(default_factory=dict)
    own_variance: float = 0.0
    links: dict[int, float] = field(default_factory=dict)
    parts: dict[str, None] = field(default_factory=dict)

    def add(self, shape: Shape | None, figures: PieceFigures) -> None:
        mass = figures.mass
        if mass.best_kg is not None:
            self.gathered.add(mass.best_kg, shape)
            letter = "A" if figures.weighed_kg is not None else mass.known_by
            self.known[letter] = self.known.get(letter, 0.0) + mass.best_kg
        self.estimated_kg += mass.estimated_kg or 0.0
        self.built_kg += mass.built_kg
        self.calculated_kg = _plus(self.calculated_kg, mass.calculated_kg if figures.begun else None)
        self.weighed_kg = _plus(self.weighed_kg, figures.weighed_kg)
        self.causes = _added(self.causes, figures.causes)
        self._spread_of(figures)
        self._link(figures.links)

    def _spread_of(self, figures: PieceFigures) -> None:
        """What no other piece shares needs no name, unless a weighed group binds it to the others."""
        if figures.in_group:
            add_spread(self.spread, figures.spread)
            return
        for key, value in figures.spread.items():
            if key[0] in _OWN:
                self.own_variance += value * value
            else:
                self.spread[key] = self.spread.get(key, 0.0) + value

    def join(self, other: _Node) -> None:
        self.gathered.join(other.gathered)
        self.estimated_kg += other.estimated_kg
        self.built_kg += other.built_kg
        self.calculated_kg = _plus(self.calculated_kg, other.calculated_kg)
        self.weighed_kg = _plus(self.weighed_kg, other.weighed_kg)
        for letter, mass in other.known.items():
            self.known[letter] = self.known.get(letter, 0.0) + mass
        self.begun += other.begun
        self.planned += other.planned
        self.causes = _added(self.causes, other.causes)
        add_spread(self.spread, other.spread)
        self.own_variance += other.own_variance
        self._link(other.links)

    def _link(self, links: dict[int, float]) -> None:
        for number, share in links.items():
            self.links[number] = self.links.get(number, 0.0) + share

    def share(self, letter: str) -> float:
        mass = self.gathered.mass_kg
        return self.known.get(letter, 0.0) / mass if mass > 0.0 else 0.0


@dataclass(frozen=True, slots=True, kw_only=True)
class Within:
    """What of one part counts in an assembly. Coats inside a cell are not `planned` pieces."""

    shape: Shape | None
    figures: tuple[PieceFigures, ...]
    planned: bool = True


class Tree:
    """Assemblies by path, the whole first. Only what has changed since is added up again."""

    def __init__(self, index: PlanIndex, differences: Differences) -> None:
        self._differences = differences
        self._within: dict[str, dict[str, Within]] = {path: {} for path in ("", *index.assemblies)}
        self._below: dict[str, list[str]] = {}
        for path in index.assemblies:
            self._below.setdefault(_above(path), []).append(path)
        self._direct: dict[str, _Node] = {}
        self._joined: dict[str, _Node] = {}

    def put(self, name: str, path: str, within: Within) -> None:
        """Let a part count in its assembly with these pieces, in the place of those it had."""
        self._within[path][name] = within
        self._direct.pop(path, None)
        while self._joined.pop(path, None) is not None and path:
            path = _above(path)

    def total(self) -> TotalMass:
        """The whole wing."""
        node = self._node("")
        return TotalMass(
            estimated_kg=node.estimated_kg,
            calculated_kg=node.calculated_kg,
            actual_kg=node.weighed_kg,
            best_kg=node.gathered.mass_kg,
            best_u_kg=self._differences.u_with(node.spread, node.links, node.own_variance),
            built_kg=node.built_kg,
            share_actual=node.share("A"),
            share_calculated=node.share("C"),
            share_estimated=node.share("E"),
            cg_m=node.gathered.cg_m,
            inertia_kg_m2=node.gathered.inertia_kg_m2(),
        )

    def off_plan(self) -> tuple[CauseMass, ...]:
        """What moved the whole wing off plan."""
        return named_causes(self._node("").causes)

    def assemblies(self) -> tuple[AssemblyMass, ...]:
        """Every node, each before what is inside it."""
        return tuple(
            AssemblyMass(
                path=path,
                depth=0 if path == "" else path.count("/") + 1,
                estimated_kg=node.estimated_kg,
                best_kg=node.gathered.mass_kg,
                best_u_kg=self._differences.u_with(node.spread, node.links, node.own_variance),
                pieces_begun=node.begun,
                pieces_planned=node.planned,
                known_by="".join(letter for letter in _LETTERS if letter in node.known),
                cg_m=node.gathered.cg_m,
                off_plan=named_causes(node.causes),
                parts=tuple(node.parts),
            )
            for path, node in self._in_order()
        )

    def _in_order(self) -> list[tuple[str, _Node]]:
        ordered = []
        waiting = [""]
        while waiting:
            path = waiting.pop()
            ordered.append((path, self._node(path)))
            waiting.extend(reversed(self._below.get(path, ())))
        return ordered

    def _node(self, path: str) -> _Node:
        found = self._joined.get(path)
        if found is None:
            found = self._joined[path] = _Node()
            found.join(self._direct_node(path))
            found.parts = self._direct_node(path).parts
            for below in self._below.get(path, ()):
                found.join(self._node(below))
        return found

    def _direct_node(self, path: str) -> _Node:
        found = self._direct.get(path)
        if found is None:
            found = self._direct[path] = _Node()
            for name, within in self._within[path].items():
                found.parts[name] = None
                for figures in within.figures:
                    found.add(within.shape, figures)
                    found.begun += within.planned and figures.begun
                    found.planned += within.planned
        return found


def _above(path: str) -> str:
    return path.rpartition("/")[0]


def _plus(one: float | None, another: float | None) -> float | None:
    if one is None or another is None:
        return another if one is None else one
    return one + another


def _added(one: tuple[float, ...], another: tuple[float, ...]) -> tuple[float, ...]:
    return tuple(a + b for a, b in zip(one, another, strict=True))
