"""A reading held against what the scale should show, before it is logged."""

from __future__ import annotations

import math
from dataclasses import dataclass

from ledger.mass.mix_ratio import scale_bound
from ledger.mass.report import PieceMass
from ledger.model.gather import split_piece_name
from ledger.model.snapshot import PieceState
from ledger.operations.take_stock import Stock

# Beyond this many standard uncertainties chance is not the likely reason.
_COVERAGE = 2.0
_MOST_FITTING = 4


@dataclass(frozen=True, slots=True, kw_only=True)
class Fitting:
    """Another open piece whose expected mass the reading fits; `opposite` is its other hand."""

    piece: str
    expected_kg: float
    opposite: bool


@dataclass(frozen=True, slots=True, kw_only=True)
class Judged:
    """Expected, got, off. `inside` is None where nothing is expected; `fits` is only filled outside."""

    piece: str
    expected_kg: float | None
    band_kg: float | None
    got_kg: float
    inside: bool | None
    fits: tuple[Fitting, ...] = ()

    @property
    def off_kg(self) -> float | None:
        """Got less expected."""
        return None if self.expected_kg is None else self.got_kg - self.expected_kg


def judge_reading(stock: Stock, piece: str, got_kg: float, scale: str | None) -> Judged:
    """Hold one reading, net of tare, against the piece's expected mass and everyone else's."""
    masses = {mass.piece: mass for part in stock.weights.parts for mass in part.pieces}
    mass = masses.get(piece) or masses.get(_part_to_begin(stock, piece))
    found = stock.build.snapshot.scales.get(scale or "")
    bound = scale_bound(None if found is None else found.instrument)
    expected = None if mass is None else expected_of(mass)
    if mass is None or expected is None:
        return Judged(piece=piece, expected_kg=None, band_kg=None, got_kg=got_kg, inside=None)
    band = _band(mass, bound)
    inside = abs(got_kg - expected) <= band
    fits = () if inside else _others(stock, piece, got_kg, bound, masses)
    return Judged(piece=piece, expected_kg=expected, band_kg=band, got_kg=got_kg, inside=inside, fits=fits)


def _part_to_begin(stock: Stock, piece: str) -> str:
    # Without the entry that began it, which is being put right, a piece is one still to be begun.
    split = split_piece_name(piece)
    return "" if split is None or piece in stock.build.snapshot.pieces else split[0]


def expected_of(mass: PieceMass) -> float | None:
    """What a scale should show; for a piece not begun, what it is planned to weigh."""
    return mass.expected_kg if mass.expected_kg is not None else mass.best_kg


def band_of(stock: Stock, mass: PieceMass, scale: str | None) -> float:
    """How far a reading off this scale may lie from what is expected and be by chance."""
    found = stock.build.snapshot.scales.get(scale or "")
    return _band(mass, scale_bound(None if found is None else found.instrument))


def _band(mass: PieceMass, bound: float) -> float:
    spread = mass.expected_u_kg if mass.expected_u_kg is not None else mass.best_u_kg or 0.0
    return math.hypot(_COVERAGE * spread, bound)


def _others(
    stock: Stock, piece: str, got_kg: float, bound: float, masses: dict[str, PieceMass]
) -> tuple[Fitting, ...]:
    pieces, plan = stock.build.snapshot.pieces, stock.build.snapshot.plan
    mine = pieces[piece].part if piece in pieces else piece
    opposite = {part.name for part in plan.parts if part.mirror_of == mine}
    own = plan.part(mine)
    if own is not None and own.mirror_of is not None:
        opposite.add(own.mirror_of)
    fitting = []
    for other in pieces.values():
        mass = masses.get(other.name)
        if mass is None or other.name == piece or other.state is not PieceState.OPEN:
            continue
        expected = expected_of(mass)
        if expected is not None and abs(got_kg - expected) <= _band(mass, bound):
            fitting.append(Fitting(piece=other.name, expected_kg=expected, opposite=other.part in opposite))
    fitting.sort(key=lambda one: (not one.opposite, abs(got_kg - one.expected_kg), one.piece))
    return tuple(fitting[:_MOST_FITTING])
