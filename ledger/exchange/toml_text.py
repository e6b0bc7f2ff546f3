"""A TOML file whose values know the line they stand in, for messages.

The standard reader tells no lines, so a second, simple pass over the same text finds the line of
each table and key. It only has to understand texts that the standard reader has accepted.
"""

from __future__ import annotations

import math
import re
import tomllib
from collections.abc import Iterable, Mapping
from dataclasses import dataclass, field
from difflib import get_close_matches
from typing import Any

from ledger.errors import Where
from ledger.exchange.problems import Problems
from ledger.exchange.texts import read_text
from ledger.exchange.toml_faults import fault_of
from ledger.units import Dimension, UnitError, read_quantity

Path = tuple[str | int, ...]

_HEADER = re.compile(r"\s*(\[\[?)\s*(.+?)\s*(\]\]?)\s*(?:#.*)?$")
_KEY = re.compile(
    r"""\s*((?:[A-Za-z0-9_-]+|"[^"]*"|'[^']*')(?:\s*\.\s*(?:[A-Za-z0-9_-]+|"[^"]*"|'[^']*'))*)\s*="""
)
_KEY_PART = re.compile(r"""[A-Za-z0-9_-]+|"[^"]*"|'[^']*'""")


@dataclass(frozen=True, slots=True, kw_only=True)
class TomlTable:
    """One table of a TOML file, with its place."""

    file: str
    values: Mapping[str, Any]
    path: Path
    lines: Mapping[Path, int] = field(repr=False)
    problems: Problems = field(repr=False)

    def where(self, key: str | None = None) -> Where:
        """The line of a key, or of the table itself."""
        path = self.path if key is None else (*self.path, key)
        if (*path, 0) in self.lines:
            path = (*path, 0)
        # A table written inside another value has no line of its own.
        while path and path not in self.lines:
            path = path[:-1]
        return Where(file=self.file, row=self.lines.get(path), column=key)

    def stop(self, code: str, key: str | None, what: str, do: str) -> None:
        """A problem at a key of this table."""
        self.problems.stop(code, self.where(key), what, do)

    def stop_for_length_unit(self) -> None:
        """Say, once a file, that its bare lengths have no unit."""
        self.problems.stop(
            "unit-missing",
            Where(file=self.file, column="length_unit"),
            "nothing says the unit of the lengths",
            'write length_unit = "mm" at the top of the file',
        )

    def refuse_others(self, known: Iterable[str]) -> frozenset[str]:
        """Note every key that is not known here; returns the keys that were named in their stead."""
        words = tuple(known)
        named: set[str] = set()
        for key in self.values:
            if key not in words:
                close = get_close_matches(key, words, n=1, cutoff=0.75)
                do = f"write {close[0]}" if close else f"the keys here are {', '.join(words)}"
                named.update(close)
                self.stop("key-unknown", key, f"{key!r} is not known here", do)
        return frozenset(named)

    def text(self, key: str, *, wanted: str | None = None) -> str | None:
        """A text; where `wanted` says what it is for, it may not be missing."""
        value = self.values.get(key)
        if value is None or (isinstance(value, str) and not value.strip()):
            if wanted is not None:
                self.stop("key-missing", key, f"{key} is missing", f"write {key} = {wanted}")
            return None
        if not isinstance(value, str):
            self.stop("value-wrong", key, f"{shown(value)} is not text", f'write {key} = "{shown(value)}"')
            return None
        return value.strip()

    def choice(self, key: str, choices: tuple[str, ...], *, required: bool = False) -> str | None:
        """One of a few words."""
        text = self.text(key, wanted=" or ".join(f'"{word}"' for word in choices) if required else None)
        if text is None or text in choices:
            return text
        close = get_close_matches(text.lower(), choices, n=1, cutoff=0.75)
        do = f"write {close[0]}" if close else f"write one of {', '.join(choices)}"
        self.stop("word-unknown", key, f"{text!r} is not a {key}", do)
        return None

    def flag(self, key: str, default: bool) -> bool:
        """true or false."""
        value = self.values.get(key, default)
        if not isinstance(value, bool):
            self.stop("value-wrong", key, f"{shown(value)} is neither true nor false", f"write {key} = true")
            return default
        return value

    def number(self, key: str, default: float | None = None) -> float | None:
        """A bare number, finite."""
        value = self.values.get(key)
        if value is None:
            return default
        return self.finite(key, value)

    def quantity(
        self, key: str, dimension: Dimension, *, bare_unit: str | None = None, zero: bool = False
    ) -> float | None:
        """Text with a unit in SI; a bare number only where the file says its unit. Not below zero."""
        value = self.values.get(key)
        if value is None:
            return None
        found = self.measured(key, value, dimension, bare_unit)
        if found is None:
            return None
        if found < 0 or (found == 0 and not zero):
            size = "zero" if found == 0 else "below zero"
            self.stop("value-out-of-range", key, f"{shown(value)} is {size}", "write a number above zero")
            return None
        return found

    def point(self, key: str, value: object, bare_unit: str | None) -> tuple[float, float, float] | None:
        """Three lengths in metres."""
        if not isinstance(value, list) or len(value) != 3:
            self.stop("value-wrong", key, f"{shown(value)} is not a point", "write three numbers, [x, y, z]")
            return None
        found = []
        for one in value:
            metres = self.measured(key, one, Dimension.LENGTH, bare_unit)
            if metres is None:
                return None
            found.append(metres)
        return (found[0], found[1], found[2])

    def tables(self, key: str) -> tuple[TomlTable, ...]:
        """The tables of `[[key]]`, in order."""
        value = self.values.get(key, [])
        if not isinstance(value, list) or not all(isinstance(one, dict) for one in value):
            self.stop("value-wrong", key, f"{key} is not a list of tables", f"write [[{key}]]")
            return ()
        return tuple(self._inner(one, (*self.path, key, number)) for number, one in enumerate(value))

    def table(self, key: str) -> TomlTable | None:
        """The table `[key]`."""
        value = self.values.get(key)
        if value is None:
            return None
        if not isinstance(value, dict):
            self.stop("value-wrong", key, f"{key} is not a table", f"write [{key}]")
            return None
        return self._inner(value, (*self.path, key))

    def _inner(self, values: Mapping[str, Any], path: Path) -> TomlTable:
        return TomlTable(file=self.file, values=values, path=path, lines=self.lines, problems=self.problems)

    def measured(self, key: str, value: object, dimension: Dimension, bare_unit: str | None) -> float | None:
        """A value of a key, or one of its list, in SI and of either sign; None with a finding."""
        if isinstance(value, str):
            text, unit = value, None
        else:
            number = self.finite(key, value)
            if number is None:
                return None
            if bare_unit is None and dimension is Dimension.LENGTH:
                self.stop_for_length_unit()
                return None
            text, unit = repr(number).removesuffix(".0"), bare_unit
        try:
            return read_quantity(text, dimension, unit=unit)
        except UnitError as error:
            self.stop("value-unreadable", key, error.what, _quoted(error.do, key, text))
            return None

    def finite(self, key: str, value: object) -> float | None:
        """A value of a key, or one of its list, as a bare number; None with a finding."""
        if isinstance(value, bool) or not isinstance(value, (int, float)):
            self.stop("value-wrong", key, f"{shown(value)} is not a number", f"write for example {key} = 2.5")
            return None
        try:
            number = float(value)
        except OverflowError:
            number = math.inf
        if not math.isfinite(number):
            self.stop("value-wrong", key, f"{value} is not a finite number", "write the number you measured")
            return None
        return number


def read_toml(file: str, content: bytes, problems: Problems) -> TomlTable | None:
    """The whole file, or None with a finding at the line where it is no TOML."""
    text = read_text(file, content, problems)
    if text is None:
        return None
    try:
        values = tomllib.loads(text)
    except (tomllib.TOMLDecodeError, RecursionError) as error:
        told = str(error)
        at = re.search(r"\s*\(at line (\d+), column (\d+)\)", told)
        row = int(at.group(1)) if at is not None else text.count("\n") + 1
        plain = told[: at.start()] if at is not None else told.removesuffix(" (at end of document)")
        line = text.split("\n")[row - 1]
        what, do = fault_of(plain, line, int(at.group(2)) if at is not None else None)
        problems.stop("toml-broken", Where(file=file, row=row), f"the line cannot be read: {what}", do)
        return None
    return TomlTable(file=file, values=values, path=(), lines=lines_of(text), problems=problems)


def lines_of(text: str) -> dict[Path, int]:
    """The line of each table and each key of a text that is TOML."""
    lines: dict[Path, int] = {}
    counts: dict[Path, int] = {}
    table: Path = ()
    depth, quote = 0, None
    for number, line in enumerate(text.splitlines(), start=1):
        if depth == 0 and quote is None:
            header = _HEADER.match(line)
            if header is not None and _KEY.match(line) is None:
                table = _entered(_parts(header.group(2)), header.group(1) == "[[", counts)
                lines.setdefault(table, number)
                continue
            key = _KEY.match(line)
            if key is not None:
                lines.setdefault((*table, *_parts(key.group(1))), number)
        depth, quote = _open_after(line, depth, quote)
    return lines


def _parts(text: str) -> Path:
    return tuple(part.strip("\"'") for part in _KEY_PART.findall(text))


def _entered(parts: Path, is_list: bool, counts: dict[Path, int]) -> Path:
    path: Path = ()
    for part in parts[:-1]:
        path = (*path, part)
        if path in counts:
            path = (*path, counts[path])
    path = (*path, parts[-1])
    if not is_list:
        return path
    counts[path] = counts.get(path, -1) + 1
    return (*path, counts[path])


def _open_after(line: str, depth: int, quote: str | None) -> tuple[int, str | None]:
    """Bracket depth and the quotation mark still open at the end of a line."""
    at = 0
    while at < len(line):
        if quote is not None:
            if line[at] == "\\" and quote[0] == '"':
                at += 2
                continue
            if line.startswith(quote, at):
                at += len(quote)
                quote = None
                continue
        elif line[at] == "#":
            break
        elif line[at] in "\"'":
            mark = line[at]
            quote = mark * 3 if line.startswith(mark * 3, at) else mark
            at += len(quote)
            continue
        elif line[at] in "[{":
            depth += 1
        elif line[at] in "]}":
            depth -= 1
        at += 1
    # A plain string cannot run over the end of a line.
    return depth, quote if quote is not None and len(quote) == 3 else None


def _quoted(do: str, key: str, text: str) -> str:
    """`write 715 kg/m3 or …` as it stands in this file: `write density_15C = "715 kg/m3"`."""
    wanted = do.removeprefix("write ").split(" or ")[0]
    return f'write {as_key(key)} = "{wanted}"' if wanted.startswith(text) else do


def as_key(key: str) -> str:
    """A key as a file has to write it: quoted, where it is not of plain letters."""
    return key if re.fullmatch(r"[A-Za-z0-9_-]+", key) else f'"{key}"'


def shown(value: object) -> str:
    """A value as it is quoted in a message."""
    if isinstance(value, bool):
        return str(value).lower()
    return str(value) if not isinstance(value, str) else repr(value)
