"""Numbers on tags: a type letter, a running number, and a check character no slip of the pen survives."""

from __future__ import annotations

import re

from stdnum.iso7064 import mod_37_2

from ledger.model.things import TYPE_LETTER, ThingKind

_KIND_OF_LETTER = {letter: kind for kind, letter in TYPE_LETTER.items()}
_LOOKS_MINTED = re.compile(rf"([{''.join(_KIND_OF_LETTER)}])([0-9]{{3,}})([0-9A-Z*])")


def next_number(kind: ThingKind, running: int) -> tuple[str, int]:
    """The first number after `running` that has a letter or digit to check it, and its running number."""
    while True:
        running += 1
        stem = f"{TYPE_LETTER[kind]}{running:03d}"
        check = str(mod_37_2.calc_check_digit(stem))
        if check != "*":
            return stem + check, running


def kind_by_look(number: str) -> ThingKind | None:
    """The kind whose minted numbers look like this one, right or wrong; None for any other text."""
    match = _LOOKS_MINTED.fullmatch(number)
    return None if match is None else _KIND_OF_LETTER[match.group(1)]


def running_of(number: str) -> int | None:
    """The running number inside a number that looks minted."""
    match = _LOOKS_MINTED.fullmatch(number)
    return None if match is None else int(match.group(2))


def check_character_fits(number: str) -> bool:
    """Whether the last character is the one that belongs to the others. `*` never stands on a tag."""
    return not number.endswith("*") and bool(mod_37_2.is_valid(number))
