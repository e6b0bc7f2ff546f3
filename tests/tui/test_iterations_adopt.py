"""Preview and adopt on the Iterations screen: nothing is adopted but by its name, typed, with a badge."""

from __future__ import annotations

from collections.abc import Callable
from contextlib import AbstractAsyncContextManager
from datetime import datetime, timedelta
from pathlib import Path
from typing import Any

import pytest

from ledger.operations.open_build import newest_entry, open_build
from ledger.tui.list_screen import ListScreen

OpenBench = Callable[..., AbstractAsyncContextManager[Any]]
BoxPlan = Callable[..., Path]
AtMinute = Callable[[int], datetime]
WIDE = (160, 48)


async def test_a_preview_compares_a_folder_and_writes_nothing(
    box_book: Path, less_fuel: BoxPlan, at_iterations: OpenBench
) -> None:
    folder, content = less_fuel("r3"), newest_entry(box_book)
    async with at_iterations(box_book) as bench:
        await bench.type(f"preview {folder}")
        await bench.reckoned()
        (headline,) = bench.words("headline")
        assert headline.startswith("PREVIEW r3 for r2:")
        assert headline.endswith("ALL THAT IS BUILT FITS")
        assert newest_entry(box_book) == content
        await bench.key("tab", "tab")
        await bench.type("latest")
        await bench.reckoned()
        assert bench.words("headline")[0].startswith("r2 for r1:")


async def test_nothing_is_chosen_about_built_pieces_in_a_preview_or_an_older_pair(
    box_book: Path, box_plan: BoxPlan, at_iterations: OpenBench
) -> None:
    folder = box_plan("r3", {"laminates.csv": ("FLOOR 5600,5600", "FLOOR 5600,4000")})
    async with at_iterations(box_book) as bench:
        await bench.type(f'preview "{folder}"')
        await bench.reckoned()
        await bench.key("tab", "tab")
        await bench.type("cut again")
        assert bench.said[-1].startswith("LOOK r3 is only a preview")
        await bench.type("r2 r1")
        await bench.reckoned()
        await bench.type("cut again")
        assert bench.app.current_mode == "iterations"


@pytest.mark.parametrize("word", ["preview", "adopt"])
async def test_a_wrong_folder_is_refused_and_what_stood_stands(
    word: str, box_book: Path, box_plan: BoxPlan, tmp_path: Path, at_iterations: OpenBench
) -> None:
    broken = box_plan("r3", {"parts.csv": ("FLOOR,floor,closeout", "FLOOR,floor,cellar")})
    text = (broken / "parts.csv").read_text().replace("LID,lid,closeout", "LID,lid,attic")
    (broken / "parts.csv").write_text(text)
    newest = newest_entry(box_book)
    async with at_iterations(box_book) as bench:
        standing = bench.words("headline")
        await bench.type(word)
        assert "write the folder after it" in bench.said[-1]
        await bench.type(f"{word} {tmp_path / 'nowhere'}")
        assert bench.said[-1].startswith("STOP")
        assert "there is no such folder" in bench.said[-1]
        await bench.type(f"{word} {tmp_path}")
        await bench.reckoned()
        assert bench.said[-1].startswith("STOP plan.toml: the folder has no plan.toml")
        await bench.type(f"{word} {broken}")
        await bench.reckoned()
        assert isinstance(bench.app.screen, ListScreen)
        assert "cellar" in bench.shown
        assert "attic" in bench.shown
        await bench.key("escape")
        await bench.reckoned()
        assert bench.words("headline") == standing
        assert bench.app.work_screen.asked is None
        assert newest_entry(box_book) == newest


async def test_adopting_wants_the_name_typed_and_is_the_entry_of_whoever_logs(
    box_book: Path, less_fuel: BoxPlan, at_iterations: OpenBench
) -> None:
    folder, newest = less_fuel("r3-light"), newest_entry(box_book)
    async with at_iterations(box_book) as bench:
        await bench.type(f"adopt {folder}")
        await bench.reckoned()
        assert bench.said[-1] == (
            "LOOK all that is built fits. To adopt it type its name, r3-light; Esc leaves it"
        )
        assert "adopt? type r3-light: _" in bench.shown
        # Enter alone, another word and a scan never adopt.
        await bench.key("enter")
        await bench.type("r3")
        await bench.scan("r3-light")
        await bench.reckoned()
        assert newest_entry(box_book) == newest
        await bench.scan("+MT")
        await bench.type("R3-Light")
        await bench.reckoned()
        assert any(
            said.startswith("ok No. 5: r3-light is adopted; all that is built fits") for said in bench.said
        )
        adopted = open_build(box_book).logged[-1]
        assert (adopted.kind, adopted.by) == ("adopt", "MT")
        assert timedelta(0) <= bench.clock.now() - adopted.at < timedelta(minutes=2)
        assert bench.words("headline")[0].startswith("r3-light for r2:")
        assert "r3-light" in bench.shown.split("\n")[0]


async def test_a_plan_changed_after_its_preview_is_not_adopted(
    box_book: Path, less_fuel: BoxPlan, at_iterations: OpenBench
) -> None:
    folder, newest = less_fuel("r3"), newest_entry(box_book)
    async with at_iterations(box_book) as bench:
        await bench.type(f"adopt {folder}")
        await bench.reckoned()
        text = (folder / "laminates.csv").read_text()
        (folder / "laminates.csv").write_text(text.replace("WALL 2000,2000", "WALL 2000,1000"))
        await bench.type("r3")
        await bench.reckoned()
        assert "the plan was changed after it was previewed; preview it again" in bench.said[-1]
        assert newest_entry(box_book) == newest


async def test_whoever_goes_on_to_another_screen_is_told_there_and_stays_there(
    box_book: Path, less_fuel: BoxPlan, at_iterations: OpenBench, monkeypatch: pytest.MonkeyPatch
) -> None:
    import threading

    from ledger.operations import adopt_previewed as operation
    from ledger.tui import iterations_asking

    gone, adopt = threading.Event(), operation.adopt_previewed

    def adopt_later(*given: Any, **more: Any) -> Any:
        assert gone.wait(60.0)
        return adopt(*given, **more)

    monkeypatch.setattr(iterations_asking, "adopt_previewed", adopt_later)
    for broken in (False, True):
        gone.clear()
        folder = less_fuel(f"r{3 + broken}")
        async with at_iterations(box_book) as bench:
            await bench.type(f"adopt {folder}")
            await bench.reckoned()
            if broken:
                (folder / "parts.csv").write_text("part,titel\nX,Y\n")
            bench.clock.go_on(seconds=1)
            bench.app.line.put(f"r{3 + broken}")
            await bench.pilot.press("enter")
            await bench.app.go("weights")
            gone.set()
            await bench.reckoned()
            assert bench.app.current_mode == "weights"
            assert not isinstance(bench.app.screen, ListScreen)
            wanted = "STOP iterations: parts.csv" if broken else "ok iterations: No. 5: r3 is adopted"
            assert bench.said[-1].startswith(wanted)


async def test_escape_leaves_what_was_to_be_adopted(
    box_book: Path, less_fuel: BoxPlan, at_iterations: OpenBench
) -> None:
    folder, newest = less_fuel("r3"), newest_entry(box_book)
    async with at_iterations(box_book) as bench:
        await bench.type(f"preview {folder}")
        await bench.reckoned()
        await bench.type("adopt")
        await bench.reckoned()
        assert bench.app.work_screen.asked[1] == folder
        await bench.key("escape")
        assert bench.said[-1].startswith("not adopted")
        await bench.type("r3")
        await bench.reckoned()
        assert newest_entry(box_book) == newest


async def test_a_plan_whose_name_is_taken_is_not_asked_about(
    box_book: Path, tmp_path: Path, at_iterations: OpenBench
) -> None:
    async with at_iterations(box_book) as bench:
        await bench.type(f"adopt {tmp_path / 'plan r1'}")
        await bench.reckoned()
        assert bench.app.work_screen.asked is None
        assert bench.said[-1].startswith("STOP an iteration of this plan's name is in the book already")


@pytest.mark.parametrize("words", [("adopt r3",), ("preview r3", "adopt ./r3"), ("preview r3", "adopt")])
async def test_a_folder_called_like_its_plan_is_adopted(
    words: tuple[str, ...],
    box_book: Path,
    less_fuel: BoxPlan,
    at_iterations: OpenBench,
    monkeypatch: pytest.MonkeyPatch,
) -> None:
    folder = less_fuel("r3")
    folder.rename(folder.parent / "r3")
    monkeypatch.chdir(folder.parent)
    newest = newest_entry(box_book)
    async with at_iterations(box_book) as bench:
        await bench.type("preview nowhere")
        for word in words:
            await bench.type(word)
            await bench.reckoned()
        assert "adopt? type r3: _" in bench.shown
        # What was said of another folder is gone with the good preview.
        assert "nowhere" not in bench.shown
        await bench.type("r3")
        await bench.reckoned()
        assert newest_entry(box_book)[0] == newest[0] + 1
        assert "To adopt it" not in bench.shown


async def test_nobody_adopts_without_a_badge(
    box_book: Path, less_fuel: BoxPlan, at_iterations: OpenBench
) -> None:
    folder, newest = less_fuel("r3"), newest_entry(box_book)
    async with at_iterations(box_book) as bench:
        await bench.type(f"adopt {folder}")
        await bench.reckoned()
        bench.clock.go_on(minutes=40)
        await bench.type("r3")
        await bench.reckoned()
        assert bench.said[-1].startswith("LOOK who adopts it? scan your badge")
        assert newest_entry(box_book) == newest
        await bench.type("+AB")
        await bench.type("r3")
        await bench.reckoned()
        assert newest_entry(box_book)[0] == newest[0] + 1
