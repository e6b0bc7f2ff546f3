"""Races run turn by turn, and the table of their ratios.

A disturbance of the machine falls on both sides of a ratio when they take turns. A median says what
is usual; the best of several says what the work itself costs. A limit in seconds is held against
processor time, this process's and its children's: the work is done by one thread, and what else the
machine does must not decide.
"""

from __future__ import annotations

import os
import statistics
import subprocess
import sys
import time
from collections.abc import Callable, Sequence
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[2]
Work = Callable[[], object]


class Race:
    """Seconds that works take, one after another, several times over."""

    @staticmethod
    def run(*works: Work, times: int, clock: Callable[[], float] = time.perf_counter) -> list[list[float]]:
        taken: list[list[float]] = [[] for _ in works]
        for _ in range(times):
            for work, row in zip(works, taken, strict=True):
                start = clock()
                work()
                row.append(clock() - start)
        return taken

    @staticmethod
    def medians(*works: Work, times: int = 7) -> list[float]:
        return [statistics.median(row) for row in Race.run(*works, times=times)]

    @staticmethod
    def bests(*works: Work, times: int = 5) -> list[float]:
        return [min(row) for row in Race.run(*works, times=times)]

    @staticmethod
    def processor_bests(*works: Work, times: int = 5) -> list[float]:
        """The least processor time of several runs of each, turn by turn."""
        return [min(row) for row in Race.run(*works, times=times, clock=lambda: sum(os.times()[:4]))]

    @staticmethod
    def processor_seconds(work: Work, *, times: int = 5) -> float:
        """The least processor time of several runs."""
        return Race.processor_bests(work, times=times)[0]

    @staticmethod
    def child(*words: object) -> Work:
        """One run of the interpreter in a process of its own, as a user's command is."""
        command = [sys.executable, *map(str, words)]
        env = {**os.environ, "PYTHONPATH": str(ROOT), "WINGLEDGER_BY": "JK"}
        # Machines that write no bytecode would measure the compiler.
        env.pop("PYTHONDONTWRITEBYTECODE", None)
        return lambda: subprocess.run(
            command, capture_output=True, text=True, check=True, env=env, timeout=120
        )


@pytest.fixture(scope="session")
def race() -> type[Race]:
    return Race


Row = tuple[str, float, float | None]


@pytest.fixture
def say(capsys: pytest.CaptureFixture[str]) -> Callable[[Sequence[Row]], None]:
    """Print rows of what, how much and the limit, past pytest's capture."""

    def printed(rows: Sequence[Row]) -> None:
        with capsys.disabled():
            print()
            for name, figure, limit in rows:
                print(f"{name:<58}{figure:>10.3f}" + ("" if limit is None else f"{limit:>10.1f}"))

    return printed
