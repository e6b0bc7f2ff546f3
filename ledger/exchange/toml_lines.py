"""TOML as a person writes it: one key a line, a list on one line, an empty line before each table.

The writers to be had put every element of a list on a line of its own, three for each point.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping

from ledger.exchange.figure_texts import exact

TomlValue = str | bool | int | float | Iterable["TomlValue"]

_SHORT = {"\b": "\\b", "\t": "\\t", "\n": "\\n", "\f": "\\f", "\r": "\\r", '"': '\\"', "\\": "\\\\"}


def toml_value(value: TomlValue) -> str:
    """A text, a truth, a number or a list of them."""
    if isinstance(value, str):
        return toml_text(value)
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, int):
        return str(value)
    if isinstance(value, float):
        text = exact(value)
        return text if "." in text else f"{text}.0"
    return f"[{', '.join(toml_value(one) for one in value)}]"


def toml_text(text: str) -> str:
    """A text in quotation marks; what cannot stand in a line is written out."""
    return '"' + "".join(_SHORT.get(char) or _written_out(char) for char in text) + '"'


def _written_out(char: str) -> str:
    # Also the marks that TOML allows and an editor would take for the end of a line.
    return (
        char
        if char.isprintable()
        else f"\\u{ord(char):04x}"
        if ord(char) < 0x10000
        else f"\\U{ord(char):08x}"
    )


def toml_keys(keys: Mapping[str, TomlValue | None]) -> str:
    """Keys with their values; one that is None is left out."""
    return "".join(f"{key} = {toml_value(value)}\n" for key, value in keys.items() if value is not None)


def toml_table(head: str, keys: Mapping[str, TomlValue | None]) -> str:
    """A table under its head, such as `[fuel]` or `[[cell]]`."""
    return f"\n{head}\n{toml_keys(keys)}"
