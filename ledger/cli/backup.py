"""`backup`: a copy of the book, made while others may be writing."""

from __future__ import annotations

from pathlib import Path

import click

from ledger.cli.options import book_argument
from ledger.cli.say import print_lines


@click.command("backup")
@book_argument
@click.argument("file", type=click.Path(path_type=Path))
def backup_command(book: Path, file: Path) -> None:
    """Copy BOOK to FILE, which must not exist yet, and check the copy."""
    from ledger.operations.back_up import back_up

    made = back_up(book, file)
    print_lines((f"copied       {file}", f"entries      {made.entries}", f"last digest  {made.last_digest}"))
