"""Where the two front ends meet: the command line, and the screens it opens."""

from __future__ import annotations

import sys
from pathlib import Path


def open_screens(book: Path) -> None:
    """Open the screens on a book and come back when they are left."""
    from ledger.tui.app import run

    run(book)


def main() -> None:
    """Run one command and end with its exit code."""
    from ledger.cli.app import run_command

    sys.exit(run_command(sys.argv[1:], open_screens))


if __name__ == "__main__":
    main()
