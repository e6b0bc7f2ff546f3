"""Our three themes, and the styles that go with each. A state is a word or a sign first; hue repeats it."""

from __future__ import annotations

import sys
from dataclasses import dataclass

from textual.theme import Theme

DARK = Theme(
    name="dark",
    primary="#d8dee6",
    secondary="#9fb0c0",
    warning="#f2d24b",
    error="#ffffff",
    success="#d8dee6",
    accent="#8fc7ff",
    foreground="#e6e9ee",
    background="#101418",
    surface="#101418",
    panel="#1b2229",
    dark=True,
)
LIGHT = Theme(
    name="light",
    primary="#20262c",
    secondary="#4a5560",
    warning="#6b5200",
    error="#000000",
    success="#20262c",
    accent="#0b4f9e",
    foreground="#15191d",
    background="#fbfbf8",
    surface="#fbfbf8",
    panel="#eceae2",
    dark=False,
)
# The terminal's own two colours and nothing else: for paper-white screens and for those who see no hue.
NONE = Theme(
    name="none",
    primary="ansi_default",
    secondary="ansi_default",
    warning="ansi_default",
    error="ansi_default",
    success="ansi_default",
    accent="ansi_default",
    foreground="ansi_default",
    background="ansi_default",
    surface="ansi_default",
    panel="ansi_default",
    dark=True,
    ansi=True,
    # The toolkit's own screens name these two, and give them a value only in themes that are not ansi.
    variables={"ansi-background": "ansi_default", "ansi-foreground": "ansi_default"},
)
THEMES = (DARK, LIGHT, NONE)


@dataclass(frozen=True, slots=True, kw_only=True)
class Signs:
    """Rich style strings by what they mean."""

    stop: str = "bold reverse"
    look: str = "bold"
    ok: str = ""
    fuel: str = ""
    trapped: str = "bold"
    quiet: str = ""
    mark: str = "bold"
    head: str = "bold"

    def of(self, word: str) -> str:
        """The style of a state's word."""
        return {"STOP": self.stop, "LOOK": self.look}.get(word, self.ok)


SIGNS = {
    "dark": Signs(look="bold #f2d24b", fuel="#8fc7ff", trapped="bold #ff9df2", quiet="#9fb0c0"),
    "light": Signs(look="bold #6b5200", fuel="#0b4f9e", trapped="bold #8a1277", quiet="#4a5560"),
    "none": Signs(),
}


@dataclass(frozen=True, slots=True, kw_only=True)
class Lines:
    """Characters to rule with."""

    h: str = "-"
    v: str = "|"
    cross: str = "+"
    tee_down: str = "+"
    tee_up: str = "+"
    tee_right: str = "+"
    tee_left: str = "+"
    full: str = "#"
    empty: str = "."


PLAIN = Lines()
DRAWN = Lines(
    h="\u2500",
    v="\u2502",
    cross="\u253c",
    tee_down="\u252c",
    tee_up="\u2534",
    tee_right="\u251c",
    tee_left="\u2524",
    full="#",
    empty=".",
)


def is_plain(encoding: str | None = None) -> bool:
    """Whether the terminal's encoding has no box characters."""
    try:
        "\u2500\u253c".encode(encoding or sys.stdout.encoding or "ascii")
    except (UnicodeEncodeError, LookupError):
        return True
    return False
