"""`compare`: what one iteration of the design changes of another, and what built work it costs."""

from __future__ import annotations

from pathlib import Path

import click

from ledger.cli.options import book_argument, json_option
from ledger.cli.progress import watched
from ledger.cli.say import print_findings, print_json, print_lines


@click.command("compare")
@book_argument
@click.argument("a")
@click.argument("b")
@json_option
def compare_command(book: Path, a: str, b: str, as_json: bool) -> None:
    """Print what iteration B changes of iteration A.

    A and B are names of iterations in BOOK; B may also be a plan folder that is not adopted yet.
    """
    from ledger.operations.compare_iterations import compare_iterations

    with watched() as progress:
        comparison = compare_iterations(book, a, b, progress=progress)
    if as_json:
        from ledger.reports.compare_figures import compare_figures

        print_json(compare_figures(comparison))
    else:
        from ledger.reports.compare_lines import compare_lines

        print_lines(compare_lines(comparison, str(book)))
    print_findings(comparison.findings)
