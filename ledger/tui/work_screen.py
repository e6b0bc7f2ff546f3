"""What every working screen hears: keys, scans and words, each led to one action of the one table."""

from __future__ import annotations

import inspect
from typing import Any, ClassVar, Generic

from ledger.operations.find_thing import FoundThing
from ledger.tui.actions import BENCH as BENCH_ACTIONS
from ledger.tui.actions import (
    SHELL,
    Action,
    action_for_key,
    action_for_tag,
    action_for_word,
    kind_actions,
)
from ledger.tui.crew import read_badge
from ledger.tui.shell_screen import ShellScreen, View, first_words

__all__ = ["View", "WorkScreen", "first_words"]

_KIND_ACTIONS = kind_actions()
# Words that log or confirm count only from a hand; their printed tags say TAG first.
_BY_HAND_ONLY = frozenset({"log", "keep", "looked", "leave", "throw_away"})


class WorkScreen(ShellScreen[View], Generic[View]):
    """One of the program's screens. See the words of each method for what a screen adds."""

    ACTIONS: ClassVar[tuple[Action, ...]] = ()

    # -- what a screen adds

    def take_thing(self, thing: FoundThing) -> bool:  # noqa: ARG002  a screen of its own uses it
        """A number that exists was scanned or typed. True where this screen used it."""
        return False

    def take_line(self, text: str) -> bool:  # noqa: ARG002
        """Enter by hand on text that is no word and no number. True where this screen used it."""
        return False

    def take_enter(self) -> None:
        """Enter by hand on an empty line."""

    def field_takes(self, text: str, *, scanned: bool) -> bool:  # noqa: ARG002
        """Text for the field in hand, before anything else looks at it. True where it was dealt with."""
        return False

    def thing_in_hand(self) -> FoundThing | None:
        """What the screen is about, so that a word opens its slip with it."""
        return None

    @property
    def table(self) -> tuple[Action, ...]:
        """Every action that applies here, the screen's own first."""
        shell = (action for action in SHELL if self.ledger_app.has(action))
        return (*self.ACTIONS, *shell, *_KIND_ACTIONS)

    # -- what is heard

    def hear_typing(self) -> None:
        """The line's text changed."""
        self.draw_line()

    def hear_scan(self, text: str) -> None:
        """A scan: a badge, an action's tag, the field in hand, a word, or a number, in that order."""
        self.draw_line()
        tagged = action_for_tag(text, (*BENCH_ACTIONS, *SHELL))
        if tagged is not None:
            self.perform(tagged)
        elif not self.field_takes(text, scanned=True):
            self._hear_elsewhere(text, scanned=True)
        self.draw_line()

    def hear_line(self, text: str) -> None:
        """Enter by hand."""
        tagged = action_for_tag(text, (*BENCH_ACTIONS, *SHELL))
        if tagged is not None:
            self.perform(tagged)
        elif self.ledger_app.take_time(text):
            self.draw_shell()
        elif not self.field_takes(text, scanned=False):
            if text.strip():
                self._hear_elsewhere(text, scanned=False)
            else:
                self.take_enter()
        self.draw_line()

    def hear_key(self, key: str) -> None:
        """A key: the screen's own action in this area, else the shell's."""
        action = action_for_key(key, self.area, self.table)
        if action is not None:
            self.perform(action)
        self.draw_line()

    def perform(self, action: Action) -> None:
        """Do one action: by the screen's own method, else the program's, else at the bench."""
        if action.name.startswith("open_") and hasattr(self.ledger_app, "open_slip"):
            kind = action.name.removeprefix("open_")
            if not hasattr(self, f"do_{action.name}"):
                self.ledger_app.open_slip(kind, self.thing_in_hand())
                return
        method = getattr(self, f"do_{action.name}", None) or getattr(
            self.ledger_app, f"do_{action.name}", None
        )
        if method is None:
            self.refuse(f"{action.word} is done on the bench screen: type bench")
            return
        result = method()
        if inspect.isawaitable(result):
            self.run_worker(_awaited(result), exit_on_error=True)

    def do_next_area(self) -> None:
        """Tab."""
        self._step_area(1)

    def do_area_before(self) -> None:
        """Shift-Tab."""
        self._step_area(-1)

    def do_leave_slip(self) -> None:
        """Esc ends long work between two of its steps; with nothing open it leaves nothing."""
        if self.long.end_by_hand():
            self.draw_messages()
        self.ledger_app.line.put("")
        self.draw_line()

    def _step_area(self, step: int) -> None:
        if len(self.AREAS) > 1:
            self.go_to_area(self.AREAS[(self._area_index + step) % len(self.AREAS)])

    def _hear_elsewhere(self, text: str, *, scanned: bool) -> None:
        badge = read_badge(text)
        action = action_for_word(text, self.table)
        if badge is not None:
            self.ledger_app.badge(badge)
        elif action is not None and not (scanned and action.name in _BY_HAND_ONLY):
            self.perform(action)
        elif self.ledger_app.take_words(text):
            return
        else:
            self._take_number(text, scanned=scanned)

    def _take_number(self, text: str, *, scanned: bool) -> None:
        if not scanned and self.take_line(text):
            return
        thing = self.ledger_app.find(text)
        if thing is None:
            said = "scanned" if scanned else "typed"
            why = self.ledger_app.why_unknown(text)
            self.refuse(why or f"{said} {text}: no word and no number known here; actions lists the words")
        elif not self.take_thing(thing):
            self.ledger_app.offer_thing(thing)


async def _awaited(result: Any) -> None:
    await result
