"""The edge towards the terminal: figures to standard output, words to standard error, all of it clean."""

from __future__ import annotations

import json
from collections.abc import Iterable, Mapping, Sequence

import click

from ledger.errors import Finding


def print_lines(lines: Iterable[str]) -> None:
    """Data, one line each, to standard output."""
    from ledger.reports.plain import clean

    for line in lines:
        click.echo(clean(line))


def print_words(lines: Iterable[str]) -> None:
    """Words about the work, to standard error."""
    from ledger.reports.plain import clean

    for line in lines:
        click.echo(clean(line), err=True)


def print_json(figures: Mapping[str, object]) -> None:
    """Figures for a program. Escaped to ASCII, so no control code of a user's text gets through."""
    click.echo(json.dumps(figures, allow_nan=False))


def print_findings(findings: Sequence[Finding]) -> None:
    """Findings as warnings on standard error."""
    from ledger.reports.finding_lines import finding_lines

    print_words(finding_lines(findings))
