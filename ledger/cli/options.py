"""Arguments and options that several commands share."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path
from typing import Any, TypeVar

import click

Command = TypeVar("Command", bound=Callable[..., Any])


def book_argument(command: Command) -> Command:
    """The book. Whether it is one is the book's own business to say, with its own exit code."""
    return click.argument("book", type=click.Path(path_type=Path))(command)


def by_option(command: Command) -> Command:
    """Who logs."""
    return click.option(
        "--by", metavar="INITIALS", help="Who logs; else WINGLEDGER_BY, else the login name."
    )(command)


def json_option(command: Command) -> Command:
    """Figures for a program instead of a table."""
    return click.option("--json", "as_json", is_flag=True, help="Print the figures as JSON.")(command)


def read_fields(texts: tuple[str, ...]) -> dict[str, str]:
    """`field=value` arguments as a mapping; one without `=`, or twice the same, is wrong use."""
    fields: dict[str, str] = {}
    for text in texts:
        word, equals, value = text.partition("=")
        word = word.strip()
        if not equals or not word:
            raise click.UsageError(f"{text!r} is not field=value; write for example resin='205 g'")
        if word in fields:
            raise click.UsageError(f"{word} is given twice; write one, with several values separated by ;")
        fields[word] = value
    return fields
