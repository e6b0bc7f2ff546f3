"""Lists that lie over a screen: all actions, help, all findings. Esc or any word puts them away."""

from __future__ import annotations

from collections.abc import Sequence

from rich.text import Text
from textual.app import ComposeResult

from ledger.errors import Finding
from ledger.tui.actions import Action
from ledger.tui.area import Area
from ledger.tui.listening import ListeningScreen
from ledger.tui.themes import SIGNS

_TURNS = {"pagedown": 1, "space": 1, "pageup": -1}
_STEPS = {"down": 1, "up": -1}

Listed = tuple[tuple[str, str], ...]


class ListScreen(ListeningScreen[None]):
    """Rows of a sign or word and its text, a page at a time."""

    DEFAULT_CSS = """
    ListScreen { background: $background; color: $foreground; layout: vertical; }
    ListScreen #list-head, ListScreen #list-foot { height: 1; }
    """

    def __init__(self, title: str, rows: Listed) -> None:
        super().__init__()
        self.title_word = title
        self.rows = rows
        self.top = 0

    def compose(self) -> ComposeResult:
        """Head, rows, and how to leave."""
        yield Area(id="list-head")
        yield Area(id="list-rows")
        yield Area(id="list-foot")

    def on_mount(self) -> None:
        """Draw the first page."""
        self.draw_rows()

    def on_resize(self) -> None:
        """Draw for the new size."""
        self.draw_rows()

    def draw_rows(self) -> None:
        """The page that stands now."""
        signs = SIGNS[self.app.theme]
        wrapped = self._wrapped(self.app.size.width)
        page = max(1, self.app.size.height - 2)
        self.top = max(0, min(self.top, len(wrapped) - page))
        shown = wrapped[self.top : self.top + page]
        head = Text(self.title_word, style=signs.head)
        head.append(
            f"   {self.top + 1 if wrapped else 0} to {self.top + len(shown)} of {len(wrapped)} lines",
            style="",
        )
        self.query_one("#list-head", Area).draw(head)
        body = Text("\n").join(
            Text.assemble((left, signs.of(left.strip()) or signs.head if left.strip() else ""), right)
            for left, right in shown
        )
        self.query_one("#list-rows", Area).draw(body)
        self.query_one("#list-foot", Area).draw(
            Text(
                f"PgDn PgUp turn the page   Esc or Enter back   or type a word: {self.ledger_app.line.text}_"
            )
        )

    def hear_typing(self) -> None:
        """Show what is typed."""
        self.draw_rows()

    def hear_scan(self, text: str) -> None:
        """A scan is for the screen below."""
        self._hand_down(text, scanned=True)

    def hear_line(self, text: str) -> None:
        """Enter leaves; a word leaves and is done below."""
        self._hand_down(text, scanned=False)

    def hear_key(self, key: str) -> None:
        """Turn, leave, or leave and do below."""
        page = max(1, self.app.size.height - 3)
        if key in _TURNS or key in _STEPS:
            self.top += _TURNS.get(key, 0) * page + _STEPS.get(key, 0)
            self.draw_rows()
        elif key in ("home", "end"):
            self.top = 0 if key == "home" else len(self.rows) * 4
            self.draw_rows()
        elif key == "escape":
            self.app.pop_screen()
        else:
            below = self.ledger_app.work_screen
            self.app.pop_screen()
            if below is not None:
                below.hear_key(key)

    def _hand_down(self, text: str, *, scanned: bool) -> None:
        below = self.ledger_app.work_screen
        self.app.pop_screen()
        if below is None or not text.strip():
            return
        if scanned:
            below.hear_scan(text)
        else:
            below.hear_line(text)

    def _wrapped(self, width: int) -> list[tuple[str, str]]:
        indent = min(24, max((len(left) for left, _ in self.rows), default=0) + 2)
        lines: list[tuple[str, str]] = []
        for left, right in self.rows:
            words = right.split()
            line = ""
            first = True
            for word in [*words, ""]:
                longer = f"{line} {word}".strip()
                if word and len(longer) <= width - indent - 1:
                    line = longer
                    continue
                lines.append((left.ljust(indent) if first else " " * indent, line))
                first, line = False, word
            if line:
                lines.append((" " * indent, line))
        return lines


def actions_listed(table: Sequence[Action]) -> Listed:
    """Every action: its word, then keys, tag and tip."""
    rows = []
    for action in table:
        keys = f"[{action.keys}] " if action.keys else ""
        tag = f" (tag: {action.tag})" if action.tag else ""
        rows.append((action.word, f"{keys}{action.tip}{tag}"))
    return tuple(rows)


def findings_listed(findings: Sequence[Finding]) -> Listed:
    """Every finding: its sign, what is so and where, what to do."""
    if not findings:
        return (("ok", "no rule has noticed anything"),)
    return tuple(
        (
            {"stop": "STOP", "look": "LOOK"}.get(finding.severity.value, "note"),
            f"{finding.where}  {finding.what}; {finding.do}  ({finding.code})",
        )
        for finding in findings
    )


_HELP: dict[str, Listed] = {
    "bench": (
        ("scan", "a number: says what it is and what can be done with it"),
        ("weigh", "scan the piece, read the scale, Enter: no slip is needed"),
        ("word", "mix, lay, cut, weigh ... and Enter opens a slip; scan or type each field, Enter goes on"),
        ("log", "the last Enter, the word log, or the printed tag logs; a scan's own Enter never does"),
        ("Esc", "puts the slip away; its word brings it back as it was"),
        ("badge", "scan it, or type +JK, before the first log and after half an hour away"),
        ("STOP", "do not go on before it is settled"),
        ("LOOK", "look before going on"),
        ("bell", "one: done; two: refused; three: a cup's clock"),
    ),
    "weights": (("A C E", "known by: actual (weighed), calculated (as logged), estimated (plan)"),),
    "fuel": (
        ("= # o >", "feeds, trapped, air caught, the chosen cell"),
        ("d v p", "between cells: hole low in the wall, hole high in it, pipe"),
        ("out V D F", "to outside: outlet (X on the true outline), vent, drain, filler"),
        ("COMPUTED", "a flow test decides what is unusable"),
    ),
    "trace": (("scan", "a number: what it was made from, what it went into"),),
    "iterations": (
        ("r1 r3", "two names of iterations: what the second changes of the first"),
        ("now", "as it stands today under either plan; a built piece keeps its mass until it is remade"),
        ("remade", "as if every built piece that does not fit were made again as planned"),
        ("estimated", "design against design, whatever was built"),
        ("* u %", "on the chart: best mass, usable fuel, both at one place"),
        (":", "from above: a cell's outline; lines are webs, ribs and other panels"),
        ("Esc", "ends what is being reckoned, between two steps; nothing is written then"),
    ),
}


def help_listed(word: str, table: Sequence[Action]) -> Listed:
    """How a screen is used, its signs, then its keys."""
    keys = tuple((action.keys, f"{action.word}: {action.tip}") for action in table if action.keys)
    return (*_HELP.get(word, ()), ("", ""), *keys)
