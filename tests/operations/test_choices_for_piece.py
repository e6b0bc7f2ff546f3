"""Built pieces that a further iteration no longer wants, and each choice made as it is written."""

from __future__ import annotations

import shlex
from datetime import UTC, datetime, timedelta
from pathlib import Path
from typing import Any

import pytest

from ledger.operations.adopt_plan import adopt_plan
from ledger.operations.compare_iterations import compare_iterations
from ledger.operations.list_findings import list_findings
from ledger.operations.log_entry import log_entry
from ledger.operations.start_book import start_book
from ledger.reports.compare_lines import choice_lines

NOON = datetime(2026, 3, 4, 12, 0, tzinfo=UTC)
# What only a builder can fill in.
ANSWERS = {"why": "measured", "sheet": "PLATE", "lots": "L-1", "reading": "20 g", "batches": ""}


class Bench:
    """A book in the middle of a build, with stock for whatever is chosen."""

    def __init__(self, drawing: Any, tmp_path: Path) -> None:
        self.drawing = drawing
        self.folder = tmp_path
        self.book = tmp_path / "wing.book"
        self.now = NOON
        self.rows = [drawing.rib("RIB"), drawing.rib("CLIP", quantity=2), drawing.PLIES,
                     drawing.item("PIN", "12 g"), drawing.item("KNOB", "5 g")]  # fmt: skip
        start_book(self.book, drawing.write(tmp_path / "r1", "r1", self.rows), by="JK", now=NOON)
        self.log("receive", material="cloth", quantity="20 m2", lot="L-1")
        self.log("sheet", laminate="SHEET", length="3 m", width="1 m", sheet="PLATE", mass="4.5 kg")
        self.log("cut", pieces="RIB; CLIP/1; CLIP/2", sheet="PLATE")
        self.log("fit", piece="RIB", into="WING")
        self.log("lay", piece="PLIES", step="1", lots="L-1")
        for name in ("PIN", "KNOB"):
            self.log("weigh", what=name, reading="13 g")

    def log(self, kind: str, **fields: str) -> None:
        """One entry, a minute later."""
        self.now += timedelta(minutes=1)
        log_entry(
            self.book, kind, {word: text for word, text in fields.items() if text}, by="JK", now=self.now
        )

    def adopt(self) -> None:
        """A second iteration that changes every part and drops the knob."""
        drawing = self.drawing
        rows = [
            drawing.rib("RIB", file="long"),
            drawing.rib("CLIP", x=0.1, quantity=2),
            self.rows[2],
            drawing.item("PIN", "14 g", 0.1),
        ]
        adopt_plan(
            self.book, drawing.write(self.folder / "r2", "r2", rows, steps=(0, 90)), by="JK", now=self.now
        )

    def unfit(self) -> dict[str, Any]:
        """What no longer fits, by name."""
        return {one.piece: one for one in compare_iterations(self.book, "r1", "r2").no_longer_fits}

    def choose(self, piece: str, choice: str) -> None:
        """Make the entries of a choice, filling in what only a builder knows."""
        for entry in next(one for one in self.unfit()[piece].choices if one.choice == choice).entries:
            self.log(entry.kind, **dict(entry.fields), **{word: ANSWERS[word] for word in entry.asks})

    def open_findings(self) -> set[str]:
        """The pieces that the rule still names."""
        return {
            str(finding.where)
            for finding in list_findings(self.book)
            if finding.code == "built-to-earlier-iteration"
        }


@pytest.fixture
def bench(drawing: Any, tmp_path: Path) -> Bench:
    """The bench, its second iteration adopted."""
    made = Bench(drawing, tmp_path)
    made.adopt()
    return made


def test_pieces_that_no_longer_fit_have_their_state_mass_why_and_choices(bench: Bench) -> None:
    unfit = bench.unfit()
    assert set(unfit) == {"RIB/1", "CLIP/1", "CLIP/2", "PLIES/1", "PIN/1", "KNOB/1"}
    first = unfit["RIB/1"]
    assert (first.state, first.begun_under, first.fitted_before) == ("finished", "r1", True)
    assert first.why == "r2: area +10.0 %; middle 25.0 mm aft"
    assert first.best_kg == pytest.approx(0.15, abs=1e-9)
    assert unfit["KNOB/1"].why == "r2 has no part KNOB"
    assert [choice.choice for choice in first.choices] == ["cut again", "accept", "keep for stock"]
    # Built in, it is taken out first; the clip lies on the bench.
    kinds = {name: [[entry.kind for entry in one.entries] for one in unfit[name].choices] for name in unfit}
    assert kinds["RIB/1"] == [["fit", "scrap", "cut"], ["accept"], ["fit", "hold", "cut"]]
    assert kinds["CLIP/1"] == [["scrap", "cut"], ["accept"], ["hold", "cut"]]
    assert [kinds[name][0][-1] for name in ("PLIES/1", "PIN/1")] == ["lay", "weigh"]
    assert [choice.choice for choice in unfit["KNOB/1"].choices] == ["keep for stock", "scrap"]
    assert {unfit[name].choices[0].entries[-1].fields for name in ("CLIP/1", "CLIP/2")} == {
        (("pieces", "CLIP/3"),)
    }


@pytest.mark.parametrize("choice", ["cut again", "accept", "keep for stock"])
@pytest.mark.parametrize("piece", ["RIB/1", "CLIP/1", "CLIP/2", "PLIES/1", "PIN/1"])
def test_each_choice_made_as_it_is_written_ends_the_matter_for_its_piece_alone(
    bench: Bench, piece: str, choice: str
) -> None:
    others = bench.open_findings() - {piece}
    bench.choose(piece, choice)
    assert bench.open_findings() == others
    assert set(bench.unfit()) == others


@pytest.mark.parametrize("choice", ["keep for stock", "scrap"])
def test_a_piece_of_a_part_that_is_no_more_is_kept_or_scrapped(bench: Bench, choice: str) -> None:
    bench.choose("KNOB/1", choice)
    assert "KNOB/1" not in bench.open_findings()
    assert "KNOB/1" not in bench.unfit()


def test_what_is_kept_or_cut_again_changes_the_wing_as_the_new_part_says(bench: Bench) -> None:
    before = compare_iterations(bench.book, "r1", "r2").mass
    # Nothing of what was built weighs less or more for being built to r1; only the knob is gone.
    assert before.now_kg.change == pytest.approx(-0.013, abs=1e-9)
    bench.choose("RIB/1", "keep for stock")
    after = compare_iterations(bench.book, "r1", "r2").mass
    assert before.now_kg.b is not None
    assert after.now_kg.b == pytest.approx(before.now_kg.b + 0.015, abs=1e-9)
    # Under r1 the first rib still counts, and what was cut for r2 is the one too many.
    assert after.now_kg.a == pytest.approx(before.now_kg.a, abs=1e-12)
    assert after.remade_kg.b == pytest.approx(before.remade_kg.b, abs=1e-9)


def test_remade_is_the_wing_with_all_that_no_longer_fits_made_again(bench: Bench) -> None:
    mass = compare_iterations(bench.book, "r1", "r2").mass
    assert mass.remade_kg.b == pytest.approx(mass.estimated_kg.b, abs=1e-9)
    assert mass.remade_kg.a == pytest.approx(mass.now_kg.a, abs=1e-12)


def test_what_stays_and_what_fits_again_are_named(bench: Bench) -> None:
    there = compare_iterations(bench.book, "r1", "r2")
    assert (there.stays, there.fits_again) == ((), ())
    back = compare_iterations(bench.book, "r2", "r1")
    everything = ("RIB/1", "CLIP/1", "CLIP/2", "PLIES/1", "PIN/1", "KNOB/1")
    assert (back.stays, back.fits_again, back.no_longer_fits) == (everything, everything, ())


def test_a_piece_begun_under_the_second_is_held_against_the_first_by_its_own_plan(bench: Bench) -> None:
    bench.choose("RIB/1", "keep for stock")
    back = compare_iterations(bench.book, "r2", "r1")
    # Its own first rib counts under r1, so the one of r2 is spare there and nobody is asked about it.
    assert "RIB/1" in back.stays
    assert (back.on_hold, back.spare) == (("RIB/1",), ("RIB/2",))
    there = compare_iterations(bench.book, "r1", "r2")
    assert (there.on_hold, there.spare) == ((), ("RIB/1",))
    assert back.no_longer_fits == ()
    bench.log("scrap", what="RIB/1", why="bent")
    (piece,) = compare_iterations(bench.book, "r2", "r1").no_longer_fits
    assert (piece.piece, piece.begun_under) == ("RIB/2", "r2")
    assert piece.why == "r1: area -9.1 %; middle 25.0 mm forward"


def test_a_spare_is_not_among_the_pieces_that_stay(bench: Bench) -> None:
    bench.log("cut", pieces="RIB/2", sheet="PLATE")
    bench.log("cut", pieces="RIB/3", sheet="PLATE")
    assert compare_iterations(bench.book, "r1", "r2").stays == ("RIB/2",)


def test_commands_of_the_text_are_read_back_by_a_shell(bench: Bench) -> None:
    lines = choice_lines(bench.unfit()["RIB/1"], "my wing.book")
    assert [shlex.split(line)[-6:] for line in lines if "accept" in line] == [
        ["enter", "my wing.book", "accept", "finding=built-to-earlier-iteration", "what=RIB/1", "why=WHY"]
    ]
