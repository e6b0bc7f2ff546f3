"""The line that listens, to the millisecond."""

from __future__ import annotations

from collections.abc import Iterable

import pytest
from hypothesis import given
from hypothesis import strategies as st

from ledger.tui.scan import Entered, Heard, Pressed, ScanLine, Scanned, Typed

CODES = st.text(alphabet="ABCDEFGHJKLMNPQRSTUVWX0123456789/-. ", min_size=4, max_size=40)


def feed(line: ScanLine, text: str, at: float, gap: float) -> tuple[list[Heard], float]:
    """Press every character of `text`, the first at `at`; the moment of the last comes back."""
    heard: list[Heard] = []
    for index, char in enumerate(text):
        heard += line.press("space" if char == " " else char, char, at + index * gap)
    return heard, at + (len(text) - 1) * gap


def meant(heard: Iterable[Heard]) -> list[Heard]:
    return [one for one in heard if not isinstance(one, Typed)]


@given(code=CODES, gap=st.floats(0.0, 0.049), end=st.sampled_from(["enter", "tab", "ctrl+j", "silence"]))
def test_a_fast_run_is_one_scan_however_it_ends(code: str, gap: float, end: str) -> None:
    line = ScanLine()
    heard, last = feed(line, code, 10.0, gap)
    heard += line.wait(last + 0.1001) if end == "silence" else line.press(end, None, last + 0.04)
    assert meant(heard) == [Scanned(code)]
    assert line.text == ""


@given(text=CODES, gap=st.floats(0.0511, 0.24), start=st.floats(0.0, 1e6))
def test_a_slow_run_is_text_and_its_enter_is_the_persons(text: str, gap: float, start: float) -> None:
    line = ScanLine()
    heard, last = feed(line, text, start, gap)
    heard += line.press("enter", None, last + gap)
    assert meant(heard) == [Entered(text)]


@pytest.mark.parametrize(("gap", "scan"), [(0.050, True), (0.0501, False)])
def test_fifty_milliseconds_is_the_last_gap_of_a_scan(gap: float, scan: bool) -> None:
    line = ScanLine()
    at = 0.0
    for index, char in enumerate("L014K"):
        line.press(char, char, at)
        at = gap if index == 0 else at + 0.001
    assert meant(line.wait(at + 1.0)) == ([Scanned("L014K")] if scan else [Scanned("014K")])


@pytest.mark.parametrize(("silence", "heard"), [(0.0999, []), (0.1001, [Scanned("B031")])])
def test_a_hundred_milliseconds_of_silence_end_a_scan(silence: float, heard: list[Heard]) -> None:
    line = ScanLine()
    feed(line, "B031", 0.0, 0.0)
    assert meant(line.wait(silence)) == heard


def test_three_fast_characters_are_typing() -> None:
    line = ScanLine()
    _, last = feed(line, "mix", 0.0, 0.001)
    assert line.wait(5.0) == ()
    assert line.press("enter", None, last + 6.0) == (Entered("mix"),)


def test_four_fast_characters_then_a_slower_one_are_typing() -> None:
    line = ScanLine()
    _, last = feed(line, "weig", 0.0, 0.01)
    line.press("h", "h", last + 0.07)
    assert meant(line.wait(last + 9.0)) == []
    assert line.text == "weigh"


def test_a_late_enter_of_the_reader_is_swallowed() -> None:
    line = ScanLine()
    _, last = feed(line, "L014K", 0.0, 0.001)
    assert line.wait(last + 0.12) == (Scanned("L014K"),)
    assert line.press("enter", None, last + 0.20) == ()
    assert line.press("enter", None, last + 0.40) == ()
    assert line.press("enter", None, last + 2.0) == (Entered(""),)


def test_a_scan_leaves_what_the_person_was_typing() -> None:
    line = ScanLine()
    feed(line, "2 pla", 0.0, 0.2)
    heard, last = feed(line, "L014K", 2.0, 0.002)
    heard += line.press("enter", None, last + 0.002)
    assert meant(heard) == [Scanned("L014K")]
    assert line.text == "2 pla"


def test_a_held_enter_is_heard_once() -> None:
    line = ScanLine()
    feed(line, "ok", 0.0, 0.2)
    heard: list[Heard] = []
    for repeat in range(60):
        heard += line.press("enter", None, 1.0 + 0.033 * repeat)
    assert heard == [Entered("ok")]


@pytest.mark.parametrize("key", ["f2", "escape", "f9", "ctrl+right_square_bracket", "up"])
def test_a_control_code_inside_a_scan_is_no_key(key: str) -> None:
    line = ScanLine()
    heard, last = feed(line, "01234", 0.0, 0.002)
    heard += line.press(key, None, last + 0.002)
    more, last = feed(line, "567", last + 0.004, 0.002)
    heard += [*more, *line.press("enter", None, last + 0.002)]
    assert meant(heard) == [Scanned("01234567")]


@given(digit=st.sampled_from("123456 "))
def test_a_lone_digit_is_a_key_after_a_quarter_of_a_second(digit: str) -> None:
    name = "space" if digit == " " else digit
    line = ScanLine()
    line.press(name, digit, 0.0)
    assert line.wait(0.249) == ()
    assert line.wait(0.2501) == (Pressed(name),)
    assert line.text == ""


@pytest.mark.parametrize("text", ["7", "0", "12", "1 "])
def test_other_digits_stay_in_the_line(text: str) -> None:
    line = ScanLine()
    feed(line, text, 0.0, 0.2)
    assert line.wait(9.0) == ()
    assert line.text == text


def test_a_digit_after_text_is_text() -> None:
    line = ScanLine()
    feed(line, "x3", 0.0, 1.0)
    assert line.wait(9.0) == ()
    assert line.text == "x3"


def test_a_digit_into_a_field_is_never_a_key() -> None:
    line = ScanLine()
    line.lone_keys = False
    line.press("3", "3", 0.0)
    assert line.wait(9.0) == ()
    assert line.press("enter", None, 9.0) == (Entered("3"),)


def test_function_keys_are_keys_at_once() -> None:
    assert ScanLine().press("f2", None, 0.0) == (Pressed("f2"),)


def test_backspace_and_clear_edit_the_line() -> None:
    line = ScanLine()
    feed(line, "abc", 0.0, 0.2)
    line.press("backspace", None, 1.0)
    assert line.text == "ab"
    line.press("ctrl+u", None, 2.0)
    assert line.text == ""


def test_pasting_never_presses_enter() -> None:
    line = ScanLine()
    line.paste("log\nlog\x1b[A\n")
    assert line.text == "log"
    assert line.wait(9.0) == ()


@given(
    presses=st.lists(
        st.tuples(
            st.sampled_from(["a", "1", "enter", "tab", "f2", "escape", "backspace"]), st.floats(0, 0.5)
        ),
        max_size=60,
    )
)
def test_a_scan_is_never_shorter_than_four(presses: list[tuple[str, float]]) -> None:
    line = ScanLine()
    at = 0.0
    for key, gap in presses:
        at += gap
        for heard in line.press(key, key if len(key) == 1 else None, at):
            assert not isinstance(heard, Scanned) or len(heard.text) >= 4
