"""What each weighing says: the net mass, how sure it is, and what was on the scale."""

from __future__ import annotations

from dataclasses import dataclass
from math import sqrt

from ledger.mass.deposits import Deposits
from ledger.mass.laminate import WET_KINDS
from ledger.mass.magnitudes import (
    ACCURACY_STEPS,
    BOUND_TO_U,
    STATED_GRAMS,
    STEP_TO_U,
    UNNAMED_SCALE_SHARE,
)
from ledger.mass.plan_index import Indexes
from ledger.mass.report import Disagreement
from ledger.mass.spread import Source
from ledger.model.acts import Fit, Instrument, Weigh
from ledger.model.entry import Logged
from ledger.model.plan import MaterialKind
from ledger.model.things import Share


@dataclass(frozen=True, slots=True, kw_only=True)
class Weighing:
    """One weighing of a thing. `contents` is what was on the scale; of a piece alone, only itself."""

    what: str
    place: int
    seq: int
    net_kg: float
    step_kg: float
    sources: tuple[Source, ...]
    contents: tuple[str, ...]
    presumed: bool = False


def scale_step(scale: Instrument | None) -> float | None:
    """One step of the display in kg; None where no scale was named."""
    return None if scale is None or scale.resolution.unit != "kg" else scale.resolution.value


def reading_sources(act: Weigh, seq: int, scale: Instrument | None) -> list[Source]:
    """The calibration and the tare of the scale are shared by its readings; the display's step is not."""
    readings = act.reading_kg
    mean = sum(readings) / len(readings)
    scatter = 0.0
    if len(readings) > 1:
        scatter = sum((one - mean) ** 2 for one in readings) / (len(readings) - 1) / len(readings)
    step = scale_step(scale)
    if scale is None or step is None:
        return [(("scale", None), UNNAMED_SCALE_SHARE * abs(mean)), (("reading", seq), sqrt(scatter))]
    known = scale.accuracy is not None and scale.accuracy.unit == "kg"
    accuracy = scale.accuracy.value if known and scale.accuracy is not None else ACCURACY_STEPS * step
    # Readings of one load can all fall on one step, so averaging them does not narrow the step itself.
    sources: list[Source] = [
        (("scale", scale.instrument), accuracy * BOUND_TO_U),
        (("reading", seq), sqrt(scatter + (step * STEP_TO_U) ** 2)),
    ]
    if act.tare_kg is not None:
        sources.append((("tare", scale.instrument, act.tare_kg), step * STEP_TO_U))
    return sources


def readings_apart(seq: int, act: Weigh, scale: Instrument | None) -> Disagreement | None:
    """Readings within one weighing that differ by more than steps of the display and chance allow."""
    if len(act.reading_kg) < 2:
        return None
    step = scale_step(scale)
    if step is None:
        allowed = 2.0 * UNNAMED_SCALE_SHARE * max(act.reading_kg)
    else:
        # Two readings of one load can differ by a step with nothing changed.
        allowed = step + 2.0 * sqrt(2.0) * STEP_TO_U * step
    apart = max(act.reading_kg) - min(act.reading_kg)
    if apart <= allowed:
        return None
    return Disagreement(piece=act.what, seq=seq, earlier_seq=seq, difference_kg=apart, allowed_kg=allowed)


class Weighings:
    """The weighings that count, read in the order they happened while keeping where everything sits.

    `alone` has all weighings of each piece alone, `groups` the last of each thing with its contents.
    """

    def __init__(self, indexes: Indexes, deposits: Deposits) -> None:
        self.alone: dict[str, list[Weighing]] = {}
        self.groups: dict[str, Weighing] = {}
        self.apart: list[Disagreement] = []
        self.sitting = Sitting(indexes)
        self._indexes = indexes
        self._deposits = deposits
        last = {act.what: place for place, _, act in deposits.weighings}
        events: list[tuple[int, Fit | tuple[Logged, Weigh]]] = [*deposits.fits]
        events += [(place, (logged, act)) for place, logged, act in deposits.weighings]
        events.sort(key=lambda event: event[0])
        for place, event in events:
            if isinstance(event, Fit):
                self.sitting.fit(event)
            elif event[1].what in indexes.snapshot.pieces:
                self.weigh_piece(place, *event)
            elif last[event[1].what] == place:
                self._weigh_assembly(place, *event)

    def weigh_piece(self, place: int, logged: Logged, act: Weigh) -> None:
        """A piece on the scale, alone or with what is fitted to it."""
        everything = (act.what, *self.sitting.inside(act.what))
        weighing = self._read(place, logged, act, everything)
        if len(weighing.contents) > 1:
            self.groups[act.what] = weighing
        else:
            self.groups.pop(act.what, None)
            self.alone.setdefault(act.what, []).append(weighing)

    def _weigh_assembly(self, place: int, logged: Logged, act: Weigh) -> None:
        contents, presumed = self.sitting.of_assembly(act.what, place, self._deposits)
        self.groups[act.what] = self._read(place, logged, act, contents, presumed=presumed)

    def _read(
        self, place: int, logged: Logged, act: Weigh, contents: tuple[str, ...], *, presumed: bool = False
    ) -> Weighing:
        scale = self.scale_of(act)
        apart = readings_apart(logged.seq, act, scale)
        if apart is not None:
            self.apart.append(apart)
        net, sources = _net(self._indexes, self._deposits, logged, act, scale)
        return Weighing(
            what=act.what,
            place=place,
            seq=logged.seq,
            net_kg=net,
            step_kg=scale_step(scale) or 0.0,
            sources=tuple(sources),
            contents=_on_scale(contents, act, self.sitting, place, self._deposits),
            presumed=presumed,
        )

    def scale_of(self, act: Weigh) -> Instrument | None:
        """The scale an entry names, where it is one of the shop's."""
        known = self._indexes.snapshot.scales.get(act.scale) if act.scale is not None else None
        return None if known is None else known.instrument


def _on_scale(
    contents: tuple[str, ...], act: Weigh, sitting: Sitting, place: int, deposits: Deposits
) -> tuple[str, ...]:
    """The contents less what was said to be missing, and less what had been scrapped by then."""
    away = set(act.missing)
    for one in act.missing:
        away.update(sitting.inside(one))
    scrapped = deposits.scrapped
    return tuple(one for one in contents if one not in away and scrapped.get(one, place) >= place)


def _net(
    indexes: Indexes, deposits: Deposits, logged: Logged, act: Weigh, scale: Instrument | None
) -> tuple[float, list[Source]]:
    sources = reading_sources(act, logged.seq, scale)
    net = sum(act.reading_kg) / len(act.reading_kg) - (act.tare_kg or 0.0)
    for share in act.present:
        mass = share.mass_kg if share.mass_kg is not None else _nominal_present(share, act.what, indexes)
        if mass is None:
            deposits.not_known(
                act.what,
                logged.seq,
                f"{share.what} was on the scale and its mass is not known, so the reading holds it",
                "correct the weighing with its grams",
            )
            continue
        net -= mass
        if mass:
            sources.append((("present", logged.seq, share.what), STATED_GRAMS * mass))
    return net, sources


def _nominal_present(share: Share, what: str, indexes: Indexes) -> float | None:
    """Peel ply and the like by its areal mass over the piece, where the plan knows it."""
    material = indexes.material(share.what)
    nominal = indexes.nominal(what)
    area = None if nominal is None else nominal.area_m2
    if material is None or material.areal_mass_kg_m2 is None or area is None:
        return None
    if material.kind is not MaterialKind.PROCESS and material.kind not in WET_KINDS:
        return None
    return material.areal_mass_kg_m2 * area


class Sitting:
    """Where every piece and assembly sits at one moment."""

    def __init__(self, indexes: Indexes) -> None:
        self.indexes = indexes
        self._holds: dict[str, dict[str, None]] = {}
        self._sits_in: dict[str, str | None] = {}
        self._below: dict[str, list[str]] = {}
        for path in indexes.now.assemblies:
            self._below.setdefault(_above(path), []).append(path)

    def fit(self, act: Fit) -> None:
        """Move a piece or an assembly to where it goes; it can be in one place at a time."""
        before = self._sits_in.get(act.piece)
        if before is not None:
            self._holds[before].pop(act.piece, None)
        self._sits_in[act.piece] = act.into
        if act.into is not None:
            self._holds.setdefault(act.into, {})[act.piece] = None

    def holders_of(self, what: str) -> tuple[str, ...]:
        """The pieces it is fitted into, from the nearest out."""
        found: list[str] = []
        above = self._sits_in.get(what)
        while above is not None and above not in found:
            if above in self.indexes.snapshot.pieces:
                found.append(above)
            above = self._sits_in.get(above)
        return tuple(found)

    def inside(self, what: str) -> tuple[str, ...]:
        """Every piece fitted into a thing, however deep."""
        found: dict[str, None] = {}
        waiting = [what]
        seen = {what}
        while waiting:
            here = waiting.pop()
            for one in (*self._holds.get(here, ()), *self._below.get(here, ())):
                # An assembly moved by an entry sits where the entry says, not where its path does.
                if one in seen or (one in self._sits_in and self._sits_in[one] != here):
                    continue
                seen.add(one)
                waiting.append(one)
                if one in self.indexes.snapshot.pieces:
                    found[one] = None
        return tuple(found)

    def of_assembly(self, path: str, place: int, deposits: Deposits) -> tuple[tuple[str, ...], bool]:
        """What was in an assembly: what was fitted, else its planned pieces begun by then; and its coats."""
        fitted = self.inside(path)
        coats = tuple(
            cell
            for cell, coats in deposits.by_cell.items()
            if coats[0].place <= place and is_under(home_of_cell(cell, self.indexes), path)
        )
        if fitted:
            return fitted + coats, False
        planned = []
        for piece in self.indexes.snapshot.pieces.values():
            part = self.indexes.of(piece.name).parts.get(piece.part)
            begun = deposits.first_place.get(piece.name)
            if part is None or begun is None or begun > place or not is_under(part.assembly, path):
                continue
            if self._sits_in.get(piece.name) is None and piece.name not in self.indexes.snapshot.gone:
                planned.append(piece.name)
        return tuple(planned) + coats, True


def is_under(assembly: str, path: str) -> bool:
    """Whether an assembly is the one of that path or part of it."""
    return path in ("", assembly) or assembly.startswith(path + "/")


def _above(path: str) -> str:
    return path.rpartition("/")[0]


def home_of_cell(cell: str, indexes: Indexes) -> str:
    """The assembly that carries a cell's coats.

    A tank's structure is not named in a plan. The assembly whose last name is the tank's stands for
    it; failing that, the deepest assembly that holds every part.
    """
    tank = next((tank.name for tank in indexes.now.plan.tanks.tanks if cell in tank.cells), None)
    paths = indexes.now.assemblies
    if tank is not None:
        for path in paths:
            if path.rpartition("/")[2].casefold() == tank.casefold():
                return path
    common: list[str] | None = None
    for part in indexes.now.plan.parts:
        steps = part.assembly.split("/") if part.assembly else []
        if common is None:
            common = steps
        else:
            shared = 0
            while shared < min(len(common), len(steps)) and common[shared] == steps[shared]:
                shared += 1
            common = common[:shared]
    return "/".join(common or [])
