"""The cups at the bench: whose pot life runs, how much is left in each."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass, replace
from datetime import datetime, timedelta

from ledger.checks.mix_ratio_out import CODE as RATIO_OUT
from ledger.checks.pot_life_exceeded import pot_life_s
from ledger.mass.mix_ratio import Verdict
from ledger.mass.report import WeightReport
from ledger.model.snapshot import Snapshot

__all__ = ["RATIO_OUT", "Cup", "best_cup", "cups_on_bench", "mixing_cup", "run_clocks"]

# A cup nobody closed stays in sight for this long after its time, so that it is scrapped or accounted for.
_IN_SIGHT_AFTER = timedelta(hours=4)
_UNTIMED_IN_SIGHT = timedelta(hours=12)
# What sticks to the wall of a cup is no pour.
_LEAST_LEFT_KG = 0.0005


@dataclass(frozen=True, slots=True, kw_only=True)
class Cup:
    """A cup on the bench. `minutes_left` is None where no pot life is known; below 0 it is past.

    `left_kg` is None where its pours or uses are not known. `mixing` cups are stamped and not logged yet.
    """

    number: str
    what: str
    resin_material: str | None
    mixed_at: datetime
    pot_life_s: float | None
    minutes_left: float | None
    left_kg: float | None
    held: bool
    verdict: str
    mixing: bool = False

    @property
    def out(self) -> bool:
        """It was mixed out of ratio, beyond doubt."""
        return self.verdict == Verdict.OUT

    @property
    def unfit(self) -> bool:
        """Nothing is to be wetted from it: past, on hold or out of ratio."""
        return self.past or self.held or self.out

    @property
    def has_some(self) -> bool:
        """Whether anything worth pouring may be left."""
        return self.left_kg is None or self.left_kg >= _LEAST_LEFT_KG

    @property
    def past(self) -> bool:
        """Its pot life is over."""
        return self.minutes_left is not None and self.minutes_left < 0.0


def cups_on_bench(snapshot: Snapshot, weights: WeightReport, now: datetime) -> tuple[Cup, ...]:
    """Every cup not scrapped, not closed by its residue, and not long past; shortest clock first."""
    accounts = {account.batch: account for account in weights.batches}
    cups = []
    for number, batch in snapshot.batches.items():
        if number in snapshot.gone or batch.mix.residue_kg is not None:
            continue
        account = accounts.get(number)
        left = None
        if account is not None:
            left = account.mixed_kg - account.charged_kg - account.scrapped_kg - (account.bled_kg or 0.0)
        material = _material_of(snapshot, batch.mix.resin_lot)
        cup = Cup(
            number=number,
            what=(material or "?").split(" ")[0],
            resin_material=material,
            mixed_at=batch.at,
            pot_life_s=pot_life_s(batch, snapshot),
            minutes_left=None,
            left_kg=left,
            held=number in snapshot.held,
            verdict="" if account is None else account.ratio_verdict,
        )
        if _in_sight(cup, now):
            cups.append(cup)
    return run_clocks(cups, now)


def run_clocks(cups: Iterable[Cup], now: datetime) -> tuple[Cup, ...]:
    """The same cups at another moment: running ones first, the shortest clock on top; unfit ones below."""
    clocked = [replace(cup, minutes_left=_minutes_left(cup, now)) for cup in cups]
    return tuple(
        sorted(
            clocked,
            key=lambda cup: (
                cup.past,
                cup.out,
                cup.minutes_left is None,
                abs(cup.minutes_left) if cup.minutes_left is not None else 0.0,
                cup.number,
            ),
        )
    )


def best_cup(cups: Iterable[Cup]) -> Cup | None:
    """The fit cup to pour from: of those with something in them the first, so that none dies unused."""
    return next((cup for cup in cups if not cup.unfit and not cup.mixing and cup.has_some), None)


def mixing_cup(snapshot: Snapshot, resin_lot: str, stamped_at: datetime, now: datetime) -> Cup:
    """A cup whose second component went in at `stamped_at` and that is not logged yet."""
    number = resin_lot.strip().upper()
    material = _material_of(snapshot, number)
    cup = Cup(
        number="mixing",
        what=(material or "?").split(" ")[0],
        resin_material=material,
        mixed_at=stamped_at,
        pot_life_s=_pot_life_of_lot(snapshot, number),
        minutes_left=None,
        left_kg=None,
        held=False,
        verdict="",
        mixing=True,
    )
    return run_clocks((cup,), now)[0]


def _pot_life_of_lot(snapshot: Snapshot, lot: str) -> float | None:
    found = snapshot.lots.get(lot)
    if found is None:
        return None
    if found.receive.pot_life_s is not None:
        return found.receive.pot_life_s
    material = snapshot.plan.material(found.receive.material)
    return None if material is None else material.pot_life_s


def _material_of(snapshot: Snapshot, lot: str) -> str | None:
    found = snapshot.lots.get(lot)
    return None if found is None else found.receive.material


def _minutes_left(cup: Cup, now: datetime) -> float | None:
    if cup.pot_life_s is None:
        return None
    return (cup.pot_life_s - (now - cup.mixed_at).total_seconds()) / 60.0


def _in_sight(cup: Cup, now: datetime) -> bool:
    age = now - cup.mixed_at
    if age < timedelta(0):
        return False
    if cup.pot_life_s is None:
        return age <= _UNTIMED_IN_SIGHT
    return age <= timedelta(seconds=cup.pot_life_s) + _IN_SIGHT_AFTER
