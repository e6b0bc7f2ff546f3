"""`open`, and the command with no argument: the screens."""

from __future__ import annotations

import sys
from pathlib import Path

import click

from ledger.cli.app import OpenScreens
from ledger.cli.options import book_argument
from ledger.cli.say import print_lines

_HOW_TO_BEGIN = (
    "No book is chosen. To begin:",
    "",
    "  wingledger demo                  a sample build to try, half built",
    "  wingledger start BOOK PLAN       a new book from a plan folder",
    "  wingledger open BOOK             the screens on a book",
    "  wingledger --help                all commands",
)


@click.command("open")
@book_argument
@click.pass_obj
def open_command(open_screens: OpenScreens, book: Path) -> None:
    """Open the screens on BOOK."""
    show(open_screens, book)


def open_here(open_screens: OpenScreens) -> None:
    """Open the only book of this folder, or say how to begin."""
    books = books_in(Path.cwd())
    if len(books) == 1:
        show(open_screens, books[0])
        return
    if books:
        print_lines([f"{len(books)} books are in this folder; open one of them:", ""])
        print_lines(f"  wingledger open {book.name}" for book in books)
        return
    print_lines(_HOW_TO_BEGIN)


def books_in(folder: Path) -> tuple[Path, ...]:
    """The files of a folder that look like books, by name."""
    return tuple(
        sorted(path for path in folder.iterdir() if path.suffix in (".wingledger", ".db") and path.is_file())
    )


def show(open_screens: OpenScreens, book: Path) -> None:
    """Hand over to the screens, once the book is known to be one and there is a terminal to draw on."""
    from ledger.operations.open_build import open_build

    open_build(book)
    if not at_a_terminal():
        raise click.UsageError(f"the screens need a terminal; for figures write wingledger weights {book}")
    open_screens(book)


def at_a_terminal() -> bool:
    """Whether there is a keyboard to read and a screen to draw on."""
    return sys.stdin.isatty() and sys.stdout.isatty()
