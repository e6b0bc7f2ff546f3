"""A folder that is there whole or not at all."""

from __future__ import annotations

import contextlib
import os
import shutil
from collections.abc import Iterator, Mapping
from pathlib import Path

from ledger.model.progress import Progress, unwatched


class Taken(Exception):
    """Something stands where the folder is to be."""


def refuse_taken(target: Path) -> None:
    """Raises Taken where something stands at the path, but for an empty folder."""
    if not os.path.lexists(target):
        return
    if not target.is_dir():
        raise Taken("something stands at this path already")
    if any(target.iterdir()):
        raise Taken("the folder is not empty")


@contextlib.contextmanager
def made_aside(target: Path, files: Mapping[str, bytes], progress: Progress = unwatched) -> Iterator[Path]:
    """The files in a folder aside, to be looked through; it becomes the target where nothing is raised.

    Raises
        Taken: something stands at the target.
        OSError: a file cannot be written. Whatever is raised, nothing is left of the folder.
    """
    refuse_taken(target)
    there = target.is_dir()
    # A folder that is there stays the same one, for it may be where the person stands, or a disk of its own.
    name = f".{target.name}.making-{os.getpid()}"
    aside = target / name if there else target.with_name(name)
    try:
        _write(aside, files, progress)
        yield aside
        if there:
            _move_in(aside, target)
        else:
            _give_name(aside, target)
    finally:
        shutil.rmtree(aside, ignore_errors=True)


def _write(folder: Path, files: Mapping[str, bytes], progress: Progress) -> None:
    folder.mkdir()
    for done, (path, content) in enumerate(files.items()):
        progress("files", done, len(files))
        file = folder / path
        file.parent.mkdir(parents=True, exist_ok=True)
        with file.open("wb") as opened:
            opened.write(content)
            opened.flush()
            os.fsync(opened.fileno())


def _give_name(aside: Path, target: Path) -> None:
    refuse_taken(target)
    try:
        aside.rename(target)
    except (FileExistsError, NotADirectoryError):
        raise Taken("something stands at this path already") from None


def _move_in(aside: Path, target: Path) -> None:
    with contextlib.ExitStack() as undoing:
        for each in sorted(aside.iterdir()):
            if os.path.lexists(target / each.name):
                raise Taken("the folder is not empty")
            moved = each.rename(target / each.name)
            undoing.callback(moved.rename, each)
        # All of it is there, so nothing is put back.
        undoing.pop_all()
