"""What a layout leaves out is told with an example that is called one, in the names of its own files."""

from __future__ import annotations

from collections.abc import Callable

import pytest

from ledger.exchange.layout_toml import ReadLayout

Read = Callable[..., ReadLayout]
WEB = 'chord = [0.35, 0.35]\nsheet = "PANEL"'
RIB = 'butt_line = 900\nrows = ["L", "T"]\nsheet = "PANEL"'


def remedies(found: ReadLayout) -> list[str]:
    assert found.layout is None
    return [one.do for one in found.findings if one.code == "key-missing"]


@pytest.mark.parametrize(
    ("was", "becomes", "do"),
    [
        ("leading_edge = 2040\nwater_line = 60\n", "leading_edge = 2040\n", "water_line = -120.7"),
        (WEB, "chord = [0.35, 0.35]", 'sheet = "PANEL"'),
        (RIB, 'butt_line = 900\nrows = ["L", "T"]', 'sheet = "PANEL"'),
        (RIB, 'butt_line = 900\nsheet = "PANEL"', 'rows = ["L"]'),
        ('webs = ["S", "tail"]\n', "", 'webs = ["F", "M"]'),
        ('chord = [0.1, 1.0]\nlaminate = "SKIN"\nfinish', "chord = [0.1, 1.0]\nfinish", 'laminate = "SKIN"'),
    ],
)
def test_an_example_is_called_one_and_names_what_the_files_hold(
    read: Read, was: str, becomes: str, do: str
) -> None:
    assert remedies(read((was, becomes))) == [f"write for example {do}"]


def test_a_value_that_can_be_no_other_is_not_called_an_example(read: Read) -> None:
    found = read(('format = "layout-1"\n', ""))
    assert [one.do for one in found.findings] == ['write format = "layout-1"']


def test_two_webs_of_the_file_stand_for_the_two_of_the_example(read: Read) -> None:
    second = '[[web]]\nname = "Q"\nchord = 0.6\nsheet = "PANEL"\n\n[[row]]\nname = "T"'
    found = read(('[[row]]\nname = "T"', second), ('webs = ["S", "tail"]\n', ""))
    assert remedies(found) == ['write for example webs = ["S", "Q"]']


@pytest.mark.parametrize(
    ("was", "becomes", "meant"),
    [
        ("water_line = 60", "waterline = 60", "water_line"),
        ('naca = "2412"', 'nacca = "2412"', "naca"),
        (RIB, RIB.replace("sheet", "shet"), "sheet"),
        ("chord = 800", "cord = 800", "chord"),
        ('name = "s1"', 'nam = "s1"', "name"),
    ],
)
def test_a_misspelt_key_is_told_once_and_not_as_missing_too(
    read: Read, was: str, becomes: str, meant: str
) -> None:
    (finding,) = read((was, becomes)).findings
    assert (finding.code, finding.do) == ("key-unknown", f"write {meant}")
