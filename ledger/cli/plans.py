"""`start` and `adopt`: a plan folder into a book."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

import click

from ledger.cli.options import book_argument, by_option, json_option
from ledger.cli.say import print_findings, print_json, print_lines

if TYPE_CHECKING:
    from ledger.operations.adopt_plan import Adopted


@click.command("start")
@book_argument
@click.argument("plan", type=click.Path(path_type=Path))
@by_option
@json_option
def start_command(book: Path, plan: Path, by: str | None, as_json: bool) -> None:
    """Make a new BOOK from the plan folder PLAN."""
    from ledger.operations.start_book import start_book

    _print_adopted(start_book(book, plan, by=by), as_json, began=True)


@click.command("adopt")
@book_argument
@click.argument("plan", type=click.Path(path_type=Path))
@by_option
@click.option("--preview", is_flag=True, help="Say what it would do, and write nothing.")
@json_option
def adopt_command(book: Path, plan: Path, by: str | None, preview: bool, as_json: bool) -> None:
    """Take the plan folder PLAN into BOOK as its next iteration."""
    from ledger.operations.adopt_plan import adopt_plan

    _print_adopted(adopt_plan(book, plan, by=by, preview=preview), as_json, preview=preview)


def _print_adopted(adopted: Adopted, as_json: bool, *, preview: bool = False, began: bool = False) -> None:
    from ledger.reports.entry_lines import adopted_figures, started_lines, unfit_lines

    # A preview wrote no entry, so it has no number and no digest to keep.
    seq, digest = (None, None) if preview else (adopted.seq, adopted.digest)
    unfit = tuple((one.piece, one.state, one.why) for one in adopted.no_longer_fits)
    if as_json:
        print_json(adopted_figures(adopted.iteration, seq, digest, unfit, adopted.findings))
    else:
        if preview:
            print_lines(("PREVIEW: nothing was written",))
        # Of a new book nothing is built yet.
        print_lines((*started_lines(adopted.iteration, seq, digest), *(() if began else unfit_lines(unfit))))
    print_findings(adopted.findings)
