"""What the build weighs, through the commands: what is begun, what is weighed, and each cause by itself.

Of the skin's six plies each is 0.5 m2 x (200 g/m2 of cloth + 200 g/m2 of resin) = 200 g; the rib is
0.2 m2 x 2000 g/m2 = 400 g. Hand values, from the plan in conftest.
"""

from __future__ import annotations

import math
from pathlib import Path
from typing import Any

import pytest

PLY_KG, SKIN_KG, RIB_KG, WING_KG = 0.2, 1.2, 0.4, 1.93


def lay(bench: Any, step: int, **more: str) -> None:
    bench.enter("lay", piece="SKIN-L", step=str(step), **{"lots": "CLOTH", **more})


def cut_rib(bench: Any, sheet: str = "BIG") -> None:
    bench.enter("cut", pieces="RIB-L", sheet=sheet)


def test_one_ply_of_six_logged_does_not_make_the_skin_a_sixth(bench: Any) -> None:
    lay(bench, 1)
    skin = bench.part("SKIN-L")
    assert skin["calculated_kg"] == pytest.approx(SKIN_KG, abs=1e-12)
    assert skin["best_kg"] == pytest.approx(SKIN_KG, abs=1e-12)
    total = bench.figures("weights")["total"]
    assert total["built_kg"] == pytest.approx(PLY_KG, abs=1e-12)
    assert total["best_kg"] == pytest.approx(WING_KG, abs=1e-12)


def test_a_trim_and_a_build_up_after_a_weighing_move_best_by_exactly_their_masses(bench: Any) -> None:
    cut_rib(bench)
    bench.enter("weigh", what="RIB-L", reading="412 g", scale="W1", state="finished")
    assert bench.part("RIB-L")["best_kg"] == pytest.approx(0.412, abs=1e-12)
    bench.enter("trim", piece="RIB-L", mass="7.5 g", why="edge trim")
    assert bench.part("RIB-L")["best_kg"] == pytest.approx(0.412 - 0.0075, abs=1e-12)
    bench.enter("build_up", piece="RIB-L", mass="11 g", lot="GREY", why="filler")
    rib = bench.part("RIB-L")
    assert rib["best_kg"] == pytest.approx(0.412 - 0.0075 + 0.011, abs=1e-12)
    assert rib["actual_kg"] == pytest.approx(0.412, abs=1e-12)


def test_two_hundred_readings_on_one_scale_share_its_calibration(
    run: Any, tmp_path: Path, plan: Path
) -> None:
    heads = (plan / "parts.csv").read_text(encoding="utf-8").splitlines()[0]
    many = tmp_path / "many"
    many.mkdir()
    for name in ("plan.toml", "materials.csv", "laminates.csv"):
        (many / name).write_bytes((plan / name).read_bytes())
    rows = [f"CLIP{n:03d},clip,fitting,C,WING,item,,,m,0 0 0,,,,10" for n in range(200)]
    (many / "parts.csv").write_text("\n".join([heads, *rows]) + "\n", encoding="utf-8")
    book = tmp_path / "many.wingledger"
    assert run("start", book, many).code == 0
    log = tmp_path / "log.csv"
    weighed = "".join(f"weigh,CLIP{n:03d},10 g,W1,finished\n" for n in range(200))
    log.write_text(f"kind,what,reading,scale,state\n{weighed}", encoding="utf-8")
    scale = ("instrument=W1", "what=scale", "resolution=1 g", "accuracy=1 g")
    assert run("enter", book, "instrument", *scale).code == 0
    assert run("enter", book, "--from", log).code == 0
    total = run("weights", book, "--json").read["total"]
    assert total["actual_kg"] == pytest.approx(2.0, abs=1e-12)
    # The scale may be off by 1 g, all readings alike: 200 times a/sqrt 3. Each is read to 1 g: sqrt 200
    # times 1/sqrt 12.
    shared, single = 200 * 1e-3 / math.sqrt(3), math.sqrt(200) * 1e-3 / math.sqrt(12)
    assert total["best_u_kg"] == pytest.approx(math.hypot(shared, single), rel=1e-9)


# -- planted causes come back one by one


def test_an_area_two_percent_over_comes_back_as_geometry(bench: Any) -> None:
    # A ply laid over 0.51 m2 where 0.5 m2 is planned: 2 % of 200 g.
    lay(bench, 1, area="0.51 m2")
    assert bench.causes_g() == pytest.approx({"geometry": 4.0}, abs=1e-6)


def test_a_heavy_sheet_comes_back_as_stock(bench: Any) -> None:
    # 2 m2 that weigh 4.2 kg are 2100 g/m2 where 2000 are planned: 0.2 m2 of rib.
    bench.enter("sheet", laminate="SHEET", length="2000 mm", width="1000 mm", mass="4200 g", sheet="HEAVY")
    cut_rib(bench, "HEAVY")
    assert bench.causes_g() == pytest.approx({"stock": 20.0}, abs=1e-6)


def test_a_heavy_lot_of_cloth_comes_back_as_stock(bench: Any) -> None:
    bench.enter("receive", material="twill", quantity="9 m2", lot="THICK", areal_mass="210 g/m2")
    lay(bench, 1, lots="THICK")
    # 10 g/m2 over half a square metre, and at the planned share as much resin with it.
    assert bench.causes_g() == pytest.approx({"stock": 10.0}, abs=1e-6)


def test_a_missing_ply_comes_back_as_plies(bench: Any) -> None:
    for step in (1, 2, 3, 4, 5):
        lay(bench, step)
    assert bench.causes_g() == {}
    bench.enter("fit", piece="SKIN-L", into="WING/LEFT")
    assert bench.causes_g() == pytest.approx({"plies": -200.0}, abs=1e-6)


def test_a_wet_ply_comes_back_as_resin(bench: Any) -> None:
    bench.enter("mix", resin_lot="RESIN", resin="100 g", hardener_lot="HARD", hardener="27 g", batch="CUP")
    lay(bench, 1, batches="CUP 125 g")
    assert bench.causes_g() == pytest.approx({"resin": 25.0}, abs=1e-6)


def test_sanding_comes_back_as_trim_and_repair(bench: Any) -> None:
    cut_rib(bench)
    bench.enter("trim", piece="RIB-L", mass="9 g", why="sanding")
    assert bench.causes_g() == pytest.approx({"trim_repair": -9.0}, abs=1e-6)


def test_paint_comes_back_as_bond_and_coat(bench: Any) -> None:
    cut_rib(bench)
    bench.enter("coat", piece="RIB-L", lot="GREY", mass="14 g")
    assert bench.causes_g() == pytest.approx({"bond_coat": 14.0}, abs=1e-6)


def test_what_the_scale_says_beyond_the_entries_is_unexplained(bench: Any) -> None:
    cut_rib(bench)
    bench.enter("weigh", what="RIB-L", reading="406 g", scale="W1", state="finished")
    assert bench.causes_g() == pytest.approx({"unexplained": 6.0}, abs=1e-6)


def test_all_of_them_together_add_up_and_each_is_what_it_was_alone(bench: Any) -> None:
    bench.enter("sheet", laminate="SHEET", length="2000 mm", width="1000 mm", mass="4200 g", sheet="HEAVY")
    cut_rib(bench, "HEAVY")
    bench.enter("trim", piece="RIB-L", mass="9 g", why="sanding")
    bench.enter("mix", resin_lot="RESIN", resin="100 g", hardener_lot="HARD", hardener="27 g", batch="CUP")
    lay(bench, 1, batches="CUP 125 g")
    for step in (2, 3, 4, 5):
        lay(bench, step)
    bench.enter("coat", piece="SKIN-L", lot="GREY", mass="14 g")
    bench.enter("fit", piece="SKIN-L", into="WING/LEFT")
    wanted = {"stock": 20.0, "trim_repair": -9.0, "resin": 25.0, "plies": -200.0, "bond_coat": 14.0}
    assert bench.causes_g() == pytest.approx(wanted, abs=1e-6)


def test_a_coat_inside_a_cell_pulls_the_centre_of_gravity_to_that_cell(bench: Any) -> None:
    before = bench.figures("weights")["total"]
    bench.enter("coat", cell="B1", lot="GREY", mass="100 g")
    after = bench.figures("weights")["total"]
    assert after["best_kg"] == pytest.approx(WING_KG + 0.1, abs=1e-12)
    # The box of 1 x 0.5 x 0.2 m has its middle here.
    middle = (0.5, 0.25, 0.1)
    wanted = [(WING_KG * a + 0.1 * b) / (WING_KG + 0.1) for a, b in zip(before["cg_m"], middle, strict=True)]
    assert after["cg_m"] == pytest.approx(wanted, abs=1e-9)
