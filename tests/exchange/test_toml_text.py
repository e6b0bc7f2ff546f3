"""The second pass over a TOML text that finds the line of every key."""

from __future__ import annotations

import tomllib
from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st

from ledger.exchange.problems import Problems
from ledger.exchange.toml_text import lines_of, read_toml

TEXT = '''# a comment with [brackets] = and "quotes
title = "one"  # [not a table]
points = [
  [0, 1],   # ] a bracket in a comment
  [2, 3],
]
text = """
[not.a.table]
key = "no"
"""
plain = 'a # b ['
[fuel]
"density 15" = 1
other . inner = 2
[[attitude]]
name = "a"
[[attitude]]
name = "b"
[attitude.more]
x = { y = [1, 2], z = "]" }
[[attitude.list]]
q = 1
[[attitude.list]]
q = 2
'''


def test_lines_of_keys_tables_and_lists_of_tables() -> None:
    assert lines_of(TEXT) == {
        ("title",): 2,
        ("points",): 3,
        ("text",): 7,
        ("plain",): 11,
        ("fuel",): 12,
        ("fuel", "density 15"): 13,
        ("fuel", "other", "inner"): 14,
        ("attitude", 0): 15,
        ("attitude", 0, "name"): 16,
        ("attitude", 1): 17,
        ("attitude", 1, "name"): 18,
        ("attitude", 1, "more"): 19,
        ("attitude", 1, "more", "x"): 20,
        ("attitude", 1, "list", 0): 21,
        ("attitude", 1, "list", 0, "q"): 22,
        ("attitude", 1, "list", 1): 23,
        ("attitude", 1, "list", 1, "q"): 24,
    }


VALUES = st.one_of(
    st.integers(-5, 5).map(str),
    st.sampled_from(
        [
            '"a # ["',
            "'it [[x]] = 3'",
            '"""\n[t]\nk = 1\n"""',
            "'''\n# [t]\n'''",
            "[1, [2,\n3],\n]",
            "{ a = 1 }",
            '"\\""',
        ]
    ),
)
TABLES = st.lists(st.tuples(st.sampled_from(["[t{}]", "[[list]]"]), st.lists(VALUES, max_size=4)), max_size=6)


@given(TABLES)
def test_every_key_of_any_text_has_the_line_it_was_written_in(tables: list[tuple[str, list[str]]]) -> None:
    lines: list[str] = []
    expected: dict[tuple[str | int, ...], int] = {}
    count = 0
    for number, (head, values) in enumerate(tables):
        path: tuple[str | int, ...] = (f"t{number}",)
        if head == "[[list]]":
            path, count = ("list", count), count + 1
        lines.append(head.format(number))
        expected[path] = len("\n".join(lines).split("\n"))
        for at, value in enumerate(values):
            begin = len("\n".join(lines).split("\n")) + 1
            lines.append(f"k{at} = {value}")
            expected[(*path, f"k{at}")] = begin
    text = "\n".join(lines)
    tomllib.loads(text)
    assert lines_of(text) == expected


@pytest.mark.parametrize(
    ("text", "row", "what", "do"),
    [
        ("a = 1\nb = \n", 2, "nothing stands behind b =", "write the value of b, or take the line out"),
        ("a = 1\na = 2\n", 2, "a is there twice in its table", "keep one of the two"),
        ("a = [1,\n2]\na = [1,\n2]\n", 4, "there twice in its table", "keep one of the two"),
        ("b = { a = 1, a = 2 }\n", 1, "a is there twice in its table", "keep one of the two"),
        ("[a]\nb = 1\n[a]\n", 3, "[a] can be there once", "write [[a]] at each"),
        ("[a]\n[[a]]\n", 2, "a is there already as one table", "write [[a]] at each of them"),
        ("a = 1\n[x\n", 2, "the brackets round the name do not match", "write [x]"),
        ("[[filler]\n", 1, "the brackets round the name do not match", "write [[filler]]"),
        ("[filler]] # two\n", 1, "the brackets round the name do not match", "write [[filler]]"),
        ("[rib one]\n", 1, "the name in the brackets has a space in it", "write [rib_one]"),
        ('a = "x\n', 1, "a text has no quotation mark at its end", 'close it on its line, as in "text"'),
        ("a = 'x", 1, "a text has no quotation mark at its end", 'close it on its line, as in "text"'),
        ("chord = .3\n", 1, ".3 is not how", "write chord = 0.3"),
        ("chord = -.3 # up\n", 1, "-.3 is not how", "write chord = -0.3"),
        ("chord = [1, .3]\n", 1, ".3 is not how", "write 0.3"),
        ("chord = { at = .3 }\n", 1, ".3 is not how", "write 0.3"),
        ("chord = 3.\n", 1, "3. is not how", "write chord = 3.0"),
        ("chord = 0,3\n", 1, "0,3 is not how", "write chord = 0.3"),
        ("chord = 12 mm\n", 1, "12 mm is not how", 'write chord = "12 mm"'),
        ("chord = 1,5 mm\n", 1, "1,5 mm is not how", 'write chord = "1.5 mm"'),
        ("a = 01\n", 1, "01 is not how", "write a = 1"),
        ("a = True\n", 1, "True is not how", "write a = true"),
        ("a = no\n", 1, "no is not how", "write a = false"),
        ("a = upper\n", 1, "upper is not how", 'write a = "upper"'),
        ("a = [1,\nb = 2\n", 2, "a list, here or in a line above, lacks", "write a list as [1, 2]"),
        ("a = [1 2]\n", 1, "a list, here or in a line above, lacks", "write a list as [1, 2]"),
        ("a = 3 4\n", 1, "what stands behind a is no value", "nothing more in the line"),
        ("a 3\n", 1, "the line is neither a [table] nor a key", "write key = value"),
        ('a = "c:\\x"\n', 1, "a \\ in a text has a meaning of its own", "write / or"),
        ("a = 1 # \x01\n", 1, "a sign that cannot be seen", "delete what cannot be seen"),
    ],
)
def test_what_is_no_toml_names_its_line_and_what_to_write(text: str, row: int, what: str, do: str) -> None:
    problems = Problems()
    assert read_toml("plan.toml", text.encode(), problems) is None
    (finding,) = problems.findings()
    assert (finding.where.row, finding.code) == (row, "toml-broken")
    assert what in finding.what
    assert do in finding.do


@given(text=st.text(alphabet="ab12.,=[]{}\"'\\ #\n-", max_size=40))
def test_whatever_is_no_toml_is_told_without_an_exception_and_with_something_to_do(text: str) -> None:
    problems = Problems()
    table = read_toml("plan.toml", text.encode(), problems)
    assert (table is None) == bool(problems.findings())
    assert all(one.what and one.do for one in problems.findings())


def test_a_value_of_the_wrong_kind_says_how_to_write_it() -> None:
    problems = Problems()
    table = read_toml("plan.toml", b"name = 3\nfill = 'yes'\npitch_deg = true\n", problems)
    assert table is not None
    values: list[Any] = [table.text("name"), table.flag("fill", False), table.number("pitch_deg")]
    assert values == [None, False, None]
    assert [str(finding) for finding in problems.findings()] == [
        'plan.toml:1:name  3 is not text; write name = "3"',
        "plan.toml:2:fill  'yes' is neither true nor false; write fill = true",
        "plan.toml:3:pitch_deg  true is not a number; write for example pitch_deg = 2.5",
    ]
