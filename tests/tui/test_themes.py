"""The themes are ours, and no state hangs on hue."""

from __future__ import annotations

from pathlib import Path

import pytest
from rich.style import Style

from ledger.tui.app import LedgerApp
from ledger.tui.themes import DRAWN, PLAIN, SIGNS, THEMES, is_plain


def test_the_list_of_themes_is_ours(tmp_path: Path) -> None:
    assert set(LedgerApp(tmp_path / "none").available_themes) == {"dark", "light", "none"}
    assert set(SIGNS) == {theme.name for theme in THEMES}


def test_there_is_no_stock_command_list_and_no_stock_key(tmp_path: Path) -> None:
    app = LedgerApp(tmp_path / "none")
    assert app.ENABLE_COMMAND_PALETTE is False
    assert not app._bindings.key_to_bindings


@pytest.mark.parametrize("theme", SIGNS)
def test_with_every_colour_code_stripped_the_states_still_differ(theme: str) -> None:
    signs = SIGNS[theme]

    def bare(style: str) -> tuple[bool | None, bool | None]:
        parsed = Style.parse(style)
        return parsed.bold, parsed.reverse

    assert bare(signs.stop) == (True, True)
    assert bare(signs.look) == (True, None)
    assert bare(signs.ok) == (None, None)


def test_the_theme_none_has_no_hue_at_all() -> None:
    for style in (getattr(SIGNS["none"], name) for name in SIGNS["none"].__slots__):
        assert Style.parse(style).color is None


@pytest.mark.parametrize("sign", ["stop", "look", "ok", "quiet", "mark", "head", "fuel"])
@pytest.mark.parametrize("theme", SIGNS)
def test_no_style_is_red_or_green(theme: str, sign: str) -> None:
    colour = Style.parse(getattr(SIGNS[theme], sign)).color
    if colour is not None and colour.triplet is not None:
        red, green, blue = colour.triplet
        assert not (red > 2 * green and red > 2 * blue)
        assert not (green > 2 * red and green > 2 * blue)


@pytest.mark.parametrize(
    ("encoding", "plain"), [("ascii", True), ("latin-1", True), ("utf-8", False), ("nonsense", True)]
)
def test_rules_are_plain_where_the_encoding_has_no_more(encoding: str, plain: bool) -> None:
    assert is_plain(encoding) is plain


def test_plain_lines_are_ascii() -> None:
    assert all(getattr(PLAIN, name).isascii() and len(getattr(PLAIN, name)) == 1 for name in PLAIN.__slots__)
    assert all(len(getattr(DRAWN, name)) == 1 for name in DRAWN.__slots__)
