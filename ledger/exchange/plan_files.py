"""The files of a plan by their paths: from its folder, or as they were stored. No path leaves it."""

from __future__ import annotations

import re
from collections.abc import Mapping
from pathlib import Path, PurePosixPath
from typing import Protocol

from ledger.errors import Unplaced


class FileRefused(Unplaced):
    """A file of a plan that cannot be had: `what` is wrong with its path, and what to `do`."""


class PlanFiles(Protocol):
    """Where a plan is read from."""

    used: dict[str, bytes]

    def read(self, path: str) -> bytes:
        """The content of a file; raises FileRefused."""


class FolderFiles:
    """The files of a plan folder. A link may not lead out of it."""

    def __init__(self, folder: Path) -> None:
        self.used: dict[str, bytes] = {}
        self._folder = folder
        self._root = folder.resolve()

    def read(self, path: str) -> bytes:
        """The content of a file, read once; raises FileRefused."""
        path = plain_path(path)
        if path not in self.used:
            self.used[path] = self._fetch(path)
        return self.used[path]

    def _fetch(self, path: str) -> bytes:
        try:
            found = (self._folder / path).resolve()
            if not found.is_relative_to(self._root):
                raise FileRefused(
                    "path-outside", f"{path!r} leads out of the plan folder", "put the file in the folder"
                )
            if not found.is_file():
                raise _missing(path)
            return found.read_bytes()
        except (OSError, RuntimeError, ValueError) as error:
            told = getattr(error, "strerror", None) or str(error)
            raise FileRefused(
                "file-unreadable", f"{path!r} cannot be read: {told}", "check the file"
            ) from None


class StoredFiles:
    """The files of a plan that was read before, by path."""

    def __init__(self, files: Mapping[str, bytes]) -> None:
        self.used: dict[str, bytes] = {}
        self._files = files

    def read(self, path: str) -> bytes:
        """The content of a file; raises FileRefused."""
        path = plain_path(path)
        if path not in self.used:
            if path not in self._files:
                raise _missing(path)
            self.used[path] = self._files[path]
        return self.used[path]


def plain_path(path: str) -> str:
    """A path as it is kept, with `/`; raises FileRefused for one that is not inside the folder."""
    if "\0" in path or not path.strip():
        raise FileRefused("path-wrong", f"{path!r} is not a path", "write for example geometry/rib.dxf")
    if path.startswith(("/", "\\", "~")) or re.match(r"[A-Za-z]:", path):
        raise FileRefused(
            "path-outside",
            f"{path!r} does not begin in the plan folder",
            "write the path from the plan folder, for example geometry/rib.dxf",
        )
    parts = PurePosixPath(path.replace("\\", "/")).parts
    if ".." in parts:
        raise FileRefused(
            "path-outside", f"{path!r} leads out of the plan folder", "put the file in the folder"
        )
    return "/".join(parts)


def _missing(path: str) -> FileRefused:
    return FileRefused("file-missing", f"there is no file {path!r} in the plan", "add it or correct the path")


def split_object(geometry: str) -> tuple[str, str | None]:
    """`geometry/rib.dxf#CUT` as the path and what is picked in it."""
    path, mark, picked = geometry.partition("#")
    return path.strip(), picked.strip() if mark else None
