"""Many entries in one file: rows in order, every problem by row and column."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import pytest

from ledger.errors import Where, WrongUse
from ledger.exchange.rows import read_rows

Written = Callable[[str, str | bytes], Path]


@pytest.fixture
def written(tmp_path: Path) -> Written:
    """A file of entries."""

    def write(name: str, content: str | bytes) -> Path:
        path = tmp_path / name
        path.write_bytes(content.encode() if isinstance(content, str) else content)
        return path

    return write


def test_rows_of_a_table_leave_out_empty_cells_and_keep_their_line(written: Written) -> None:
    head = "\ufeffkind,what,reading [g],remark\n\n"
    text = head + 'weigh,RIB.03-L,"412,3",\nnote,,,"two\nlines"\n ,,,\nweigh,X,1,y\n'
    rows, findings = read_rows(written("log.csv", text))
    assert [finding.code for finding in findings] == []
    assert rows == (
        (Where(file="log.csv", row=3), "weigh", {"what": "RIB.03-L", "reading [g]": "412,3"}),
        (Where(file="log.csv", row=4), "note", {"remark": "two\nlines"}),
        (Where(file="log.csv", row=7), "weigh", {"what": "X", "reading [g]": "1", "remark": "y"}),
    )


def test_rows_of_json_lines_keep_lists_and_truth_values(written: Written) -> None:
    text = (
        '{"kind": "bond", "pieces": ["A", "B"], "peel_ply_removed": true}\n\n{"kind": "note", "text": "x"}\n'
    )
    rows, findings = read_rows(written("log.jsonl", text))
    assert findings == ()
    assert rows == (
        (Where(file="log.jsonl", row=1), "bond", {"pieces": ["A", "B"], "peel_ply_removed": True}),
        (Where(file="log.jsonl", row=3), "note", {"text": "x"}),
    )


@pytest.mark.parametrize(
    ("name", "content", "lines"),
    [
        ("a.csv", "what,reading\nA,1 g\n", ["a.csv:1  there is no column kind; add a column kind"]),
        (
            "a.csv",
            "kind;what\nweigh;A\n",
            ["a.csv:1  columns are parted by semicolons; save the file with commas between columns"],
        ),
        (
            "a.csv",
            "kind,waht,what,what [g]\n",
            [
                "a.csv:1:waht  no kind of entry has a field 'waht'; correct the head or remove the column",
                "a.csv:1:what  column what is there twice; remove one",
            ],
        ),
        (
            "a.csv",
            "kind,what\nweigh,A,1 g\n",
            ["a.csv:2  the row has 3 columns and the head 2; put text that holds a comma in quotation marks"],
        ),
        (
            "a.csv",
            b"kind,text\nnote,\xfc\n",
            ["a.csv:2  byte 0xfc is not UTF-8 text; save the file as UTF-8"],
        ),
        (
            "a.csv",
            'kind,text\nnote,"open\n',
            [
                "a.csv:2  the row cannot be told apart into columns (unexpected end of data); "
                "close the quotation marks in it"
            ],
        ),
        ("a.csv", "", ["a.csv:1  there is no column kind; add a column kind"]),
        ("a.jsonl", "[1]\n", ["a.jsonl:1  the line is not a JSON object; write one object a line"]),
        (
            "a.jsonl",
            '{"kind": "note", "text": "a", "text": "b"}\n',
            ["a.jsonl:1  the line is not JSON: text is there twice; write one object a line"],
        ),
        (
            "a.jsonl",
            '{"kind": "note", "text": NaN}\n',
            ["a.jsonl:1  the line is not JSON: NaN is not a number; write one object a line"],
        ),
    ],
)
def test_what_is_wrong_is_told_by_row(
    written: Written, name: str, content: str | bytes, lines: list[str]
) -> None:
    rows, findings = read_rows(written(name, content))
    assert rows == ()
    assert [str(finding) for finding in findings] == lines


def test_a_row_without_a_kind_leaves_the_others(written: Written) -> None:
    rows, findings = read_rows(written("a.csv", "kind,text\n,x\nnote,y\n"))
    assert [row[0].row for row in rows] == [3]
    assert [str(finding.where) for finding in findings] == ["a.csv:2:kind"]
    rows, findings = read_rows(written("a.jsonl", '{"text": "x"}\n{"kind": "note"\n{"kind": "note"}\n'))
    assert [row[0].row for row in rows] == [3]
    assert [str(finding.where) for finding in findings] == ["a.jsonl:1:kind", "a.jsonl:2"]


def test_a_file_that_is_not_there_or_of_another_kind_is_wrong_use(tmp_path: Path, written: Written) -> None:
    with pytest.raises(WrongUse, match="cannot be read: No such file"):
        read_rows(tmp_path / "none.csv")
    with pytest.raises(WrongUse, match=r"give a \.csv or \.jsonl file"):
        read_rows(written("a.txt", "kind\n"))
    with pytest.raises(WrongUse):
        read_rows(tmp_path)
