"""What entries put on pieces and took off them: the records that reading the entries fills."""

from __future__ import annotations

from dataclasses import dataclass, field

from ledger.mass.magnitudes import RESIN_ACCOUNT, RESIN_HABIT, STATED_GRAMS
from ledger.mass.plan_index import Indexes
from ledger.mass.report import Unknown
from ledger.mass.spread import Source, Spread
from ledger.mass.stock import Stock
from ledger.model.acts import Fit, Weigh
from ledger.model.entry import Logged


@dataclass(slots=True, kw_only=True)
class Draw:
    """One source going into one thing. Until cups are shared out the mass may be its nominal demand.

    `sure` is false where the split over several sources is a guess.
    """

    seq: int
    piece: str
    source: str
    step: int | None
    what: str
    mass_kg: float | None
    sure: bool = True


@dataclass(slots=True, kw_only=True)
class CupUse:
    """What one entry took from one batch. `by` is stated, account or nominal.

    `split` is true where several cups were named and nobody said how much of each.
    """

    batch: str
    draw: Draw
    stated_kg: float | None
    demand_kg: float | None
    split: bool = False
    by: str = "nominal"


@dataclass(slots=True, kw_only=True)
class Deposit:
    """What one entry did to one thing. `place` is its rank in time.

    `nominal_kg` is the planned layer at the area laid, `stock_kg` the same with the lot or sheet
    really used and nominal resin; what came from cups is added from `uses`. `sheds_m2` is an area cut
    away whose mass depends on what is there by then. `sources` are those it shares with other
    entries; what is its own alone is in `own_variance`.
    """

    place: int
    seq: int
    kind: str
    step: int | None = None
    area: float | None = None
    nominal_kg: float = 0.0
    dry_kg: float = 0.0
    demand_kg: float = 0.0
    given_kg: float | None = 0.0
    sheds_m2: float | None = None
    covers: frozenset[int] | None = None
    material: frozenset[str] = frozenset()
    uses: tuple[CupUse, ...] = ()
    sources: tuple[Source, ...] = ()
    own_variance: float = 0.0

    @property
    def stock_kg(self) -> float:
        """With the stock really used and nominal resin."""
        return self.dry_kg + self.demand_kg

    def add_unsureness(self, spread: Spread, sign: float) -> float:
        """Add what it shares with other entries to a spread; return the variance of what is its own."""
        variance = self.own_variance
        for key, value in self.sources:
            spread[key] = spread.get(key, 0.0) + sign * value
        for use in self.uses:
            mass = use.draw.mass_kg or 0.0
            if use.by != "stated":
                habit = RESIN_ACCOUNT if use.by == "account" else RESIN_HABIT
                key = ("batch", use.batch)
                spread[key] = spread.get(key, 0.0) + sign * habit * mass
            elif self.kind == "lay" or self.given_kg is None:
                variance += (STATED_GRAMS * mass) ** 2
        return variance

    @property
    def mass_kg(self) -> float:
        """What the entry added, by best evidence; less than nothing where it took away."""
        if self.kind == "lay":
            resin = sum(use.draw.mass_kg or 0.0 for use in self.uses) if self.uses else self.demand_kg
            return self.dry_kg + resin
        if self.given_kg is not None:
            return self.given_kg
        return sum(use.draw.mass_kg or 0.0 for use in self.uses)


@dataclass(slots=True, kw_only=True)
class Deposits:
    """Everything put on and taken off, by piece and by cell. Filled once, then only read."""

    entries: list[Logged]
    by_piece: dict[str, list[Deposit]] = field(default_factory=dict)
    by_cell: dict[str, list[Deposit]] = field(default_factory=dict)
    uses: dict[str, list[CupUse]] = field(default_factory=dict)
    draws: list[Draw] = field(default_factory=list)
    first_place: dict[str, int] = field(default_factory=dict)
    first_shown: dict[str, int] = field(default_factory=dict)
    fits: list[tuple[int, Fit]] = field(default_factory=list)
    weighings: list[tuple[int, Logged, Weigh]] = field(default_factory=list)
    scrapped: dict[str, int] = field(default_factory=dict)
    unknowns: dict[tuple[str, int, str], Unknown] = field(default_factory=dict)

    def not_known(self, thing: str, seq: int, what: str, do: str) -> None:
        """Note a mass that the entries leave open; said again, it is noted once."""
        self.unknowns[thing, seq, what] = Unknown(thing=thing, seq=seq, what=what, do=do)

    def known_after_all(self, thing: str, seq: int, what: str) -> None:
        """Take back a note, where a later entry settled it."""
        self.unknowns.pop((thing, seq, what), None)


@dataclass(frozen=True, slots=True, kw_only=True)
class Reading:
    """What reading an entry needs at hand: the build, its plans, its stock, and a place for what it finds."""

    indexes: Indexes
    stock: Stock
    deposits: Deposits

    def add(self, piece: str, deposit: Deposit) -> Deposit:
        """Keep a deposit on a piece."""
        self.deposits.by_piece.setdefault(piece, []).append(deposit)
        return deposit

    def use_cup(
        self,
        deposit: Deposit,
        thing: str,
        batch: str,
        *,
        stated_kg: float | None,
        demand_kg: float | None,
        what: str,
        sure: bool = True,
    ) -> None:
        """Keep what a deposit took from a cup, by its stated grams or by its demand."""
        draw = Draw(
            seq=deposit.seq,
            piece=thing,
            source=batch,
            step=deposit.step,
            what=what,
            mass_kg=demand_kg if stated_kg is None else stated_kg,
            sure=sure,
        )
        use = CupUse(batch=batch, draw=draw, stated_kg=stated_kg, demand_kg=demand_kg, split=not sure)
        deposit.uses = (*deposit.uses, use)
        self.deposits.draws.append(draw)
        self.deposits.uses.setdefault(batch, []).append(use)

    def draw(
        self,
        seq: int,
        thing: str,
        source: str,
        what: str,
        mass_kg: float | None,
        *,
        step: int | None = None,
        sure: bool = True,
    ) -> None:
        """Keep what came straight from a lot or a sheet."""
        self.deposits.draws.append(
            Draw(seq=seq, piece=thing, source=source, step=step, what=what, mass_kg=mass_kg, sure=sure)
        )
