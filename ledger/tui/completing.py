"""Completing what is typed from what is open."""

from __future__ import annotations

from collections.abc import Mapping

from ledger.model.declare import Field
from ledger.model.things import ThingKind
from ledger.operations.look_at_bench import OpenThing


def candidates(
    field: Field, typed: str, open_things: Mapping[ThingKind, tuple[OpenThing, ...]]
) -> tuple[OpenThing, ...]:
    """What could stand in the field and begins with the last name typed."""
    begun = last_name(typed).casefold() if field.many else typed.strip().casefold()
    if field.choices:
        return tuple(OpenThing(text=choice, says="") for choice in field.choices if choice.startswith(begun))
    if field.mints is not None:
        return ()
    return tuple(
        one
        for kind in field.things
        for one in open_things.get(kind, ())
        if one.text.casefold().startswith(begun)
    )


def completed(typed: str, whole: str) -> str:
    """The typed text with its last name completed."""
    kept = typed[: len(typed) - len(last_name(typed))] if ";" in typed or "," in typed else ""
    return f"{kept}{whole}"


def last_name(typed: str) -> str:
    """The name being typed, after the last semicolon or comma."""
    return typed.replace(",", ";").rsplit(";", 1)[-1].lstrip()
