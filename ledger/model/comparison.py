"""Two iterations held against each other, as figures: what the second one changes of the first.

In every pair `a` is under the first plan and `b` under the second; None is a figure that does not exist.
"""

from __future__ import annotations

from dataclasses import dataclass

from ledger.errors import Finding
from ledger.model.plan import Plan
from ledger.model.vectors import Matrix, Vector


@dataclass(frozen=True, slots=True, kw_only=True)
class Pair:
    """One figure under both plans."""

    a: float | None
    b: float | None

    @property
    def change(self) -> float | None:
        """The second less the first; None where either does not exist."""
        return None if self.a is None or self.b is None else self.b - self.a


@dataclass(frozen=True, slots=True, kw_only=True)
class PlacePair:
    """One place under both plans, metres, build axes."""

    a: Vector | None
    b: Vector | None

    @property
    def change(self) -> Vector | None:
        """From the first to the second: x aft, y right, z up."""
        if self.a is None or self.b is None:
            return None
        return (self.b[0] - self.a[0], self.b[1] - self.a[1], self.b[2] - self.a[2])


@dataclass(frozen=True, slots=True, kw_only=True)
class InertiaPair:
    """The inertia tensor under both plans, each about its own CG, kg m2."""

    a: Matrix | None
    b: Matrix | None

    @property
    def change(self) -> Matrix | None:
        """The second less the first, element by element."""
        if self.a is None or self.b is None:
            return None
        rows = [PlacePair(a=one, b=other).change for one, other in zip(self.a, self.b, strict=True)]
        x, y, z = (row for row in rows if row is not None)
        return (x, y, z)


@dataclass(frozen=True, slots=True, kw_only=True)
class PartChange:
    """A part added, removed or changed, and why in words and figures.

    `planned_kg` is what the designs say of all its pieces, `now_kg` the best there is with the record
    as it stands: a piece built before keeps its mass until another is made in its stead.
    """

    part: str
    title: str
    change: str
    planned_kg: Pair
    now_kg: Pair
    why: tuple[str, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class AttitudeChange:
    """What is trapped and usable at the attitude of one name.

    `usable_m3` is capacity less what is trapped there, None at one not flown. `remark` says where the
    attitude is in one plan only or stands otherwise in the two.
    """

    attitude: str
    flight: bool
    trapped_m3: Pair
    usable_m3: Pair
    remark: str | None


@dataclass(frozen=True, slots=True, kw_only=True)
class TankChange:
    """One tank under both plans, or all tanks together; `remark` says where only one plan has it."""

    tank: str
    gross_m3: Pair
    capacity_m3: Pair
    caught_air_m3: Pair
    usable_m3: Pair
    attitudes: tuple[AttitudeChange, ...]
    remark: str | None


@dataclass(frozen=True, slots=True, kw_only=True)
class FuelChange:
    """All tanks together, where there are any in either plan, and each of them."""

    whole: TankChange
    tanks: tuple[TankChange, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class MassChange:
    """The finished wing under both plans.

    `now_kg` and its CG and inertia rest on the record as it stands; `remade_kg` takes every piece that
    does not fit the plan as still to be made; `estimated_kg` is design against design.
    """

    now_kg: Pair
    remade_kg: Pair
    estimated_kg: Pair
    cg_m: PlacePair
    inertia_kg_m2: InertiaPair
    parts: tuple[PartChange, ...]
    parts_same: int


@dataclass(frozen=True, slots=True, kw_only=True)
class EntryToMake:
    """An entry that a choice comes to. `asks` are the fields that only the builder can fill in."""

    kind: str
    fields: tuple[tuple[str, str], ...]
    asks: tuple[str, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Choice:
    """One thing to do about a piece that no longer fits, in the builder's words, and what it does."""

    choice: str
    does: str
    entries: tuple[EntryToMake, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class UnfitPiece:
    """A piece that was built and is not what the new plan wants. `fitted_before`: under the first plan."""

    piece: str
    number: str
    part: str
    state: str
    begun_under: str
    why: str
    best_kg: float | None
    fitted_before: bool
    choices: tuple[Choice, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Comparison:
    """What the second plan changes of the first.

    `adopted` is False where the second is a folder not in the book: a preview. `saved_as_fuel_m3` is
    the fuel at 15 C that weighs what `mass.now_kg` saves, below 0 where mass is added; None where the
    plan gives no density. `stays` are the live pieces that fit the second plan or are accepted in it,
    `fits_again` those of them that do not fit the first, `on_hold` those that are on hold. `spare` are
    the live pieces that count nothing under the second: one too many, or kept for stock.
    """

    a: str
    b: str
    plan_a: Plan
    plan_b: Plan
    adopted: bool
    mass: MassChange
    fuel: FuelChange | None
    fuel_density_kg_m3: float | None
    saved_as_fuel_m3: float | None
    no_longer_fits: tuple[UnfitPiece, ...]
    stays: tuple[str, ...]
    fits_again: tuple[str, ...]
    findings: tuple[Finding, ...]
    on_hold: tuple[str, ...] = ()
    spare: tuple[str, ...] = ()
