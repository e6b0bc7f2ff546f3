"""Every kind of entry is logged from the bench at 80 x 24, by keyboard alone and by reader alone."""

from __future__ import annotations

from collections.abc import Callable
from contextlib import AbstractAsyncContextManager
from datetime import UTC, datetime
from pathlib import Path
from typing import Any

import pytest

from ledger.model import acts  # noqa: F401  the kinds are declared when this is imported
from ledger.model.declare import KINDS
from ledger.operations.list_findings import list_findings
from ledger.operations.log_entry import log_entry
from ledger.operations.open_build import open_build

# Between the book of the fixture and the clock of the bench.
EARLIER = datetime(2026, 11, 3, 9, 30, tzinfo=UTC)

OpenBench = Callable[..., AbstractAsyncContextManager[Any]]

# Field by field as a person types it, in the units of the labels.
SLIPS: dict[str, dict[str, str]] = {
    "receive": {"material": "twill", "quantity": "5 m2", "maker_code": "T-77"},
    "instrument": {"instrument": "W9", "what": "scale", "resolution": "5 g"},
    "sheet": {"laminate": "PANEL", "length": "1000", "width": "500", "mass": "450"},
    "mix": {"resin_lot": "RESIN-A", "resin": "100", "hardener_lot": "HARD-A", "hardener": "27.1"},
    "cut": {"pieces": "RIB.01-L, RIB.01-R", "sheet": "SHEET-A", "kerf": "3", "offcut": "600 mm x 400 mm"},
    "lay": {"piece": "SKIN.UPR-L", "step": "1", "lots": "GLASS-A", "batches": "CUP-1", "seen_by": "AB"},
    "bond": {"pieces": "RIB.01-L", "batches": "CUP-1 12", "peel_ply_removed": "yes"},
    "coat": {"piece": "FIT.MAIN-L", "batch": "CUP-1", "mass": "12.5"},
    "trim": {"piece": "FIT.MAIN-L", "mass": "3", "why": "sanding"},
    "build_up": {"piece": "FIT.MAIN-L", "mass": "4,5", "batch": "CUP-1"},
    "weigh": {"what": "FIT.MAIN-L", "reading": "641; 642", "scale": "W1", "state": "fin"},
    "fit": {"piece": "FIT.MAIN-L", "into": "WING/LEFT"},
    "scrap": {"what": "GLASS-A", "why": "torn"},
    "hold": {"what": "TWILL-A", "why": "creased"},
    "release": {"what": "HARD-A", "why": "test cup cured"},
    "note": {"text": "radius [/x] looks right", "about": "SKIN.UPR-L"},
    "withdraw": {"seq": "2", "why": "entered twice"},
    "accept": {"finding": "", "what": "", "why": "seen and agreed"},
}
# What a reader sends for the same: numbers off tags, a scale's own text, words off a printed sheet.
SCANS: dict[str, list[str]] = {
    "receive": ["twill", "5.00 m2"],
    "instrument": ["SCALE-9", "scale", "5.0 g"],
    # Laminate and lots stand there already, as last time.
    "sheet": ["1000 mm", "500 mm"],
    "mix": ["+  100.0 g", "HARD-A", "+   27.1 g"],
    "cut": ["RIB.01-L", "RIB.01-R", "SHEET-A"],
    "lay": ["GLASS-A", "CUP-1", "BADGE AB"],
    "bond": ["RIB.01-L", "CUP-1"],
    "coat": ["FIT.MAIN-L", "CUP-1", "12.5 g"],
    "trim": ["FIT.MAIN-L", "3.0 g", "sanding"],
    "build_up": ["FIT.MAIN-L", "4.5 g", "CUP-1"],
    "weigh": ["FIT.MAIN-L", "+  641.0 g", "+  642.0 g"],
    "fit": ["FIT.MAIN-L", "WING/LEFT"],
    "scrap": ["GLASS-A", "torn"],
    "hold": ["TWILL-A", "creased"],
    "release": ["HARD-A", "cured well"],
    "note": ["radius looks right"],
    "withdraw": ["entered twice"],
    "accept": ["seen and agreed"],
}


@pytest.fixture
def ready_book(small_book: Path) -> Path:
    """With a cup, a held hardener and a finding that can be accepted."""
    log_entry(
        small_book,
        "mix",
        {
            "resin_lot": "RESIN-A",
            "resin": "100 g",
            "hardener_lot": "HARD-A",
            "hardener": "41 g",
            "batch": "CUP-1",
        },
        by="MT",
        now=EARLIER,
    )
    log_entry(small_book, "hold", {"what": "HARD-A", "why": "lid open"}, by="MT", now=EARLIER)
    log_entry(
        small_book,
        "lay",
        {"piece": "SKIN.UPR-R", "step": "1", "lots": "GLASS-A", "batches": "CUP-1"},
        by="MT",
        now=EARLIER,
    )
    assert list_findings(small_book)
    return small_book


def wanted_of(kind: str, book: Path) -> dict[str, str]:
    if kind != "accept":
        return SLIPS[kind]
    finding = list_findings(book)[0]
    return {**SLIPS[kind], "finding": finding.code, "what": finding.where.thing or str(finding.where)}


@pytest.mark.parametrize("kind", [kind for kind in KINDS if kind != "adopt"])
async def test_every_kind_is_logged_by_keyboard_alone(
    kind: str, ready_book: Path, open_bench: OpenBench
) -> None:
    wanted = wanted_of(kind, ready_book)
    before = len(open_build(ready_book).logged)
    async with open_bench(ready_book) as bench:
        await bench.type(kind)
        screen = bench.app.work_screen
        await bench.key(*["up"] * screen.desk.slip.at_field)
        for place, field in enumerate(screen.desk.slip.fields):
            # The mark goes past what stands there from last time.
            await bench.key(*["up"] * (screen.desk.slip.at_field - place))
            assert screen.desk.slip.current == field
            if field.word in wanted:
                if screen.desk.slip.value(field.word):
                    await bench.key("delete")
                await bench.type(wanted[field.word])
            else:
                await bench.key("enter")
        assert len(open_build(ready_book).logged) == before
        await bench.key("enter")
        if kind == "withdraw":
            assert "log once more to do it" in bench.said[-1]
            await bench.key("enter")
        if kind == "weigh" and len(open_build(ready_book).logged) == before:
            await bench.type("keep")
        assert screen.desk.slip is None, bench.said
    entry = open_build(ready_book).logged[-1]
    assert (entry.kind, entry.by) == (kind, "JK")
    assert len(open_build(ready_book).logged) == before + 1


@pytest.mark.parametrize("kind", [kind for kind in KINDS if kind != "adopt"])
async def test_every_kind_is_logged_by_reader_alone(
    kind: str, ready_book: Path, open_bench: OpenBench
) -> None:
    before = len(open_build(ready_book).logged)
    async with open_bench(ready_book) as bench:
        if kind == "lay":
            # The piece in hand; without it the slip goes on with the skin laid last.
            await bench.scan("SKIN.UPR-L")
        await bench.scan(kind)
        screen = bench.app.work_screen
        for code in SCANS[kind]:
            await bench.scan(code)
            assert bench.app.rung[-1:] != [2], (code, bench.said)
        assert len(open_build(ready_book).logged) == before
        await bench.scan("TAG LOG")
        if kind == "withdraw":
            await bench.scan("TAG LOG")
        assert screen.desk.slip is None, (bench.said, bench.shown)
    entry = open_build(ready_book).logged[-1]
    assert (entry.kind, entry.by) == (kind, "JK")
