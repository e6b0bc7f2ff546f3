"""Drafts of slips on disk: an open slip, and the moment its cup was poured, survive a kill."""

from __future__ import annotations

import contextlib
import hashlib
import json
import os
import sys
import tempfile
from dataclasses import dataclass
from datetime import datetime
from pathlib import Path
from typing import Any

from ledger.errors import LedgerError

_FORMAT = "drafts-1"


class DraftNotKept(LedgerError):
    """The draft could not be written; the slip is still on the screen."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Draft:
    """One slip not yet logged. `stamped_at` is time zero of a cup; `corrects` the entry it puts right.

    `original` is what stood in it before anyone wrote; `apart` tells two drafts of one kind from each
    other; `away` is true once a person put it away.
    """

    kind: str
    values: tuple[tuple[str, str], ...]
    kept_at: datetime
    proposed: tuple[str, ...] = ()
    stamped_at: datetime | None = None
    corrects: int | None = None
    by: str | None = None
    original: tuple[tuple[str, str], ...] = ()
    apart: str = ""
    away: bool = False

    @property
    def name(self) -> str:
        """What it is kept under: a correction never takes the place of a plain draft of its kind."""
        return draft_name(self.kind, self.corrects, self.apart)


def draft_name(kind: str, corrects: int | None = None, apart: str = "") -> str:
    """`weigh`, `weigh of RIB.01-L/1`, or `correct No. 12`."""
    if corrects is not None:
        return f"correct No. {corrects}"
    return f"{kind} of {apart}" if apart else kind


def keep_draft(book: Path, draft: Draft) -> None:
    """Write a draft in place of the one of the same name, and wait until it is on the disk.

    Raises
        DraftNotKept: nowhere to write to.
    """
    others = [other for other in drafts_of(book) if other.name != draft.name]
    _write(book, (*others, draft))


def drop_draft(book: Path, name: str) -> None:
    """The slip was logged or thrown away."""
    drafts = drafts_of(book)
    left = tuple(draft for draft in drafts if draft.name != name)
    if len(left) != len(drafts):
        _write(book, left)


def drafts_of(book: Path) -> tuple[Draft, ...]:
    """Every draft kept for this book. A file that cannot be read counts as none: a draft is no record."""
    try:
        stored = json.loads(_place(book).read_text(encoding="utf-8"))
        if stored.get("format") != _FORMAT:
            return ()
        return tuple(_draft(plain) for plain in stored["drafts"])
    except (OSError, ValueError, KeyError, TypeError, AttributeError):
        return ()


def _write(book: Path, drafts: tuple[Draft, ...]) -> None:
    place = _place(book)
    if not drafts:
        with contextlib.suppress(OSError):
            place.unlink()
        return
    stored = {"format": _FORMAT, "book": str(book.absolute()), "drafts": [_plain(one) for one in drafts]}
    try:
        place.parent.mkdir(parents=True, exist_ok=True)
        number, temporary = tempfile.mkstemp(dir=place.parent, prefix=place.name, suffix=".part")
        with os.fdopen(number, "w", encoding="utf-8") as file:
            json.dump(stored, file, ensure_ascii=False, indent=1)
            file.flush()
            # Without this a power cut can leave the new name on an empty file.
            os.fsync(file.fileno())
        os.replace(temporary, place)
        _settle_folder(place.parent)
    except OSError as error:
        raise DraftNotKept(f"the draft could not be kept in {place.parent}: {error.strerror}") from error


def _settle_folder(folder: Path) -> None:
    # The new name is in the folder, and on most disks a folder is written later than its files.
    if sys.platform == "win32":
        return
    number = os.open(folder, os.O_RDONLY)
    try:
        os.fsync(number)
    finally:
        os.close(number)


def _place(book: Path) -> Path:
    # Not beside the book: on a shared disk two benches would write each other's drafts.
    name = hashlib.sha256(str(book.absolute()).encode()).hexdigest()[:16]
    return state_folder() / "drafts" / f"{name}.json"


def state_folder() -> Path:
    """Where this computer keeps what belongs to no book."""
    chosen = os.environ.get("WINGLEDGER_STATE")
    if chosen:
        return Path(chosen)
    if sys.platform == "win32":
        return Path(os.environ.get("LOCALAPPDATA") or Path.home()) / "wingledger"
    if sys.platform == "darwin":
        return Path.home() / "Library" / "Application Support" / "wingledger"
    return Path(os.environ.get("XDG_STATE_HOME") or Path.home() / ".local" / "state") / "wingledger"


def _plain(draft: Draft) -> dict[str, Any]:
    return {
        "kind": draft.kind,
        "values": [list(pair) for pair in draft.values],
        "kept_at": draft.kept_at.isoformat(),
        "proposed": list(draft.proposed),
        "stamped_at": None if draft.stamped_at is None else draft.stamped_at.isoformat(),
        "corrects": draft.corrects,
        "by": draft.by,
        "original": [list(pair) for pair in draft.original],
        "apart": draft.apart,
        "away": draft.away,
    }


def _draft(plain: dict[str, Any]) -> Draft:
    stamped = plain["stamped_at"]
    return Draft(
        kind=str(plain["kind"]),
        values=tuple((str(word), str(text)) for word, text in plain["values"]),
        kept_at=datetime.fromisoformat(plain["kept_at"]),
        proposed=tuple(str(word) for word in plain["proposed"]),
        stamped_at=None if stamped is None else datetime.fromisoformat(stamped),
        corrects=plain["corrects"],
        by=plain["by"],
        # Drafts kept before these were written have none of them.
        original=tuple((str(word), str(text)) for word, text in plain.get("original", ())),
        apart=str(plain.get("apart", "")),
        away=plain.get("away") is True,
    )
