"""`enter`: one entry from the command line, or many from a file."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

import click

from ledger.cli.options import book_argument, by_option, json_option, read_fields
from ledger.cli.progress import watched
from ledger.cli.say import print_findings, print_json, print_lines

if TYPE_CHECKING:
    from ledger.errors import Finding
    from ledger.operations.log_entry import LoggedEntry


class EnterCommand(click.Command):
    """The command with a list of all kinds at the end of its help."""

    def format_epilog(self, ctx: click.Context, formatter: click.HelpFormatter) -> None:  # noqa: ARG002
        """Each kind with the fields it needs, then those it may have."""
        with formatter.section("Kinds and their fields, those that may be left out in brackets"):
            formatter.write_dl(_kinds_with_fields())
        formatter.write_paragraph()
        formatter.write_text("Every kind also takes by, with, at and remark.")


@click.command("enter", cls=EnterCommand)
@book_argument
@click.argument("kind", required=False)
@click.argument("fields", metavar="FIELD=VALUE...", nargs=-1)
@click.option(
    "--from", "file", type=click.Path(path_type=Path), help="Many entries, CSV or JSON Lines; all or none."
)
@by_option
@json_option
def enter_command(
    *,
    book: Path,
    kind: str | None,
    fields: tuple[str, ...],
    file: Path | None,
    by: str | None,
    as_json: bool,
) -> None:
    """Log one entry, or with --from all the rows of a file.

    For example: wingledger enter BOOK weigh what=RIB.03-L reading='412.3 g' scale=W2
    """
    if file is not None:
        if kind is not None:
            raise click.UsageError("give a kind with its fields, or --from FILE, not both")
        _enter_file(book, file, by, as_json)
        return
    if kind is None:
        kinds = ", ".join(word for word, _ in _kinds_with_fields())
        raise click.UsageError(f"give a kind of entry, or --from FILE; the kinds are {kinds}")
    _enter_one(book, kind, read_fields(fields), by, as_json)


def _enter_one(book: Path, kind: str, fields: dict[str, str], by: str | None, as_json: bool) -> None:
    from ledger.operations.log_entry import log_entry

    entered = log_entry(book, kind, fields, by=by)
    print_entered((entered,), as_json)


def _enter_file(book: Path, file: Path, by: str | None, as_json: bool) -> None:
    from ledger.operations.log_file import log_file

    with watched() as progress:
        entered = log_file(book, file, by=by, progress=progress)
    print_entered(entered, as_json, many=True)


def print_entered(entered: tuple[LoggedEntry, ...], as_json: bool, *, many: bool = False) -> None:
    """The seq of each entry, the numbers it gave out, and the last digest."""
    from ledger.reports.entry_lines import entry_line, minted_lines
    from ledger.reports.figures import entry_figures

    findings = _findings(entered)
    if as_json:
        each = [entry_figures(one.seq, one.digest, one.minted, _findings((one,))) for one in entered]
        if many:
            print_json(_all_entries(entered, each))
        else:
            print_json(each[0])
    else:
        for one in entered:
            print_lines((entry_line(one.seq, one.kind, one.says), *minted_lines(one.minted)))
        if entered:
            print_lines((f"digest {entered[-1].digest}",))
        else:
            print_lines(("no rows, nothing was written",))
    print_findings(findings)


def _all_entries(entered: tuple[LoggedEntry, ...], each: list[dict[str, object]]) -> dict[str, object]:
    from ledger.reports.figures import entry_figures

    minted = tuple(number for one in entered for number in one.minted)
    last = entered[-1] if entered else None
    whole = entry_figures(
        0 if last is None else last.seq, "" if last is None else last.digest, minted, _findings(entered)
    )
    return {**whole, "entries": each}


def _findings(entered: tuple[LoggedEntry, ...]) -> tuple[Finding, ...]:
    """What is wrong with the book itself, then what arose; each once."""
    return tuple(dict.fromkeys(finding for one in entered for finding in (*one.warnings, *one.findings)))


def _kinds_with_fields() -> list[tuple[str, str]]:
    """Every kind that can be typed in, with its fields; of those joined by a bar exactly one is given."""
    from ledger.model import acts  # noqa: F401  the kinds are declared when this is imported
    from ledger.model.declare import KINDS

    rows = []
    for kind in KINDS.values():
        if kind.word in ("adopt", "withdraw"):
            continue
        needed = [field.word for field in kind.fields if field.required]
        needed += ["|".join(group) for group in kind.one_of]
        grouped = {word for group in kind.one_of for word in group}
        free = [field.word for field in kind.fields if not field.required and field.word not in grouped]
        rows.append((kind.word, " ".join([*needed, *([f"[{' '.join(free)}]"] if free else [])])))
    return rows
