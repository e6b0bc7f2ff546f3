"""What the published schemas are put together from."""

from __future__ import annotations

from typing import Any

Schema = dict[str, Any]

NUMBER: Schema = {"type": "number"}
NUMBER_OR_NULL: Schema = {"type": ["number", "null"]}
TEXT: Schema = {"type": "string"}
TEXT_OR_NULL: Schema = {"type": ["string", "null"]}
YES_NO: Schema = {"type": "boolean"}
COUNT: Schema = {"type": "integer", "minimum": 0}
VECTOR: Schema = {"type": "array", "items": NUMBER, "minItems": 3, "maxItems": 3}
VECTOR_OR_NULL: Schema = {"anyOf": [VECTOR, {"type": "null"}]}
MATRIX_OR_NULL: Schema = {
    "anyOf": [{"type": "array", "items": VECTOR, "minItems": 3, "maxItems": 3}, {"type": "null"}]
}
SHA256: Schema = {"type": "string", "pattern": "^[0-9a-f]{64}$"}


def record(**keys: Schema) -> Schema:
    """An object with exactly these keys."""
    return {
        "type": "object",
        "properties": keys,
        "required": list(keys),
        "additionalProperties": False,
    }


def each(item: Schema) -> Schema:
    """A list of one thing."""
    return {"type": "array", "items": item}


def one_of(*words: str, or_null: bool = False) -> Schema:
    """One of a few words."""
    return {"enum": [*words, None] if or_null else list(words)}


FINDING = record(code=TEXT, severity=one_of("stop", "look", "note"), where=TEXT, what=TEXT, do=TEXT)
MINTED: Schema = {"type": "object", "additionalProperties": TEXT}
