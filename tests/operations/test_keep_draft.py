"""Drafts are on the disk before the call comes back, and are no record."""

from __future__ import annotations

import os
import signal
import subprocess
import sys
from datetime import UTC, datetime
from pathlib import Path

import pytest

from ledger.operations.keep_draft import Draft, DraftNotKept, drafts_of, drop_draft, keep_draft

NOW = datetime(2026, 11, 3, 10, 42, 7, 123456, tzinfo=UTC)
MIX = Draft(
    kind="mix",
    values=(("resin_lot", "L009 \u00e9 [/x]"), ("resin", "205 g")),
    kept_at=NOW,
    proposed=("resin_lot",),
    stamped_at=NOW,
    by="JK",
)


@pytest.fixture(autouse=True)
def _own_state(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("WINGLEDGER_STATE", str(tmp_path / "state"))


def test_a_draft_reads_back_as_it_was(tmp_path: Path) -> None:
    keep_draft(tmp_path / "a.book", MIX)
    assert drafts_of(tmp_path / "a.book") == (MIX,)


def test_one_draft_of_a_kind_stands_and_drafts_of_books_are_apart(tmp_path: Path) -> None:
    keep_draft(tmp_path / "a.book", MIX)
    lay = Draft(kind="lay", values=(), kept_at=NOW, corrects=7)
    later = Draft(kind="mix", values=(("resin", "210 g"),), kept_at=NOW)
    keep_draft(tmp_path / "a.book", lay)
    keep_draft(tmp_path / "a.book", later)
    assert set(drafts_of(tmp_path / "a.book")) == {lay, later}
    assert drafts_of(tmp_path / "b.book") == ()
    drop_draft(tmp_path / "a.book", "mix")
    assert drafts_of(tmp_path / "a.book") == (lay,)


def test_the_last_draft_dropped_leaves_no_file(tmp_path: Path) -> None:
    keep_draft(tmp_path / "a.book", MIX)
    drop_draft(tmp_path / "a.book", "mix")
    assert list((tmp_path / "state" / "drafts").iterdir()) == []


def test_a_draft_survives_a_kill(tmp_path: Path) -> None:
    book = tmp_path / "a.book"
    code = (
        "import os, signal; from datetime import UTC, datetime; from pathlib import Path\n"
        "from ledger.operations.keep_draft import Draft, keep_draft\n"
        f"keep_draft(Path({str(book)!r}), Draft(kind='mix', values=(('resin', '205 g'),), "
        "kept_at=datetime(2026, 11, 3, tzinfo=UTC), stamped_at=datetime(2026, 11, 3, tzinfo=UTC)))\n"
        "os.kill(os.getpid(), signal.SIGKILL)\n"
    )
    done = subprocess.run([sys.executable, "-c", code], check=False, cwd=Path(__file__).parents[2])
    assert done.returncode == -signal.SIGKILL
    (draft,) = drafts_of(book)
    assert draft.stamped_at == datetime(2026, 11, 3, tzinfo=UTC)


@pytest.mark.parametrize(
    "content", ["", "{", "[]", '{"format": "other"}', '{"format": "drafts-1", "drafts": [1]}']
)
def test_a_file_that_cannot_be_read_counts_as_no_draft(tmp_path: Path, content: str) -> None:
    keep_draft(tmp_path / "a.book", MIX)
    (file,) = (tmp_path / "state" / "drafts").iterdir()
    file.write_text(content)
    assert drafts_of(tmp_path / "a.book") == ()


def test_a_place_that_cannot_be_written_is_said(tmp_path: Path) -> None:
    (tmp_path / "state").write_text("a file where the folder should be")
    with pytest.raises(DraftNotKept, match="could not be kept"):
        keep_draft(tmp_path / "a.book", MIX)
    assert os.path.isfile(tmp_path / "state")
