"""The sample opens in the middle of a job, and its six acts show the figures they promise."""

from __future__ import annotations

from collections.abc import Callable
from contextlib import AbstractAsyncContextManager
from datetime import timedelta
from pathlib import Path
from typing import Any

import pytest

from ledger.operations.open_build import open_build
from ledger.tui.tour import ACTS, INVENTED, act_now

OpenBench = Callable[..., AbstractAsyncContextManager[Any]]


@pytest.fixture
def just_laid_out(demo_book: Path, clock: Any, monkeypatch: pytest.MonkeyPatch) -> Path:
    """The sample's book two minutes after its last entry, with nobody named by the shell."""
    monkeypatch.delenv("WINGLEDGER_BY")
    clock.wall = open_build(demo_book).logged[-1].at + timedelta(minutes=2)
    return demo_book


async def test_the_demo_opens_in_the_middle_of_a_lay_slip(just_laid_out: Path, open_bench: OpenBench) -> None:
    async with open_bench(just_laid_out) as bench:
        slip = bench.app.bench.desk.slip
        assert (slip.kind, slip.value("piece"), slip.value("step")) == ("lay", "SKIN.UPR-L/1", "3")
        assert slip.ply.seen_deg == -45.0
        shown = bench.shown
        for words in (
            INVENTED,
            "LAY  SKIN.UPR-L  LEFT  piece 1",
            "ply 3 of 7   -45  \\  as you see it",
            "needs 510 g: B028N has 78",
            "STOP 2  LOOK 5",
            "logs JK with AB",
            "act 1 of 6",
        ):
            assert words in shown, (words, shown)
        assert any(
            line.startswith("STOP B014Z: mixed 31.1 to 31.2 hardener to 100 resin") for line in bench.said
        )


async def test_the_demo_shows_two_cups_that_run_and_one_past(
    just_laid_out: Path, open_bench: OpenBench
) -> None:
    async with open_bench(just_laid_out) as bench:
        cups = bench.app.bench.view.cups
        assert [(cup.number, cup.past) for cup in cups] == [
            ("B028N", False),
            ("B029L", False),
            ("B027P", True),
        ]
        rows = bench.app.screen.query_one("#cups").words.splitlines()
        assert [row.split()[0] for row in rows[1:4]] == ["B028N", "B029L", "B027P"]
        assert "PAST" in rows[3]
        assert rows[3].endswith("STOP")


async def test_the_six_acts_show_their_figures(just_laid_out: Path, open_bench: OpenBench) -> None:
    async with open_bench(just_laid_out) as bench:
        seen: dict[int, bool] = {1: ACTS[0].figure in bench.shown}
        for text in ("B029L", "+MT", "log"):
            await bench.type(text)
        assert "act 2 of 6" in bench.shown
        for text in ("RIB.A6-L", "14.9"):
            await bench.type(text)
        seen[2] = ACTS[1].figure in bench.shown
        assert "the opposite hand" in " ".join(bench.said)
        for text in ("RIB.A6-R", "14.9"):
            await bench.type(text)
        assert "act 3 of 6" in bench.shown
        for text in ("mix", "200"):
            await bench.type(text)
        seen[3] = ACTS[2].figure in bench.shown
        for text in ("54", "log"):
            await bench.type(text)
        assert "act 4 of 6" in bench.shown
        await bench.type("weights")
        seen[4] = ACTS[3].figure in bench.shown
        await bench.type("fuel")
        for _ in range(8):
            if 'as "best climb"' not in bench.shown:
                await bench.key("end")
                await bench.pilot.pause(0.3)
        assert 'as "best climb"' in bench.shown
        assert "behind drain L4-L6" in bench.shown
        seen[5] = ACTS[4].figure in bench.shown
        await bench.type("trace")
        await bench.type("B014Z")
        seen[6] = ACTS[5].figure in bench.shown
        assert seen == dict.fromkeys(range(1, 7), True), bench.shown
        assert act_now(open_build(just_laid_out).logged, bench.app.toured) is None
        await bench.type("bench")
        assert "The six acts are done" in bench.shown


async def test_another_book_is_led_nowhere(small_book: Path, open_bench: OpenBench) -> None:
    async with open_bench(small_book) as bench:
        assert INVENTED not in bench.shown
        assert bench.app.tour_line is None
        assert bench.app.bench.desk.slip is None


async def test_with_no_colour_at_all_every_state_is_still_a_word(
    just_laid_out: Path, open_bench: OpenBench, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setenv("NO_COLOR", "1")
    async with open_bench(just_laid_out) as bench:
        assert bench.app.theme == "none"
        styles = [
            segment.style
            for strip in bench.app.screen._compositor.render_strips()
            for segment in strip
            if segment.style is not None
        ]
        reversed_words = {
            segment.text.strip()
            for strip in bench.app.screen._compositor.render_strips()
            for segment in strip
            if segment.style is not None and segment.style.reverse and segment.style.bold
        }
        assert {"STOP", "STOP 2"} <= reversed_words
        hues = {style.color.triplet for style in styles if style.color is not None} - {None}
        assert all(red == green == blue for red, green, blue in hues)
        for word in ("STOP 2", "LOOK 5", "LOOK needs 510 g", "PAST"):
            assert word in bench.shown


async def test_at_160_by_48_the_stack_its_place_and_every_finding_with_what_to_do_are_added(
    just_laid_out: Path, open_bench: OpenBench
) -> None:
    async with open_bench(just_laid_out, size=(160, 48)) as bench:
        stack = bench.app.screen.query_one("#stack").words
        assert [line.split()[0] for line in stack.splitlines()[2:9]] == ["7", "6", "5", "4", "3", "2", "1"]
        assert " 3 \\ \\" in stack
        assert "-45 NOW  carbon twill 200" in stack
        where = bench.app.screen.query_one("#where").words.splitlines()
        assert where[1] == "upper skin, in WING/LEFT/skins"
        marks = [line.find("X") for line in where[2:] if "X" in line]
        assert len(marks) == 1
        assert 0 <= marks[0] < len(where[0]) / 2
        findings = bench.app.screen.query_one("#findings").words
        assert "do not use it; hold it and\n      what it went into" in findings
        await bench.key("pagedown", "pagedown", "pagedown")
        assert "note" in bench.app.screen.query_one("#findings").words.splitlines()[1]
        rows = bench.shown.splitlines()
        assert all(len(row) == 160 for row in rows)
        assert "ply 3 of 7   -45  \\  as you see it" in rows[4]


async def test_a_badge_finds_its_field_after_an_enter_on_nothing(
    just_laid_out: Path, open_bench: OpenBench
) -> None:
    async with open_bench(just_laid_out) as bench:
        await bench.type("B029L")
        await bench.type("")
        await bench.type("+MT")
        assert bench.app.bench.desk.slip.value("seen_by") == "MT"
