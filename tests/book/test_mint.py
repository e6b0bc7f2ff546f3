"""Numbers on tags."""

from __future__ import annotations

import itertools

import pytest

from ledger.book.mint import check_character_fits, kind_by_look, next_number, running_of
from ledger.model.things import TYPE_LETTER, ThingKind

CHARACTERS = "0123456789ABCDEFGHIJKLMNOPQRSTUVWXYZ"


def _iso_7064_mod_37_2(text: str) -> int:
    # checks: ISO 7064 pure system recursive method, radix 2, modulus 37, from memory: valid where this is 1
    total = 0
    for character in text:
        total = (total * 2 + "0123456789ABCDEFGHIJKLMNOPQRSTUVWXYZ*".index(character)) % 37
    return total


def _numbers(kind: ThingKind, count: int) -> list[str]:
    running, numbers = 0, []
    for _ in range(count):
        number, running = next_number(kind, running)
        numbers.append(number)
    return numbers


@pytest.mark.parametrize("kind", list(TYPE_LETTER))
def test_numbers_rise_and_carry_the_check_character_of_the_standard(kind: ThingKind) -> None:
    numbers = _numbers(kind, 1200)
    assert all(_iso_7064_mod_37_2(number) == 1 for number in numbers)
    assert not any("*" in number for number in numbers)
    runnings = [running_of(number) or 0 for number in numbers]
    assert runnings == sorted(set(runnings))
    assert all(number[0] == TYPE_LETTER[kind] and len(number) >= 5 for number in numbers)


def test_numbers_whose_check_would_be_a_star_are_skipped() -> None:
    given = {running_of(number) for number in _numbers(ThingKind.LOT, 200)}
    skipped = set(range(1, 200)) - given
    assert skipped
    assert all(_iso_7064_mod_37_2(f"L{running:03d}*") == 1 for running in skipped)


@pytest.mark.parametrize("kind", list(TYPE_LETTER))
def test_every_single_wrong_character_is_refused(kind: ThingKind) -> None:
    for number in _numbers(kind, 25):
        assert check_character_fits(number)
        for place, wrong in itertools.product(range(len(number)), CHARACTERS):
            mistyped = number[:place] + wrong + number[place + 1 :]
            assert mistyped == number or not check_character_fits(mistyped)


@pytest.mark.parametrize("kind", list(TYPE_LETTER))
def test_every_swap_of_neighbours_is_refused(kind: ThingKind) -> None:
    for number in _numbers(kind, 200):
        for place in range(len(number) - 1):
            swapped = number[:place] + number[place + 1] + number[place] + number[place + 2 :]
            assert swapped == number or not check_character_fits(swapped)


@pytest.mark.parametrize(("text", "kind"), [("L014N", ThingKind.LOT), ("B0018", ThingKind.BATCH)])
def test_a_minted_number_shows_its_kind(text: str, kind: ThingKind) -> None:
    assert kind_by_look(text) is kind


@pytest.mark.parametrize("text", ["L01", "LOT-7", "X014N", "L14", "RIB.01", "L014-N", "l014N", ""])
def test_other_numbers_do_not_look_minted(text: str) -> None:
    assert kind_by_look(text) is None
