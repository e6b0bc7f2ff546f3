"""Large print: a few short lines in letters five rows high, to be read at 3 m."""

from __future__ import annotations

from rich.text import Text

_ROWS = 5
# Drawn by hand for this program: five rows of up to five cells, read from left to right.
_LETTERS = {
    "A": " ## |#  #|####|#  #|#  #",
    "B": "### |#  #|### |#  #|### ",
    "C": " ###|#   |#   |#   | ###",
    "D": "### |#  #|#  #|#  #|### ",
    "E": "####|#   |### |#   |####",
    "F": "####|#   |### |#   |#   ",
    "G": " ###|#   |# ##|#  #| ###",
    "H": "#  #|#  #|####|#  #|#  #",
    "I": "###| # | # | # |###",
    "J": "  ##|   #|   #|#  #| ## ",
    "K": "#  #|# # |##  |# # |#  #",
    "L": "#   |#   |#   |#   |####",
    "M": "#   #|## ##|# # #|#   #|#   #",
    "N": "#   #|##  #|# # #|#  ##|#   #",
    "O": " ## |#  #|#  #|#  #| ## ",
    "P": "### |#  #|### |#   |#   ",
    "Q": " ## |#  #|#  #|# # | # #",
    "R": "### |#  #|### |# # |#  #",
    "S": " ###|#   | ## |   #|### ",
    "T": "#####|  #  |  #  |  #  |  #  ",
    "U": "#  #|#  #|#  #|#  #| ## ",
    "V": "#   #|#   #| # # | # # |  #  ",
    "W": "#   #|#   #|# # #|## ##|#   #",
    "X": "#   #| # # |  #  | # # |#   #",
    "Y": "#   #| # # |  #  |  #  |  #  ",
    "Z": "#####|   # |  #  | #   |#####",
    "0": " ## |#  #|#  #|#  #| ## ",
    "1": " # |## | # | # |###",
    "2": "### |   #| ## |#   |####",
    "3": "### |   #| ## |   #|### ",
    "4": "#  #|#  #|####|   #|   #",
    "5": "####|#   |### |   #|### ",
    "6": " ## |#   |### |#  #| ## ",
    "7": "####|   #|  # | #  | #  ",
    "8": " ## |#  #| ## |#  #| ## ",
    "9": " ## |#  #| ###|   #| ## ",
    "+": "   | # |###| # |   ",
    "-": "   |   |###|   |   ",
    ".": " | | | |#",
    ":": " |#| |#| ",
    "/": "    #|   # |  #  | #   |#    ",
    "\\": "#    | #   |  #  |   # |    #",
    "|": "#|#|#|#|#",
    "%": "#  #|  # | ## | #  |#  #",
    " ": "  |  |  |  |  ",
}
_UNKNOWN = "####|####|####|####|####"


def large_text(lines: tuple[str, ...], width: int, height: int) -> Text:
    """The lines in large letters, as many as there is room for; too wide ones, and the rest, stay small."""
    fitting = large_rows(height)
    rows: list[str] = []
    for line in lines[:fitting]:
        drawn = _drawn(line)
        rows += drawn if len(drawn[0]) <= width else [line.upper()]
        rows.append("")
    small = "   ".join(lines[fitting:]).upper()
    return Text("\n".join([*rows, small[:width]][:height]), style="bold")


def large_rows(height: int) -> int:
    """How many lines in large letters fit."""
    return max(1, (height + 1) // (_ROWS + 1))


def _drawn(line: str) -> list[str]:
    letters = [_LETTERS.get(char, _UNKNOWN).split("|") for char in line.upper()]
    letters = [
        ["#", "#", "#", "#", "#"] if char == "|" else one for char, one in zip(line, letters, strict=True)
    ]
    return [" ".join(letter[row] for letter in letters) for row in range(_ROWS)]
