"""Text at the edge: no control code gets through, and columns line up."""

from __future__ import annotations

import unicodedata

from hypothesis import given
from hypothesis import strategies as st

from ledger.reports.plain import aligned, clean, shortened, width_of

UNSAFE = {"Cc", "Cf", "Cs", "Zl", "Zp"}


def test_an_escape_sequence_is_written_out() -> None:
    assert clean("RIB\x1b[2J\x07") == r"RIB\x1b[2J\x07"


def test_a_direction_override_is_written_out() -> None:
    assert clean("a\u202eb") == r"a\u202eb"


def test_a_line_break_in_a_title_cannot_begin_a_line_of_its_own() -> None:
    assert clean("ok\nSTOP  forged") == r"ok\nSTOP  forged"


def test_letters_of_any_alphabet_stay() -> None:
    assert clean("Flügel 翼 é") == "Flügel 翼 é"


@given(st.text(alphabet=st.characters(codec=None)))
def test_nothing_unsafe_is_left_of_any_text(text: str) -> None:
    assert not {unicodedata.category(char) for char in clean(text)} & UNSAFE


@given(st.text(alphabet=st.characters(codec=None)))
def test_cleaning_twice_changes_nothing_more(text: str) -> None:
    assert clean(clean(text)) == clean(text)


@given(st.lists(st.tuples(st.text(max_size=9), st.text(max_size=9)), min_size=1, max_size=5))
def test_every_row_of_a_table_ends_its_last_flush_column_at_the_same_cell(
    rows: list[tuple[str, str]],
) -> None:
    filled = [(first, second + "x") for first, second in rows]
    lines = aligned(("one", "two"), filled, right=(1,))
    assert len({width_of(line) for line in lines}) == 1


@given(st.text(), st.integers(2, 80))
def test_a_shortened_text_never_takes_more_than_its_width(text: str, width: int) -> None:
    assert width_of(shortened(text, width)) <= width


def test_wide_letters_count_two() -> None:
    assert width_of("翼a") == 3
    assert shortened("翼翼翼", 5) == "翼.."
