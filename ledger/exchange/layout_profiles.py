"""The profiles of a layout's sections: family numbers, and coordinate files beside it."""

from __future__ import annotations

from ledger.exchange.plan_files import FileRefused, FolderFiles, plain_path
from ledger.exchange.profile_file import read_profile
from ledger.exchange.toml_text import TomlTable
from ledger.loft.layout import PlanPoint


def read_beside(files: FolderFiles, path: str) -> bytes:
    """A file in the folder of the layout; raises FileRefused in words that fit there."""
    try:
        return files.read(path)
    except FileRefused as refused:
        what, do = refused.what, refused.do
        if refused.code == "file-missing":
            what, do = f"there is no file {path!r} beside the layout", "put it there, or correct the path"
        elif refused.code == "path-outside":
            what = f"{path!r} does not stay in the folder of the layout"
            do = "put the file in that folder and write its path from there"
        raise FileRefused(refused.code, what, do) from None


class Profiles:
    """Each file is read once, whatever number of sections names it."""

    def __init__(self, files: FolderFiles) -> None:
        self._files = files
        self._outlines: dict[str, tuple[PlanPoint, ...]] = {}

    def check_number(self, table: TomlTable, number: str) -> None:
        """Note a number of no family."""
        from ledger.loft.section import naca_section

        try:
            naca_section(number, 8)
        except ValueError as error:
            table.stop(
                "section-unknown", "naca", str(error), 'write four or five digits, for example naca = "2412"'
            )

    def outline(self, table: TomlTable, path: str) -> tuple[PlanPoint, ...]:
        """The outline of a file, of unit chord; empty with findings."""
        if path in self._outlines:
            return self._outlines[path]
        try:
            content = read_beside(self._files, path)
        except FileRefused as refused:
            table.stop(refused.code, "coordinates", refused.what, refused.do)
            return ()
        self._outlines[path] = read_profile(plain_path(path), content, table.problems)
        return self._outlines[path]
