"""A wall's name means the rib of a row where there is one, else the stretch of a web."""

from __future__ import annotations

from pathlib import Path

from ledger.exchange.layout_toml import read_layout
from ledger.loft.loft import loft
from ledger.loft.lofted import Lofted

SMALL = Path(__file__).resolve().parents[2] / "sample_builds" / "small_wing"
AIR = 'name = "air"\nwalls = ["L2"]'
DRAIN = 'name = "drain"\nwalls = "ribs"'


def lofted(folder: Path, *edits: tuple[str, str]) -> tuple[Lofted | None, tuple[str, ...]]:
    text = (SMALL / "layout.toml").read_text(encoding="utf-8")
    for old, new in edits:
        assert old in text
        text = text.replace(old, new)
    for name in ("materials.csv", "laminates.csv"):
        (folder / name).write_bytes((SMALL / name).read_bytes())
    (folder / "layout.toml").write_text(text, encoding="utf-8")
    read = read_layout(folder / "layout.toml")
    assert read.layout is not None, read.findings
    found, findings = loft(read.layout)
    return found, tuple(f"{finding.code} {finding.what}" for finding in findings)


def drilled(wing: Lofted | None) -> dict[str, int]:
    assert wing is not None
    return {panel.part: len(panel.holes) for panel in wing.panels if panel.holes}


def test_walls_of_a_kind_are_those_that_part_two_bays_of_a_tank(tmp_path: Path) -> None:
    wing, _ = lofted(tmp_path)
    assert drilled(wing) == {"RIB.L2": 2, "RIB.T3": 1}


def test_a_name_that_rib_and_web_share_means_the_rib(tmp_path: Path) -> None:
    # The row is renamed like its web, so that S2 could be the rib in row S or web S outboard of rib 2.
    wing, _ = lofted(
        tmp_path,
        ('name = "L"', 'name = "S"'),
        ('["L", "T"]', '["S", "T"]'),
        ('rows = ["L"]', 'rows = ["S"]'),
        ('"RIB.L1"', '"RIB.S1"'),
        ('bay = "L', 'bay = "S'),
        ('walls = ["L2"]', 'walls = ["S2"]'),
    )
    assert drilled(wing) == {"RIB.S2": 2, "RIB.T3": 1}


def test_the_name_of_a_web_and_a_rib_is_the_stretch_outboard_of_it(tmp_path: Path) -> None:
    # Behind the web the tail is filled or dry, so a hole there would open the tank: the loft says where.
    dry = ('rows = ["L"]\nribs = ["1", "3"]', 'rows = ["L"]\nribs = ["1", "2"]')
    wing, _ = lofted(
        tmp_path,
        dry,
        ('bay = "L2"', 'bay = "L1"'),
        (AIR, 'name = "air"\nwalls = ["S2"]'),
        (DRAIN, 'name = "drain"\nwalls = ["L3"]'),
    )
    assert drilled(wing) == {"RIB.L3": 1, "RIB.T3": 1, "WEB.S.OUT": 1}


def test_walls_left_out_get_no_hole_even_where_they_are_named(tmp_path: Path) -> None:
    wing, _ = lofted(tmp_path, ('leaving_out = ["T2"]', 'leaving_out = ["T3"]'))
    assert drilled(wing) == {"RIB.L2": 2, "RIB.T2": 1}
