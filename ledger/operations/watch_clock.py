"""Whether the computer's clock can be believed: it may not run back, nor leap while nobody looks."""

from __future__ import annotations

import contextlib
import os
from datetime import datetime, timedelta

from ledger.operations.keep_draft import state_folder

# A shop shuts for a night; a clock that was reset to a wrong day leaps farther than a working day.
LEAP = timedelta(hours=12)
# Two laptops on one book are never set to the same second.
_APART = timedelta(minutes=1)
_FILE = "clock-seen"


def doubt_of(now: datetime, last_entry_at: datetime | None, seen_at: datetime | None) -> str | None:
    """Why the clock is doubted, in words; None where it is not."""
    if last_entry_at is not None and now < last_entry_at - _APART:
        return f"the clock says {_told(now)}, before the last entry of {_told(last_entry_at, now)}"
    if seen_at is not None and now - seen_at > LEAP:
        return f"the clock says {_told(now)} and was last seen {_told(seen_at, now)}"
    return None


def clock_seen_at() -> datetime | None:
    """When this computer's clock was last seen by the program; None on a computer it never ran on."""
    try:
        seen = datetime.fromisoformat((state_folder() / _FILE).read_text(encoding="ascii").strip())
    except (OSError, ValueError):
        return None
    return seen if seen.tzinfo is not None else None


def see_clock(now: datetime) -> None:
    """Keep the moment. Where nothing can be kept the rule only loses its memory, so that is no error."""
    with contextlib.suppress(OSError):
        folder = state_folder()
        folder.mkdir(parents=True, exist_ok=True)
        part = folder / f"{_FILE}.{os.getpid()}.part"
        part.write_text(now.isoformat(), encoding="ascii")
        part.replace(folder / _FILE)


def _told(moment: datetime, beside: datetime | None = None) -> str:
    zone = moment.tzinfo if beside is None else beside.tzinfo
    return f"{moment.astimezone(zone):%d %b %H:%M}"
