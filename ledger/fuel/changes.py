"""What one fuel report changes of another, tank by tank and attitude by attitude."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable, Sequence

from ledger.fuel.report import AttitudeFuel, FuelReport, TankFuel
from ledger.model.comparison import AttitudeChange, FuelChange, Pair, TankChange

ALL = "all tanks"
_ANGLE_DEG = 0.05


def fuel_change(a: FuelReport, b: FuelReport, names: tuple[str, str]) -> FuelChange | None:
    """All tanks of two plans; None where neither has any.

    names : of the two plans, for what is in one of them only.
    A sum is None where one tank's figure is not known: leaving it out would read as less fuel trapped.
    """
    tanks_a, tanks_b = ({tank.tank: tank for tank in report.tanks} for report in (a, b))
    if not tanks_a and not tanks_b:
        return None
    tanks = tuple(
        _tank(name, [tanks_a[name]] if name in tanks_a else [], [tanks_b[name]] if name in tanks_b else [],
              names)
        for name in dict.fromkeys((*tanks_a, *tanks_b))
    )  # fmt: skip
    return FuelChange(whole=_tank(ALL, a.tanks, b.tanks, names), tanks=tanks)


def _tank(name: str, a: Sequence[TankFuel], b: Sequence[TankFuel], names: tuple[str, str]) -> TankChange:
    def pair(read: Callable[[TankFuel], float | None]) -> Pair:
        return Pair(a=_sum(map(read, a)), b=_sum(map(read, b)))

    attitudes = dict.fromkeys(attitude.attitude for tank in (*b, *a) for attitude in tank.attitudes)
    return TankChange(
        tank=name,
        gross_m3=pair(lambda tank: tank.gross_m3),
        capacity_m3=pair(lambda tank: tank.capacity_m3),
        caught_air_m3=pair(lambda tank: tank.caught_air_m3),
        usable_m3=pair(lambda tank: tank.usable_m3),
        attitudes=tuple(_attitude(one, a, b, names) for one in attitudes),
        remark=_only_in(bool(a), bool(b), names),
    )


def _attitude(
    name: str, a: Sequence[TankFuel], b: Sequence[TankFuel], names: tuple[str, str]
) -> AttitudeChange:
    there_a, there_b = _at(name, a), _at(name, b)
    found = [attitude for _, attitude in (*there_b, *there_a)]
    remark = None
    if a and b:
        remark = _only_in(bool(there_a), bool(there_b), names) or _turned(there_a[0][1], there_b[0][1], names)
    return AttitudeChange(
        attitude=name,
        flight=found[0].flight,
        trapped_m3=Pair(a=_trapped(there_a), b=_trapped(there_b)),
        usable_m3=Pair(a=_usable(there_a), b=_usable(there_b)),
        remark=remark,
    )


def _at(name: str, tanks: Sequence[TankFuel]) -> list[tuple[TankFuel, AttitudeFuel]]:
    return [(tank, attitude) for tank in tanks for attitude in tank.attitudes if attitude.attitude == name]


def _trapped(there: list[tuple[TankFuel, AttitudeFuel]]) -> float | None:
    return _sum(attitude.trapped_m3 for _, attitude in there)


def _usable(there: list[tuple[TankFuel, AttitudeFuel]]) -> float | None:
    return _sum(_usable_at(tank, attitude) for tank, attitude in there)


def _usable_at(tank: TankFuel, attitude: AttitudeFuel) -> float | None:
    # A tank of which no usable is known has none at one attitude either: it may lack an outlet.
    if not attitude.flight or tank.usable_m3 is None:
        return None
    if tank.capacity_m3 is None or attitude.trapped_m3 is None:
        return None
    return max(0.0, tank.capacity_m3 - attitude.trapped_m3)


def _sum(volumes: Iterable[float | None]) -> float | None:
    listed = list(volumes)
    known = [volume for volume in listed if volume is not None]
    return math.fsum(known) if known and len(known) == len(listed) else None


def _only_in(in_a: bool, in_b: bool, names: tuple[str, str]) -> str | None:
    if in_a and in_b:
        return None
    return f"only in {names[0] if in_a else names[1]}"


def _turned(a: AttitudeFuel, b: AttitudeFuel, names: tuple[str, str]) -> str | None:
    apart = math.degrees(math.acos(max(-1.0, min(1.0, math.fsum(map(float.__mul__, a.up, b.up))))))
    if apart < _ANGLE_DEG:
        return None if a.flight == b.flight else f"flown in {names[0] if a.flight else names[1]} only"
    return (
        f"pitch {a.pitch_deg:.1f} roll {a.roll_deg:.1f} in {names[0]},"
        f" pitch {b.pitch_deg:.1f} roll {b.roll_deg:.1f} in {names[1]}"
    )
