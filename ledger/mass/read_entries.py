"""Go through the entries once, in the order things happened, and keep what each did to what."""

from __future__ import annotations

from ledger.mass.deposits import Deposit, Deposits, Reading
from ledger.mass.magnitudes import (
    BOUND_TO_U,
    BY_THE_AREA,
    GEOMETRY_TOLERANCE,
    OTHER_LOT_SPREAD,
    SCATTER_WITHIN_LOT,
    STATED_GRAMS,
    WEIGHED_SHEET,
)
from ledger.mass.plan_index import Indexes
from ledger.mass.plies import lay
from ledger.mass.stock import Stock
from ledger.mass.when import as_it_happened
from ledger.model.acts import Bond, BuildUp, Coat, Cut, Fit, Lay, Scrap, Trim, Weigh
from ledger.model.entry import Logged
from ledger.model.snapshot import Snapshot


def read_deposits(snapshot: Snapshot, indexes: Indexes) -> Deposits:
    """Everything the entries put on pieces and took off them, with cups at their nominal demand."""
    return start_reading(snapshot, indexes).deposits


def start_reading(snapshot: Snapshot, indexes: Indexes) -> Reading:
    """The same with all it takes to read on."""
    deposits = Deposits(entries=as_it_happened(snapshot.logged))
    reading = Reading(indexes=indexes, stock=Stock(indexes), deposits=deposits)
    for place, logged in enumerate(deposits.entries):
        read_entry(reading, place, logged)
    return reading


def read_entry(reading: Reading, place: int, logged: Logged) -> None:
    """Keep what one entry did to what. `place` is its rank in time."""
    act, seq = logged.act, logged.seq
    first = reading.deposits.first_place.setdefault
    match act:
        case Lay():
            first(act.piece, place)
            lay(reading, place, seq, act)
        case Cut():
            for piece in act.pieces:
                first(piece, place)
                _cut(reading, place, seq, piece, act)
        case Bond():
            for piece in act.pieces:
                first(piece, place)
            _bond(reading, place, seq, act)
        case Coat():
            if act.piece is not None:
                first(act.piece, place)
            _coat(reading, place, seq, act)
        case Trim():
            first(act.piece, place)
            _trim(reading, place, seq, act)
        case BuildUp():
            first(act.piece, place)
            _build_up(reading, place, seq, act)
        case Scrap():
            reading.deposits.scrapped.setdefault(act.what, place)
        case Weigh():
            first(act.what, place)
            reading.deposits.first_shown.setdefault(act.what, place)
            reading.deposits.weighings.append((place, logged, act))
        case Fit():
            first(act.piece, place)
            reading.deposits.first_shown.setdefault(act.piece, place)
            reading.deposits.fits.append((place, act))
        case _:
            pass


def _cut(reading: Reading, place: int, seq: int, piece: str, act: Cut) -> None:
    nominal = reading.indexes.nominal(piece)
    offcut = reading.indexes.snapshot.offcuts.get(act.sheet)
    whole = act.sheet if offcut is None else offcut.sheet
    areal, weighed = reading.stock.sheet_areal_mass(whole)
    covers = reading.stock.steps_in_sheet(nominal, whole)
    measure = None if nominal is None else nominal.area_m2
    planned = None
    if nominal is not None and nominal.layers is not None and measure is not None:
        planned = measure * sum(
            layer.whole for layer in nominal.layers if covers is None or layer.number in covers
        )
    elif nominal is not None and not nominal.flat:
        planned = nominal.mass_kg
    mass = planned if areal is None or measure is None else areal * measure
    reading.draw(seq, piece, act.sheet, "sheet", mass)
    if mass is None:
        reading.deposits.not_known(
            piece, seq, "what was cut weighs is not known", "weigh the sheet or the piece"
        )
        return
    deposit = Deposit(place=place, seq=seq, kind="cut", dry_kg=mass, given_kg=mass, covers=covers)
    deposit.nominal_kg = mass if planned is None else planned
    mean = WEIGHED_SHEET if weighed else OTHER_LOT_SPREAD * BOUND_TO_U
    deposit.sources = ((("sheet", whole), mean * mass),)
    deposit.own_variance = (SCATTER_WITHIN_LOT**2 + GEOMETRY_TOLERANCE**2) * mass * mass
    reading.add(piece, deposit)


def _bond(reading: Reading, place: int, seq: int, act: Bond) -> None:
    first, *others = act.pieces
    deposit = Deposit(place=place, seq=seq, kind="bond", given_kg=act.mass_kg, area=act.length_m)
    reading.add(first, deposit)
    stated = sum(share.mass_kg or 0.0 for share in act.batches)
    unstated = sum(share.mass_kg is None for share in act.batches)
    wanted = _bond_demand(reading, first, act) if act.mass_kg is None else act.mass_kg
    rest = None if wanted is None else max(wanted - stated, 0.0) / max(unstated, 1)
    for share in act.batches:
        reading.use_cup(
            deposit,
            first,
            share.what,
            stated_kg=rest if share.mass_kg is None and act.mass_kg is not None else share.mass_kg,
            demand_kg=rest,
            what="adhesive",
            sure=share.mass_kg is not None or unstated == 1,
        )
        for piece in others:
            reading.draw(seq, piece, share.what, "touches", 0.0)
    if act.mass_kg is not None:
        deposit.own_variance = (STATED_GRAMS * act.mass_kg) ** 2


def _bond_demand(reading: Reading, first: str, act: Bond) -> float | None:
    """Planned adhesive over the length bonded; None where none was planned for the first piece."""
    nominal = reading.indexes.nominal(first)
    if nominal is None or not nominal.wet or nominal.layers is None or nominal.measure is None:
        return None
    length = nominal.measure if act.length_m is None else act.length_m
    return length * sum(layer.whole for layer in nominal.layers)


def _coat(reading: Reading, place: int, seq: int, act: Coat) -> None:
    thing = act.cell if act.piece is None else act.piece
    source = act.lot if act.batch is None else act.batch
    if thing is None or source is None:
        return
    mass = act.mass_kg
    if mass is None and act.piece is not None and act.areal_mass_kg_m2 is not None:
        nominal = reading.indexes.nominal(act.piece)
        area = None if nominal is None else nominal.area_m2
        mass = None if area is None else area * act.areal_mass_kg_m2
    # A coat from a cup may still have its grams from the cup's account.
    given = None if mass is None and act.batch is not None else mass or 0.0
    deposit = Deposit(place=place, seq=seq, kind="coat", given_kg=given)
    deposit.material = frozenset(reading.stock.materials_in(source))
    if given is None:
        pass
    elif mass is None:
        reading.deposits.not_known(
            thing,
            seq,
            "what the coat weighs is not known: there is no area to put it on",
            "correct the coat to grams",
        )
    else:
        share = BY_THE_AREA if act.mass_kg is None else STATED_GRAMS
        deposit.own_variance = (share * mass) ** 2
    if act.piece is not None:
        reading.add(act.piece, deposit)
    else:
        reading.deposits.by_cell.setdefault(thing, []).append(deposit)
    _from_cup_or_lot(reading, deposit, thing, act, mass)


def _trim(reading: Reading, place: int, seq: int, act: Trim) -> None:
    deposit = reading.add(act.piece, Deposit(place=place, seq=seq, kind="trim"))
    if act.mass_kg is None:
        deposit.sheds_m2 = act.area_m2
        return
    deposit.given_kg = -act.mass_kg
    deposit.own_variance = (STATED_GRAMS * act.mass_kg) ** 2


def _build_up(reading: Reading, place: int, seq: int, act: BuildUp) -> None:
    deposit = Deposit(place=place, seq=seq, kind="build_up", given_kg=act.mass_kg)
    deposit.own_variance = (STATED_GRAMS * act.mass_kg) ** 2
    reading.add(act.piece, deposit)
    _from_cup_or_lot(reading, deposit, act.piece, act, act.mass_kg)


def _from_cup_or_lot(
    reading: Reading, deposit: Deposit, thing: str, act: Coat | BuildUp, mass_kg: float | None
) -> None:
    what = "coat" if isinstance(act, Coat) else "build up"
    if act.batch is not None:
        reading.use_cup(deposit, thing, act.batch, stated_kg=mass_kg, demand_kg=None, what=what)
    elif act.lot is not None:
        reading.draw(deposit.seq, thing, act.lot, what, mass_kg)
