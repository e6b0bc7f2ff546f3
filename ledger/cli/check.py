"""`check`: is the book whole, is it the same book, and what do the rules say."""

from __future__ import annotations

from pathlib import Path

import click

from ledger.cli.options import book_argument, json_option
from ledger.cli.progress import watched
from ledger.cli.say import print_findings, print_json, print_lines
from ledger.errors import Severity


@click.command("check")
@book_argument
@click.option(
    "--last", metavar="CODE", help="A last digest or its short code, kept elsewhere, to compare with."
)
@json_option
@click.pass_context
def check_command(ctx: click.Context, book: Path, last: str | None, as_json: bool) -> None:
    """Check BOOK from its first entry to its last, and print its last digest.

    Ends with 1 where the book is broken or a finding says STOP.
    """
    from ledger.operations.check_book import check_book

    with watched() as progress:
        checked = check_book(book, last, progress=progress)
    if as_json:
        from ledger.reports.figures import check_figures

        print_json(
            check_figures(
                entries=checked.entries,
                last_digest=checked.last_digest,
                short_code=checked.short_code,
                chain_ok=checked.chain_ok,
                replay_ok=checked.replay_ok,
                findings=checked.findings,
            )
        )
    else:
        from ledger.reports.finding_lines import counted

        print_lines(
            (
                f"entries      {checked.entries}",
                f"last digest  {checked.last_digest}",
                f"short code   {checked.short_code}",
                f"record       {'whole' if checked.chain_ok else 'BROKEN'}",
                f"figures      {'as the record says' if checked.replay_ok else 'NOT as the record says'}",
                f"findings     {counted(checked.findings)}",
            )
        )
    print_findings(checked.findings)
    stopped = any(finding.severity is Severity.STOP for finding in checked.findings)
    if stopped or not (checked.chain_ok and checked.replay_ok):
        ctx.exit(1)
