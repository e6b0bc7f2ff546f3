"""Where the two front ends meet: the command line, and the screens it opens."""

from __future__ import annotations

import sys
from typing import TYPE_CHECKING

from ledger import __version__

if TYPE_CHECKING:
    from pathlib import Path


# As `ledger.cli.app` has it, which may be what was interrupted while it was loaded.
_EXIT_INTERRUPTED = 130


def open_screens(book: Path) -> None:
    """Open the screens on a book and come back when they are left."""
    from ledger.tui.app import run

    run(book)


def main() -> None:
    """Run one command and end with its exit code."""
    # Importing the reader of options takes longer than the interpreter's own start.
    if sys.argv[1:] == ["--version"]:
        print(f"wingledger, version {__version__}")
        return
    try:
        from ledger.cli.app import run_command

        sys.exit(run_command(sys.argv[1:], open_screens))
    except KeyboardInterrupt:
        # Pressed while the program was still being loaded, or already ending.
        print("stopped before the end", file=sys.stderr)
        sys.exit(_EXIT_INTERRUPTED)


if __name__ == "__main__":
    main()
