"""`trace`: what a thing was made from, and everything it went into."""

from __future__ import annotations

from pathlib import Path

import click

from ledger.cli.options import book_argument, json_option
from ledger.cli.say import print_findings, print_json, print_lines


@click.command("trace")
@book_argument
@click.argument("what", metavar="ID")
@json_option
def trace_command(book: Path, what: str, as_json: bool) -> None:
    """Follow ID, a number or name of anything in BOOK, both ways as far as the record goes."""
    from ledger.operations.trace_thing import follow_thing

    followed = follow_thing(book, what)
    if as_json:
        from ledger.reports.figures import trace_figures

        print_json(trace_figures(followed.trace))
    else:
        from ledger.reports.trace_lines import trace_lines

        print_lines(trace_lines(followed.trace, followed.display))
    print_findings(followed.findings)
