"""The schema of a layout file as parsed TOML, made from the declaration that its reader follows."""

from __future__ import annotations

from ledger.loft.keys import Key, TableKeys, Takes
from ledger.loft.layout import Walls
from ledger.loft.layout_keys import FORMAT, SECTION, SKIN, TABLES, TOP
from ledger.reports.schema_shapes import NUMBER, TEXT, YES_NO, Schema, each

_SHORT: Schema = {"type": "string", "pattern": r"^\s*[A-Za-z0-9_-]+\s*$"}
_PART: Schema = {"type": "string", "pattern": r"^\s*[^\s;,/=\"'#]+\s*$"}
_WITH_UNIT: Schema = {"type": "string", "pattern": "[0-9]"}
_ABOVE_ZERO: Schema = {"type": "number", "exclusiveMinimum": 0}
_NOT_BELOW_ZERO: Schema = {"type": "number", "minimum": 0}
_SHARE: Schema = {"type": "number", "minimum": 0, "maximum": 1}
_LENGTH: Schema = {"anyOf": [_ABOVE_ZERO, _WITH_UNIT]}
_LENGTH_OR_ZERO: Schema = {"anyOf": [_NOT_BELOW_ZERO, _WITH_UNIT]}
_STATION: Schema = {"anyOf": [NUMBER, _WITH_UNIT]}


def _several(item: Schema, least: int = 1, most: int | None = None) -> Schema:
    ends = {"minItems": least} if most is None else {"minItems": least, "maxItems": most}
    return {**each(item), **ends}


_NAMES: Schema = {**_several(TEXT), "uniqueItems": True}
_POINT = _several(_STATION, 3, 3)
_ALONG: Schema = {
    "anyOf": [
        _SHARE,
        *(
            {
                "type": "object",
                "properties": {word: shape},
                "required": [word],
                "additionalProperties": False,
            }
            for word, shape in (
                ("share", _SHARE),
                ("from_start", _LENGTH_OR_ZERO),
                ("from_end", _LENGTH_OR_ZERO),
            )
        ),
    ]
}

_SHAPES: dict[Takes, Schema] = {
    Takes.TEXT: TEXT,
    Takes.NAME: TEXT,
    Takes.PART: _PART,
    Takes.SHORT: _SHORT,
    Takes.SHORTS: {**_several(_SHORT), "uniqueItems": True},
    Takes.NAMES: _NAMES,
    Takes.YES_NO: YES_NO,
    Takes.COUNT: {"type": "integer"},
    Takes.NUMBER: NUMBER,
    Takes.SHARE: _SHARE,
    Takes.TWO_SHARES: _several(_SHARE, 2, 2),
    Takes.ONE_OR_TWO_SHARES: {"anyOf": [_SHARE, _several(_SHARE, 2, 2)]},
    Takes.LENGTH: _LENGTH,
    Takes.LENGTH_OR_ZERO: _LENGTH_OR_ZERO,
    Takes.STATION: _STATION,
    Takes.STATIONS: _several(_STATION),
    Takes.TWO_STATIONS: _several(_STATION, 2, 2),
    Takes.PLAN_POINT: _several(_STATION, 2, 2),
    Takes.POINT: _POINT,
    Takes.SIZE: _several(_LENGTH, 3, 3),
    Takes.POINTS: _several(_POINT),
    Takes.ALONG: _ALONG,
    Takes.WALLS: {"anyOf": [{"enum": [kind.value for kind in Walls]}, _NAMES]},
    Takes.MASS: _WITH_UNIT,
    Takes.DENSITY: _WITH_UNIT,
    Takes.FLOW: _WITH_UNIT,
    Takes.FRACTION: _WITH_UNIT,
    Takes.PERCENT: {"anyOf": [{"type": "number", "minimum": 0, "exclusiveMaximum": 100}, _WITH_UNIT]},
}


def layout_schema() -> Schema:
    """A layout file. Bare lengths are in its length_unit; texts carry their own unit."""
    top = _table(TOP)
    top["properties"]["format"] = {"const": FORMAT, "description": "which format the file is in"}
    for keys in TABLES:
        top["properties"][keys.word] = _each_table(keys)
    top["required"] += [SECTION.word, SKIN.word]
    return top


def _each_table(keys: TableKeys) -> Schema:
    table = _table(keys)
    if not keys.many:
        return {"description": keys.tip, **table}
    least = 2 if keys is SECTION else 1
    return {"description": keys.tip, **_several(table, least)}


def _table(keys: TableKeys) -> Schema:
    if keys.each is not None:
        return {"type": "object", "additionalProperties": _key(keys.each)}
    schema: Schema = {
        "type": "object",
        "properties": {key.word: _key(key) for key in keys.keys},
        "required": [key.word for key in keys.keys if key.required],
        "additionalProperties": False,
    }
    if keys.one_of:
        schema["allOf"] = [_one_way(group) for group in keys.one_of]
    together = [way for group in keys.one_of for way in group if len(way) > 1]
    if together:
        schema["dependentRequired"] = {
            word: [other for other in way if other != word] for way in together for word in way
        }
    return schema


def _one_way(group: tuple[tuple[str, ...], ...]) -> Schema:
    return {"oneOf": [{"required": list(way)} for way in group]}


def _key(key: Key) -> Schema:
    return {**_shape(key), "description": key.tip}


def _shape(key: Key) -> Schema:
    if key.takes is Takes.WORD:
        return {"enum": list(key.choices)}
    if key.takes is Takes.WORDS:
        return {**_several({"enum": list(key.choices)}), "uniqueItems": True}
    if key.takes in (Takes.COUNT, Takes.NUMBER) and key.least > float("-inf"):
        return {**_SHAPES[key.takes], "minimum": key.least, "maximum": key.most}
    return _SHAPES[key.takes]
