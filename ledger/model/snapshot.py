"""What the book says at one moment, frozen: the only thing mass, fuel and the rules ever see."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from datetime import datetime
from enum import StrEnum

from ledger.model.acts import Instrument, Mix, Receive, Sheet
from ledger.model.entry import Logged
from ledger.model.plan import Plan


class PieceState(StrEnum):
    """How far a piece is. Finished: weighed as finished, or fitted."""

    OPEN = "open"
    FINISHED = "finished"
    SCRAPPED = "scrapped"


@dataclass(frozen=True, slots=True, kw_only=True)
class Piece:
    """One physical example of a part. `name` is `PART/running`; `number` is on its tag.

    `accepted_under` names the iterations it was accepted under although they had changed its part,
    `held_under` the one in which it was put on hold, None once it is released.
    """

    number: str
    name: str
    part: str
    running: int
    begun_seq: int
    iteration: str
    state: PieceState
    fitted_into: str | None
    accepted_under: tuple[str, ...] = ()
    held_under: str | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Lot:
    """A delivery in stock."""

    number: str
    seq: int
    at: datetime
    receive: Receive


@dataclass(frozen=True, slots=True, kw_only=True)
class SheetInStock:
    """A sheet with its size and weighed mass."""

    number: str
    seq: int
    sheet: Sheet


@dataclass(frozen=True, slots=True, kw_only=True)
class Offcut:
    """What was kept of a sheet; `source` is the sheet or offcut it was cut from."""

    number: str
    seq: int
    source: str
    sheet: str
    length_m: float
    width_m: float


@dataclass(frozen=True, slots=True, kw_only=True)
class Batch:
    """A cup, mixed at `at`."""

    number: str
    seq: int
    at: datetime
    mix: Mix


@dataclass(frozen=True, slots=True, kw_only=True)
class Scale:
    """An instrument of the shop."""

    number: str
    seq: int
    instrument: Instrument


@dataclass(frozen=True, slots=True, kw_only=True)
class Iteration:
    """A plan adopted. The last one that counts is the current one."""

    name: str
    seq: int
    at: datetime
    plan: Plan


@dataclass(frozen=True, slots=True, kw_only=True)
class Snapshot:
    """The whole build at one moment. `logged` holds what counts, in order; mappings are by number or name.

    `gone` are numbers scrapped, `held` numbers on hold with the seq of the hold.
    """

    iterations: tuple[Iteration, ...]
    logged: tuple[Logged, ...]
    pieces: Mapping[str, Piece]
    lots: Mapping[str, Lot]
    sheets: Mapping[str, SheetInStock]
    offcuts: Mapping[str, Offcut]
    batches: Mapping[str, Batch]
    scales: Mapping[str, Scale]
    held: Mapping[str, int]
    gone: Mapping[str, int]
    last_seq: int
    last_digest: str
    now: datetime

    @property
    def plan(self) -> Plan:
        """The plan of the current iteration."""
        return self.iterations[-1].plan
