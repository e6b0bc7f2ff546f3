"""A reading off a scale for the thing in hand: is it one, what was expected, what would be logged."""

from __future__ import annotations

from dataclasses import dataclass

from ledger.errors import LedgerError
from ledger.model.things import ThingKind
from ledger.operations.find_thing import FoundThing
from ledger.operations.judge_reading import Judged, judge_reading
from ledger.operations.propose_entry import scale_in_use
from ledger.operations.take_stock import Stock
from ledger.tui.field_text import Find, is_number, split_quantities, with_unit
from ledger.tui.slip import Slip
from ledger.units import Dimension, Display, read_quantity

_WEIGHED = (ThingKind.PIECE, ThingKind.PART, ThingKind.ASSEMBLY)
_LONGEST_BARE = 5


@dataclass(frozen=True, slots=True, kw_only=True)
class Reading:
    """What a scale showed for the thing in hand, not logged yet."""

    what: str
    text: str
    scale: str | None
    judged: Judged

    @property
    def fields(self) -> dict[str, str]:
        """As an entry's fields."""
        fields = {"what": self.what, "reading": self.text}
        return {**fields, "scale": self.scale} if self.scale else fields


def weigh_unit(units: Display) -> str:
    """The unit of a bare reading."""
    return "g" if units is Display.METRIC else "lb"


def read_scale(
    stock: Stock, thing: FoundThing, text: str, units: Display, *, scanned: bool
) -> Reading | None:
    """The text as a reading for this thing; None where it is none."""
    if thing.kind not in _WEIGHED:
        return None
    unit = None if scanned and not _looks_read(text) else weigh_unit(units)
    written = "; ".join(with_unit(part, unit) for part in split_quantities(text))
    try:
        readings = [read_quantity(part, Dimension.MASS) for part in written.split(";")]
    except LedgerError:
        return None
    scale = scale_in_use(stock)
    judged = judge_reading(stock, thing.name, sum(readings) / len(readings), scale)
    return Reading(what=thing.number or thing.name, text=written, scale=scale, judged=judged)


def why_no_reading(thing: FoundThing, text: str, units: Display) -> str:
    """Why a text that begins like a number is no reading; nothing where it is none of a number at all."""
    if thing.kind not in _WEIGHED or not text.strip() or text.strip()[0] not in "+-.,0123456789":
        return ""
    for part in split_quantities(text):
        try:
            read_quantity(with_unit(part, weigh_unit(units)), Dimension.MASS)
        except LedgerError as error:
            return f"{getattr(error, 'what', error)}; {getattr(error, 'do', 'write it anew')}"
    return ""


def judge_slip(slip: Slip, stock: Stock, find: Find) -> Judged | None:
    """A weigh slip's mean reading held against what was expected; None where that cannot be said."""
    if slip.kind != "weigh" or not slip.value("reading"):
        return None
    thing = find(slip.value("what"))
    if thing is None or slip.value("present") or slip.value("missing"):
        return None
    try:
        readings = [read_quantity(one, Dimension.MASS) for one in slip.value("reading").split(";")]
        tare = read_quantity(slip.value("tare"), Dimension.MASS) if slip.value("tare") else 0.0
    except LedgerError:
        return None
    got = sum(readings) / len(readings) - tare
    return judge_reading(stock, thing.name, got, slip.value("scale") or None)


def _looks_read(text: str) -> bool:
    # The code on a package is digits too; a scale's reading is short, or has a point or a sign.
    bare = text.strip()
    return not is_number(text) or len(bare) <= _LONGEST_BARE or any(mark in text for mark in "+-.,")
