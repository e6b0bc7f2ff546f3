"""Problems of a file, collected with their places so that all of them are told at once."""

from __future__ import annotations

from collections.abc import Iterable

from ledger.errors import Finding, Severity, Where


class Problems:
    """Findings as they are met, in order. `stopped` says whether one of them forbids to go on."""

    def __init__(self) -> None:
        self._findings: list[Finding] = []

    def stop(self, code: str, where: Where, what: str, do: str) -> None:
        """Something that must be mended before the file can be used."""
        self._findings.append(Finding(code=code, severity=Severity.STOP, where=where, what=what, do=do))

    def look(self, code: str, where: Where, what: str, do: str) -> None:
        """Something to look at; the file can be used."""
        self._findings.append(Finding(code=code, severity=Severity.LOOK, where=where, what=what, do=do))

    def note(self, code: str, where: Where, what: str, do: str) -> None:
        """Something worth knowing."""
        self._findings.append(Finding(code=code, severity=Severity.NOTE, where=where, what=what, do=do))

    def extend(self, findings: Iterable[Finding]) -> None:
        """Take over what another reader found."""
        self._findings.extend(findings)

    @property
    def stopped(self) -> bool:
        """Whether anything found forbids to go on."""
        return any(finding.severity is Severity.STOP for finding in self._findings)

    @property
    def count(self) -> int:
        """How many there are, to tell whether a step added any."""
        return len(self._findings)

    @property
    def stops(self) -> int:
        """How many of them forbid to go on, to tell whether a step added any."""
        return sum(finding.severity is Severity.STOP for finding in self._findings)

    def findings(self) -> tuple[Finding, ...]:
        """Everything found, each once."""
        return tuple(dict.fromkeys(self._findings))


def listed(words: Iterable[str]) -> str:
    """Words in a row for a message: `a, b or c`."""
    each = list(words)
    if len(each) < 2:
        return "".join(each)
    return f"{', '.join(each[:-1])} or {each[-1]}"
