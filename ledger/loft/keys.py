"""What a key of a layout file may take, and a table of such keys."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace
from enum import StrEnum


class Takes(StrEnum):
    """What may stand behind a key."""

    TEXT = "text"
    NAME = "name that is given elsewhere"
    PART = "part number"
    SHORT = "short name of letters and digits"
    SHORTS = "list of short names"
    NAMES = "list of names"
    WORD = "one word of a few"
    WORDS = "list of words of a few"
    YES_NO = "true or false"
    COUNT = "whole number"
    NUMBER = "number"
    SHARE = "share from 0 to 1"
    TWO_SHARES = "two shares from 0 to 1"
    ONE_OR_TWO_SHARES = "a share from 0 to 1, or two: inboard and outboard"
    LENGTH = "length above zero"
    LENGTH_OR_ZERO = "length, not below zero"
    STATION = "length of either sign"
    STATIONS = "list of lengths"
    TWO_STATIONS = "two lengths, the lesser first"
    PLAN_POINT = "point in plan, [x, y]"
    POINT = "point, [x, y, z]"
    SIZE = "size, [x, y, z], each above zero"
    POINTS = "list of points, [[x, y, z], ...]"
    ALONG = "a share from 0 to 1, or { from_start = } or { from_end = }"
    WALLS = '"ribs", "webs" or a list of walls'
    MASS = "mass with its unit"
    DENSITY = "density with its unit"
    FLOW = "flow with its unit"
    FRACTION = "text such as 2 %"
    PERCENT = "percent from 0 to below 100"


@dataclass(frozen=True, slots=True, kw_only=True)
class Key:
    """One key: what it takes, what it says, and how it is written."""

    word: str
    takes: Takes
    tip: str
    example: str
    required: bool = False
    choices: tuple[str, ...] = ()
    least: float = -math.inf
    most: float = math.inf


@dataclass(frozen=True, slots=True, kw_only=True)
class TableKeys:
    """One table, `[word]` or `[[word]]` where it is `many`.

    `one_of` are groups of which exactly one alternative is given, each all of its keys. Where the keys
    are names of the user's own, `each` is what stands behind every one of them.
    """

    word: str
    tip: str
    keys: tuple[Key, ...] = ()
    many: bool = True
    one_of: tuple[tuple[tuple[str, ...], ...], ...] = ()
    each: Key | None = None

    @property
    def words(self) -> tuple[str, ...]:
        """The keys that are known."""
        return tuple(key.word for key in self.keys)


def must(word: str, takes: Takes, tip: str, example: str, choices: tuple[str, ...] = ()) -> Key:
    """A key that may not be left out."""
    return Key(word=word, takes=takes, tip=tip, example=example, required=True, choices=choices)


def may(word: str, takes: Takes, tip: str, example: str, choices: tuple[str, ...] = ()) -> Key:
    """A key that may be left out, or is one of several ways to say a thing."""
    return Key(word=word, takes=takes, tip=tip, example=example, choices=choices)


def within(least: float, most: float, key: Key) -> Key:
    """The key, its number from `least` to `most`."""
    return replace(key, least=least, most=most)
