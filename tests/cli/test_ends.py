"""How a command ends: its exit code, where its words go, and never a traceback."""

from __future__ import annotations

import os
import subprocess
import sys
from pathlib import Path
from typing import Any

import pytest

from ledger import __version__
from ledger.cli.app import COMMANDS, run_command


def in_child(*words: object, env: dict[str, str] | None = None, cwd: Path | None = None) -> Any:
    """Run the command as a user does, in a process of its own."""
    return subprocess.run(
        [sys.executable, "-m", "ledger", *map(str, words)],
        capture_output=True,
        text=True,
        timeout=60,
        check=False,
        cwd=cwd,
        env={**os.environ, "PYTHONPATH": str(Path(__file__).resolve().parents[2]), **(env or {})},
    )


def test_the_version_is_that_of_the_package() -> None:
    done = in_child("--version")
    assert (done.returncode, done.stdout, done.stderr) == (0, f"wingledger, version {__version__}\n", "")


def test_the_version_is_the_same_among_other_options(run: Any) -> None:
    assert run("--version").out == in_child("--version").stdout


def test_help_lists_every_command(run: Any) -> None:
    ran = run("--help")
    assert ran.code == 0
    assert all(f"\n  {command}" in ran.out for command in COMMANDS)


@pytest.mark.parametrize("command", sorted(COMMANDS))
def test_every_command_explains_itself(run: Any, command: str) -> None:
    ran = run(command, "--help")
    assert ran.code == 0
    assert ran.out.startswith(f"Usage: wingledger {command}")


@pytest.mark.parametrize(
    "words",
    [
        ("weigths", "BOOK"),
        ("weights",),
        ("weights", "BOOK", "--yaml"),
        ("enter", "BOOK"),
        ("enter", "BOOK", "weigh", "what"),
        ("enter", "BOOK", "weigh", "what=RIB-L", "what=SKIN-L"),
        ("enter", "BOOK", "weigh", "what=RIB-L", "--from", "rows.csv"),
        ("enter", "BOOK", "sweep", "floor=yes"),
        ("enter", "BOOK", "note", "text=a", "colour=red"),
        ("enter", "BOOK", "--from", "absent.csv"),
        ("withdraw", "BOOK", "2"),
        ("withdraw", "BOOK", "two", "--why", "mistake"),
        ("correct", "BOOK", "2"),
        ("fuel", "BOOK", "--levels", "0"),
        ("fuel", "BOOK", "--levels", "many"),
        ("fuel", "BOOK", "--pitch", "steep"),
        ("fuel", "BOOK", "--pitch", "nan"),
        ("fuel", "BOOK", "--temperature", "28"),
        ("adopt", "BOOK", "absent-plan"),
        ("start", "new.wingledger", "absent-plan"),
    ],
)
def test_wrong_use_ends_with_2_and_writes_nothing(
    run: Any, book: Path, words: tuple[str, ...], monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.chdir(book.parent)
    before = book.read_bytes()
    ran = run(*(str(book) if word == "BOOK" else word for word in words))
    assert (ran.code, ran.out) == (2, "")
    assert ran.err
    assert book.read_bytes() == before
    assert not (book.parent / "new.wingledger").exists()


@pytest.mark.parametrize(
    "words",
    [
        ("enter", "BOOK", "weigh", "what=RIB.99", "reading=4 g"),
        ("enter", "BOOK", "weigh", "what=RIB-L", "reading=heavy"),
        ("enter", "BOOK", "weigh", "what=RIB-L", "reading=412.3"),
        ("enter", "BOOK", "weigh", "what=RIB-L"),
        ("enter", "BOOK", "note", "text=tomorrow", "at=2199-01-01T00:00"),
        ("withdraw", "BOOK", "99", "--why", "mistake"),
        ("correct", "BOOK", "99", "text=b"),
        ("trace", "BOOK", "B999X"),
        ("fuel", "BOOK", "--attitude", "on its back"),
        ("fuel", "BOOK", "--pitch", "170"),
        ("backup", "BOOK", "BOOK"),
        ("start", "BOOK", "PLAN"),
        ("adopt", "BOOK", "PLAN"),
    ],
)
def test_what_is_refused_ends_with_1_and_writes_nothing(
    run: Any, book: Path, plan: Path, words: tuple[str, ...]
) -> None:
    before = book.read_bytes()
    real = {"BOOK": str(book), "PLAN": str(plan)}
    ran = run(*(real.get(word, word) for word in words))
    assert (ran.code, ran.out) == (1, "")
    assert ran.err.startswith("STOP  ")
    assert book.read_bytes() == before


@pytest.mark.parametrize(
    "words",
    [
        ("weights", "BOOK"),
        ("fuel", "BOOK"),
        ("trace", "BOOK", "RIB-L"),
        ("check", "BOOK"),
        ("enter", "BOOK", "note", "text=a"),
        ("withdraw", "BOOK", "2", "--why", "mistake"),
        ("correct", "BOOK", "2", "text=b"),
        ("backup", "BOOK", "copy.wingledger"),
        ("adopt", "BOOK", "PLAN"),
        ("open", "BOOK"),
    ],
)
@pytest.mark.parametrize("content", [None, b"", b"not a book, but long enough to have a header" * 9])
def test_what_is_no_book_ends_with_3(
    run: Any, tmp_path: Path, plan: Path, words: tuple[str, ...], content: bytes | None
) -> None:
    book = tmp_path / "wing.wingledger"
    if content is not None:
        book.write_bytes(content)
    real = {"BOOK": str(book), "PLAN": str(plan), "copy.wingledger": str(tmp_path / "copy.wingledger")}
    ran = run(*(real.get(word, word) for word in words))
    assert (ran.code, ran.out) == (3, "")
    assert str(book) in ran.err
    assert (book.read_bytes() if content is not None else None) == content


def test_a_word_nearly_right_is_answered_with_the_right_one(run: Any) -> None:
    assert "did you mean weights?" in run("weigths", "book").err


def test_an_escape_code_in_a_wrong_option_reaches_no_terminal(run: Any, book: Path) -> None:
    ran = run("weights", book, "--ya\x1b[2Jml")
    assert ran.code == 2
    assert r"--ya\x1b[2Jml" in ran.err
    assert "\x1b" not in ran.err


def test_a_path_that_cannot_be_made_is_one_plain_line(run: Any, book: Path) -> None:
    ran = run("demo", book / "\x1b[2Jwing")
    assert (ran.code, ran.out, ran.err.count("\n")) == (1, "", 1)
    assert r"\x1b[2Jwing" in ran.err
    assert "\x1b" not in ran.err


def test_an_error_of_its_own_is_one_plain_line(monkeypatch: pytest.MonkeyPatch, run: Any, book: Path) -> None:
    def broken(_book: Path) -> None:
        raise KeyError("spar\x1b[31m")

    monkeypatch.setattr("ledger.operations.weigh_up_build.weigh_up_build", broken)
    ran = run("weights", book)
    assert (ran.code, ran.out) == (70, "")
    assert ran.err.count("\n") == 1
    assert "please report it" in ran.err
    assert "Traceback" not in ran.err
    assert "\x1b" not in ran.err


def test_with_debug_set_the_error_comes_out(monkeypatch: pytest.MonkeyPatch, run: Any, book: Path) -> None:
    def broken(_book: Path) -> None:
        raise KeyError("spar")

    monkeypatch.setattr("ledger.operations.weigh_up_build.weigh_up_build", broken)
    run("--version")
    monkeypatch.setenv("WINGLEDGER_DEBUG", "1")
    with pytest.raises(KeyError):
        run_command(["weights", str(book)], lambda _book: None)


def test_a_reader_that_stops_reading_ends_the_command_quietly(book: Path) -> None:
    command = [sys.executable, "-m", "ledger", "fuel", str(book), "--json", "--levels", "2000"]
    env = {**os.environ, "PYTHONPATH": str(Path(__file__).resolve().parents[2])}
    with subprocess.Popen(command, stdout=subprocess.PIPE, stderr=subprocess.PIPE, env=env) as child:
        assert child.stdout is not None
        assert child.stderr is not None
        child.stdout.close()
        said = child.stderr.read().decode()
        child.wait(60)
    assert "Traceback" not in said
    assert "Exception" not in said


def test_a_terminal_without_the_letters_still_gets_its_answer(book: Path) -> None:
    done = in_child("enter", book, "note", "text=wing 翼", env={"PYTHONIOENCODING": "cp1252"})
    assert done.returncode == 0, done.stderr
    assert r"wing \u7ffc" in done.stdout


def test_alone_in_a_folder_without_a_book_it_says_how_to_begin(tmp_path: Path) -> None:
    done = in_child(cwd=tmp_path)
    assert done.returncode == 0
    assert "wingledger demo" in done.stdout
    assert "wingledger start BOOK PLAN" in done.stdout


def test_alone_beside_two_books_it_asks_which(book: Path) -> None:
    (book.parent / "other.db").write_bytes(book.read_bytes())
    done = in_child(cwd=book.parent)
    assert done.returncode == 0
    assert "wingledger open other.db" in done.stdout
    assert "wingledger open wing.wingledger" in done.stdout


def test_alone_beside_one_book_it_opens_the_screens_on_it(
    run: Any, book: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.chdir(book.parent)
    monkeypatch.setattr("ledger.cli.screens.at_a_terminal", lambda: True)
    ran = run()
    assert (ran.code, ran.out) == (0, f"SCREENS {book}\n")


def test_without_a_terminal_the_screens_are_wrong_use(run: Any, book: Path) -> None:
    ran = run("open", book)
    assert ran.code == 2
    assert "need a terminal" in ran.err
