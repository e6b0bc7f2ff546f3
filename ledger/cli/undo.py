"""`withdraw` and `correct`: an entry undone, or undone and put right in one go."""

from __future__ import annotations

from pathlib import Path

import click

from ledger.cli.enter import print_entered
from ledger.cli.options import book_argument, by_option, json_option, read_fields


@click.command("withdraw")
@book_argument
@click.argument("seq", type=int)
@click.option("--why", required=True, metavar="TEXT", help="The reason, kept in the record.")
@by_option
@json_option
def withdraw_command(book: Path, seq: int, why: str, by: str | None, as_json: bool) -> None:
    """Undo entry SEQ of BOOK. The entry stays in the record and no longer counts."""
    from ledger.operations.withdraw_entry import withdraw_entry

    print_entered((withdraw_entry(book, seq, why, by=by),), as_json)


@click.command("correct")
@book_argument
@click.argument("seq", type=int)
@click.argument("fields", metavar="FIELD=VALUE...", nargs=-1, required=True)
@by_option
@json_option
def correct_command(book: Path, seq: int, fields: tuple[str, ...], by: str | None, as_json: bool) -> None:
    """Withdraw entry SEQ of BOOK and log it again with these fields changed."""
    from ledger.operations.correct_entry import correct_entry

    corrected = correct_entry(book, seq, read_fields(fields), by=by)
    print_entered((corrected.entered,), as_json)
