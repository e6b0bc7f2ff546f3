"""A small invented build, put into a book without going through files."""

from __future__ import annotations

import contextlib
from collections.abc import Callable
from dataclasses import dataclass
from datetime import UTC, datetime
from pathlib import Path

import pytest

from ledger.book.appending import append_entry
from ledger.book.migrations import MIGRATIONS, run_steps
from ledger.book.names import Known
from ledger.book.opening import connect_new, open_for_writing
from ledger.book.possible import impossible
from ledger.book.resolving import resolve
from ledger.errors import Finding, Where
from ledger.model.acts import Act, Adopt
from ledger.model.entry import Entry
from ledger.model.plan import (
    Form,
    Laminate,
    Material,
    MaterialKind,
    Part,
    PartClass,
    Plan,
    Shape,
    Side,
    Step,
)
from ledger.model.tanks import Cell, Tanks
from ledger.model.vectors import NO_SPREAD, ZERO
from ledger.units import Display

NOON = datetime(2026, 3, 4, 12, 0, tzinfo=UTC)


def _part(name: str, form: Form, made_of: str | None, assembly: str, quantity: int = 1) -> Part:
    return Part(
        name=name,
        title=name.title(),
        part_class=PartClass.RIB,
        side=Side.LEFT,
        assembly=assembly,
        form=form,
        made_of=made_of,
        quantity=quantity,
    )


@pytest.fixture(scope="session")
def plan() -> Plan:
    """Two ribs, a rib made four times, a skin of three plies, a fitting; two assemblies named alike."""
    parts = (
        _part("RIB.01-L", Form.PANEL, "SANDWICH", "WING/LEFT/ribs"),
        _part("RIB.01-R", Form.PANEL, "SANDWICH", "WING/RIGHT/ribs"),
        _part("CLIP", Form.PANEL, "SANDWICH", "WING/LEFT/ribs", quantity=4),
        _part("SKIN-L", Form.SKIN, "PLIES", "WING/LEFT/skins"),
        _part("BOLT", Form.ITEM, None, "WING"),
    )
    return Plan(
        name="r1",
        title="first",
        display=Display.METRIC,
        materials=(
            Material(name="carbon 200", kind=MaterialKind.FABRIC, areal_mass_kg_m2=0.2),
            Material(name="epoxy", kind=MaterialKind.RESIN, density_kg_m3=1150.0),
            Material(name="slow", kind=MaterialKind.HARDENER, density_kg_m3=950.0),
        ),
        laminates=(
            Laminate(name="SANDWICH", areal_mass_kg_m2=1.5),
            Laminate(
                name="PLIES",
                steps=tuple(
                    Step(number=number, material="carbon 200", orientation_deg=angle)
                    for number, angle in ((1, 0.0), (2, 45.0), (3, -45.0))
                ),
            ),
        ),
        parts=parts,
        shapes=tuple(
            Shape(measure=1.0, centroid_m=ZERO, second_m2=NO_SPREAD, digest=part.name) for part in parts
        ),
        tanks=Tanks(cells=(Cell(name="L1", mesh="geometry/L1.obj"),)),
    )


@dataclass(frozen=True, slots=True)
class Shop:
    """A book with its plan, and the way to put an act into it."""

    book: Path
    plan: Plan

    def enter(self, kind: str, act: Act, *, at: datetime = NOON) -> Entry:
        """Resolve and append, in one transaction; a refusal fails the test."""
        with open_for_writing(self.book) as connection:
            known = Known(connection, self.plan)
            resolved = resolve(kind, act, known, where=Where())
            findings = resolved.findings or impossible(kind, resolved.act, known, where=Where())
            assert findings == ()
            return append_entry(connection, kind, resolved.act, by="JK", at=at, logged_at=at)

    def refusals(self, kind: str, act: Act) -> tuple[Finding, ...]:
        """What would be wrong with the act."""
        with open_for_writing(self.book) as connection:
            known = Known(connection, self.plan)
            resolved = resolve(kind, act, known, where=Where())
            return resolved.findings or impossible(kind, resolved.act, known, where=Where())


@pytest.fixture
def make_shop(tmp_path: Path, plan: Plan) -> Callable[[str], Shop]:
    """A fresh book under a name, begun with the plan."""

    def make(name: str) -> Shop:
        book = tmp_path / name
        with contextlib.closing(connect_new(book)) as connection:
            run_steps(connection, MIGRATIONS)
            connection.execute("BEGIN IMMEDIATE")
            connection.execute("INSERT INTO meta VALUES ('book', 'test')")
            adopt = Adopt(plan=plan.name, title=plan.title)
            append_entry(connection, "adopt", adopt, by="JK", at=NOON, logged_at=NOON)
            connection.execute("COMMIT")
        return Shop(book, plan)

    return make


@pytest.fixture
def shop(make_shop: Callable[[str], Shop]) -> Shop:
    """The usual book."""
    return make_shop("wing.book")
