"""Bytes of a file as text, and the rows of a comma-separated one with their places."""

from __future__ import annotations

import csv
import io
from collections.abc import Iterator

from ledger.errors import Where
from ledger.exchange.problems import Problems


def read_text(file: str, content: bytes, problems: Problems) -> str | None:
    """The text of a UTF-8 file, with or without its mark; None with a finding where it is another."""
    try:
        text = content.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        row = content[: error.start].count(b"\n") + 1
        problems.stop(
            "file-not-utf8",
            Where(file=file, row=row),
            f"byte {content[error.start]:#04x} is not UTF-8 text",
            "save the file as UTF-8",
        )
        return None
    if "\0" in text:
        row = text[: text.index("\0")].count("\n") + 1
        problems.stop(
            "file-not-text",
            Where(file=file, row=row),
            "the file holds bytes that are not text",
            "save it as UTF-8 text",
        )
        return None
    return text


def read_csv_rows(file: str, text: str, problems: Problems) -> Iterator[tuple[int, list[str]]]:
    """Rows that are not empty, each with the line of the file it begins in."""
    reader = csv.reader(io.StringIO(text, newline=""), strict=True)
    begins = 1
    while True:
        try:
            row = next(reader)
        except StopIteration:
            return
        except csv.Error as error:
            problems.stop(
                "csv-broken",
                Where(file=file, row=begins),
                f"the row cannot be told apart into columns ({error})",
                "close the quotation marks in it",
            )
            return
        if any(cell.strip() for cell in row):
            yield begins, row
        begins = reader.line_num + 1
