"""Progress on one line where a person watches, and Ctrl-C that ends long work between two steps."""

from __future__ import annotations

import os
import pty
import signal
import subprocess
import sys
import tempfile
from collections.abc import Callable
from pathlib import Path
from typing import Any

import pytest

from ledger.cli.progress import STOPPED, line_of, watched
from ledger.operations.check_book import check_book
from ledger.operations.open_build import newest_entry

BoxPlan = Callable[..., Path]
CHECKOUT = str(Path(__file__).resolve().parents[2])
ROWS = 6000


class Terminal:
    """Stands in for standard error where a person watches."""

    def __init__(self) -> None:
        self.written: list[str] = []

    def isatty(self) -> bool:
        return True

    def write(self, text: str) -> int:
        self.written.append(text)
        return len(text)

    def flush(self) -> None: ...


class Time:
    """A clock that the test moves."""

    def __init__(self) -> None:
        self.now = 0.0

    def __call__(self) -> float:
        return self.now


def test_the_line_is_a_plain_bar_with_the_count_and_the_words() -> None:
    assert line_of("rows", 250, 1000) == "[#####...............] 250 of 1000  rows"
    assert line_of("\x1b[31mred", 0, 0) == "[....................] 0 of 0  \\x1b[31mred"


def test_nothing_is_written_in_the_first_half_second_then_over_the_same_line(
    monkeypatch: pytest.MonkeyPatch,
) -> None:
    terminal, time = Terminal(), Time()
    monkeypatch.setattr(sys, "stderr", terminal)
    with watched(clock=time) as tell:
        for step in range(50):
            time.now = 0.01 * step
            tell("rows", step, 1000)
        assert terminal.written == []
        time.now = 0.51
        tell("rows", 51, 1000)
        tell("rows", 52, 1000)
        time.now = 0.65
        tell("rows", 60, 1000)
    first, second, away = terminal.written
    assert first == f"\r{line_of('rows', 51, 1000)}"
    assert second == f"\r{line_of('rows', 60, 1000)}"
    # Taken away before anything else is printed, so that no finding stands behind it.
    assert away == f"\r{' ' * len(line_of('rows', 60, 1000))}\r"


def test_nothing_is_written_where_nobody_watches(capsys: pytest.CaptureFixture[str]) -> None:
    time = Time()
    with watched(clock=time) as tell:
        time.now = 5.0
        tell("rows", 1, 2)
    assert capsys.readouterr() == ("", "")


def test_ctrl_c_after_the_last_step_is_said_to_be_too_late(capsys: pytest.CaptureFixture[str]) -> None:
    before = signal.getsignal(signal.SIGINT)
    with watched() as tell:
        tell("rows", 1, 1)
        os.kill(os.getpid(), signal.SIGINT)
    assert capsys.readouterr().err == "it was done before it could be stopped\n"
    assert signal.getsignal(signal.SIGINT) is before


class Child:
    """The command in a process of its own, its standard error a terminal that the test reads."""

    def __init__(self, *words: object) -> None:
        self._terminal, theirs = pty.openpty()
        out, self._out = tempfile.mkstemp()
        self.process = subprocess.Popen(
            [sys.executable, "-m", "ledger", *map(str, words)],
            # Not a pipe: what is read too late would hold the child up.
            stdout=out,
            stderr=theirs,
            text=True,
            env={**os.environ, "PYTHONPATH": CHECKOUT, "WINGLEDGER_BY": "JK"},
        )
        os.close(theirs)
        os.close(out)
        self.err = ""

    def read(self) -> bool:
        """A little more of standard error; False at its end."""
        try:
            more = os.read(self._terminal, 4096)
        except OSError:
            # A terminal whose other end is closed reads as an error on Linux.
            return False
        self.err += more.decode()
        return bool(more)

    def interrupt_once_it_tells(self, words: str) -> Any:
        """Ctrl-C when these words are seen in the line of progress; then its end."""
        while words not in self.err and self.read():
            pass
        self.process.send_signal(signal.SIGINT)
        while self.read():
            pass
        self.process.wait(timeout=60)
        os.close(self._terminal)
        out = Path(self._out).read_text()
        Path(self._out).unlink()
        return out

    @property
    def left_on_screen(self) -> list[str]:
        """What a person still sees: of each line what was written over it last."""
        lines = []
        for line in self.err.replace("\r\n", "\n").split("\n"):
            shown = ""
            for part in line.split("\r"):
                shown = part + shown[len(part) :]
            if shown.strip():
                lines.append(shown.rstrip())
        return lines


@pytest.fixture
def box_book(tmp_path: Path, box_plan: BoxPlan, run: Any) -> Path:
    """The box's book with one iteration."""
    assert run("start", tmp_path / "box.book", box_plan("r1"), "--by", "JK").code == 0
    return tmp_path / "box.book"


def test_ctrl_c_in_the_middle_of_a_file_of_rows_writes_nothing(box_book: Path, tmp_path: Path) -> None:
    rows = "".join(f"note,row {number}\n" for number in range(ROWS))
    (tmp_path / "rows.csv").write_text(f"kind,text\n{rows}")
    newest = newest_entry(box_book)
    child = Child("enter", box_book, "--from", tmp_path / "rows.csv")
    out = child.interrupt_once_it_tells(f" of {ROWS}  rows")
    assert (child.process.returncode, out) == (1, "")
    assert child.left_on_screen == [STOPPED]
    assert newest_entry(box_book) == newest
    checked = check_book(box_book)
    assert (checked.entries, checked.chain_ok, checked.replay_ok) == (1, True, True)


def test_ctrl_c_in_the_middle_of_adopting_a_plan_writes_nothing(
    box_book: Path, tmp_path: Path, box_plan: BoxPlan
) -> None:
    folder = box_plan("r2")
    # Every part has a file of its own, so that reading the plan takes seconds.
    many = 1500
    rows = (folder / "parts.csv").read_text()
    mesh = "v 0 0 0\nv {0} 0 0\nv {0} 1 0\nv 0 1 0\nf 1 2 3\nf 1 3 4\n"
    for number in range(many):
        (folder / "geometry" / f"S{number}.obj").write_text(mesh.format(1.0 + number / many))
        rows += f"S{number},s,skin,C,BOX,skin,WALL 2000,geometry/S{number}.obj,m,,,\n"
    (folder / "parts.csv").write_text(rows)
    newest, content = newest_entry(box_book), box_book.read_bytes()
    child = Child("adopt", box_book, folder)
    out = child.interrupt_once_it_tells("plan, part S")
    assert (child.process.returncode, out) == (1, "")
    assert child.left_on_screen == [STOPPED]
    assert newest_entry(box_book) == newest
    assert box_book.read_bytes() == content
    assert not list(tmp_path.glob(".*making*"))
