"""Long work in a thread: one at a time, a line that tells how far it is, Esc that ends it between steps."""

from __future__ import annotations

import threading
from collections.abc import Callable
from pathlib import Path
from typing import Any

import pytest

from ledger.errors import Stopped
from ledger.model.progress import Progress
from ledger.tui.long_work import Job, LongWork, progress_row
from ledger.tui.themes import SIGNS
from ledger.tui.weights_screen import WeightsScreen

OpenBench = Callable[..., Any]


class Slow:
    """Work of some steps that goes on only as the test lets it."""

    def __init__(self, steps: int = 3) -> None:
        self.steps = steps
        self.ready = threading.Event()
        self.go = threading.Event()
        self.stopped = False

    def __call__(self, progress: Progress) -> str:
        try:
            for step in range(self.steps):
                progress("sanding", step, self.steps)
                self.ready.set()
                assert self.go.wait(60.0)
        except Stopped:
            self.stopped = True
            raise
        return "smooth"


async def _until(bench: Any, true: Callable[[], bool]) -> None:
    for _ in range(400):
        if true():
            return
        await bench.pilot.pause(0.02)
    raise AssertionError("it never came")


async def test_the_line_tells_how_far_it_is_and_keys_are_heard_meanwhile(
    small_book: Path, open_bench: OpenBench
) -> None:
    async with open_bench(small_book, screen=WeightsScreen) as bench:
        work = Slow()
        found: list[str] = []
        screen = bench.app.work_screen
        screen.long.begin(Job(about="sanding", do=work, then=found.append))
        await _until(bench, lambda: "[....................]  0 of 3  sanding" in bench.shown)
        assert "Esc ends it" in bench.shown
        # Not through the bench's own hands: they wait until every thread has answered.
        bench.clock.go_on(seconds=1)
        await bench.pilot.press("down")
        await _until(bench, lambda: screen.at == 1)
        work.go.set()
        await _until(bench, lambda: found == ["smooth"])
        await _until(bench, lambda: "sanding" not in bench.shown)


async def test_escape_ends_it_between_two_steps_and_says_so(small_book: Path, open_bench: OpenBench) -> None:
    async with open_bench(small_book, screen=WeightsScreen) as bench:
        work = Slow()
        found: list[str] = []
        ended: list[str] = []
        job = Job(about="sanding", do=work, then=found.append, undone=lambda: ended.append("ended"))
        bench.app.work_screen.long.begin(job)
        await _until(bench, work.ready.is_set)
        await bench.pilot.press("escape")
        work.go.set()
        await _until(bench, lambda: work.stopped)
        await _until(bench, lambda: ended == ["ended"])
        assert found == []
        assert bench.said[-1] == "LOOK sanding: stopped; nothing was written"


async def test_a_newer_request_replaces_one_that_only_reads(small_book: Path, open_bench: OpenBench) -> None:
    async with open_bench(small_book, screen=WeightsScreen) as bench:
        first, second, found = Slow(), Slow(1), []
        long = bench.app.work_screen.long
        long.begin(Job(about="first", do=first, then=lambda _: found.append("first")))
        await _until(bench, first.ready.is_set)
        long.begin(Job(about="second", do=second, then=lambda _: found.append("second")))
        second.go.set()
        first.go.set()
        await _until(bench, lambda: found == ["second"])
        assert first.stopped
        assert not any("stopped" in said for said in bench.said)


async def test_what_writes_is_never_replaced_and_the_newer_request_waits(
    small_book: Path, open_bench: OpenBench
) -> None:
    async with open_bench(small_book, screen=WeightsScreen) as bench:
        first, second, found = Slow(), Slow(1), []
        long = bench.app.work_screen.long
        long.begin(Job(about="adopting r2", do=first, then=lambda _: found.append("first"), gives_way=False))
        await _until(bench, first.ready.is_set)
        long.begin(Job(about="comparing", do=second, then=lambda _: found.append("second")))
        assert bench.said[-1] == "comparing waits until adopting r2 is done"
        second.go.set()
        first.go.set()
        await _until(bench, lambda: found == ["first", "second"])
        assert not first.stopped


async def test_a_path_that_cannot_be_used_is_said_and_ends_nothing_else(
    small_book: Path, open_bench: OpenBench
) -> None:
    async with open_bench(small_book, screen=WeightsScreen) as bench:

        def fails(progress: Progress) -> None:
            del progress
            raise PermissionError(13, "Permission denied", "/plans/r4")

        undone: list[str] = []
        job = Job(about="reading", do=fails, then=lambda _: None, undone=lambda: undone.append("undone"))
        bench.app.work_screen.long.begin(job)
        await _until(bench, lambda: undone == ["undone"])
        assert bench.said[-1].startswith("STOP /plans/r4: Permission denied; look whether the path is right")


def test_the_row_keeps_how_to_end_it_in_sight_however_long_the_words_are() -> None:
    row = progress_row(("[bold] " + "word " * 60, 7, 21), 80, SIGNS["none"], end="Esc ends it").plain
    assert row.startswith("[#######.............]  7 of 21  [bold] word")
    assert row.endswith("..   Esc ends it")
    assert len(row) == 80
    assert row.isascii()


@pytest.mark.parametrize(("done", "of", "full"), [(0, 0, 0), (0, 5, 0), (5, 5, 20), (9, 5, 20)])
def test_the_bar_is_never_longer_than_its_frame(done: int, of: int, full: int) -> None:
    row = progress_row(("x", done, of), 80, SIGNS["none"]).plain
    assert row.startswith(f"[{'#' * full}{'.' * (20 - full)}]")


def test_nothing_is_shown_for_what_takes_a_moment_only() -> None:
    now = [0.0]

    class Screen:
        def run_job(self, work: Callable[[], None]) -> Any:
            del work

        def call_here(self, function: Callable[..., None], *words: Any) -> None:
            function(*words)

        def draw_progress(self) -> None: ...

        def refuse(self, text: str, sign: str = "LOOK") -> None: ...

        def say(self, sign: str, text: str) -> None: ...

    long = LongWork(Screen(), clock=lambda: now[0])
    long.begin(Job(about="x", do=lambda progress: progress("x", 1, 2), then=lambda _: None))
    assert long.drawn(80, SIGNS["none"]) is None
    now[0] = 0.5
    assert long.drawn(80, SIGNS["none"]) is not None
