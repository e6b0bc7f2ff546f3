"""Commands run as a user runs them, from plan folders written for the purpose."""

from __future__ import annotations

import contextlib
import io
import json
from collections.abc import Callable, Iterator
from dataclasses import dataclass
from typing import Any

import pytest

from ledger.cli.app import run_command


@dataclass(frozen=True, slots=True, kw_only=True)
class Ran:
    """How a command ended and what it said where."""

    code: int
    out: str
    err: str

    @property
    def read(self) -> Any:
        """What it printed with --json."""
        assert self.code == 0, self.err
        return json.loads(self.out)


Run = Callable[..., Ran]


def run_words(*words: object) -> Ran:
    """Run one command in this process; opening the screens does nothing."""
    out, err = io.StringIO(), io.StringIO()
    with contextlib.redirect_stdout(out), contextlib.redirect_stderr(err):
        code = run_command([str(word) for word in words], lambda _book: None)
    return Ran(code=code, out=out.getvalue(), err=err.getvalue())


@pytest.fixture(scope="session")
def run() -> Iterator[Run]:
    """One command, for fixtures of any scope."""
    with pytest.MonkeyPatch.context() as patch:
        patch.setenv("WINGLEDGER_BY", "JK")
        patch.delenv("WINGLEDGER_DEBUG", raising=False)
        yield run_words
