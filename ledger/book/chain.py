"""How entries hang together: canonical text, the digest of one entry over the last, and its short code."""

from __future__ import annotations

import hashlib
from json.encoder import encode_basestring as _quoted
from typing import Any

import rfc8785
from stdnum.iso7064 import mod_37_2

from ledger.errors import LedgerError
from ledger.model.entry import Entry

# Digits and letters less I, L, O and U, so that a code written on paper is read back as it was.
_PAPER = "0123456789ABCDEFGHJKMNPQRSTVWXYZ"
_PAPER_LOOKALIKES = str.maketrans("ILO", "110")
_PAPER_CHARACTERS = 12


class NotText(LedgerError):
    """A text with half a character in it, or a number JSON cannot hold."""


def canonical(value: Any) -> str:
    """RFC 8785 text of JSON values.

    Raises
        NotText: a lone surrogate, a number that is not finite or too large for JSON.
    """
    try:
        return str(rfc8785.dumps(value), "utf-8")
    except (rfc8785.CanonicalizationError, UnicodeError) as error:
        raise NotText(str(error)) from error


def digest_of(
    previous: str, *, seq: int, id: str, at: str, logged_at: str, by: str, kind: str, body: str
) -> str:
    """The digest of an entry whose `body` is canonical text already.

    The six other members are strings and a whole number, whose canonical form the standard encoder
    gives, in the order of their keys; canonicalising the body a second time would double the work.
    """
    text = (
        f'{{"at":{_quoted(at)},"body":{body},"by":{_quoted(by)},"id":{_quoted(id)},'
        f'"kind":{_quoted(kind)},"logged_at":{_quoted(logged_at)},"seq":{seq}}}'
    )
    return hashlib.sha256(previous.encode("ascii") + text.encode("utf-8")).hexdigest()


def digest_of_entry(entry: Entry, previous: str) -> str:
    """The digest the row should have after `previous`, its body taken as canonical."""
    return digest_of(
        previous,
        seq=entry.seq,
        id=entry.id,
        at=entry.at,
        logged_at=entry.logged_at,
        by=entry.by,
        kind=entry.kind,
        body=entry.body,
    )


def short_code(digest: str) -> str:
    """The first 60 bits of a digest for paper, with a check character: `4F7K-92QD-XM3T-8`.

    Empty for what is no digest, as a damaged book may have.
    """
    try:
        bits = int(digest[:15], 16)
    except ValueError:
        return ""
    characters = "".join(_PAPER[bits >> shift & 31] for shift in range(55, -5, -5))
    return _in_groups(characters + _shell_safe(str(mod_37_2.calc_check_digit(characters))))


def read_code(text: str) -> str | None:
    """A short code or a whole digest in its written form, or None where it was mistyped."""
    bare = "".join(text.split()).replace("-", "")
    if len(bare) == 64 and all(character in "0123456789abcdefABCDEF" for character in bare):
        return bare.lower()
    bare = bare.upper()
    if len(bare) != _PAPER_CHARACTERS + 1:
        return None
    # The check character may be any letter; only the others are never I, L or O.
    bare = bare[:-1].translate(_PAPER_LOOKALIKES) + bare[-1]
    return _in_groups(bare) if mod_37_2.is_valid(bare.replace("=", "*")) else None


def _shell_safe(check: str) -> str:
    # A shell would take a star for a pattern of file names.
    return check.replace("*", "=")


def _in_groups(characters: str) -> str:
    return "-".join(characters[start : start + 4] for start in range(0, len(characters), 4))
