"""Canonical text, digests and the code for paper."""

from __future__ import annotations

import hashlib
import json
import sqlite3
from typing import Any

import pytest
import rfc8785
from hypothesis import given
from hypothesis import strategies as st

from ledger.book.chain import NotText, canonical, digest_of, read_code, short_code
from ledger.model.acts import Note, Receive
from ledger.model.things import Measure

DIGESTS = st.binary(min_size=32, max_size=32).map(bytes.hex)
TEXTS = st.text(st.characters(exclude_categories=["Cs"]))


def test_every_digest_follows_from_the_table_alone(shop: Any) -> None:
    shop.enter("receive", Receive(material="epoxy", quantity=Measure(value=5.0, unit="kg")))
    shop.enter("note", Note(text='a "quoted" \u2028 line\n\x07 and \u00fc \U0001f6e9'))
    connection = sqlite3.connect(shop.book)
    connection.row_factory = sqlite3.Row
    previous = "0" * 64
    rows = connection.execute("SELECT * FROM entry ORDER BY seq").fetchall()
    assert [row["seq"] for row in rows] == [1, 2, 3]
    for row in rows:
        members = {name: row[name] for name in ("seq", "id", "at", "logged_at", "by", "kind")}
        text = rfc8785.dumps({**members, "body": json.loads(row["body"])})
        assert row["previous"] == previous
        assert row["digest"] == hashlib.sha256(previous.encode("ascii") + text).hexdigest()
        assert row["body"].encode() == rfc8785.dumps(json.loads(row["body"]))
        previous = row["digest"]
    connection.close()


@given(by=TEXTS, kind=TEXTS, remark=TEXTS, number=st.floats(allow_nan=False, allow_infinity=False))
def test_the_quick_digest_is_that_of_the_whole_object_made_canonical(
    by: str, kind: str, remark: str, number: float
) -> None:
    body = {"remark": remark, "mass_kg": number}
    whole = {"seq": 7, "id": "i", "at": "a", "logged_at": "l", "by": by, "kind": kind, "body": body}
    expected = hashlib.sha256(("f" * 64).encode() + rfc8785.dumps(whole)).hexdigest()
    quick = digest_of("f" * 64, seq=7, id="i", at="a", logged_at="l", by=by, kind=kind, body=canonical(body))
    assert quick == expected


@pytest.mark.parametrize("value", [float("nan"), float("inf"), "\ud800", 2**60])
def test_what_canonical_json_cannot_hold_is_refused(value: object) -> None:
    with pytest.raises(NotText):
        canonical({"value": value})


@given(DIGESTS)
def test_a_code_reads_back_to_itself_in_any_spelling(digest: str) -> None:
    code = short_code(digest)
    assert read_code(code) == code
    assert read_code(code.lower().replace("-", " ")) == code
    assert read_code(digest) == digest


@given(DIGESTS, st.data())
def test_a_wrong_character_or_two_swapped_in_a_code_are_noticed(digest: str, data: st.DataObject) -> None:
    code = short_code(digest).replace("-", "")
    place = data.draw(st.integers(0, len(code) - 1))
    wrong = data.draw(st.sampled_from("0123456789ABCDEFGHJKMNPQRSTVWXYZ"))
    mistyped = code[:place] + wrong + code[place + 1 :]
    if mistyped != code:
        assert read_code(mistyped) is None
    if place + 1 < len(code):
        swapped = code[:place] + code[place + 1] + code[place] + code[place + 2 :]
        # I, L and O before the check character are read as the digits they look like.
        if swapped != code and not set(swapped[:-1]) & set("ILO"):
            assert read_code(swapped) is None


def test_a_code_written_with_letters_for_digits_is_read() -> None:
    code = short_code("0084" + "1" * 60)
    assert "0" in code
    assert "1" in code
    written = code[:-1].replace("0", "O").replace("1", "l") + code[-1]
    assert read_code(written) == code


def test_the_code_of_a_digest_does_not_change() -> None:
    # From memory: the alphabet is Crockford's base 32; first 60 bits of the digest, ISO 7064 MOD 37-2 check.
    assert short_code("0" * 64).startswith("0000-0000-0000-")
    assert short_code("f" * 64).startswith("ZZZZ-ZZZZ-ZZZZ-")
    assert short_code("08421084210842" + "1" * 50)[:4] == "1111"
