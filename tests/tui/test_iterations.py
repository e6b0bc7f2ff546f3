"""The Iterations screen with hands: what a change of design does, and which two are compared."""

from __future__ import annotations

from collections.abc import Callable
from contextlib import AbstractAsyncContextManager
from datetime import datetime
from pathlib import Path
from typing import Any

import pytest

from ledger.operations.adopt_plan import adopt_plan
from ledger.operations.log_entry import log_entry
from ledger.operations.start_book import start_book
from ledger.operations.withdraw_entry import withdraw_entry
from ledger.tui.iterations_actions import ITERATION_ACTIONS
from ledger.tui.list_screen import ListScreen

OpenBench = Callable[..., AbstractAsyncContextManager[Any]]
BoxPlan = Callable[..., Path]
AtMinute = Callable[[int], datetime]
WIDE = (160, 48)


# -- at first glance


async def test_at_80x24_one_look_tells_mass_cg_fuel_and_built_work(
    box_book: Path, at_iterations: OpenBench
) -> None:
    async with at_iterations(box_book) as bench:
        # The floor stays as heavy as it is until it is made again.
        (headline,) = bench.words("headline")
        assert headline == "r2 for r1:  0.00 kg  CG same  usable 0.0 L   2 BUILT PIECES NO LONGER FIT"
        figures = bench.words("figures")
        assert figures[0].split()[:2] == [">", "FIGURES"]
        # 5.0 + 0.050 + 0.010 today; remade 2.5 + 1.0 + 0.8 + 0.4.
        assert figures[1].split() == [">now", "kg", "5.06", "5.06", "0.00", "|"]
        assert figures[2].split()[:5] == ["remade", "kg", "5.06", "4.70", "-0.36"]
        assert figures[2].split()[5].strip("|") == "<" * 12
        assert " ".join(bench.words("parts")[0].split()) == "PARTS 0 out 0 in 2 changed 4 same"
        assert bench.words("parts")[1].split()[0] == "FLOOR"
        assert bench.words("parts")[1].endswith("-300.0 g")
        unfit = bench.words("unfit")
        assert unfit[0] == "BUILT, NOT WHAT r2 WANTS       2"
        assert unfit[1].split() == ["FLOOR/1", "open", "2850.0", "g"]
        assert unfit[2].split() == ["WALL.OUT/1", "open", "410.0", "g"]
        history = bench.words("history")
        assert " ".join(history[0].split()) == "OVER TIME kg, L estim. best forec. usable"
        assert history[1].split() == ["03", "Nov", "r1", "5.00", "5.06", "-", "58.1"]
        assert history[2].split() == ["03", "Nov", "r2", "4.70", "5.06", "-", "58.1"]
        assert bench.words("chart")[0].strip() == "* best kg   u usable L"
        lines = bench.shown.split("\n")
        assert len(lines) == 24
        assert all(len(line) == 80 for line in lines)


async def test_it_comes_up_by_lone_6_by_f7_and_by_its_word(box_book: Path, open_bench: OpenBench) -> None:
    async with open_bench(box_book) as bench:
        for go in ("6", "f7", "word"):
            await bench.key("f2")
            if go == "word":
                await bench.type("iterations")
            else:
                await bench.key(go)
                bench.clock.go_on(seconds=1)
                bench.app.let_silence_speak()
                await bench.settle()
            assert bench.app.current_mode == "iterations"


@pytest.mark.parametrize("size", [(80, 24), WIDE])
async def test_plain_ascii_has_every_figure_and_sign(
    size: tuple[int, int], box_book: Path, at_iterations: OpenBench
) -> None:
    async with at_iterations(box_book, size=size, plain=True) as bench:
        assert bench.shown.isascii()
        # Neither mass nor fuel has changed: both stand in the middle, one sign for the two.
        assert sum(row.count("%") for row in bench.words("chart")[1:]) == 2


async def test_with_colour_gone_every_row_reads_the_same(box_book: Path, at_iterations: OpenBench) -> None:
    async with at_iterations(box_book, size=WIDE) as bench:
        shown = set()
        for _ in range(3):
            areas = ("headline", "figures", "parts", "unfit", "history", "chart", "plan-a", "attitudes")
            shown.add("\n".join(row for area in areas for row in bench.words(area)))
            await bench.type("theme")
            await bench.reckoned()
        assert len(shown) == 1


async def test_wide_shows_both_plans_to_one_scale_and_every_attitude(
    box_book: Path, at_iterations: OpenBench
) -> None:
    async with at_iterations(box_book, size=WIDE) as bench:
        a, b = bench.words("plan-a"), bench.words("plan-b")
        assert a[0].startswith("r1 FROM ABOVE, nose to the top")
        assert b[0].startswith("r2 FROM ABOVE, nose to the top")
        # The outboard wall stands farther inboard in r2, and only that line differs.
        moved = [(one, other) for one, other in zip(a[1:], b[1:], strict=True) if one != other]
        assert moved
        walls_a, walls_b = ([row.rfind("|") for row in rows if "|" in row] for rows in (a[1:], b[1:]))
        assert max(walls_a) == max(walls_b)
        inner = [
            max(place for place, sign in enumerate(row) if sign == "|" and place < max(walls_b))
            for _, row in moved
            if row.count("|") >= 3
        ]
        assert inner
        assert len(set(inner)) == 1
        attitudes = bench.words("attitudes")
        assert attitudes[1].split() == ["r1", "r2", "change"] * 2
        assert [row.split()[0] for row in attitudes[2:5]] == ["ground", "level", "climb"]
        lines = bench.shown.split("\n")
        assert len(lines) == 48
        assert all(len(line) == 160 for line in lines)


async def test_less_usable_fuel_is_said_in_figures_and_in_a_word(
    tmp_path: Path, box_plan: BoxPlan, less_fuel: BoxPlan, at_iterations: OpenBench, at_minute: AtMinute
) -> None:
    book = tmp_path / "box.book"
    start_book(book, box_plan("r1"), by="JK", now=at_minute(0))
    adopt_plan(book, less_fuel("r2"), by="AB", now=at_minute(10))
    async with at_iterations(book, size=WIDE) as bench:
        (headline,) = bench.words("headline")
        assert headline == "r2 for r1:  0.00 kg  CG same  usable -20.0 L   ALL THAT IS BUILT FITS"
        assert any(row.endswith("LESS") for row in bench.words("attitudes"))


async def test_a_plan_without_tanks_has_no_fuel_to_show(
    tmp_path: Path, small_plan: Path, at_iterations: OpenBench, at_minute: AtMinute
) -> None:
    from shutil import copytree

    book, later = tmp_path / "small.book", tmp_path / "later"
    start_book(book, small_plan, by="JK", now=at_minute(0))
    copytree(small_plan, later)
    text = (later / "plan.toml").read_text().replace('"r1"', '"r2"')
    (later / "plan.toml").write_text(text.replace("metric", "us").replace("Small", "[bold]Small[/bold]"))
    adopt_plan(book, later, by="JK", now=at_minute(1))
    async with at_iterations(book, size=WIDE) as bench:
        (headline,) = bench.words("headline")
        assert headline == "r2 for r1:  0.00 lb  CG same   ALL THAT IS BUILT FITS"
        assert bench.words("attitudes")[2] == "no tank in either plan"
        assert [row.split()[-1] for row in bench.words("history")[1:3]] == ["-", "-"]
        await bench.key("shift+tab", "shift+tab", "end", "enter")
        # User text is never markup.
        assert "[bold]Small[/bold] wing" in bench.said[-1]


async def test_one_iteration_says_that_there_is_nothing_to_compare_and_what_to_do(
    small_book: Path, at_iterations: OpenBench
) -> None:
    async with at_iterations(small_book) as bench:
        assert bench.words("headline") == ["NOTHING TO COMPARE YET"]
        assert bench.words("figures")[0] == "1 iteration so far: r1. There is nothing to compare yet."
        assert bench.words("figures")[2].startswith("preview FOLDER")
        assert bench.words("history")[1].split()[2] == "r1"
        for word in ("older", "newer", "r1", "cut again"):
            await bench.type(word)
            assert bench.said[-1].startswith("LOOK")
        for key in ("down", "end", "pagedown", "enter", "tab", "enter", "tab", "enter", "f8"):
            await bench.key(key)


async def test_a_withdrawn_iteration_is_shown_as_such(
    box_book: Path, at_iterations: OpenBench, at_minute: AtMinute
) -> None:
    withdraw_entry(box_book, 4, "not yet", by="JK", now=at_minute(20))
    async with at_iterations(box_book) as bench:
        assert bench.words("headline") == ["NOTHING TO COMPARE YET"]
        assert bench.words("history")[2].split() == ["03", "Nov", "r2", "withdrawn"]


# -- marks


async def test_tab_goes_through_the_areas_and_the_mark_stays_inside_each(
    box_book: Path, at_iterations: OpenBench
) -> None:
    async with at_iterations(box_book) as bench:
        marked = {"figures": "figures", "parts": "parts", "no longer fits": "unfit", "over time": "history"}
        for area, widget in marked.items():
            assert bench.app.work_screen.area == area
            for key in ("home", "up", "end", "down", "pageup", "pagedown", "end"):
                await bench.key(key)
                rows = bench.words(widget)
                assert rows[0].startswith("> ")
                assert sum(row.startswith(">") for row in rows[1:]) == 1
            await bench.key("tab")
        # Attitudes have no room here.
        assert bench.app.work_screen.area == "figures"
        await bench.key("shift+tab")
        assert bench.app.work_screen.area == "over time"
    async with at_iterations(box_book, size=WIDE) as bench:
        await bench.key("shift+tab", "end")
        assert bench.app.work_screen.area == "attitudes"
        assert bench.words("attitudes")[4].startswith(">climb")


async def test_enter_tells_the_marked_row_at_length(box_book: Path, at_iterations: OpenBench) -> None:
    async with at_iterations(box_book) as bench:
        await bench.key("tab", "enter")
        assert bench.said[-1].startswith(
            "FLOOR, floor: changed; laminate FLOOR 5600: 5000 g/m2, was 5600 g/m2"
        )
        await bench.key("tab", "down", "enter")
        assert bench.said[-1].startswith("LOOK WALL.OUT/1, begun under r1: r2: placed 50.0 mm left.")
        assert bench.said[-1].endswith("Choose: cut again; accept; keep for stock")
        await bench.key("tab", "end", "enter")
        assert "adopted 2026-11-03 09:10 by AB, entry 4" in bench.said[-1]


async def test_a_scanned_piece_gets_the_mark_and_another_goes_to_the_bench(
    box_book: Path, at_iterations: OpenBench, at_minute: AtMinute
) -> None:
    piece = log_entry(box_book, "weigh", {"what": "LID", "reading": "1 kg"}, by="JK", now=at_minute(15))
    async with at_iterations(box_book) as bench:
        await bench.scan("WALL.OUT")
        assert bench.app.work_screen.unfit.piece == "WALL.OUT/1"
        await bench.scan(piece.minted[0].number)
        assert bench.app.current_mode == "bench"


# -- what is compared


async def test_older_newer_and_names_choose_the_pair(
    box_book: Path, less_fuel: BoxPlan, at_iterations: OpenBench, at_minute: AtMinute
) -> None:
    adopt_plan(box_book, less_fuel("r3"), by="AB", now=at_minute(20))
    async with at_iterations(box_book) as bench:

        async def pair(*, key: str = "", word: str = "") -> str:
            if key:
                await bench.key(key)
            else:
                await bench.type(word)
            await bench.reckoned()
            return str(bench.words("headline")[0].split(":")[0])

        assert bench.words("headline")[0].startswith("r3 for r2:")
        assert await pair(key="left") == "r2 for r1"
        assert await pair(key="left") == "r2 for r1"
        assert bench.said[-1] == "there is none older"
        assert await pair(word="newer") == "r3 for r2"
        assert await pair(key="right") == "r3 for r2"
        assert bench.said[-1] == "there is none newer"
        assert await pair(word="r1 R3") == "r3 for r1"
        assert await pair(word="r3 r1") == "r1 for r3"
        assert await pair(word="latest") == "r3 for r2"
        assert await pair(word="r1") == "r3 for r1"
        assert await pair(word="r1 r9") == "r3 for r1"
        assert bench.said[-1] == "STOP the book has no iteration r9; it has r1, r2, r3"
        assert await pair(word="r2 r2") == "r3 for r1"
        assert bench.said[-1].startswith("STOP r2 and r2 are the same iteration")
        assert await pair(word="r7 r9") == "r3 for r1"
        assert bench.said[-1].startswith("LOOK typed r7 r9: no word and no number known here")


async def test_what_is_shown_is_reckoned_once_until_the_book_changes(
    box_book: Path, at_iterations: OpenBench, at_minute: AtMinute, monkeypatch: pytest.MonkeyPatch
) -> None:
    from ledger.operations import look_at_iterations as operation
    from ledger.tui import iterations_asking

    asked: list[str | None] = []
    really = operation.look_at_iterations

    def look(build: Any, wanted: Any, progress: Any) -> Any:
        asked.append(wanted.b)
        return really(build, wanted, progress)

    monkeypatch.setattr(iterations_asking, "look_at_iterations", look)
    async with at_iterations(box_book) as bench:
        for key in ("f3", "f7", "f2", "f7"):
            await bench.key(key)
        await bench.reckoned()
        assert asked == ["r2"]
        log_entry(box_book, "weigh", {"what": "LID", "reading": "970 g"}, by="MT", now=at_minute(30))
        bench.app.book_changed()
        await bench.reckoned()
        assert asked == ["r2", "r2"]
        assert bench.words("figures")[1].split()[2:4] == ["5.03", "5.03"]


# -- others, words, large print


async def test_what_someone_else_adopts_is_compared_without_asking(
    box_book: Path, less_fuel: BoxPlan, at_iterations: OpenBench, at_minute: AtMinute
) -> None:
    async with at_iterations(box_book) as bench:
        adopt_plan(box_book, less_fuel("r3"), by="MT", now=at_minute(30))
        bench.app.book_changed()
        await bench.reckoned()
        assert bench.words("headline")[0].startswith("r3 for r2:")


async def test_escape_ends_a_comparison_and_the_word_compare_begins_it_again(
    box_book: Path, at_iterations: OpenBench, monkeypatch: pytest.MonkeyPatch
) -> None:
    import threading

    from ledger.operations import look_at_iterations as operation
    from ledger.tui import iterations_asking

    begun, go_on = threading.Event(), threading.Event()
    really = operation.look_at_iterations

    def look(build: Any, wanted: Any, progress: Any) -> Any:
        progress("held", 0, 9)
        begun.set()
        assert go_on.wait(60.0)
        progress("held", 1, 9)
        return really(build, wanted, progress)

    async with at_iterations(box_book) as bench:
        monkeypatch.setattr(iterations_asking, "look_at_iterations", look)
        bench.clock.go_on(seconds=1)
        bench.app.line.put("r2 r1")
        await bench.pilot.press("enter")
        for _ in range(200):
            await bench.pilot.pause(0.02)
            if begun.is_set():
                break
        bench.clock.go_on(seconds=1)
        await bench.pilot.press("escape")
        go_on.set()
        await bench.reckoned()
        assert bench.said[-1] == "LOOK comparing r1 with r2: stopped; nothing was written"
        assert bench.words("headline")[0].startswith("r2 for r1:")
        await bench.type("r2 r1")
        await bench.reckoned()
        assert bench.words("headline")[0].startswith("r1 for r2:")


async def test_loft_is_refused_with_what_is_wrong_about_its_paths(
    box_book: Path, tmp_path: Path, at_iterations: OpenBench
) -> None:
    async with at_iterations(box_book) as bench:
        for text in ("loft", "loft wing.toml", "loft a b c", 'loft "a'):
            await bench.type(text)
            assert "loft wing.toml plans/r4" in bench.said[-1]
        await bench.type(f"loft {tmp_path / 'none.toml'} {tmp_path / 'out'}")
        await bench.reckoned()
        assert bench.said[-1].startswith("STOP")
        assert not (tmp_path / "out").exists()


async def test_large_print_says_which_two_how_much_and_what_it_costs(
    box_book: Path, at_iterations: OpenBench
) -> None:
    async with at_iterations(box_book) as bench:
        assert bench.app.work_screen.large_lines() == ("r2 for r1", "0.00 kg", "2 no longer fit")
        await bench.key("f8")
        assert bench.app.work_screen.has_class("-large")


async def test_every_action_of_the_screen_is_a_word_with_a_tip_in_the_list(
    box_book: Path, at_iterations: OpenBench
) -> None:
    async with at_iterations(box_book) as bench:
        await bench.type("actions")
        assert isinstance(bench.app.screen, ListScreen)
        listed = dict(bench.app.screen.rows)
        for action in ITERATION_ACTIONS:
            assert action.tip in listed[action.word]
        await bench.key("escape")
        await bench.type("help")
        assert {"now", "remade", "estimated"} <= set(dict(bench.app.screen.rows))


async def test_a_row_too_long_for_the_message_lines_is_shown_whole(
    box_book: Path, at_iterations: OpenBench, monkeypatch: pytest.MonkeyPatch
) -> None:
    from ledger.tui import iterations_screen

    words = " ".join(f"reason{number}" for number in range(60))
    monkeypatch.setattr(iterations_screen, "part_words", lambda *_: words)
    async with at_iterations(box_book) as bench:
        await bench.key("tab", "enter")
        assert isinstance(bench.app.screen, ListScreen)
        assert " ".join(bench.shown.split()).count("reason") == 60
        await bench.key("escape")
        assert not isinstance(bench.app.screen, ListScreen)
