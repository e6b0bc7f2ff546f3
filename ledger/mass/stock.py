"""What lots and sheets weigh: by their own figures where they have any, else by the material's."""

from __future__ import annotations

from collections.abc import Iterator

from ledger.mass.laminate import Layer, dry_areal_mass, layer_of
from ledger.mass.plan_index import Indexes, Nominal
from ledger.model.plan import Form, Step
from ledger.model.snapshot import Lot


class Stock:
    """Lots and sheets as layers. What is found is kept: one lot goes into thousands of plies."""

    def __init__(self, indexes: Indexes) -> None:
        self._indexes = indexes
        self._lot_layers: dict[tuple[str, int, int], Layer | None] = {}
        self._sheets: dict[str, tuple[float | None, bool]] = {}
        self._covered: dict[tuple[str, int], frozenset[int] | None] = {}

    def lot_layer(self, number: str, piece: str, step: int, layer: Layer | None) -> Layer | None:
        """A step as this lot makes it; None where neither the lot nor the plan says what it weighs."""
        key = (number, id(layer), step)
        if key not in self._lot_layers:
            self._lot_layers[key] = self._read_lot_layer(number, piece, step, layer)
        return self._lot_layers[key]

    def is_measured(self, number: str) -> bool:
        """Whether the lot has a figure of its own."""
        lot = self._indexes.snapshot.lots.get(number)
        if lot is None:
            return False
        return lot.receive.areal_mass_kg_m2 is not None or lot.receive.density_kg_m3 is not None

    def sheet_areal_mass(self, number: str) -> tuple[float | None, bool]:
        """A sheet's areal mass, and whether it is by its own weighing; else by its lots, else nominal."""
        if number not in self._sheets:
            self._sheets[number] = self._read_sheet(number)
        return self._sheets[number]

    def steps_in_sheet(self, nominal: Nominal | None, sheet: str) -> frozenset[int] | None:
        """The steps of a piece that its sheet already holds; None for all of them."""
        key = (sheet, id(nominal))
        if key not in self._covered:
            self._covered[key] = self._read_covered(nominal, sheet)
        return self._covered[key]

    def materials_in(self, source: str) -> Iterator[str]:
        """The materials of a lot, or of both lots of a batch."""
        batch = self._indexes.snapshot.batches.get(source)
        numbers = (source,) if batch is None else (batch.mix.resin_lot, batch.mix.hardener_lot)
        for number in numbers:
            lot = self._indexes.snapshot.lots.get(number)
            if lot is not None:
                yield lot.receive.material

    def _read_lot_layer(self, number: str, piece: str, step: int, layer: Layer | None) -> Layer | None:
        lot = self._indexes.snapshot.lots.get(number)
        material = None if lot is None else self._indexes.material(lot.receive.material)
        if lot is None or material is None:
            return layer
        nominal = self._indexes.nominal(piece)
        if layer is not None and nominal is not None and not nominal.flat:
            return _solid_by_lot(layer, nominal, lot)
        if layer is not None and layer.material not in self._indexes.of(piece).materials:
            # A plain areal mass stands for a whole laminate, which no one lot can change.
            return layer
        fraction = None if layer is None else layer.resin_fraction
        asked = Step(number=step, material=material.name, resin_fraction=fraction)
        areal, density = lot.receive.areal_mass_kg_m2, lot.receive.density_kg_m3
        found = layer_of(asked, material, areal_mass_kg_m2=areal, density_kg_m3=density)
        if found is not None:
            return found
        dry = dry_areal_mass(material, areal_mass_kg_m2=areal, density_kg_m3=density)
        if dry is None:
            return layer
        return Layer(number=step, material=material.name, kind=material.kind, dry=dry, resin=0.0)

    def _read_sheet(self, number: str) -> tuple[float | None, bool]:
        known = self._indexes.snapshot.sheets.get(number)
        if known is None:
            return None, False
        sheet = known.sheet
        if sheet.mass_kg is not None and sheet.length_m > 0.0 and sheet.width_m > 0.0:
            return sheet.mass_kg / (sheet.length_m * sheet.width_m), True
        layers = self._indexes.now.layers_of(sheet.laminate)
        laminate = self._indexes.now.laminates.get(sheet.laminate)
        if layers is None or laminate is None:
            return None, False
        lots = {
            lot.receive.material: lot
            for lot in (self._indexes.snapshot.lots.get(name) for name in sheet.lots)
            if lot is not None
        }
        steps = {step.number: step for step in laminate.steps}
        by_lots = [
            self._sheet_layer(layer, steps.get(layer.number), lots.get(layer.material)) for layer in layers
        ]
        return sum(layer.whole for layer in by_lots), False

    def _sheet_layer(self, layer: Layer, step: Step | None, lot: Lot | None) -> Layer:
        material = self._indexes.material(layer.material)
        if lot is None or step is None or material is None:
            return layer
        by_lot = layer_of(
            step,
            material,
            areal_mass_kg_m2=lot.receive.areal_mass_kg_m2,
            density_kg_m3=lot.receive.density_kg_m3,
        )
        return layer if by_lot is None else by_lot

    def _read_covered(self, nominal: Nominal | None, sheet: str) -> frozenset[int] | None:
        known = self._indexes.snapshot.sheets.get(sheet)
        if nominal is None or nominal.layers is None or known is None:
            return None
        if known.sheet.laminate == nominal.part.made_of:
            return None
        held = [layer.material for layer in self._indexes.now.layers_of(known.sheet.laminate) or ()]
        covered = set()
        for layer in nominal.layers:
            if layer.material in held:
                held.remove(layer.material)
                covered.add(layer.number)
        return frozenset(covered) if covered else None


def _solid_by_lot(layer: Layer, nominal: Nominal, lot: Lot) -> Layer:
    """A solid by its lot's density; a run or an item has no figure that a lot gives."""
    density = lot.receive.density_kg_m3
    if nominal.part.form is not Form.SOLID or density is None:
        return layer
    return Layer(number=layer.number, material=layer.material, kind=layer.kind, dry=density, resin=0.0)
