"""What a person can log: one frozen record a kind. Each is the single declaration of its kind."""

from __future__ import annotations

from dataclasses import dataclass
from datetime import date

from ledger.model.declare import (
    Takes,
    choice_of,
    kind,
    measure_of,
    name_of,
    quantity_of,
    shares_of,
    special,
    text_of,
)
from ledger.model.things import KeptOffcut, Measure, Minted, Share, ThingKind
from ledger.units import Dimension

WEIGHED_STATES = ("before trim", "after trim", "finished")


@dataclass(frozen=True, slots=True, kw_only=True)
class Act:
    """What every entry may carry. `typed` keeps the text of each quantity as the person wrote it.

    `corrects` is the seq of the entry this one stands in for; it then counts in that entry's place.
    """

    with_others: tuple[str, ...] = ()
    remark: str | None = None
    minted: tuple[Minted, ...] = ()
    typed: tuple[tuple[str, str], ...] = ()
    corrects: int | None = None


@kind("receive", "a delivery of a material")
@dataclass(frozen=True, slots=True, kw_only=True)
class Receive(Act):
    """A lot arrives. Its own figures, where given, stand before the material's nominal ones."""

    material: str = name_of("material", ThingKind.MATERIAL, tip="material of the plan", required=True)
    quantity: Measure = measure_of(
        "quantity",
        Dimension.MASS,
        Dimension.AREA,
        Dimension.LENGTH,
        Dimension.VOLUME,
        tip="how much came, for example 5 kg or 25 m2",
        required=True,
    )
    lot: str | None = name_of("lot", tip="number of your own; else one is given", mints=ThingKind.LOT)
    maker_code: str | None = text_of("maker_code", "lot code on the package")
    expiry: date | None = special("expiry", Takes.DATE, tip="use before, year-month-day")
    opened: date | None = special("opened", Takes.DATE, tip="day the package was opened")
    certificate: str | None = text_of("certificate", "certificate or data sheet it came with")
    areal_mass_kg_m2: float | None = quantity_of(
        "areal_mass", Dimension.AREAL_MASS, tip="measured areal mass of this lot"
    )
    density_kg_m3: float | None = quantity_of("density", Dimension.DENSITY, tip="density of this lot")
    ratio: float | None = special("ratio", Takes.RATIO, tip="resin to hardener by mass, for example 100:27")
    pot_life_s: float | None = quantity_of("pot_life", Dimension.DURATION, tip="pot life of this lot")
    limits: str | None = text_of("limits", "storage and handling limits of this lot")


@kind("instrument", "a scale or other instrument, with what it can show")
@dataclass(frozen=True, slots=True, kw_only=True)
class Instrument(Act):
    """An instrument of the shop. Resolution and accuracy set the uncertainty of what it reads."""

    instrument: str = text_of("instrument", "the name on it, for example W2", required=True)
    what: str = text_of("what", "what it is, for example scale", required=True)
    resolution: Measure = measure_of(
        "resolution",
        Dimension.MASS,
        Dimension.LENGTH,
        Dimension.TEMPERATURE,
        tip="its smallest step",
        required=True,
    )
    accuracy: Measure | None = measure_of(
        "accuracy",
        Dimension.MASS,
        Dimension.LENGTH,
        Dimension.TEMPERATURE,
        tip="plus or minus, from its data sheet",
    )
    capacity: Measure | None = measure_of(
        "capacity", Dimension.MASS, Dimension.LENGTH, Dimension.TEMPERATURE, tip="the most it reads"
    )
    calibrated: date | None = special("calibrated", Takes.DATE, tip="day of its last calibration")
    due: date | None = special("due", Takes.DATE, tip="day the next calibration is due")


@kind("sheet", "a bulk sandwich panel, measured and weighed")
@dataclass(frozen=True, slots=True, kw_only=True)
class Sheet(Act):
    """A sheet to cut from. Its own mass and size give the areal mass of what is cut from it."""

    laminate: str = name_of("laminate", ThingKind.LAMINATE, tip="laminate of the plan", required=True)
    length_m: float = quantity_of("length", Dimension.LENGTH, tip="along the face plies' 0", required=True)
    width_m: float = quantity_of("width", Dimension.LENGTH, tip="across", required=True)
    sheet: str | None = name_of("sheet", tip="number of your own; else one is given", mints=ThingKind.SHEET)
    mass_kg: float | None = quantity_of("mass", Dimension.MASS, tip="weighed mass of the whole sheet")
    lots: tuple[str, ...] = name_of("lots", ThingKind.LOT, tip="lots it was made from", many=True)


@kind("mix", "a cup: resin and hardener weighed out")
@dataclass(frozen=True, slots=True, kw_only=True)
class Mix(Act):
    """One batch. Several pours add up; `residue` and `bled` close its account."""

    resin_lot: str = name_of("resin_lot", ThingKind.LOT, tip="scan the resin or base", required=True)
    resin_kg: tuple[float, ...] = quantity_of(
        "resin", Dimension.MASS, tip="grams of resin, every pour", required=True, many=True
    )
    hardener_lot: str = name_of("hardener_lot", ThingKind.LOT, tip="scan the hardener", required=True)
    hardener_kg: tuple[float, ...] = quantity_of(
        "hardener", Dimension.MASS, tip="grams of hardener, every pour", required=True, many=True
    )
    batch: str | None = name_of("batch", tip="number of your own; else one is given", mints=ThingKind.BATCH)
    method: str | None = choice_of("method", "scale", "running total", "pump", tip="how it was measured out")
    scale: str | None = name_of("scale", ThingKind.INSTRUMENT, tip="the scale used")
    residue_kg: float | None = quantity_of("residue", Dimension.MASS, tip="left in the cup, weighed")
    bled_kg: float | None = quantity_of("bled", Dimension.MASS, tip="drawn off into bleeder and breather")
    temperature_k: float | None = quantity_of("temperature", Dimension.TEMPERATURE, tip="of the shop")
    humidity: float | None = quantity_of("humidity", Dimension.FRACTION, tip="of the shop")


@kind("cut", "pieces cut from one sheet")
@dataclass(frozen=True, slots=True, kw_only=True)
class Cut(Act):
    """Pieces routed from a sheet or offcut in one job, with one kerf and what was left."""

    pieces: tuple[str, ...] = name_of(
        "pieces", ThingKind.PIECE, tip="parts or pieces cut", required=True, many=True
    )
    sheet: str = name_of(
        "sheet", ThingKind.SHEET, ThingKind.OFFCUT, tip="scan the sheet or offcut", required=True
    )
    revision: str | None = text_of("revision", "revision of the cut file")
    angle_deg: float | None = quantity_of("angle", Dimension.ANGLE, tip="turned on the sheet from its length")
    kerf_m: float | None = quantity_of("kerf", Dimension.LENGTH, tip="width of the cutter")
    offcut: KeptOffcut | None = special(
        "offcut", Takes.OFFCUT, tip="size kept, 600 mm x 400 mm, or what became of it"
    )


@kind("lay", "one ply laid on a piece")
@dataclass(frozen=True, slots=True, kw_only=True)
class Lay(Act):
    """A step of a piece's laminate, from which lots, wetted from which cups."""

    piece: str = name_of("piece", ThingKind.PIECE, tip="part or piece laid up", required=True)
    step: int = special("step", Takes.WHOLE, tip="step of the laminate", required=True)
    lots: tuple[Share, ...] = shares_of("lots", ThingKind.LOT, tip="scan the cloth or core", required=True)
    batches: tuple[Share, ...] = shares_of(
        "batches", ThingKind.BATCH, tip="scan the cup, with grams where known"
    )
    orientation_deg: float | None = quantity_of(
        "orientation", Dimension.ANGLE, tip="as laid, by the piece's own 0"
    )
    area_m2: float | None = quantity_of("area", Dimension.AREA, tip="as laid; the plan's where empty")
    seen_by: str | None = name_of("seen_by", ThingKind.PERSON, tip="a second person's initials")


@kind("bond", "pieces joined with adhesive")
@dataclass(frozen=True, slots=True, kw_only=True)
class Bond(Act):
    """A joint. The adhesive belongs to the first piece named; the others touch it."""

    pieces: tuple[str, ...] = name_of(
        "pieces", ThingKind.PIECE, tip="joint or pieces bonded", required=True, many=True
    )
    batches: tuple[Share, ...] = shares_of(
        "batches", ThingKind.BATCH, tip="scan the cup, with grams where known", required=True
    )
    length_m: float | None = quantity_of("length", Dimension.LENGTH, tip="length of the joint")
    mass_kg: float | None = quantity_of("mass", Dimension.MASS, tip="adhesive used, weighed")
    surface: str | None = text_of("surface", "how the faces were made ready")
    peel_ply_removed: bool | None = special("peel_ply_removed", Takes.YES_NO, tip="yes or no")


@kind(
    "coat",
    "sealant, paint or other coat",
    one_of=(("piece", "cell"), ("batch", "lot"), ("mass", "areal_mass")),
)
@dataclass(frozen=True, slots=True, kw_only=True)
class Coat(Act):
    """A coat on a piece or inside a cell, by its mass or by its areal mass."""

    piece: str | None = name_of("piece", ThingKind.PIECE, tip="piece coated")
    cell: str | None = name_of("cell", ThingKind.CELL, tip="or the cell sealed")
    batch: str | None = name_of("batch", ThingKind.BATCH, tip="scan the cup")
    lot: str | None = name_of("lot", ThingKind.LOT, tip="or the lot, where nothing is mixed")
    mass_kg: float | None = quantity_of("mass", Dimension.MASS, tip="mass put on")
    areal_mass_kg_m2: float | None = quantity_of("areal_mass", Dimension.AREAL_MASS, tip="or mass per area")


@kind("trim", "material taken off a piece", one_of=(("mass", "area"),))
@dataclass(frozen=True, slots=True, kw_only=True)
class Trim(Act):
    """Sanding, trimming or boring: mass leaves the piece."""

    piece: str = name_of("piece", ThingKind.PIECE, tip="piece trimmed", required=True)
    mass_kg: float | None = quantity_of("mass", Dimension.MASS, tip="mass taken off")
    area_m2: float | None = quantity_of("area", Dimension.AREA, tip="or area cut away")
    why: str = text_of("why", "for example edge trim, sanding", required=True)


@kind("build_up", "material added to a piece outside its plan", one_of=(("batch", "lot"),))
@dataclass(frozen=True, slots=True, kw_only=True)
class BuildUp(Act):
    """Filler, a doubler or a repair: mass joins the piece."""

    piece: str = name_of("piece", ThingKind.PIECE, tip="piece built up", required=True)
    mass_kg: float = quantity_of("mass", Dimension.MASS, tip="mass put on", required=True)
    batch: str | None = name_of("batch", ThingKind.BATCH, tip="scan the cup")
    lot: str | None = name_of("lot", ThingKind.LOT, tip="or the lot")
    why: str | None = text_of("why", "for example repair, filler")


@kind("weigh", "a piece or assembly on a scale")
@dataclass(frozen=True, slots=True, kw_only=True)
class Weigh(Act):
    """Readings of one thing, averaged. `present` was on the scale and is not part of it."""

    what: str = name_of(
        "what", ThingKind.PIECE, ThingKind.ASSEMBLY, tip="scan the piece or assembly", required=True
    )
    reading_kg: tuple[float, ...] = quantity_of(
        "reading", Dimension.MASS, tip="every reading", required=True, many=True
    )
    scale: str | None = name_of("scale", ThingKind.INSTRUMENT, tip="the scale used")
    tare_kg: float | None = quantity_of("tare", Dimension.MASS, tip="mass to take off the reading")
    state: str | None = choice_of("state", *WEIGHED_STATES, tip="how far the piece is")
    present: tuple[Share, ...] = shares_of("present", tip="peel ply, bag or jig on the scale, with its mass")
    missing: tuple[str, ...] = name_of("missing", ThingKind.PIECE, tip="contents not on the scale", many=True)


@kind("fit", "a piece put into, or taken out of, an assembly", one_of=(("into", "out_of"),))
@dataclass(frozen=True, slots=True, kw_only=True)
class Fit(Act):
    """Where a piece sits. It can be in one place at a time."""

    piece: str = name_of("piece", ThingKind.PIECE, tip="piece or assembly fitted", required=True)
    into: str | None = name_of("into", ThingKind.ASSEMBLY, ThingKind.PIECE, tip="assembly it goes into")
    out_of: str | None = name_of(
        "out_of", ThingKind.ASSEMBLY, ThingKind.PIECE, tip="assembly it comes out of"
    )


_STOCK = (
    ThingKind.LOT,
    ThingKind.SHEET,
    ThingKind.OFFCUT,
    ThingKind.BATCH,
    ThingKind.PIECE,
    ThingKind.INSTRUMENT,
)


@kind("scrap", "something thrown away")
@dataclass(frozen=True, slots=True, kw_only=True)
class Scrap(Act):
    """A piece scrapped is made again under the next running number."""

    what: str = name_of("what", *_STOCK, tip="number scrapped", required=True)
    why: str = text_of("why", "reason", required=True)


@kind("hold", "not to be used until released")
@dataclass(frozen=True, slots=True, kw_only=True)
class Hold(Act):
    """Segregated. Use is logged all the same, with a finding."""

    what: str = name_of("what", *_STOCK, tip="number held", required=True)
    why: str = text_of("why", "reason", required=True)


@kind("release", "free again after a hold")
@dataclass(frozen=True, slots=True, kw_only=True)
class Release(Act):
    """Ends the hold of the same thing."""

    what: str = name_of("what", *_STOCK, tip="number released", required=True)
    why: str = text_of("why", "reason", required=True)


@kind("note", "a remark, or a photograph by its hash")
@dataclass(frozen=True, slots=True, kw_only=True)
class Note(Act):
    """Words for the record."""

    text: str = text_of("text", "what is to be remembered", required=True)
    file_hash: str | None = text_of("file", "SHA-256 of a photograph or document")
    about: str | None = name_of("about", *ThingKind, tip="what it is about")


@kind("withdraw", "undo an entry; the entry itself stays in the record")
@dataclass(frozen=True, slots=True, kw_only=True)
class Withdraw(Act):
    """The entry no longer counts. It cannot itself be withdrawn."""

    seq: int = special("seq", Takes.WHOLE, tip="number of the entry", required=True)
    why: str = text_of("why", "reason", required=True)


@kind("accept", "a finding accepted for one thing")
@dataclass(frozen=True, slots=True, kw_only=True)
class Accept(Act):
    """Lapses when the facts of the finding change: `facts` is what it said."""

    finding: str = text_of("finding", "code of the finding", required=True)
    what: str = text_of("what", "the thing it is about", required=True)
    why: str = text_of("why", "reason", required=True)
    facts: str | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class PlanFile:
    """One file of a stored plan, by content."""

    path: str
    sha256: str


@kind("adopt", "a plan taken into the book as an iteration")
@dataclass(frozen=True, slots=True, kw_only=True)
class Adopt(Act):
    """Made by the command of that name only. `plan` is the plan's own name, unique in the book."""

    plan: str = text_of("plan", "name of the iteration", required=True)
    title: str = text_of("title", "what it changes", required=True)
    files: tuple[PlanFile, ...] = ()
