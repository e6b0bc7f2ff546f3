"""The plan of an iteration, from its stored files; once read, its records are kept in the book."""

from __future__ import annotations

import hashlib
import json
import sqlite3
from functools import lru_cache

from ledger import __version__
from ledger.book.reading import StoredGeometry, files_of
from ledger.errors import BookUnusable, Finding
from ledger.model.acts import Adopt
from ledger.model.body import UnreadableBody, plain_of, record_from
from ledger.model.plan import Plan

UNREADABLE = (KeyError, ValueError, TypeError, IndexError, AttributeError, EOFError)


def plan_key(adopt: Adopt) -> str:
    """What the records of a plan are kept under: its files by content, and how this program reads them."""
    from ledger.exchange.geometry_cache import METHOD

    listed = json.dumps([__version__, METHOD, sorted((file.path, file.sha256) for file in adopt.files)])
    return "plan:" + hashlib.sha256(listed.encode()).hexdigest()


def keep_plan(adopt: Adopt, plan: Plan, geometry: StoredGeometry) -> None:
    """Put the records of a plan that was just read where `stored_plan` finds them."""
    content = json.dumps(plain_of(plan)).encode()
    geometry.put(plan_key(adopt), content)
    geometry.put(_adopted_key(adopt), content)


def stored_plan(connection: sqlite3.Connection, adopt: Adopt, geometry: StoredGeometry) -> Plan:
    """The plan that an entry adopted.

    Raises
        BookUnusable: the stored files no longer make a plan.
    """
    key = plan_key(adopt)
    geometry.load(connection, key)
    kept = geometry.get(key)
    if kept is not None:
        try:
            return _decoded(kept)
        except (UnreadableBody, ValueError):
            pass
    from ledger.exchange.plan_folder import read_plan_files

    files = files_of(connection, adopt)
    try:
        read = read_plan_files(files, geometry)
    except UNREADABLE:
        # What is kept is only there to save time: where it cannot be read, all is computed again.
        read = read_plan_files(files, None)
    if read.plan is None:
        return _as_adopted(connection, adopt, geometry, read.findings)
    keep_plan(adopt, read.plan, geometry)
    return read.plan


def _as_adopted(
    connection: sqlite3.Connection, adopt: Adopt, geometry: StoredGeometry, findings: tuple[Finding, ...]
) -> Plan:
    # A later program may read plans more strictly; a plan that was adopted stays readable all the same.
    key = _adopted_key(adopt)
    geometry.load(connection, key)
    kept = geometry.get(key)
    if kept is None:
        raise BookUnusable(*findings)
    try:
        return _decoded(kept)
    except (UnreadableBody, ValueError):
        raise BookUnusable(*findings) from None


def _adopted_key(adopt: Adopt) -> str:
    listed = json.dumps(sorted((file.path, file.sha256) for file in adopt.files))
    return "plan as adopted:" + hashlib.sha256(listed.encode()).hexdigest()


@lru_cache(maxsize=8)
def _decoded(kept: bytes) -> Plan:
    plan: Plan = record_from(Plan, json.loads(kept))
    return plan
