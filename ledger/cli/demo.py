"""`demo`: the sample build, half built, to try everything on."""

from __future__ import annotations

from pathlib import Path

import click

from ledger.cli.app import OpenScreens
from ledger.cli.progress import watched
from ledger.cli.say import print_lines, print_words


@click.command("demo")
@click.argument("folder", metavar="[DIR]", required=False, type=click.Path(path_type=Path))
@click.option("--report", is_flag=True, help="Print the main figures and end, without opening the screens.")
@click.pass_obj
def demo_command(open_screens: OpenScreens, folder: Path | None, report: bool) -> None:
    """Make a book from the sample build in DIR and open the screens on it.

    Nothing is ever written over; without DIR a new folder is made here.
    """
    from ledger.operations.lay_out_demo import free_folder, lay_out_demo

    with watched() as progress:
        book = lay_out_demo(folder if folder is not None else free_folder(Path.cwd()), progress=progress)
    print_words([f"Invented build, nothing here flies. The book is {book}"])
    if report:
        _print_report(book)
        return
    from ledger.cli.screens import at_a_terminal, show

    if at_a_terminal():
        show(open_screens, book)
    else:
        print_words([f"There is no terminal to draw on here; later: wingledger open {book}"])


def _print_report(book: Path) -> None:
    from ledger.operations.compare_iterations import compare_iterations
    from ledger.operations.open_build import open_build
    from ledger.operations.reckon_fuel import reckon_fuel
    from ledger.operations.weigh_up_build import weigh_up_build
    from ledger.reports.demo_lines import demo_lines

    weights = weigh_up_build(book)
    last = [iteration.name for iteration in open_build(book).snapshot.iterations[-2:]]
    with watched() as progress:
        fuel = reckon_fuel(book, progress=progress)
        change = compare_iterations(book, *last, progress=progress) if len(last) == 2 else None
    print_lines(demo_lines(weights.report, fuel.report, fuel.findings, weights.display, change=change))
