"""`loft`: a plan folder from sections, webs and ribs."""

from __future__ import annotations

import shlex
from pathlib import Path

import click

from ledger.cli.options import json_option
from ledger.cli.progress import watched
from ledger.cli.say import print_findings, print_json, print_lines, print_words


@click.command("loft")
@click.argument("layout", type=click.Path(path_type=Path))
@click.argument("out", type=click.Path(path_type=Path))
@json_option
def loft_command(layout: Path, out: Path, as_json: bool) -> None:
    """Make the plan folder OUT from the file LAYOUT: sections, webs, ribs and bays of a wing.

    materials.csv and laminates.csv stand beside LAYOUT. OUT must not exist yet, or be empty; nothing is
    ever written over.
    """
    from ledger.operations.loft_wing import loft_wing

    with watched() as progress:
        plan = loft_wing(layout, out, progress=progress)
    if as_json:
        from ledger.reports.loft_lines import loft_figures

        print_json(loft_figures(plan))
    else:
        from ledger.reports.loft_lines import loft_lines

        print_lines(loft_lines(plan))
        folder = shlex.quote(str(out))
        print_words(
            (
                f"next: wingledger start BOOK {folder}",
                f"or, in the middle of a build: wingledger adopt BOOK {folder} --preview",
            )
        )
    print_findings(plan.findings)
