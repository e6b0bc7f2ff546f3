"""The message lines: the newest two, each behind its sign."""

from __future__ import annotations

from dataclasses import dataclass, replace

from rich.text import Text

from ledger.tui.themes import Signs

_KEPT = 200
_SHOWN = 2


@dataclass(frozen=True, slots=True, kw_only=True)
class Message:
    """One line said. `sign` is ok, LOOK, STOP or empty.

    A `passing` line holds only as long as a slip stands as it does; once it is `over` it is drawn no more.
    """

    sign: str
    text: str
    passing: bool = False
    over: bool = False


@dataclass(frozen=True, slots=True, kw_only=True)
class Messages:
    """What was said on a screen, oldest first."""

    said: tuple[Message, ...] = ()

    def with_one(self, message: Message) -> Messages:
        """One more at the end."""
        return Messages(said=(*self.said, message)[-_KEPT:])

    def settled(self) -> Messages:
        """With every passing line over."""
        return Messages(said=tuple(replace(one, over=one.over or one.passing) for one in self.said))

    @property
    def last(self) -> Message | None:
        """The newest."""
        return self.said[-1] if self.said else None

    def drawn(self, width: int, signs: Signs, rows: int = _SHOWN) -> Text:
        """A long newest one takes all rows; above a short one the one before is cut to a row."""
        standing = [message for message in self.said if not message.over]
        if not standing:
            return Text()
        newest = _rows_of(standing[-1], width, signs, rows)
        if len(newest) < rows and len(standing) > 1:
            newest = [*_rows_of(standing[-2], width, signs, 1), *newest]
        return Text("\n").join(newest)


def fits(text: str, width: int, rows: int = _SHOWN) -> bool:
    """Whether the message lines have room for all of a text."""
    rest = " ".join(text.split())
    for _ in range(rows):
        _, rest = _broken(rest, max(8, width - 6))
    return not rest


def _rows_of(message: Message, width: int, signs: Signs, most: int) -> list[Text]:
    room = max(8, width - 6)
    words = " ".join(message.text.split())
    first, rest = _broken(words, room)
    row = Text()
    row.append(message.sign, style=signs.of(message.sign))
    row.append(" " * (6 - len(message.sign)))
    if not rest or most == 1:
        row.append(f"{first[: room - 2]}.." if rest else first)
        return [row]
    row.append(first)
    second, left = _broken(rest, room)
    return [row, Text(" " * 6 + (f"{second[: room - 2]}.." if left else second))]


def _broken(words: str, room: int) -> tuple[str, str]:
    if len(words) <= room:
        return words, ""
    at = words.rfind(" ", 0, room + 1)
    at = room if at <= room // 2 else at
    return words[:at], words[at:].strip()
