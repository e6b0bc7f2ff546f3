"""The fields of one entry, as typed, read into its record. Syntax only: no name is looked up here."""

from __future__ import annotations

import dataclasses
from collections.abc import Mapping
from dataclasses import dataclass
from datetime import datetime
from typing import Any

from ledger.errors import Finding, Where
from ledger.exchange.field_texts import read_field, split_names
from ledger.exchange.problems import Problems, listed
from ledger.model import acts  # noqa: F401  the kinds are declared when this is imported
from ledger.model.acts import Act
from ledger.model.declare import KINDS, Field, Kind, Takes
from ledger.units import UnitError, check_unit, read_moment, unit_in_head

COMMON_FIELDS = ("by", "with", "at", "remark")


@dataclass(frozen=True, slots=True, kw_only=True)
class ReadAct:
    """The act with who and when, or None and what is wrong with it."""

    act: Act | None
    by: str | None
    at: datetime | None
    findings: tuple[Finding, ...]


def read_act(kind: str, fields: Mapping[str, object], *, now: datetime, where: Where) -> ReadAct:
    """Read the fields of an entry of a kind. A field's head may carry its unit: `resin [g]`.

    A problem is at `where`, with the field's word as its column. An unknown kind or field has the
    code `unknown-kind` or `unknown-field`.
    """
    declared = KINDS.get(kind)
    if declared is None:
        return _unknown_kind(kind, where)
    reading = _Reading(declared, now, where)
    for head, given in fields.items():
        reading.take(head, given)
    reading.check_whole()
    findings = reading.problems.findings()
    act = None if findings else reading.act()
    return ReadAct(act=act, by=reading.by, at=reading.at, findings=findings)


def _unknown_kind(kind: str, where: Where) -> ReadAct:
    problems = Problems()
    close = _nearest(kind, KINDS)
    problems.stop(
        "unknown-kind",
        dataclasses.replace(where, column="kind"),
        f"{kind!r} is not a kind of entry",
        f"write {close}" if close else f"write one of {', '.join(sorted(set(KINDS) - {'adopt'}))}",
    )
    return ReadAct(act=None, by=None, at=None, findings=problems.findings())


class _Reading:
    """One entry being read."""

    def __init__(self, kind: Kind, now: datetime, where: Where) -> None:
        self.kind = kind
        self.problems = Problems()
        self.by: str | None = None
        self.at: datetime | None = None
        self._now = now
        self._where = where
        self._values: dict[str, Any] = {}
        self._typed: dict[str, str] = {}
        self._given: set[str] = set()
        self._tried: set[str] = set()

    def take(self, head: str, given: object) -> None:
        """Read one field, or note what is wrong with it."""
        word, unit = unit_in_head(head)
        if given is None or given in ("", [], ()) or (isinstance(given, str) and not given.strip()):
            if word not in COMMON_FIELDS and self.kind.field(word) is None:
                self._unknown(word)
            return
        if word in self._tried:
            self._stop("field-twice", word, f"{word} is given twice", "give it once")
            return
        self._tried.add(word)
        if not _is_text(given):
            self._stop("not-text", word, f"{word} holds what is not text", "type it with plain characters")
            return
        if word in COMMON_FIELDS:
            self._take_common(word, given)
            return
        field = self.kind.field(word)
        if field is None:
            self._unknown(word)
            return
        try:
            self._values[field.key], typed = read_field(field, given, self._checked(field, unit))
        except UnitError as error:
            self._stop("field-unreadable", word, error.what, error.do)
            return
        self._given.add(word)
        if typed is not None:
            self._typed[word] = typed

    def check_whole(self) -> None:
        """Note what is missing, and choices of which not exactly one was made."""
        for field in self.kind.fields:
            if field.required and field.word not in self._tried:
                self._stop(
                    "field-missing", field.word, f"{self.kind.word} needs {field.word}", _how_to_give(field)
                )
        for group in self.kind.one_of:
            made = [word for word in group if word in self._tried]
            if not made:
                self._stop(
                    "field-missing", group[0], f"{self.kind.word} needs {listed(group)}", "give one of them"
                )
            elif len(made) > 1:
                self._stop(
                    "field-twice", made[1], f"{' and '.join(made)} cannot both be given", "give one of them"
                )
        for field in self.kind.fields:
            if field.required and field.many and field.word in self._given and not self._values[field.key]:
                self._stop("field-missing", field.word, f"{field.word} is empty", _how_to_give(field))

    def act(self) -> Act:
        """The record of what was read."""
        typed = tuple(sorted(self._typed.items()))
        act: Act = self.kind.record(**self._values, typed=typed)
        return act

    def _take_common(self, word: str, given: object) -> None:
        if word == "at" and isinstance(given, datetime):
            self.at = given if given.tzinfo is not None else given.replace(tzinfo=self._now.tzinfo)
            return
        if word == "with":
            texts = given if isinstance(given, (list, tuple)) else [given]
            self._values["with_others"] = tuple(name for text in texts for name in split_names(str(text)))
            return
        if not isinstance(given, str):
            self._stop("field-unreadable", word, f"{given!r} is not text", f"write {word} as text")
        elif word == "at":
            try:
                self.at = read_moment(given, self._now)
            except UnitError as error:
                self._stop("field-unreadable", word, error.what, error.do)
        elif word == "by":
            self.by = given.strip()
        else:
            self._values["remark"] = given.strip()

    def _checked(self, field: Field, unit: str | None) -> str | None:
        if unit is None:
            return None
        dimensions = field.dimensions
        if field.takes is Takes.SHARE:
            from ledger.units import Dimension

            dimensions = (Dimension.MASS,)
        if not dimensions:
            raise UnitError(f"{field.word} takes no unit", f"write {field.word} as the head")
        for dimension in dimensions[:-1]:
            try:
                return check_unit(unit, dimension)
            except UnitError:
                continue
        return check_unit(unit, dimensions[-1])

    def _unknown(self, word: str) -> None:
        words = [field.word for field in self.kind.fields] + list(COMMON_FIELDS)
        close = _nearest(word, words)
        self._stop(
            "unknown-field",
            word,
            f"{self.kind.word} has no field {word!r}",
            f"write {close}" if close else f"its fields are {', '.join(words)}",
        )

    def _stop(self, code: str, word: str, what: str, do: str) -> None:
        self.problems.stop(code, dataclasses.replace(self._where, column=word), what, do)


def _is_text(given: object) -> bool:
    # Bytes of another encoding reach a command as half characters that no file of ours can hold.
    if isinstance(given, (list, tuple)):
        return all(_is_text(one) for one in given)
    return not (isinstance(given, str) and any("\ud800" <= character <= "\udfff" for character in given))


def _nearest(word: str, words: object) -> str | None:
    from difflib import get_close_matches

    found = get_close_matches(word.lower(), list(words), n=1, cutoff=0.75)  # type: ignore[call-overload]
    return str(found[0]) if found else None


def _how_to_give(field: Field) -> str:
    # Many tips are sentences already, as `scan the cloth or core`.
    return field.tip if field.tip.split(" ")[0] in ("scan", "write") else f"give {field.tip}"
