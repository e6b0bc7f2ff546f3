"""`start` and `adopt`: a plan folder into a book."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

import click

from ledger.cli.options import book_argument, by_option, json_option
from ledger.cli.progress import watched
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

    with watched() as progress:
        adopted = start_book(book, plan, by=by, progress=progress)
    if as_json:
        _print_figures(adopted)
    else:
        from ledger.reports.entry_lines import started_lines

        print_lines(started_lines(adopted.iteration, adopted.seq, adopted.digest))
    print_findings(adopted.findings)


@click.command("adopt")
@book_argument
@click.argument("plan", type=click.Path(path_type=Path))
@by_option
@click.option("--preview", is_flag=True, help="Say what it would do, and write nothing.")
@json_option
def adopt_command(book: Path, plan: Path, by: str | None, preview: bool, as_json: bool) -> None:
    """Take the plan folder PLAN into BOOK as its next iteration."""
    from ledger.operations.adopt_plan import adopt_plan

    with watched() as progress:
        adopted = adopt_plan(book, plan, by=by, preview=preview, progress=progress)
    if as_json:
        _print_figures(adopted, preview=preview)
    elif adopted.comparison is not None:
        from ledger.reports.compare_lines import compare_lines

        print_lines(compare_lines(adopted.comparison, str(book)))
    else:
        from ledger.reports.entry_lines import look_closer_lines, started_lines, unfit_lines

        unfit = tuple((one.piece, one.state, one.why) for one in adopted.no_longer_fits)
        print_lines(
            (
                *started_lines(adopted.iteration, adopted.seq, adopted.digest),
                *unfit_lines(unfit),
                *look_closer_lines(str(book), adopted.before, adopted.iteration, len(unfit)),
            )
        )
    print_findings(adopted.findings)


def _print_figures(adopted: Adopted, *, preview: bool = False) -> None:
    from ledger.reports.compare_figures import adopted_figures

    # A preview wrote no entry, so it has no number and no digest to keep.
    seq, digest = (None, None) if preview else (adopted.seq, adopted.digest)
    print_json(
        adopted_figures(
            iteration=adopted.iteration,
            seq=seq,
            digest=digest,
            no_longer_fits=adopted.no_longer_fits,
            comparison=adopted.comparison,
            findings=adopted.findings,
        )
    )
