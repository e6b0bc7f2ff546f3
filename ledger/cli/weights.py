"""`weights`: what the wing weighs, how sure that is, and what moved it off plan."""

from __future__ import annotations

from pathlib import Path

import click

from ledger.cli.options import book_argument, json_option
from ledger.cli.say import print_findings, print_json, print_lines


@click.command("weights")
@book_argument
@json_option
def weights_command(book: Path, as_json: bool) -> None:
    """Print mass, CG and what is off plan, of the wing and of every part."""
    from ledger.operations.weigh_up_build import weigh_up_build

    weights = weigh_up_build(book)
    if as_json:
        from ledger.reports.figures import weight_figures

        print_json(weight_figures(weights.report))
    else:
        from ledger.reports.weight_lines import weight_lines

        print_lines(weight_lines(weights.report, weights.display, weights.title))
    print_findings(weights.findings)
