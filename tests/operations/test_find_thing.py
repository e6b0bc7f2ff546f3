"""What a scan names."""

from __future__ import annotations

from typing import Any

import pytest

from ledger.model.things import ThingKind
from ledger.operations.find_thing import find_thing


@pytest.mark.parametrize(
    ("text", "kind", "name", "says"),
    [
        (" cloth ", ThingKind.LOT, "CLOTH", "lot CLOTH: CLOTH received: 20 m2 carbon 200"),
        ("W2", ThingKind.INSTRUMENT, "W2", "instrument W2: scale W2 entered, reads to 1 g"),
        ("epoxy", ThingKind.MATERIAL, "epoxy", "material epoxy"),
        ("SANDWICH", ThingKind.LAMINATE, "SANDWICH", "laminate SANDWICH"),
        ("clip", ThingKind.PART, "CLIP", "part CLIP, Clip, 0 of 4 begun"),
        ("left/ribs", ThingKind.ASSEMBLY, "WING/LEFT/ribs", "assembly WING/LEFT/ribs"),
        ("r1", ThingKind.ITERATION, "r1", "iteration r1"),
    ],
)
def test_a_text_names_a_thing(shop: Any, text: str, kind: ThingKind, name: str, says: str) -> None:
    found = find_thing(shop.book, text)
    assert found is not None
    assert (found.kind, found.name, found.says) == (kind, name, says)


def test_a_tag_a_name_and_a_part_number_name_the_same_piece(shop: Any) -> None:
    tag = shop.log("cut", pieces="RIB.01-L", sheet="PLATE").minted[0].number
    found = [find_thing(shop.book, text) for text in (tag, tag.lower(), "RIB.01-L/1", "rib.01-l")]
    assert [one.says for one in found if one is not None] == [
        f"piece RIB.01-L/1, tag {tag}, Rib.01-L, not fitted yet"
    ] * 4


def test_a_hold_is_said(shop: Any) -> None:
    shop.log("hold", what="CLOTH", why="wet")
    found = find_thing(shop.book, "CLOTH")
    assert found is not None
    assert found.says.endswith("ON HOLD since entry 7")


@pytest.mark.parametrize("text", ["", "   ", "nothing", "L001X", "ribs", "%", "RIB.01-L/1"])
def test_other_texts_name_nothing(shop: Any, text: str) -> None:
    assert find_thing(shop.book, text) is None
