"""A cap that stands in a tank is told; one let into the skin, or no wider than its web, is not."""

from __future__ import annotations

from pathlib import Path

import pytest

from ledger.errors import Severity
from ledger.exchange.layout_toml import read_layout
from ledger.loft.loft import loft

GRID = Path(__file__).resolve().parents[2] / "sample_builds" / "two_seater" / "layouts"


@pytest.mark.parametrize(
    ("let_in", "width", "told"), [("true", "60", 0), ("false", "60", 2), ("false", "10.6", 0)]
)
def test_a_cap_makes_a_ledge_only_where_it_stands_out_into_a_tank(
    let_in: str, width: str, told: int, tmp_path: Path
) -> None:
    text = (GRID / "single_spar.toml").read_text(encoding="utf-8")
    text = text.replace("let_in = true", f"let_in = {let_in}").replace("width = 60", f"width = {width}")
    (tmp_path / "layout.toml").write_text(text, encoding="utf-8")
    materials = (GRID / "materials.csv").read_text(encoding="utf-8")
    strip = "pultruded strip 60 x 3,solid,"
    # Under the skin a strip is weighed by its volume: 288 g/m over 60 x 3 mm is 1600 kg/m3.
    materials = materials.replace(f"{strip},,,288", f"{strip},1600,,288")
    (tmp_path / "materials.csv").write_text(materials, encoding="utf-8")
    (tmp_path / "laminates.csv").write_bytes((GRID / "laminates.csv").read_bytes())
    read = read_layout(tmp_path / "layout.toml")
    assert read.layout is not None, read.findings
    lofted, findings = loft(read.layout)
    assert lofted is not None
    assert [finding.code for finding in findings] == ["cap-in-tank"] * told
    assert all(finding.severity is Severity.LOOK and finding.where.row for finding in findings)
