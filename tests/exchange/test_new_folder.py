"""A folder is there whole or not at all, whatever goes wrong on the way."""

from __future__ import annotations

import errno
import os
from pathlib import Path

import pytest

from ledger.errors import Stopped
from ledger.exchange.new_folder import Taken, made_aside

FILES = {"plan.toml": b"head\n", "geometry/a.obj": b"v 0 0 0\n", "parts.csv": b"part\n"}


def contents(folder: Path) -> dict[str, bytes]:
    return {
        path.relative_to(folder).as_posix(): path.read_bytes() for path in folder.rglob("*") if path.is_file()
    }


@pytest.mark.parametrize("there", [False, True])
def test_the_folder_has_the_files_once_it_was_looked_through(tmp_path: Path, there: bool) -> None:
    target = tmp_path / "r1"
    if there:
        target.mkdir()
    with made_aside(target, FILES) as aside:
        assert contents(aside) == FILES
        assert not (target / "plan.toml").exists()
    assert contents(target) == FILES
    assert sorted(path.name for path in target.iterdir()) == ["geometry", "parts.csv", "plan.toml"]
    assert list(tmp_path.iterdir()) == [target]


def test_an_empty_folder_stays_the_same_one(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(tmp_path)
    before = tmp_path.stat().st_ino
    with made_aside(Path(), FILES):
        pass
    assert tmp_path.stat().st_ino == before
    assert contents(tmp_path) == FILES


def test_a_folder_by_a_link_is_filled_where_it_is(tmp_path: Path) -> None:
    (tmp_path / "real").mkdir()
    (tmp_path / "link").symlink_to("real")
    with made_aside(tmp_path / "link", FILES):
        pass
    assert contents(tmp_path / "real") == FILES
    assert (tmp_path / "link").is_symlink()


def stand(target: Path, what: str) -> None:
    if what == "file":
        target.write_text("mine")
    elif what == "link to nothing":
        target.symlink_to("nowhere")
    else:
        target.mkdir()
        (target / ".hidden").write_text("mine")


@pytest.mark.parametrize("what", ["file", "link to nothing", "folder with a hidden file"])
def test_what_stands_there_is_never_touched(tmp_path: Path, what: str) -> None:
    target = tmp_path / "r1"
    stand(target, what)
    with pytest.raises(Taken), made_aside(target, FILES):
        pass
    assert list(tmp_path.iterdir()) == [target]
    assert [path.read_text() for path in tmp_path.rglob("*") if path.is_file()] in ([], ["mine"])


@pytest.mark.parametrize("what", ["file", "folder with a hidden file"])
def test_what_came_there_in_the_meantime_is_not_touched_either(tmp_path: Path, what: str) -> None:
    target = tmp_path / "r1"
    with pytest.raises(Taken), made_aside(target, FILES):
        stand(target, what)
    assert list(tmp_path.iterdir()) == [target]
    assert [path.read_text() for path in tmp_path.rglob("*") if path.is_file()] == ["mine"]


def test_what_came_into_an_empty_folder_in_the_meantime_stays_and_nothing_else_does(tmp_path: Path) -> None:
    with pytest.raises(Taken), made_aside(tmp_path, FILES):
        (tmp_path / "plan.toml").write_text("mine")
    assert contents(tmp_path) == {"plan.toml": b"mine"}
    assert [path.name for path in tmp_path.iterdir()] == ["plan.toml"]


@pytest.mark.parametrize("there", [False, True])
@pytest.mark.parametrize("error", [Stopped("stopped"), KeyboardInterrupt(), OSError(errno.EIO, "broken")])
def test_nothing_is_left_where_looking_through_it_raises(
    tmp_path: Path, there: bool, error: BaseException
) -> None:
    target = tmp_path / "r1"
    if there:
        target.mkdir()
    with pytest.raises(type(error)), made_aside(target, FILES):
        raise error
    assert list(tmp_path.rglob("*")) == ([target] if there else [])


@pytest.mark.parametrize("there", [False, True])
@pytest.mark.parametrize("at", [1, 2, 3])
def test_nothing_is_left_where_the_disk_is_full(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, there: bool, at: int
) -> None:
    synced: list[int] = []

    def full(descriptor: int) -> None:
        synced.append(descriptor)
        if len(synced) == at:
            raise OSError(errno.ENOSPC, os.strerror(errno.ENOSPC))

    monkeypatch.setattr(os, "fsync", full)
    target = tmp_path / "r1"
    if there:
        target.mkdir()
    with pytest.raises(OSError, match="No space left"), made_aside(target, FILES):
        pytest.fail("it was looked through though it could not be written")
    assert list(tmp_path.rglob("*")) == ([target] if there else [])


def test_progress_is_told_each_file_and_can_end_the_work(tmp_path: Path) -> None:
    told: list[tuple[str, int, int]] = []

    def stop_at_the_last(what: str, done: int, of: int) -> None:
        told.append((what, done, of))
        if done == 2:
            raise Stopped("stopped")

    with pytest.raises(Stopped), made_aside(tmp_path / "r1", FILES, stop_at_the_last):
        pytest.fail("it went on")
    assert told == [("files", done, 3) for done in range(3)]
    assert list(tmp_path.iterdir()) == []
