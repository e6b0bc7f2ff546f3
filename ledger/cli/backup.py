"""`backup`, `restore` and `rescue`: copies of the book, each read back before it is called one."""

from __future__ import annotations

from pathlib import Path

import click

from ledger.cli.options import book_argument
from ledger.cli.progress import watched
from ledger.cli.say import print_findings, print_lines


@click.command("backup")
@book_argument
@click.argument("file", type=click.Path(path_type=Path))
def backup_command(book: Path, file: Path) -> None:
    """Copy BOOK to FILE, which must not exist yet, and check the copy."""
    from ledger.operations.back_up import back_up

    with watched() as progress:
        made = back_up(book, file, progress=progress)
    _print_copy("copied", file, made.entries, made.last_digest, made.short_code)
    print_findings(made.findings)


@click.command("restore")
@click.argument("file", type=click.Path(path_type=Path))
@book_argument
def restore_command(file: Path, book: Path) -> None:
    """Put the backup FILE back as BOOK, which must not exist yet, and check it. FILE stays as it is.

    Nothing is written over: move a book that stands in the way aside first.
    """
    from ledger.operations.restore_book import restore_book

    with watched() as progress:
        made = restore_book(file, book, progress=progress)
    _print_copy("restored", book, made.entries, made.last_digest, made.short_code)
    print_findings(made.findings)


@click.command("rescue")
@click.argument("damaged", type=click.Path(path_type=Path))
@click.argument("new", type=click.Path(path_type=Path))
def rescue_command(damaged: Path, new: Path) -> None:
    """Save what can be proved of a DAMAGED book into NEW, which must not exist yet.

    Entries are saved from the first on, as far as each follows from the one before; those past a break
    are named. DAMAGED stays as it is.
    """
    from ledger.operations.rescue_book import rescue_book

    with watched() as progress:
        saved = rescue_book(damaged, new, progress=progress)
    _print_copy("rescued", new, saved.entries, saved.last_digest, saved.short_code)
    print_lines((f"left out     {len(saved.left_out)}",))
    print_findings(saved.findings)


def _print_copy(done: str, file: Path, entries: int, last_digest: str, short_code: str) -> None:
    print_lines(
        (
            f"{done:<11}  {file}",
            f"entries      {entries}",
            f"last digest  {last_digest}",
            f"short code   {short_code}",
        )
    )
