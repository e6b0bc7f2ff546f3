"""A comma-separated table of a plan: known columns in any order, units in the heads, rows by line."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field, replace
from difflib import get_close_matches

from ledger.errors import Where
from ledger.exchange.problems import Problems
from ledger.exchange.texts import read_csv_rows, read_text
from ledger.units import Dimension, UnitError, check_unit, read_quantity, unit_in_head


@dataclass(frozen=True, slots=True, kw_only=True)
class TableRow:
    """One row: its line in the file, its cells that are not empty, and the units of its columns."""

    file: str
    number: int
    cells: Mapping[str, str]
    units: Mapping[str, str]
    problems: Problems = field(repr=False)

    def where(self, column: str | None = None) -> Where:
        """The place of a cell."""
        return Where(file=self.file, row=self.number, column=column)

    def text(self, column: str) -> str | None:
        """What stands in a cell, None where it is empty."""
        return self.cells.get(column)

    def wanted(self, column: str, what: str) -> str | None:
        """What stands in a cell that may not be empty."""
        text = self.cells.get(column)
        if text is None:
            self.stop("cell-empty", column, f"{column} is empty", f"write {what}")
        return text

    def choice(self, column: str, choices: tuple[str, ...]) -> str | None:
        """One of a few words."""
        text = self.wanted(column, f"one of {', '.join(choices)}")
        if text is None or text in choices:
            return text
        self.stop(
            "word-unknown",
            column,
            f"{text!r} is not a {column}",
            f"write {_nearest(text, choices) or 'one of ' + ', '.join(choices)}",
        )
        return None

    def quantity(
        self,
        column: str,
        dimension: Dimension,
        *,
        zero: bool = False,
        negative: bool = False,
        most: float | None = None,
    ) -> float | None:
        """A number with its unit in SI; None where the cell is empty or, with a finding, unreadable."""
        text = self.cells.get(column)
        if text is None:
            return None
        unit = self.units.get(column)
        try:
            value = read_quantity(text, dimension, unit=unit)
        except UnitError as error:
            if "is not a number" in error.what:
                example = f"write a number and a unit, for example {_SIZES.get(dimension, '4.2 g')}"
                self.stop("cell-unreadable", column, f"{text!r} is not {_a(dimension)}", example)
            else:
                self.stop("cell-unreadable", column, error.what, error.do)
            return None
        if value < 0 and not negative:
            self.stop("cell-out-of-range", column, f"{text!r} is below zero", "write a number above zero")
            return None
        if value == 0 and not (zero or negative):
            self.stop(
                "cell-out-of-range",
                column,
                f"{text!r} is zero",
                "write a number above zero or leave it empty",
            )
            return None
        if most is not None and value > most:
            self.stop("cell-out-of-range", column, f"{text!r} is too much", f"write at most {most * 100:g} %")
            return None
        return value

    def stop(self, code: str, column: str | None, what: str, do: str) -> None:
        """A problem in a cell of this row."""
        self.problems.stop(code, self.where(column), what, do)


_SIZES = {
    Dimension.MASS: "4.2 kg",
    Dimension.LENGTH: "6 mm",
    Dimension.DENSITY: "75 kg/m3",
    Dimension.AREAL_MASS: "200 g/m2",
    Dimension.LINEAR_MASS: "34 g/m",
    Dimension.DURATION: "25 min",
    Dimension.FRACTION: "42 %",
    Dimension.ANGLE: "45 deg",
}


def _a(dimension: Dimension) -> str:
    word = dimension.value
    return f"an {word}" if word[0] in "aeiou" else f"a {word}"


def read_table(
    file: str,
    content: bytes,
    columns: Mapping[str, tuple[Dimension, ...]],
    required: tuple[str, ...],
    problems: Problems,
) -> tuple[TableRow, ...] | None:
    """The rows of a table whose columns are among `columns`, each with the dimensions its head may carry.

    None where it is no text or a head is wrong, since the cells below it could not be told.
    """
    text = read_text(file, content, problems)
    if text is None:
        return None
    lines = read_csv_rows(file, text, problems)
    begin, heads = next(lines, (1, []))
    units = _read_heads(Where(file=file, row=begin), heads, columns, required, problems)
    if units is None:
        return None
    words = [unit_in_head(head)[0] for head in heads]
    rows = []
    for number, cells in lines:
        if len(cells) > len(words) and any(cell.strip() for cell in cells[len(words) :]):
            problems.stop(
                "row-too-long",
                Where(file=file, row=number),
                f"the row has {len(cells)} columns and the head {len(words)}",
                "put text that holds a comma in quotation marks",
            )
            continue
        found = {word: cell.strip() for word, cell in zip(words, cells, strict=False) if cell.strip()}
        rows.append(TableRow(file=file, number=number, cells=found, units=units, problems=problems))
    return tuple(rows)


def _read_heads(
    place: Where,
    heads: list[str],
    columns: Mapping[str, tuple[Dimension, ...]],
    required: tuple[str, ...],
    problems: Problems,
) -> dict[str, str] | None:
    before = problems.count
    units: dict[str, str] = {}
    seen: set[str] = set()
    if len(heads) == 1 and ";" in heads[0]:
        problems.stop(
            "column-missing",
            place,
            "columns are parted by semicolons",
            "save the file with commas between columns",
        )
        return None
    for head in heads:
        word, unit = unit_in_head(head)
        where = replace(place, column=word or None)
        if word not in columns:
            _unknown_column(word, columns, where, problems)
            continue
        if word in seen:
            problems.stop("column-twice", where, f"column {word} is there twice", "remove one")
        seen.add(word)
        if unit is not None:
            known = _unit_of_head(unit, columns[word], where, problems)
            if known is not None:
                units[word] = known
    for word in required:
        if word not in seen:
            problems.stop(
                "column-missing",
                place,
                f"there is no column {word}",
                f"add a column {word}",
            )
    return units if problems.count == before else None


def _unknown_column(
    word: str, columns: Mapping[str, tuple[Dimension, ...]], where: Where, problems: Problems
) -> None:
    if not word:
        problems.stop("column-unknown", where, "a column has no head", "write its head or remove the column")
        return
    close = _nearest(word, tuple(columns))
    problems.stop(
        "column-unknown",
        where,
        f"{word!r} is not a column of {where.file}",
        f"write {close}" if close else f"the columns are {', '.join(columns)}",
    )


def _unit_of_head(
    unit: str, dimensions: tuple[Dimension, ...], where: Where, problems: Problems
) -> str | None:
    if not dimensions:
        problems.stop(
            "unit-unknown", where, f"column {where.column} takes no unit", f"write {where.column} as the head"
        )
        return None
    try:
        return check_unit(unit, dimensions[0])
    except UnitError as error:
        problems.stop("unit-unknown", where, error.what, error.do)
        return None


def _nearest(word: str, words: tuple[str, ...]) -> str | None:
    found = get_close_matches(word.lower(), words, n=1, cutoff=0.75)
    return found[0] if found else None
