"""The values of one table of a layout, read as its declaration says: lengths in metres, shares of 1."""

from __future__ import annotations

import re
from collections.abc import Callable, Iterable
from difflib import get_close_matches
from typing import Any

from ledger.errors import Unplaced
from ledger.exchange.problems import listed
from ledger.exchange.toml_text import TomlTable, as_key, shown
from ledger.loft.keys import Key, TableKeys, Takes
from ledger.loft.layout import Along, Walls
from ledger.units import Dimension

_PART = re.compile(r"[^\s;,/=\"'#]+")
_SHORT = re.compile(r"[A-Za-z0-9_-]+")

Reader = Callable[[TomlTable, Key, Any, str | None], Any]


def read_values(table: TomlTable, keys: TableKeys, unit: str | None) -> dict[str, Any]:
    """What stands behind each key, in SI; what is missing or wrong is left out, with a finding.

    `unit` is that of bare lengths, None where the file says none.
    """
    meant = table.refuse_others(keys.words)
    _check_alternatives(table, keys, meant)
    return read_some(table, keys, unit, keys.words, meant=meant)


def read_some(
    table: TomlTable,
    keys: TableKeys,
    unit: str | None,
    words: Iterable[str],
    *,
    meant: frozenset[str] = frozenset(),
) -> dict[str, Any]:
    """What stands behind some keys of a table, as `read_values` does it.

    `meant` are keys of which a misspelt one was told: that one is missing says nothing new.
    """
    wanted = frozenset(words)
    found: dict[str, Any] = {}
    for key in keys.keys:
        if key.word not in wanted:
            continue
        value = table.values.get(key.word)
        if not says(table, key.word):
            if key.required and key.word not in meant:
                table.stop("key-missing", key.word, f"{key.word} is missing", _for_example(key))
            continue
        read = _read(table, key, value, unit)
        if read is not None:
            found[key.word] = read
    return found


def says(table: TomlTable, word: str) -> bool:
    """Whether anything stands behind a key; an empty text is nothing."""
    value = table.values.get(word)
    return value is not None and not (isinstance(value, str) and not value.strip())


def read_each(table: TomlTable, each: Key, unit: str | None) -> dict[str, Any]:
    """A table whose keys are names of the user's own, each with a value of one kind."""
    found = {}
    for name, value in table.values.items():
        key = Key(word=name, takes=each.takes, tip=each.tip, example=each.example)
        read = _read(table, key, value, unit)
        if read is not None:
            found[name] = read
    return found


def _read(table: TomlTable, key: Key, value: object, unit: str | None) -> Any:
    try:
        return _READERS[key.takes](table, key, value, unit)
    except Unplaced as wrong:
        table.problems.extend((wrong.at(table.where(key.word)),))
        return None


def _for_example(*keys: Key) -> str:
    """How keys are written; only a value that can be no other is not called an example."""
    written = " and ".join(f"{as_key(key.word)} = {key.example}" for key in keys)
    return (
        f"write {written}" if all(len(key.choices) == 1 for key in keys) else f"write for example {written}"
    )


def _check_alternatives(table: TomlTable, keys: TableKeys, meant: frozenset[str]) -> None:
    by_word = {key.word: key for key in keys.keys}
    for group in keys.one_of:
        ways = [" and ".join(way) for way in group]
        given = [way for way in group if any(says(table, word) for word in way)]
        if not given:
            if not any(meant.intersection(way) for way in group):
                do = _for_example(*(by_word[word] for word in group[0]))
                table.stop("key-missing", group[0][0], f"none of {listed(ways)} is given", do)
        elif len(given) > 1:
            said = " and ".join(word for way in given for word in way if says(table, word))
            what, do = f"{said} are both given", f"give one of {listed(ways)}"
            table.stop("given-both-ways", given[1][0], what, do)
        else:
            for word in given[0]:
                if not says(table, word) and word not in meant:
                    table.stop("key-missing", word, f"{word} is missing", _for_example(by_word[word]))


def _wrong(key: Key, value: object, what: str | None = None) -> Unplaced:
    said = what or f"is not {_with_article(key.takes)}"
    do = f"write for example {as_key(key.word)} = {key.example}"
    return Unplaced("value-wrong", f"{_short(value)} {said}", do)


def _with_article(takes: Takes) -> str:
    """`a whole number`, but `two lengths, the lesser first`."""
    bare = (Takes.TWO_SHARES, Takes.TWO_STATIONS, Takes.ALONG, Takes.ONE_OR_TWO_SHARES, Takes.WALLS)
    return takes.value if takes in bare else f"a {takes.value}"


def _short(value: object) -> str:
    text = shown(value)
    if isinstance(value, dict):
        text = f"{{ {', '.join(f'{as_key(word)} = {shown(one)}' for word, one in value.items())} }}"
    return text if len(text) <= 60 else f"{text[:57]}..."


def _out(value: object, what: str, do: str) -> Unplaced:
    return Unplaced("value-out-of-range", f"{_short(value)} {what}", do)


def _text(_table: TomlTable, key: Key, value: object, _: str | None) -> str:
    if isinstance(value, str) and value.strip():
        return value.strip()
    raise _wrong(key, value, "is not text")


def _part(table: TomlTable, key: Key, value: object, unit: str | None) -> str:
    text = _text(table, key, value, unit)
    if _PART.fullmatch(text):
        return text
    do = "leave out spaces and the marks ; , / = # and quotation marks"
    raise Unplaced("name-wrong", f"{text!r} is not a part number", do)


def _short_name(table: TomlTable, key: Key, value: object, unit: str | None) -> str:
    text = _text(table, key, value, unit)
    if _SHORT.fullmatch(text):
        return text
    do = f"write letters and digits, for example {key.word} = {key.example}"
    raise Unplaced("name-wrong", f"{text!r} is not a short name", do)


def _names(_table: TomlTable, key: Key, value: object, _: str | None) -> tuple[str, ...]:
    names = value if isinstance(value, list) else []
    if not names or not all(isinstance(one, str) and one.strip() for one in names):
        raise _wrong(key, value, "is not a list of names")
    stripped = tuple(one.strip() for one in names)
    twice = next((name for name in stripped if stripped.count(name) > 1), None)
    if twice is not None:
        raise Unplaced("name-twice", f"{twice!r} is named twice", "name it once")
    return stripped


def _short_names(table: TomlTable, key: Key, value: object, unit: str | None) -> tuple[str, ...]:
    return tuple(_short_name(table, key, name, unit) for name in _names(table, key, value, unit))


def _word(table: TomlTable, key: Key, value: object, unit: str | None) -> str | None:
    return _one_of(key, _text(table, key, value, unit))


def _words(table: TomlTable, key: Key, value: object, unit: str | None) -> tuple[str, ...]:
    words = _names(table, key, value, unit)
    return tuple(_one_of(key, word) for word in words)


def _one_of(key: Key, word: str) -> str:
    if word in key.choices:
        return word
    close = get_close_matches(word.lower(), key.choices, n=1, cutoff=0.75)
    do = f"write {close[0]}" if close else f"write one of {', '.join(key.choices)}"
    raise Unplaced("word-unknown", f"{word!r} is no word for {key.word}", do)


def _yes_no(_table: TomlTable, key: Key, value: object, _: str | None) -> bool:
    if not isinstance(value, bool):
        raise _wrong(key, value, "is neither true nor false")
    return value


def _count(_table: TomlTable, key: Key, value: object, _: str | None) -> int:
    if isinstance(value, bool) or not isinstance(value, int):
        raise _wrong(key, value)
    if not key.least <= value <= key.most:
        do = f"write a whole number from {key.least:g} to {key.most:g}"
        raise _out(value, "is out of range", do)
    return value


def _number(table: TomlTable, key: Key, value: object, _: str | None) -> float | None:
    number = table.finite(key.word, value)
    if number is not None and not key.least <= number <= key.most:
        do = f"write a number from {key.least:g} to {key.most:g}"
        raise _out(value, "is out of range", do)
    return number


def _share(table: TomlTable, key: Key, value: object, _: str | None) -> float | None:
    number = table.finite(key.word, value)
    if number is not None and not 0.0 <= number <= 1.0:
        do = f"write a share, for example {key.word} = {key.example}"
        raise _out(value, "is not from 0 to 1", do)
    return number


def _two_shares(table: TomlTable, key: Key, value: object, unit: str | None) -> tuple[float, float] | None:
    if not isinstance(value, list) or len(value) != 2:
        raise _wrong(key, value)
    first, second = (_share(table, key, one, unit) for one in value)
    return None if first is None or second is None else (first, second)


def _one_or_two(table: TomlTable, key: Key, value: object, unit: str | None) -> tuple[float, float] | None:
    if isinstance(value, list):
        return _two_shares(table, key, value, unit)
    share = _share(table, key, value, unit)
    return None if share is None else (share, share)


def _station(table: TomlTable, key: Key, value: object, unit: str | None) -> float | None:
    return table.measured(key.word, value, Dimension.LENGTH, unit)


def _length_or_zero(table: TomlTable, key: Key, value: object, unit: str | None) -> float | None:
    metres = _station(table, key, value, unit)
    if metres is not None and metres < 0.0:
        raise _out(value, "is below zero", "write a number not below zero")
    return metres


def _length(table: TomlTable, key: Key, value: object, unit: str | None) -> float | None:
    metres = _length_or_zero(table, key, value, unit)
    if metres == 0.0:
        raise _out(value, "is zero", "write a number above zero")
    return metres


def _each_station(
    table: TomlTable, key: Key, value: object, unit: str | None, how_many: int | None
) -> tuple[float, ...] | None:
    if not isinstance(value, list) or not value or (how_many is not None and len(value) != how_many):
        raise _wrong(key, value)
    read = [_station(table, key, one, unit) for one in value]
    known = tuple(metres for metres in read if metres is not None)
    return known if len(known) == len(read) else None


def _stations(table: TomlTable, key: Key, value: object, unit: str | None) -> tuple[float, ...] | None:
    return _each_station(table, key, value, unit, None)


def _plan_point(table: TomlTable, key: Key, value: object, unit: str | None) -> tuple[float, ...] | None:
    return _each_station(table, key, value, unit, 2)


def _point(table: TomlTable, key: Key, value: object, unit: str | None) -> tuple[float, ...] | None:
    return _each_station(table, key, value, unit, 3)


def _between(table: TomlTable, key: Key, value: object, unit: str | None) -> tuple[float, ...] | None:
    two = _each_station(table, key, value, unit, 2)
    if two is not None and two[0] >= two[1]:
        raise _out(value, "does not rise", "write the inboard one first")
    return two


def _size(table: TomlTable, key: Key, value: object, unit: str | None) -> tuple[float, ...] | None:
    size = _point(table, key, value, unit)
    if size is not None and min(size) <= 0.0:
        raise _out(value, "is not above zero", "write three numbers above zero")
    return size


def _points(table: TomlTable, key: Key, value: object, unit: str | None) -> tuple[Any, ...] | None:
    if not isinstance(value, list) or not value:
        raise _wrong(key, value)
    read = [_point(table, key, one, unit) for one in value]
    return None if None in read else tuple(read)


def _along(table: TomlTable, key: Key, value: object, unit: str | None) -> Along | None:
    if not isinstance(value, dict):
        share = _share(table, key, value, unit)
        return None if share is None else Along(share=share)
    if len(value) != 1 or not set(value) <= {"share", "from_start", "from_end"}:
        raise _wrong(key, value)
    ((word, said),) = value.items()
    if word == "share":
        if isinstance(said, dict):
            raise _wrong(key, value)
        return _along(table, key, said, unit)
    metres = _length_or_zero(table, key, said, unit)
    if metres is None:
        return None
    return Along(from_start_m=metres) if word == "from_start" else Along(from_end_m=metres)


def _walls(table: TomlTable, key: Key, value: object, unit: str | None) -> Walls | tuple[str, ...] | None:
    if isinstance(value, str):
        if value.strip() in tuple(Walls):
            return Walls(value.strip())
        do = f'write "ribs", "webs" or a list of walls, for example {key.word} = ["A3"]'
        raise Unplaced("word-unknown", f"{value!r} is no kind of wall", do)
    return _names(table, key, value, unit)


def _measure(dimension: Dimension) -> Reader:
    def read(table: TomlTable, key: Key, value: object, _: str | None) -> float | None:
        if isinstance(value, (str, int, float)) and not isinstance(value, bool):
            return table.quantity(key.word, dimension, bare_unit=None)
        raise _wrong(key, value)

    return read


def _percent(table: TomlTable, key: Key, value: object, _: str | None) -> float | None:
    if isinstance(value, str):
        share = table.measured(key.word, value, Dimension.FRACTION, None)
    else:
        percent = table.finite(key.word, value)
        share = None if percent is None else percent / 100.0
    if share is not None and not 0.0 <= share < 1.0:
        do = f"write percent from 0 to below 100, for example {key.word} = {key.example}"
        raise _out(value, "is no such share", do)
    return share


_READERS: dict[Takes, Reader] = {
    Takes.TEXT: _text,
    Takes.NAME: _text,
    Takes.PART: _part,
    Takes.SHORT: _short_name,
    Takes.NAMES: _names,
    Takes.SHORTS: _short_names,
    Takes.WORD: _word,
    Takes.WORDS: _words,
    Takes.YES_NO: _yes_no,
    Takes.COUNT: _count,
    Takes.NUMBER: _number,
    Takes.SHARE: _share,
    Takes.TWO_SHARES: _two_shares,
    Takes.ONE_OR_TWO_SHARES: _one_or_two,
    Takes.LENGTH: _length,
    Takes.LENGTH_OR_ZERO: _length_or_zero,
    Takes.STATION: _station,
    Takes.STATIONS: _stations,
    Takes.TWO_STATIONS: _between,
    Takes.PLAN_POINT: _plan_point,
    Takes.POINT: _point,
    Takes.SIZE: _size,
    Takes.POINTS: _points,
    Takes.ALONG: _along,
    Takes.WALLS: _walls,
    Takes.MASS: _measure(Dimension.MASS),
    Takes.DENSITY: _measure(Dimension.DENSITY),
    Takes.FLOW: _measure(Dimension.FLOW),
    Takes.FRACTION: _measure(Dimension.FRACTION),
    Takes.PERCENT: _percent,
}
