"""Make the sample's log anew: `python sample_builds/two_seater/make_log.py`.

The story is played into a book in a temporary folder, because what a scale shows depends on what was
logged before; every row is then written to log.jsonl beside this file. Scatter comes from one seed.
The plans it adopts are those of plans/, which make_plans.py makes.
"""

from __future__ import annotations

import json
import random
import sys
import tempfile
from collections.abc import Callable
from datetime import UTC, datetime, timedelta
from pathlib import Path

from ledger.operations.adopt_plan import adopt_plan
from ledger.operations.log_entry import log_entry
from ledger.operations.start_book import start_book
from ledger.operations.weigh_up_build import weigh_up_build

HERE = Path(__file__).parent
FIRST_DAY = datetime(2026, 9, 7, 8, 20, tzinfo=UTC)
LAST_MOMENT = datetime(2026, 11, 27, 10, 40, tzinfo=UTC)
SEED = 20260907


class Story:
    """Plays entries one after another and keeps each as a row."""

    def __init__(self, book: Path) -> None:
        self.book = book
        self.rows: list[dict[str, str]] = []
        self.now = FIRST_DAY
        self.chance = random.Random(SEED)
        self.by = "JK"

    def start(self, plan: str) -> None:
        """The book is begun with the plan of the first concept."""
        start_book(self.book, HERE / plan, by=self.by, now=self.now)
        self._adopted(plan)

    def adopt(self, plan: str, minutes: float = 20.0) -> None:
        """A changed plan is taken in."""
        self.now += timedelta(minutes=minutes)
        adopt_plan(self.book, HERE / plan, by=self.by, now=self.now)
        self._adopted(plan)

    def _adopted(self, plan: str) -> None:
        self.rows.append({"kind": "adopt", "at": self.now.isoformat(), "by": self.by, "plan": plan})

    def next_day(self, by: str, days: int = 1, hour: int = 8, minute: int = 30) -> None:
        """Another working day begins."""
        self.by = by
        self.now = (self.now + timedelta(days=days)).replace(hour=hour, minute=minute)

    def log(self, kind: str, minutes: float = 6.0, **fields: str) -> str:
        """Log one entry some minutes later; the number it gave out, if it gave one."""
        self.now += timedelta(minutes=minutes)
        words = {key.rstrip("_"): value for key, value in fields.items()}
        logged = log_entry(self.book, kind, words, by=self.by, now=self.now)
        self.rows.append({"kind": kind, "at": self.now.isoformat(), "by": self.by, **words})
        own = [minted.number for minted in logged.minted if minted.kind.value != "piece"]
        return own[0] if own else ""

    def expected_g(self, piece: str) -> float:
        """What the scale should show for a piece, from what was logged."""
        number = piece.rpartition("/")[0]
        part = next(part for part in weigh_up_build(self.book).report.parts if part.part == number)
        for mass in part.pieces:
            if mass.piece == piece and mass.expected_kg is not None:
                return 1000.0 * mass.expected_kg
        return 1000.0 * part.best_kg / part.quantity

    def weigh(
        self, piece: str, scale: str, *, off: float = 0.0, spread: float = 0.012, **fields: str
    ) -> None:
        """Weigh a piece: its expected mass with scatter, and what the story puts on top, in grams."""
        true_g = (
            self.expected_g(piece if "/" in piece else f"{piece}/1") * self.chance.gauss(1.0, spread) + off
        )
        step = 0.1 if scale == "W1" else 5.0
        readings = [round((true_g + self.chance.gauss(0.0, 0.3 * step)) / step) * step for _ in range(2)]
        self.log(
            "weigh",
            what=piece,
            reading="; ".join(f"{value:.1f} g" for value in readings),
            scale=scale,
            **fields,
        )

    def mix(self, resin_lot: str, hardener_lot: str, grams: float, ratio: float, **fields: str) -> str:
        """A cup by scale: resin as poured, hardener near what it wants."""
        resin = round(grams * self.chance.gauss(1.0, 0.01), 1)
        hardener = round(resin * ratio * self.chance.gauss(1.0, 0.006), 1)
        return self.log(
            "mix",
            resin_lot=resin_lot,
            resin=f"{resin} g",
            hardener_lot=hardener_lot,
            hardener=f"{hardener} g",
            method="scale",
            scale="W3",
            **fields,
        )


def stock(story: Story) -> dict[str, str]:
    """Scales and deliveries of the first two days."""
    story.log(
        "instrument",
        instrument="W1",
        what="scale",
        resolution="0.1 g",
        accuracy="0.3 g",
        capacity="6 kg",
        due="2027-06-30",
    )
    story.log(
        "instrument",
        instrument="W2",
        what="scale",
        resolution="5 g",
        accuracy="10 g",
        capacity="60 kg",
        due="2027-06-30",
    )
    story.log(
        "instrument",
        instrument="W3",
        what="scale",
        resolution="0.1 g",
        accuracy="0.2 g",
        capacity="2 kg",
        due="2027-03-31",
    )
    deliveries = (
        ("twill", "carbon twill 200", "60 m2", {"areal_mass": "203 g/m2", "maker_code": "T2-1187"}),
        ("twill2", "carbon twill 200", "40 m2", {"areal_mass": "198 g/m2", "maker_code": "T2-1203"}),
        ("glass", "glass plain 80", "20 m2", {"maker_code": "G80-044"}),
        ("resin", "lam resin", "10 kg", {"expiry": "2027-08-31", "ratio": "100:27", "pot_life": "25 min"}),
        ("hardener", "lam hardener", "3 kg", {"expiry": "2027-06-30"}),
        ("resin2", "lam resin", "10 kg", {"expiry": "2027-09-30", "ratio": "100:27", "pot_life": "25 min"}),
        ("bond", "bond base", "4 kg", {"expiry": "2027-05-31"}),
        ("bond_h", "bond hardener", "2 kg", {"expiry": "2027-05-31"}),
        ("foam3", "foam 75 x 3", "12 m2", {"density": "78 kg/m3"}),
        ("foam6", "foam 75 x 6", "6 m2", {"density": "81 kg/m3"}),
        ("foam10", "foam 75 x 10", "6 m2", {"density": "76 kg/m3"}),
        ("block", "block foam 80", "4 kg", {}),
        ("strip", "pultruded strip 60 x 3", "16 m", {}),
        ("sealant", "tank sealant", "3 kg", {"expiry": "2027-02-28"}),
        ("sealant_h", "sealant hardener", "0.4 kg", {"expiry": "2027-02-28"}),
        ("peel", "peel ply 85", "40 m2", {}),
    )
    return {
        key: story.log("receive", material=material, quantity=quantity, **more)
        for key, material, quantity, more in deliveries
    }


def panels(story: Story, lots: dict[str, str]) -> None:
    """Sheets pressed, weighed and routed into ribs and webs; ribs weighed as they come off."""
    story.next_day("JK")
    story.log("note", text="One spar and a wet nose hold too little fuel: a grid of webs and ribs instead")
    story.adopt("plans/r1")
    story.next_day("MT", days=2)
    six = [
        story.log(
            "sheet",
            laminate="PANEL 6",
            length="1200 mm",
            width="1000 mm",
            mass=mass,
            lots=f"{lots['twill']}; {lots['foam6']}",
        )
        for mass in ("1608 g", "1655 g")
    ]
    ten = [
        story.log(
            "sheet",
            laminate="PANEL 10",
            length="2200 mm",
            width="600 mm",
            mass=mass,
            lots=f"{lots['twill']}; {lots['foam10']}",
        )
        for mass in ("2168 g", "2144 g", "2239 g")
    ]
    first_cuts(story, six[1], ten[1])
    story.next_day("JK")
    for side, sheet in (("L", six[0]), ("R", six[1])):
        front = [f"RIB.F{index}-{side}" for index in range(1, 10 if side == "L" else 8)]
        rear = [f"RIB.A{index}-{side}" for index in range(1, 8)]
        for pieces in (front[:4], front[4:], rear[:4], rear[4:]):
            story.log(
                "cut", 25, pieces="; ".join(pieces), sheet=sheet, revision="3", kerf="3 mm", angle="0 deg"
            )
        story.next_day("MT")
    story.log(
        "cut",
        pieces="WEB.F.IN-L; WEB.M.IN-L; WEB.R.IN-L",
        sheet=ten[0],
        revision="2",
        kerf="3 mm",
        offcut="700 mm x 500 mm",
    )
    story.log(
        "cut",
        40,
        pieces="WEB.F.OUT-L; WEB.M.OUT-L; WEB.R.OUT-L",
        sheet=ten[1],
        revision="2",
        kerf="3 mm",
        offcut="650 mm x 500 mm",
    )
    story.log(
        "cut",
        40,
        pieces="WEB.F.IN-R; WEB.M.IN-R; WEB.R.IN-R",
        sheet=ten[2],
        revision="2",
        kerf="3 mm",
        offcut="scrapped",
    )
    story.log(
        "note",
        text="Router lost its zero on the middle of sheet three; edges checked, all within 0.3 mm",
        about=ten[2],
    )
    story.log("scrap", what="RIB.A4-R", why="hole for the wiring routed in the wrong place")
    story.log("cut", pieces="RIB.A4-R", sheet=six[1], revision="4", kerf="3 mm")
    story.log("hold", what="RIB.F8-R/1", why="kept for stock")
    story.log("cut", pieces="RIB.F8-R/2", sheet=six[1], revision="4", kerf="3 mm")
    story.next_day("JK")
    for side in "LR":
        for index in range(1, 8):
            if (side, index) != ("R", 7):
                story.weigh(f"RIB.F{index}-{side}", "W1", state="finished")
    for index in (1, 2, 3, 4, 5):
        story.weigh(f"RIB.A{index}-L", "W1", state="finished")
    story.weigh("RIB.A4-R/2", "W1", state="finished")
    for web in ("WEB.F.IN-L", "WEB.M.IN-L", "WEB.R.IN-L", "WEB.F.OUT-L"):
        story.weigh(web, "W1", spread=0.006, state="after trim")


def first_cuts(story: Story, six: str, ten: str) -> None:
    """Two ribs and a web are routed to r1 before the second web is moved aft: then they no longer fit."""
    story.log("cut", 60, pieces="RIB.F8-R; RIB.F9-R", sheet=six, revision="2", kerf="3 mm", angle="0 deg")
    story.log("cut", 30, pieces="WEB.M.OUT-R", sheet=ten, revision="1", kerf="3 mm")
    story.next_day("JK")
    story.log("note", text="Main fitting stands 40 mm ahead of where it has to be: second web goes aft")
    story.adopt("plans/r2")


def lay_up(
    story: Story, piece: str, steps: list[tuple[str, str, float]], cups: Callable[[float], str], seen: str
) -> None:
    """Lay steps of a skin in order; a step with grams of resin is wetted from a new cup."""
    for number, (lot, orientation, grams) in enumerate(steps, start=1):
        fields = {"piece": piece, "step": str(number), "lots": lot}
        if orientation:
            # A left piece is the mirror of a right one: +45 there is -45 here.
            mirrored = piece.endswith("-L") and orientation != "0 deg"
            fields["orientation"] = f"-{orientation}" if mirrored else orientation
        if grams:
            fields["batches"] = f"{cups(grams)} {grams:.0f} g"
        if number % 2 == 0:
            fields["seen_by"] = seen
        story.log("lay", 9, **fields)


def skins(story: Story, lots: dict[str, str]) -> None:
    """Noses, then lower skins; one cup of the left lower skin has too much hardener."""
    twill, twill2, glass, foam, peel = (lots[key] for key in ("twill", "twill2", "glass", "foam3", "peel"))

    def good_cup(grams: float) -> str:
        return story.mix(
            lots["resin"], lots["hardener"], grams / 1.27 * 1.12, 0.27, residue=f"{grams * 0.1:.0f} g"
        )

    for side, by in (("L", "JK"), ("R", "MT")):
        story.next_day(by, days=2)
        nose = [
            (glass, "0 deg", 48.0),
            (twill, "45 deg", 108.0),
            (twill, "0 deg", 106.0),
            (twill, "45 deg", 110.0),
        ]
        lay_up(story, f"SKIN.LE-{side}", nose, good_cup, "AB")
    story.next_day("JK", days=3)
    story.weigh("SKIN.LE-L", "W1", spread=0.004, state="after trim", present="peel ply 12 g")
    story.log(
        "build_up", piece="SKIN.LE-L", mass="14.2 g", batch=good_cup(30.0), why="filler at the nose joint"
    )
    steps = [
        (glass, "0 deg", 219.0),
        (twill, "45 deg", 508.0),
        (twill, "45 deg", 514.0),
        (foam, "", 360.0),
        (twill2, "45 deg", 520.0),
        (twill2, "0 deg", 156.0),
        (peel, "", 0.0),
    ]
    heavy = [(lot, turn, grams * 1.22) for lot, turn, grams in steps]
    story.next_day("MT", days=2)
    bad: list[str] = []

    def left_cup(grams: float) -> str:
        if len(bad) == 5:
            number = bad[4]
        elif len(bad) == 4:
            resin = round((grams + 186.0) / 1.27 * 1.06, 1)
            number = story.log(
                "mix",
                resin_lot=lots["resin"],
                resin=f"{resin} g",
                hardener_lot=lots["hardener"],
                hardener=f"{resin * 0.312:.1f} g",
                method="scale",
                scale="W3",
                residue="34 g",
            )
        else:
            number = good_cup(grams)
        bad.append(number)
        return number

    lay_up(story, "SKIN.LWR-L", heavy, left_cup, "AB")
    story.log("note", text="Shop 14 C this morning, resin thick, hard to wet out", about="SKIN.LWR-L")
    story.next_day("MT", days=3)
    lay_up(story, "SKIN.LWR-R", steps, good_cup, "JK")
    story.next_day("JK", days=3)
    story.weigh("SKIN.LWR-L", "W2", off=330.0, spread=0.002, state="before trim", present="peel ply 226 g")
    story.log("trim", piece="SKIN.LWR-L", mass="118 g", why="edge trim")
    story.weigh("SKIN.LWR-R", "W2", spread=0.004, state="before trim")
    story.log("trim", piece="SKIN.LWR-R", mass="104 g", why="edge trim")


def assembly(story: Story, lots: dict[str, str]) -> None:
    """Caps and fittings weighed; ribs and webs bonded to the left lower skin; bays sealed."""
    story.next_day("AB", days=2)
    for side in "LR":
        story.weigh(f"CAP.LWR-{side}", "W1", spread=0.006, state="finished")
    story.weigh("CAP.UPR-L", "W1", spread=0.006, state="finished")
    for piece in (
        "FIT.MAIN-L",
        "FIT.MAIN-R",
        "FIT.REAR-L",
        "FIT.OUTLET-L",
        "FIT.OUTLET-R",
        "FIT.FILLER-L",
        "FIT.VENT-L",
    ):
        story.weigh(piece, "W1", spread=0.008, state="finished")
    story.weigh("CLO.TIP-L", "W1", spread=0.03, state="finished")
    story.next_day("JK", days=2)
    cup = story.mix(lots["bond"], lots["bond_h"], 62.0, 0.44)
    story.log(
        "bond",
        pieces="JNT.LWR-L; WEB.F.IN-L; WEB.M.IN-L; WEB.R.IN-L; SKIN.LWR-L",
        batches=f"{cup} 84 g",
        surface="sanded 180, wiped",
        peel_ply_removed="yes",
    )
    cup = story.mix(lots["bond"], lots["bond_h"], 40.0, 0.44)
    story.log(
        "bond",
        12,
        pieces="JNT.RIB-L; RIB.F1-L; RIB.F2-L; RIB.F3-L; RIB.A1-L; RIB.A2-L; RIB.A3-L; SKIN.LWR-L",
        batches=f"{cup} 41 g",
        surface="sanded 180, wiped",
        peel_ply_removed="yes",
    )
    story.next_day("JK")
    for piece in (
        "SKIN.LWR-L",
        "WEB.F.IN-L",
        "WEB.M.IN-L",
        "WEB.R.IN-L",
        "JNT.LWR-L",
        "JNT.RIB-L",
        "CAP.LWR-L",
    ):
        story.log("fit", 2, piece=piece, into="WING/LEFT")
    for row in "FA":
        for index in (1, 2, 3):
            story.log("fit", 2, piece=f"RIB.{row}{index}-L", into="WING/LEFT")
    story.next_day("AB", days=3)
    for cell in ("L1", "L2", "L3"):
        cup = story.mix(lots["sealant"], lots["sealant_h"], 190.0, 0.10)
        story.log("coat", 20, cell=cell, batch=cup, mass=f"{story.chance.gauss(188.0, 6.0):.0f} g")
    story.log("hold", what=lots["sealant"], why="tin found open in the morning")
    story.log(
        "note", text="Sealant cup cured hard overnight, shore check as it should be", about=lots["sealant"]
    )
    story.log("release", what=lots["sealant"], why="test cup cured as it should")


def today(story: Story, lots: dict[str, str]) -> None:
    """The morning the demo opens on: the upper left skin at its third ply, two cups running, one past."""
    story.by = "JK"
    story.now = LAST_MOMENT - timedelta(minutes=80)
    # Its rest was weighed when it was thrown away: one past cup on the bench is enough to look at.
    old = story.mix(lots["resin2"], lots["hardener"], 196.0, 0.27, residue="30.2 g")
    story.log(
        "lay",
        5,
        piece="SKIN.UPR-L",
        step="1",
        lots=lots["glass"],
        orientation="0 deg",
        batches=f"{old} 217 g",
    )
    story.now = LAST_MOMENT - timedelta(minutes=52)
    story.mix(lots["bond"], lots["bond_h"], 60.0, 0.44)
    story.now = LAST_MOMENT - timedelta(minutes=22)
    first = story.mix(lots["resin2"], lots["hardener"], 464.0, 0.27)
    story.log(
        "lay",
        7,
        piece="SKIN.UPR-L",
        step="2",
        lots=lots["twill2"],
        orientation="-45 deg",
        batches=f"{first} 514 g",
        seen_by="AB",
    )
    story.now = LAST_MOMENT - timedelta(minutes=6)
    story.mix(lots["resin2"], lots["hardener"], 400.0, 0.27)
    story.now = LAST_MOMENT - timedelta(minutes=1)
    story.log("note", 1, text="AB cutting the third ply of the upper left skin", about="SKIN.UPR-L")


def make_log(folder: Path) -> None:
    """Play the story and write log.jsonl into `folder`."""
    with tempfile.TemporaryDirectory() as scratch:
        story = Story(Path(scratch) / "story.wingledger")
        story.start("plans/r0")
        lots = stock(story)
        panels(story, lots)
        skins(story, lots)
        assembly(story, lots)
        today(story, lots)
    rows = [json.dumps(row, ensure_ascii=False) for row in story.rows]
    (folder / "log.jsonl").write_text("\n".join(rows) + "\n", encoding="utf-8")


if __name__ == "__main__":
    make_log(Path(sys.argv[1]) if len(sys.argv) > 1 else HERE)
