"""The sample build as a book of one's own, half built, its dates brought up to now."""

from __future__ import annotations

import json
import os
import shutil
from collections.abc import Mapping
from datetime import date, datetime, timedelta
from itertools import count
from pathlib import Path

import ledger
from ledger.book.copies import give_name
from ledger.book.opening import open_for_writing
from ledger.errors import Finding, Refused, Severity, Where
from ledger.model import acts  # noqa: F401  the kinds are declared when this is imported
from ledger.model.declare import KINDS, Takes
from ledger.model.progress import Progress, unwatched
from ledger.model.steps import Steps
from ledger.operations.adopt_plan import adopt_plan
from ledger.operations.log_entry import Writing, log_entry
from ledger.operations.open_build import open_build
from ledger.operations.start_book import start_book

SAMPLE = "two_seater"
BOOK_NAME = "two_seater.wingledger"
_TO_TRY_CHANGES_ON = ("layouts", "plans")
_FOLDER_NAME = "wingledger-demo"
_LAST_ENTRY_AGE = timedelta(minutes=2)


def free_folder(inside: Path) -> Path:
    """A folder name that is not taken yet, for a demo without a folder of its own."""
    names = (_FOLDER_NAME if number == 1 else f"{_FOLDER_NAME}-{number}" for number in count(1))
    return next(inside / name for name in names if not os.path.lexists(inside / name))


def sample_folder() -> Path:
    """Where the sample build is: beside the program in a checkout, inside it once installed.

    Raises
        FileNotFoundError: the installation lacks its sample builds.
    """
    package = Path(ledger.__file__).parent
    for home in (package / "sample_builds", package.parent / "sample_builds"):
        if (home / SAMPLE / "log.jsonl").is_file():
            return home / SAMPLE
    raise FileNotFoundError(2, "the sample build is missing from this installation", SAMPLE)


def lay_out_demo(folder: Path, now: datetime | None = None, *, progress: Progress = unwatched) -> Path:
    """Make the sample's book, and copies of its layouts and plans to try changes on; the book's path.

    The last entry is two minutes old, and every interval between entries is that of the sample.

    Raises
        Refused: the book or one of the copies is in `folder` already; nothing is ever written over.
        Stopped: `progress` was told to end the work; nothing was made.
    """
    moment = now if now is not None else datetime.now().astimezone()
    sample = sample_folder()
    book = folder / BOOK_NAME
    for target in (book, *(folder / name for name in _TO_TRY_CHANGES_ON)):
        if os.path.lexists(target):
            raise Refused(_taken(target))
    new = not folder.exists()
    folder.mkdir(parents=True, exist_ok=True)
    # Named only when whole, so that a demo stopped half way can simply be begun again.
    making = folder / f".{BOOK_NAME}.making-{os.getpid()}"
    try:
        _play(making, sample, moment, progress)
        give_name(making, book)
    except FileExistsError:
        raise Refused(_taken(book)) from None
    finally:
        for ending in ("", "-wal", "-shm"):
            making.with_name(making.name + ending).unlink(missing_ok=True)
        if new and not any(folder.iterdir()):
            folder.rmdir()
    for name in _TO_TRY_CHANGES_ON:
        shutil.copytree(sample / name, folder / name)
    return book


def shifted(rows: list[dict[str, str]], now: datetime) -> list[dict[str, str]]:
    """The rows of a log with all their times and dates moved, so that the last one is two minutes old."""
    if not rows:
        return []
    by = now - _LAST_ENTRY_AGE - max(datetime.fromisoformat(row["at"]) for row in rows)
    return [_moved(row, by, now) for row in rows]


def _moved(row: Mapping[str, str], by: timedelta, now: datetime) -> dict[str, str]:
    # A date has no time of day: moved by whole days, it keeps its distance from the entries.
    days = timedelta(days=round(by / timedelta(days=1)))
    dates = {field.word for field in KINDS[row["kind"]].fields if field.takes is Takes.DATE}
    moved = dict(row)
    moved["at"] = (datetime.fromisoformat(row["at"]) + by).astimezone(now.tzinfo).isoformat()
    for word in dates & row.keys():
        moved[word] = (date.fromisoformat(row[word]) + days).isoformat()
    return moved


def _play(book: Path, sample: Path, now: datetime, progress: Progress) -> None:
    """Log every row at its own time; the first adopts the plan the book is started with."""
    text = (sample / "log.jsonl").read_text(encoding="utf-8")
    first, *rows = shifted([json.loads(line) for line in text.splitlines() if line.strip()], now)
    start_book(book, sample / first["plan"], by=first["by"], now=datetime.fromisoformat(first["at"]))
    steps = Steps(len(rows), progress)
    # One transaction for all that lies between: an acceptance needs the findings open by then, and an
    # adoption the record as it stands.
    waiting: list[dict[str, str]] = []
    for row in rows:
        if row["kind"] not in ("accept", "adopt"):
            waiting.append(row)
            continue
        _log_together(book, waiting, steps)
        waiting = []
        steps.take("sample's log")
        at = datetime.fromisoformat(row["at"])
        if row["kind"] == "adopt":
            adopt_plan(book, sample / row["plan"], by=row["by"], now=at)
        else:
            log_entry(book, "accept", {word: value for word, value in row.items() if word != "kind"}, now=at)
    _log_together(book, waiting, steps)


def _log_together(book: Path, rows: list[dict[str, str]], steps: Steps) -> None:
    if not rows:
        return
    build = open_build(book)
    with open_for_writing(book) as connection:
        writing = Writing(connection, build, now=datetime.fromisoformat(rows[0]["at"]), by=None)
        for row in rows:
            steps.take("sample's log")
            writing.now = datetime.fromisoformat(row["at"])
            writing.enter(row["kind"], {word: value for word, value in row.items() if word != "kind"})
        writing.keep_geometry()


def _taken(target: Path) -> Finding:
    return Finding(
        code="target-exists",
        severity=Severity.STOP,
        where=Where(file=str(target)),
        what="something stands at this path already",
        do="choose another folder; nothing is ever overwritten",
    )
