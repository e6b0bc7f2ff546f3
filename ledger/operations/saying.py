"""One plain sentence for an entry, as the log and the bench show it."""

from __future__ import annotations

import re

from ledger.model.acts import (
    Accept,
    Act,
    Adopt,
    Bond,
    BuildUp,
    Coat,
    Cut,
    Fit,
    Hold,
    Instrument,
    Lay,
    Mix,
    Note,
    Receive,
    Release,
    Scrap,
    Sheet,
    Trim,
    Weigh,
    Withdraw,
)
from ledger.model.declare import KINDS, Takes
from ledger.model.things import Measure, Share

_OWN_UNITS = ("g", "kg", "m2", "m")


def say(kind: str, act: Act) -> str:
    """What the entry says happened."""
    sentence = _sentence(act) or _field_by_field(kind, act)
    return f"{sentence} (corrects entry {act.corrects})" if act.corrects is not None else sentence


def _sentence(act: Act) -> str | None:
    match act:
        case Receive():
            return f"{act.lot} received: {_read(act, 'quantity', _measure(act.quantity))} {act.material}"
        case Instrument():
            step = _read(act, "resolution", _measure(act.resolution))
            return f"{act.what} {act.instrument} entered, reads to {step}"
        case Sheet():
            size = f"{_mm(act.length_m)} x {_mm(act.width_m)} mm"
            return f"{act.sheet} is a sheet of {act.laminate}, {size}{_weighed(act.mass_kg)}"
        case Mix():
            resin, hardener = _grams(sum(act.resin_kg)), _grams(sum(act.hardener_kg))
            return f"{act.batch} mixed: {resin} of {act.resin_lot}, {hardener} of {act.hardener_lot}"
        case Cut():
            return f"{_listed(act.pieces)} cut from {act.sheet}"
        case Lay():
            cups = f", wet from {_shares(act.batches)}" if act.batches else ""
            return f"{act.piece} step {act.step} laid from {_shares(act.lots)}{cups}"
        case Bond():
            return f"{_listed(act.pieces)} bonded with {_shares(act.batches)}"
        case Coat():
            how_much = _grams(act.mass_kg) if act.mass_kg is not None else _per_area(act.areal_mass_kg_m2)
            return f"{act.piece or act.cell} coated with {how_much} of {act.batch or act.lot}"
        case Trim():
            how_much = _grams(act.mass_kg) if act.mass_kg is not None else f"{act.area_m2:g} m2"
            return f"{act.piece} trimmed by {how_much}: {act.why}"
        case BuildUp():
            return f"{act.piece} built up by {_grams(act.mass_kg)} of {act.batch or act.lot}"
        case Weigh():
            reading = _grams(sum(act.reading_kg) / len(act.reading_kg))
            if len(act.reading_kg) == 1:
                reading = _read(act, "reading", reading)
            return f"{act.what} weighed at {reading}{f', {act.state}' if act.state else ''}"
        case Fit():
            return f"{act.piece} fitted into {act.into}" if act.into else f"{act.piece} out of {act.out_of}"
        case _:
            return _short_sentence(act)


def _short_sentence(act: Act) -> str | None:
    match act:
        case Scrap():
            return f"{act.what} scrapped: {act.why}"
        case Hold():
            return f"{act.what} on hold: {act.why}"
        case Release():
            return f"{act.what} released: {act.why}"
        case Note():
            return f"{f'about {act.about}: ' if act.about else ''}{act.text}"
        case Withdraw():
            return f"entry {act.seq} withdrawn: {act.why}"
        case Accept():
            return f"{act.finding} accepted for {act.what}: {act.why}"
        case Adopt():
            return f"plan {act.plan} adopted: {act.title}"
        case _:
            return None


def _field_by_field(kind: str, act: Act) -> str:
    typed = dict(act.typed)
    said = []
    for declared in KINDS[kind].fields:
        value = getattr(act, declared.key)
        if value is None or value == ():
            continue
        if declared.word in typed:
            said.append(f"{declared.word} {typed[declared.word]}")
        elif declared.takes is Takes.SHARE:
            said.append(f"{declared.word} {_shares(value)}")
        else:
            said.append(f"{declared.word} {_listed(value) if isinstance(value, tuple) else value}")
    return f"{kind}: {', '.join(said)}"


def _read(act: Act, word: str, value: str) -> str:
    """The value as it was read; where it was typed in another unit, that before it."""
    typed = dict(act.typed).get(word, "")
    unit = re.search(r"[A-Za-z][A-Za-z0-9/ ]*$", typed)
    # 2 US gal is not known again in 0.00757082 m3 alone.
    return value if unit is None or unit.group() in _OWN_UNITS else f"{typed} ({value})"


def _listed(names: tuple[object, ...]) -> str:
    words = [str(name) for name in names]
    return words[0] if len(words) == 1 else f"{', '.join(words[:-1])} and {words[-1]}"


def _shares(shares: tuple[Share, ...]) -> str:
    return _listed(
        tuple(
            share.what if share.mass_kg is None else f"{share.what} {_grams(share.mass_kg)}"
            for share in shares
        )
    )


def _grams(mass_kg: float) -> str:
    return f"{mass_kg * 1000:.6g} g"


def _per_area(areal_mass_kg_m2: float | None) -> str:
    return "an unknown mass" if areal_mass_kg_m2 is None else f"{areal_mass_kg_m2 * 1000:.6g} g/m2"


def _measure(measure: Measure) -> str:
    # What a scale resolves is a fraction of a gram: in kilograms nobody reads it at a glance.
    if measure.unit == "kg" and measure.value < 1:
        return _grams(measure.value)
    return f"{measure.value:.6g} {measure.unit}"


def _weighed(mass_kg: float | None) -> str:
    return "" if mass_kg is None else f", {_grams(mass_kg)}"


def _mm(length_m: float) -> str:
    return f"{length_m * 1000:.6g}"
