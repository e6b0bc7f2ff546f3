"""Many entries from one file: comma-separated with a column `kind`, or one JSON object a line."""

from __future__ import annotations

import json
from collections.abc import Mapping
from pathlib import Path
from typing import Any

from ledger.errors import Finding, Severity, Where, WrongUse
from ledger.exchange.fields import COMMON_FIELDS
from ledger.exchange.problems import Problems
from ledger.exchange.texts import read_csv_rows, read_text
from ledger.model.declare import KINDS
from ledger.units import unit_in_head

Row = tuple[Where, str, Mapping[str, object]]


def read_rows(path: Path) -> tuple[tuple[Row, ...], tuple[Finding, ...]]:
    """The rows of a file of entries in order, and what is wrong with those that are left out.

    Raises
        WrongUse: there is no such file, or its ending is neither .csv, .jsonl nor .ndjson.
    """
    ending = path.suffix.lower()
    if ending not in (".csv", ".jsonl", ".ndjson"):
        raise WrongUse(
            _wrong(path, "file-kind", f"{path.name} is no file of entries", "give a .csv or .jsonl file")
        )
    try:
        content = path.read_bytes()
    except OSError as error:
        raise WrongUse(
            _wrong(path, "file-missing", f"cannot be read: {error.strerror}", "give the path of a file")
        ) from None
    problems = Problems()
    text = read_text(path.name, content, problems)
    if text is None:
        return (), problems.findings()
    if ending == ".csv":
        rows = _csv_rows(path.name, text, problems)
    else:
        rows = _json_rows(path.name, text, problems)
    return rows, problems.findings()


def _wrong(path: Path, code: str, what: str, do: str) -> Finding:
    return Finding(code=code, severity=Severity.STOP, where=Where(file=str(path)), what=what, do=do)


def _csv_rows(file: str, text: str, problems: Problems) -> tuple[Row, ...]:
    lines = read_csv_rows(file, text, problems)
    begin, heads = next(lines, (1, []))
    heads = [head.strip() for head in heads]
    if not _heads_fit(file, begin, heads, problems):
        return ()
    rows: list[Row] = []
    for number, cells in lines:
        where = Where(file=file, row=number)
        if len(cells) > len(heads) and any(cell.strip() for cell in cells[len(heads) :]):
            problems.stop(
                "row-too-long",
                where,
                f"the row has {len(cells)} columns and the head {len(heads)}",
                "put text that holds a comma in quotation marks",
            )
            continue
        fields = {head: cell.strip() for head, cell in zip(heads, cells, strict=False) if cell.strip()}
        kind = fields.pop("kind", "")
        if not kind:
            _kind_missing(where, problems)
            continue
        rows.append((where, kind, fields))
    return tuple(rows)


def _heads_fit(file: str, row: int, heads: list[str], problems: Problems) -> bool:
    before = problems.count
    if "kind" not in heads:
        many = len(heads) == 1 and ";" in heads[0]
        problems.stop(
            "column-missing",
            Where(file=file, row=row),
            "columns are parted by semicolons" if many else "there is no column kind",
            "save the file with commas between columns" if many else "add a column kind",
        )
        return False
    words = {field.word for kind in KINDS.values() for field in kind.fields} | {"kind", *COMMON_FIELDS}
    seen: set[str] = set()
    for head in heads:
        word, _ = unit_in_head(head)
        where = Where(file=file, row=row, column=word or None)
        if word not in words:
            named = f"no kind of entry has a field {word!r}" if word else "a column has no head"
            problems.stop("unknown-field", where, named, "correct the head or remove the column")
        elif word in seen:
            problems.stop("field-twice", where, f"column {word} is there twice", "remove one")
        seen.add(word)
    return problems.count == before


def _json_rows(file: str, text: str, problems: Problems) -> tuple[Row, ...]:
    rows: list[Row] = []
    for number, line in enumerate(text.split("\n"), start=1):
        if not line.strip():
            continue
        where = Where(file=file, row=number)
        try:
            fields = json.loads(line, object_pairs_hook=_once_each, parse_constant=_no_constant)
        except (ValueError, RecursionError) as error:
            told = str(error).removesuffix(f": line 1 column {len(line) + 1} (char {len(line)})")
            problems.stop("json-broken", where, f"the line is not JSON: {told}", "write one object a line")
            continue
        if not isinstance(fields, dict):
            problems.stop("json-broken", where, "the line is not a JSON object", "write one object a line")
            continue
        kind = fields.pop("kind", None)
        if not isinstance(kind, str) or not kind.strip():
            _kind_missing(where, problems)
            continue
        rows.append((where, kind.strip(), fields))
    return tuple(rows)


def _kind_missing(where: Where, problems: Problems) -> None:
    problems.stop(
        "field-missing",
        Where(file=where.file, row=where.row, column="kind"),
        "the row says no kind of entry",
        f"write one of {', '.join(sorted(set(KINDS) - {'adopt'}))}",
    )


def _once_each(pairs: list[tuple[str, Any]]) -> dict[str, Any]:
    found: dict[str, Any] = {}
    for key, value in pairs:
        if key in found:
            raise ValueError(f"{key} is there twice")
        found[key] = value
    return found


def _no_constant(word: str) -> None:
    raise ValueError(f"{word} is not a number")
