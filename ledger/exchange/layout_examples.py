"""The examples of a layout's keys in the names that the user's own files hold."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import replace
from typing import TYPE_CHECKING

from ledger.exchange.toml_text import TomlTable
from ledger.loft.keys import Key, TableKeys, Takes
from ledger.model.plan import MaterialKind

if TYPE_CHECKING:
    from ledger.exchange.layout_shelf import Shelf

_LAMINATES = ("sheet", "laminate", "finish")
_MATERIALS = {
    "material": (MaterialKind.SOLID, MaterialKind.CORE),
    "paste": (MaterialKind.PASTE,),
    "sealant_material": (MaterialKind.SEALANT, MaterialKind.PASTE),
}
# How many of the names make a whole value.
_COUNTS = {"webs": 2, "ribs": 2}


def in_own_names(whole: TomlTable, keys: TableKeys, shelf: Shelf) -> TableKeys:
    """The keys of a table; a name in an example is one of the user's own, where there is one."""
    return replace(keys, keys=tuple(_in_own_name(whole, keys.word, key, shelf) for key in keys.keys))


def _in_own_name(whole: TomlTable, table: str, key: Key, shelf: Shelf) -> Key:
    if key.takes not in (Takes.NAME, Takes.NAMES):
        return key
    count = _COUNTS.get(key.word, 1)
    names = _said_already(whole, table, key.word, _known(key.word, shelf))[:count]
    if len(names) < count:
        return key
    quoted = ", ".join(f'"{name}"' for name in names)
    return replace(key, example=f"[{quoted}]" if key.takes is Takes.NAMES else quoted)


def _known(word: str, shelf: Shelf) -> tuple[str, ...]:
    """The names that may stand behind a key."""
    if word in _LAMINATES:
        return tuple(shelf.laminates.records)
    if word in _MATERIALS:
        materials = shelf.materials.records.values()
        return tuple(
            one.name for one in materials if one.kind in _MATERIALS[word] and one.density_kg_m3 is not None
        )
    if word == "bay":
        return tuple(f"{row}{rib}" for row in shelf.rows[:1] for rib in shelf.ribs[:1])
    named = {"web": shelf.webs, "webs": shelf.webs, "through": shelf.webs}
    return (named | {"row": shelf.rows, "rows": shelf.rows, "ribs": shelf.ribs}).get(word, ())


def _said_already(whole: TomlTable, table: str, word: str, known: Iterable[str]) -> tuple[str, ...]:
    """The known names, one that another table of this kind gives for the key first."""
    listed = tuple(name for name in known if '"' not in name and "\\" not in name)
    tables = whole.values.get(table)
    said = [one.get(word) for one in tables if isinstance(one, dict)] if isinstance(tables, list) else []
    first = next((name for name in said if isinstance(name, str) and name in listed), None)
    return listed if first is None else (first, *(name for name in listed if name != first))
