"""Where computed geometry is kept between readings, under the hash of all it came from."""

from __future__ import annotations

import hashlib
import json
from typing import Protocol

# Another method gives other figures: what an earlier one computed must not be found.
METHOD = "geometry-1"


class GeometryCache(Protocol):
    """A store of computed geometry. What it loses is computed again."""

    def get(self, key: str) -> bytes | None:
        """What is kept under a key."""

    def put(self, key: str, content: bytes) -> None:
        """Keep this under a key."""


class MemoryCache:
    """A cache for one process."""

    def __init__(self) -> None:
        self._kept: dict[str, bytes] = {}

    def get(self, key: str) -> bytes | None:
        """What is kept under a key."""
        return self._kept.get(key)

    def put(self, key: str, content: bytes) -> None:
        """Keep this under a key."""
        self._kept[key] = content


def key_for(kind: str, *parts: str | float | None) -> str:
    """The key of something computed: its kind, the method, and everything that went into it."""
    listed = json.dumps([METHOD, kind, *parts], ensure_ascii=True)
    return f"{kind}:{hashlib.sha256(listed.encode()).hexdigest()}"


def content_hash(content: bytes) -> str:
    """SHA-256 of a file, in hex."""
    return hashlib.sha256(content).hexdigest()
