"""One table of actions: nothing clashes, nothing is out of reach."""

from __future__ import annotations

from itertools import combinations
from pathlib import Path

import pytest

from ledger.model.declare import KINDS
from ledger.tui.actions import (
    BENCH,
    SHELL,
    Action,
    action_for_key,
    action_for_tag,
    action_for_word,
    kind_actions,
)
from ledger.tui.app import LedgerApp
from ledger.tui.list_screen import actions_listed
from ledger.tui.work_screen import WorkScreen

SCREENS: list[type[WorkScreen]] = [*LedgerApp.MODES.values()]  # type: ignore[type-arg, list-item]


def table_of(screen: type[WorkScreen]) -> tuple[Action, ...]:  # type: ignore[type-arg]
    return (*screen.ACTIONS, *SHELL, *kind_actions())


@pytest.mark.parametrize("screen", SCREENS)
def test_no_two_actions_of_a_screen_share_a_word_or_a_key(screen: type[WorkScreen]) -> None:  # type: ignore[type-arg]
    for one, other in combinations(table_of(screen), 2):
        assert not {one.word, *one.also} & {other.word, *other.also}, (one.name, other.name)
        keys = ({one.key, one.lone} & {other.key, other.lone}) - {None}
        areas_meet = not one.areas or not other.areas or set(one.areas) & set(other.areas)
        assert not (keys and areas_meet), (one.name, other.name)


@pytest.mark.parametrize("screen", SCREENS)
def test_every_action_has_something_that_does_it(screen: type[WorkScreen]) -> None:  # type: ignore[type-arg]
    for action in table_of(screen):
        if action in BENCH and screen.WORD != "bench":
            continue
        done = action.name.startswith("open_") and action.word in KINDS
        done = done or hasattr(screen, f"do_{action.name}") or hasattr(LedgerApp, f"do_{action.name}")
        assert done or action.name in ("go_weights", "go_fuel", "go_trace", "go_iterations"), action.name


@pytest.mark.parametrize("screen", SCREENS)
def test_every_action_has_a_word_and_a_tip(screen: type[WorkScreen]) -> None:  # type: ignore[type-arg]
    for action in table_of(screen):
        assert action_for_word(action.word.upper(), table_of(screen)) == action
        assert action.tip


def test_every_kind_but_adopt_has_its_word() -> None:
    words = {action.word for action in kind_actions()}
    assert words == set(KINDS) - {"adopt"}


def test_printable_characters_are_keys_only_as_lone_digits_and_space() -> None:
    for screen in SCREENS:
        for action in table_of(screen):
            assert action.key is None or len(action.key) > 1, action.name
            assert action.lone is None or action.lone in ("1", "2", "3", "5", "6", "space"), action.name


def test_tags_hold_only_letters_and_spaces_so_that_every_keyboard_layout_sends_them_alike() -> None:
    for action in BENCH:
        if action.tag is not None:
            assert action.tag.replace(" ", "").isalpha()
            assert len(action.tag) >= 4
            assert action_for_tag(action.tag.lower(), BENCH) is action
    assert {"next ply", "new cup", "undo", "stop", "log"} <= {action.word for action in BENCH if action.tag}


def test_a_key_bound_to_an_area_comes_before_one_bound_to_none() -> None:
    general = Action(name="a", word="a", tip="a", key="up")
    own = Action(name="b", word="b", tip="b", key="up", areas=("tilt",))
    assert action_for_key("up", "tilt", (general, own)) is own
    assert action_for_key("up", "fuel", (general, own)) is general


def test_the_list_of_all_actions_holds_every_one(tmp_path: Path) -> None:
    del tmp_path
    for screen in SCREENS:
        rows = actions_listed(table_of(screen))
        assert [word for word, _ in rows] == [action.word for action in table_of(screen)]
