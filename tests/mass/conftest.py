"""A shop with a small plan, to log entries in without a book."""

from __future__ import annotations

from dataclasses import replace
from datetime import UTC, datetime, timedelta
from typing import Any

import pytest

from ledger.checks.facts import Facts, Rule
from ledger.mass.report import PartMass, PieceMass, WeightReport
from ledger.mass.weigh_up import weigh_up
from ledger.model.acts import Act, Adopt, Bond, Cut, Instrument, Lay, Mix, Receive, Sheet, Weigh
from ledger.model.declare import KINDS
from ledger.model.entry import Logged
from ledger.model.gather import gather, pieces_begun_by
from ledger.model.plan import Form, Laminate, Material, MaterialKind, Part, PartClass, Plan, Shape, Side, Step
from ledger.model.snapshot import Snapshot
from ledger.model.things import Measure, Minted, Share, ThingKind
from ledger.model.vectors import NO_SPREAD, Vector
from ledger.units import Display

START = datetime(2026, 3, 2, 8, 0, tzinfo=UTC)
_WORD = {kind.record: word for word, kind in KINDS.items()}


class Shop:
    """Logs acts one minute apart and weighs up what came of them."""

    def __init__(self, plan: Plan) -> None:
        self.plans = {plan.name: plan}
        self.logged: list[Logged] = []
        self._known: set[str] = set()
        self.log(Adopt(plan=plan.name, title="first"))

    def log(self, act: Act, *, minute: float | None = None) -> int:
        """Log one act and return its seq; pieces it names for the first time are begun."""
        seq = len(self.logged) + 1
        word = _WORD[type(act)]
        new = []
        for name in pieces_begun_by(word, act):
            part = name.rpartition("/")[0]
            if part in self._parts() and name not in self._known:
                self._known.add(name)
                new.append(Minted(kind=ThingKind.PIECE, number=f"P{len(self._known):03d}", name=name))
        at = START + timedelta(minutes=seq if minute is None else minute)
        act = replace(act, minted=(*act.minted, *new))
        self.logged.append(Logged(seq=seq, at=at, logged_at=at, by="JK", kind=word, act=act))
        return seq

    def adopt(self, plan: Plan) -> int:
        """Take in a further iteration."""
        self.plans[plan.name] = plan
        return self.log(Adopt(plan=plan.name, title="next"))

    def receive(self, lot: str, material: str, **more: Any) -> int:
        """A lot arrives."""
        return self.log(Receive(lot=lot, material=material, quantity=Measure(value=5.0, unit="kg"), **more))

    def scale(self, name: str, resolution_kg: float, accuracy_kg: float | None = None, **more: Any) -> int:
        """A scale is set up."""
        accuracy = None if accuracy_kg is None else Measure(value=accuracy_kg, unit="kg")
        return self.log(
            Instrument(
                instrument=name,
                what="scale",
                resolution=Measure(value=resolution_kg, unit="kg"),
                accuracy=accuracy,
                **more,
            )
        )

    def sheet(self, number: str, laminate: str, length_m: float, width_m: float, **more: Any) -> int:
        """A bulk panel arrives."""
        return self.log(Sheet(sheet=number, laminate=laminate, length_m=length_m, width_m=width_m, **more))

    def mix(self, batch: str, resin_kg: float, hardener_kg: float, **more: Any) -> int:
        """A cup is mixed from lots LR and LH."""
        more = {"resin_lot": "LR", "hardener_lot": "LH"} | more
        return self.log(Mix(batch=batch, resin_kg=(resin_kg,), hardener_kg=(hardener_kg,), **more))

    def snapshot(self) -> Snapshot:
        """The build now."""
        return gather(self.logged, lambda entry: self.plans[_adopted(entry)], now=START + timedelta(days=300))

    def weights(self) -> WeightReport:
        """The build weighed up."""
        return weigh_up(self.snapshot())

    def part(self, name: str) -> PartMass:
        """One part weighed up."""
        return next(part for part in self.weights().parts if part.part == name)

    def piece(self, name: str) -> PieceMass:
        """One piece weighed up."""
        return next(piece for part in self.weights().parts for piece in part.pieces if piece.piece == name)

    def say(self, rule: Rule) -> list[tuple[str, str | None, int | None]]:
        """What a rule says: severity, thing and entry of each finding."""
        findings = rule(Facts(snapshot=self.snapshot(), weights=self.weights(), fuel=None))
        for finding in findings:
            assert finding.what
            assert finding.do
            assert rule.__module__.endswith("." + finding.code.replace("-", "_"))
        return [(one.severity.value, one.where.thing, one.where.entry) for one in findings]

    @staticmethod
    def lay(step: int, piece: str = "SKIN/1", **more: Any) -> Lay:
        """A ply of cloth from lot LT."""
        more = {"lots": (Share(what="LT"),)} | more
        return Lay(piece=piece, step=step, **more)

    @staticmethod
    def weigh(what: str, *readings_kg: float, **more: Any) -> Weigh:
        """A weighing on scale W1."""
        return Weigh(what=what, reading_kg=readings_kg, **({"scale": "W1"} | more))

    @staticmethod
    def cut(*pieces: str, **more: Any) -> Cut:
        """Pieces cut from sheet S1."""
        return Cut(pieces=pieces, **({"sheet": "S1"} | more))

    @staticmethod
    def bond(*pieces: str, **more: Any) -> Bond:
        """Pieces bonded with 20 g of cup B1."""
        return Bond(pieces=pieces, batches=(Share(what="B1", mass_kg=0.02),), **more)

    def _parts(self) -> set[str]:
        return {part.name for plan in self.plans.values() for part in plan.parts}


def _adopted(entry: Logged) -> str:
    if not isinstance(entry.act, Adopt):
        raise TypeError(entry.kind)
    return entry.act.plan


def causes(record: PieceMass | PartMass | WeightReport) -> dict[str, float]:
    """Off plan by cause, by name."""
    return {one.cause: one.mass_kg for one in record.off_plan}


MATERIALS = (
    Material(
        name="twill",
        kind=MaterialKind.FABRIC,
        areal_mass_kg_m2=0.2,
        fibre_density_kg_m3=1770.0,
        lot_spread=0.06,
    ),
    Material(
        name="foam", kind=MaterialKind.CORE, density_kg_m3=60.0, thickness_m=0.01, resin_uptake_kg_m2=0.15
    ),
    Material(name="resin", kind=MaterialKind.RESIN, ratio=0.25, ratio_tolerance=0.03, pot_life_s=1800.0),
    Material(name="hardener", kind=MaterialKind.HARDENER),
    Material(name="peel ply", kind=MaterialKind.PROCESS, areal_mass_kg_m2=0.085),
    Material(name="paste", kind=MaterialKind.PASTE, linear_mass_kg_m=0.05, density_kg_m3=1200.0),
    Material(name="sealant", kind=MaterialKind.SEALANT, areal_mass_kg_m2=0.8),
    Material(name="aluminium", kind=MaterialKind.SOLID, density_kg_m3=2700.0),
)
LAMINATES = (
    Laminate(
        name="six",
        steps=tuple(
            Step(number=number, material="twill", orientation_deg=angle, resin_fraction=0.5)
            for number, angle in enumerate((45.0, 0.0, 90.0, 90.0, 0.0, 45.0), start=1)
        ),
    ),
    Laminate(
        name="sandwich",
        steps=(
            Step(number=1, material="twill", orientation_deg=0.0, resin_fraction=0.4),
            Step(number=2, material="foam"),
            Step(number=3, material="twill", orientation_deg=0.0, resin_fraction=0.4),
            Step(number=4, material="peel ply"),
        ),
    ),
    Laminate(name="bought", areal_mass_kg_m2=1.5),
)


def shape(measure: float, centroid: Vector = (1.0, 2.0, 3.0), digest: str = "a") -> Shape:
    """A shape with no extent of its own."""
    return Shape(measure=measure, centroid_m=centroid, second_m2=NO_SPREAD, digest=digest)


def part(name: str, form: Form, made_of: str | None, part_class: PartClass, **more: Any) -> Part:
    """A part in the ribs unless told otherwise."""
    more = {"title": name.lower(), "side": Side.LEFT, "assembly": "WING/LEFT/ribs"} | more
    return Part(name=name, form=form, made_of=made_of, part_class=part_class, **more)


def plan(*parts: tuple[Part, Shape], name: str = "r1", **more: Any) -> Plan:
    """A plan of the given parts over the materials and laminates above."""
    more = {"materials": MATERIALS, "laminates": LAMINATES} | more
    return Plan(
        name=name,
        title=name,
        display=Display.METRIC,
        parts=tuple(one for one, _ in parts),
        shapes=tuple(other for _, other in parts),
        **more,
    )


def standard_parts() -> tuple[tuple[Part, Shape], ...]:
    """A skin of six plies, two ribs, a joint, a fitting."""
    return (
        (
            part("SKIN", Form.SKIN, "six", PartClass.SKIN, assembly="WING/LEFT/skins"),
            shape(1.5, (2.0, 1.0, 0.1), "s"),
        ),
        (part("RIB.1", Form.PANEL, "bought", PartClass.RIB), shape(0.2, (1.0, 0.5, 0.0), "r1")),
        (part("RIB.2", Form.PANEL, "bought", PartClass.RIB), shape(0.1, (1.0, 1.5, 0.0), "r2")),
        (
            part("JOINT", Form.RUN, "paste", PartClass.JOINT, assembly="WING/LEFT"),
            shape(3.0, (2.0, 1.0, 0.0), "j"),
        ),
        (
            part("PIN", Form.ITEM, None, PartClass.FITTING, assembly="WING", planned_mass_kg=0.25),
            shape(1.0, (1.5, 0.0, 0.0), "p"),
        ),
    )


def stocked(shop: Shop) -> Shop:
    """The shop with lots of twill, resin and hardener, and scale W1."""
    shop.receive("LT", "twill")
    shop.receive("LR", "resin")
    shop.receive("LH", "hardener")
    shop.scale("W1", 0.001, 0.002)
    return shop


def sandwich_shop() -> Shop:
    """A shop with one rib of cloth, foam, cloth and peel ply."""
    rib = part("RIB", Form.PANEL, "sandwich", PartClass.RIB)
    return stocked(Shop(plan((rib, shape(0.5)))))


@pytest.fixture
def shop() -> Shop:
    """The standard shop."""
    return stocked(Shop(plan(*standard_parts())))


class Make:
    """The builders, for tests that want a plan of their own."""

    shop = Shop
    plan = staticmethod(plan)
    part = staticmethod(part)
    shape = staticmethod(shape)
    standard_parts = staticmethod(standard_parts)
    sandwich_shop = staticmethod(sandwich_shop)
    causes = staticmethod(causes)
    materials = MATERIALS
    laminates = LAMINATES


@pytest.fixture(scope="session")
def make() -> type[Make]:
    """Builders of plans and shops."""
    return Make
