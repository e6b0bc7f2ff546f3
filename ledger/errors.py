"""The error family, and the finding: what every layer uses to say that something is wrong.

A user's mistake is a `Finding`, collected with its neighbours and returned. A mistake of the
program is an exception. `Refused`, `WrongUse` and `BookUnusable` carry findings to the front ends,
which print them and end with the exit code of the class.
"""

from __future__ import annotations

from dataclasses import dataclass
from enum import StrEnum


class Severity(StrEnum):
    """How much a finding asks for: stop work, look at it, or know it."""

    STOP = "stop"
    LOOK = "look"
    NOTE = "note"


@dataclass(frozen=True, slots=True, kw_only=True)
class Where:
    """The place a finding is about: a cell of a file, an entry of the book, or a named thing."""

    file: str | None = None
    tab: str | None = None
    row: int | None = None
    column: str | None = None
    entry: int | None = None
    thing: str | None = None

    def __str__(self) -> str:
        if self.entry is not None:
            words = [f"entry {self.entry}", self.thing, self.column]
            return " ".join(word for word in words if word is not None)
        row = None if self.row is None else str(self.row)
        parts = [self.file, self.tab, row, self.thing, self.column]
        return ":".join(part for part in parts if part is not None)


@dataclass(frozen=True, slots=True, kw_only=True)
class Finding:
    """Something noticed: which rule, how grave, where, what is so, and what to do about it."""

    code: str
    severity: Severity
    where: Where
    what: str
    do: str

    def __str__(self) -> str:
        return f"{self.where}  {self.what}; {self.do}"


class LedgerError(Exception):
    """Every error the program raises on purpose."""


class FindingsError(LedgerError):
    """An error that carries findings to the person who can mend them."""

    exit_code = 1

    def __init__(self, *findings: Finding) -> None:
        super().__init__("\n".join(str(finding) for finding in findings))
        self.findings = findings


class Refused(FindingsError):
    """The request was understood and refused; nothing was written."""

    exit_code = 1


class WrongUse(FindingsError):
    """The kind, field, option, argument or source path itself is wrong; nothing was written."""

    exit_code = 2


class BookUnusable(FindingsError):
    """The book is absent, empty, not a book, truncated, or newer than this program."""

    exit_code = 3


class Unplaced(LedgerError):
    """What is wrong and what to do, raised where nobody knows the place; who knows it makes a finding."""

    def __init__(self, code: str, what: str, do: str) -> None:
        super().__init__(f"{what}; {do}")
        self.code = code
        self.what = what
        self.do = do

    def at(self, where: Where) -> Finding:
        """The finding at that place."""
        return Finding(code=self.code, severity=Severity.STOP, where=where, what=self.what, do=self.do)


class Stopped(LedgerError):
    """The person asked for long work to end before it was done; nothing was written."""


class MeshRefused(Unplaced):
    """A mesh that cannot be integrated as a solid. The message says why and names places."""
