"""The figures of a small build, from the command's own output to closed forms."""

from __future__ import annotations

import json
import shutil
from pathlib import Path
from typing import Any

import jsonschema
import pytest

from ledger.reports.schemas import all_schemas

# checks: box 1 x 0.5 x 0.2, pitch 5 deg, drain at the high floor edge (computed)
TRAPPED_AT_5_DEG_M3 = 0.021872166


def figures(run: Any, command: str, *words: object) -> dict[str, Any]:
    """What a command prints with --json, read and held against its schema."""
    ran = run(command, *words, "--json")
    assert ran.code == 0, ran.err
    read: dict[str, Any] = json.loads(ran.out)
    jsonschema.validate(read, all_schemas()[f"output/{command}.json"])
    return read


def entered(run: Any, book: Path, kind: str, **fields: str) -> dict[str, Any]:
    """What `enter --json` prints for one entry."""
    words = [f"{word.rstrip('_')}={value}" for word, value in fields.items()]
    ran = run("enter", book, kind, *words, "--json")
    assert ran.code == 0, ran.err
    read: dict[str, Any] = json.loads(ran.out)
    jsonschema.validate(read, all_schemas()["output/enter.json"])
    return read


def wet_out(run: Any, book: Path) -> tuple[str, str]:
    """A cup of 127 g with 7 g left in it, and the first ply of the skin from it: lot and cup."""
    cloth = entered(run, book, "receive", material="twill", quantity="10 m2")["minted"]["lot"]
    resin = entered(run, book, "receive", material="lam resin", quantity="5 kg")["minted"]["lot"]
    hardener = entered(run, book, "receive", material="lam hardener", quantity="2 kg")["minted"]["lot"]
    cup = entered(
        run,
        book,
        "mix",
        resin_lot=resin,
        resin="100 g",
        hardener_lot=hardener,
        hardener="27 g",
        residue="7 g",
    )["minted"]["batch"]
    entered(run, book, "lay", piece="SKIN-L", step="1", lots=cloth, batches=f"{cup} 100 g")
    return cloth, cup


def test_weights_of_the_plan_are_the_closed_forms(run: Any, book: Path) -> None:
    read = figures(run, "weights", book)
    assert read["iteration"] == "r1"
    # skin 0.5 m2 x 2 plies x 200/(1 - 0.5) g/m2; rib 0.2 m2 x 2000 g/m2; tip as planned
    estimated = {part["part"]: part["estimated_kg"] for part in read["parts"]}
    assert estimated == pytest.approx({"SKIN-L": 0.4, "RIB-L": 0.4, "TIP-L": 0.25}, abs=1e-12)
    total = read["total"]
    assert total["estimated_kg"] == total["best_kg"] == pytest.approx(1.05, abs=1e-12)
    assert (total["actual_kg"], total["built_kg"], total["share_actual"]) == (None, 0.0, 0.0)
    assert total["cg_m"][:2] == pytest.approx([0.5, (0.4 * 0.25 + 0.25 * 0.5) / 1.05], abs=1e-3)


def test_a_weighing_moves_best_and_is_explained_to_the_last_gram(run: Any, book: Path) -> None:
    entered(run, book, "weigh", what="RIB-L", reading="412 g; 414 g", state="finished")
    read = figures(run, "weights", book)
    rib = next(part for part in read["parts"] if part["part"] == "RIB-L")
    assert rib["actual_kg"] == pytest.approx(0.413, abs=1e-12)
    off_plan = sum(cause["mass_kg"] for cause in read["off_plan"])
    assert off_plan == pytest.approx(read["total"]["best_kg"] - read["total"]["estimated_kg"], abs=1e-9)


def test_fuel_of_the_box_is_the_closed_form(run: Any, book: Path) -> None:
    read = figures(run, "fuel", book)
    (tank,) = read["tanks"]
    assert tank["gross_m3"] == pytest.approx(0.1, rel=1e-12)
    assert tank["capacity_m3"] == pytest.approx(0.1, rel=1e-9)
    assert tank["usable_m3"] == pytest.approx(0.1 - TRAPPED_AT_5_DEG_M3, abs=1e-6)
    assert tank["governing_attitude"] == "climb"
    assert [attitude["attitude"] for attitude in tank["attitudes"]] == ["ground", "climb"]
    assert len(tank["attitudes"][1]["table"]) == 101


def test_a_plan_without_tanks_has_an_empty_list_of_them(run: Any, plan: Path, tmp_path: Path) -> None:
    dry = Path(shutil.copytree(plan, tmp_path / "dry"))
    (dry / "tanks.toml").unlink()
    book = tmp_path / "dry.wingledger"
    assert run("start", book, dry).code == 0
    assert figures(run, "fuel", book) == {"tanks": [], "feeds": []}
    ran = run("fuel", book)
    assert (ran.code, ran.out) == (0, "no tanks in the plan\n")


def test_an_attitude_asked_for_is_listed_and_never_enters_usable(run: Any, book: Path) -> None:
    planned = figures(run, "fuel", book)["tanks"][0]
    asked = figures(run, "fuel", book, "--pitch", "30", "--levels", "4")["tanks"][0]
    (last,) = [one for one in asked["attitudes"] if one["attitude"] == "asked"]
    assert (last["pitch_deg"], last["roll_deg"], last["flight"], len(last["table"])) == (30.0, 0.0, False, 5)
    assert last["trapped_m3"] > TRAPPED_AT_5_DEG_M3
    assert asked["usable_m3"] == planned["usable_m3"]


def test_a_listed_attitude_changes_only_what_is_listed(run: Any, book: Path) -> None:
    ground = figures(run, "fuel", book, "--attitude", "ground")["tanks"][0]
    assert [attitude["attitude"] for attitude in ground["attitudes"]] == ["ground"]
    assert ground["governing_attitude"] == "climb"
    assert ground["usable_m3"] == pytest.approx(0.1 - TRAPPED_AT_5_DEG_M3, abs=1e-6)


def test_warm_fuel_weighs_less(run: Any, book: Path) -> None:
    def heaviest(*words: str) -> float:
        climb = figures(run, "fuel", book, *words)["tanks"][0]["attitudes"][1]
        return max(float(row["mass_kg"]) for row in climb["drained"])

    assert heaviest("--temperature", "40 C") < heaviest() < heaviest("--temperature", "-20 C")


def test_the_density_a_temperature_gives_is_a_line_of_the_text(run: Any, book: Path) -> None:
    def densities(*words: str) -> list[str]:
        return [line for line in run("fuel", book, *words).out.splitlines() if line.startswith("density")]

    (warm,), (cold,) = densities("--temperature", "28 C"), densities("--temperature", "-20 C")
    assert warm.endswith(" kg/m3 at 28 C")
    assert cold.endswith(" kg/m3 at -20 C")
    assert float(warm.split()[1]) < float(cold.split()[1])
    assert densities() == []


def test_a_cup_is_traced_both_ways_and_adds_up(run: Any, book: Path) -> None:
    cloth, cup = wet_out(run, book)
    read = figures(run, "trace", book, cup.lower())
    assert (read["what"], read["kind"]) == (cup, "batch")
    assert {link["mass_kg"] for link in read["made_from"]} == {0.1, 0.027}
    assert {link["made_from"][0]["what"] for link in read["made_from"]} == {"lam resin", "lam hardener"}
    by_name = {link["what"]: link["mass_kg"] for link in read["went_into"]}
    assert by_name["SKIN-L/1"] == pytest.approx(0.1)
    assert sum(by_name.values()) == pytest.approx(0.127)
    piece = figures(run, "trace", book, "SKIN-L")
    assert {link["what"] for link in piece["made_from"]} == {cloth, cup}


def test_a_lot_is_followed_through_its_cup_into_the_piece_and_the_wing(run: Any, book: Path) -> None:
    wet_out(run, book)
    entered(run, book, "fit", piece="SKIN-L", into="WING/LEFT")
    resin = figures(run, "trace", book, _lot_of(run, book, "lam resin"))
    (cup,) = resin["went_into"]
    piece = next(link for link in cup["went_into"] if link["kind"] == "piece")
    assert (piece["what"], piece["state"]) == ("SKIN-L/1", "fitted")
    (left,) = piece["went_into"]
    assert (left["what"], left["went_into"][0]["what"]) == ("WING/LEFT", "WING")


def _lot_of(run: Any, book: Path, material: str) -> str:
    """The only lot of a material."""
    (link,) = figures(run, "trace", book, material)["went_into"]
    return str(link["what"])


def test_entries_are_those_that_name_the_thing(run: Any, book: Path) -> None:
    _, cup = wet_out(run, book)
    assert figures(run, "trace", book, cup)["entries"] == [5, 6]


def test_a_held_lot_is_traced_as_held(run: Any, book: Path) -> None:
    cloth, _ = wet_out(run, book)
    entered(run, book, "hold", what=cloth, why="wrong certificate")
    assert figures(run, "trace", book, cloth)["state"] == "on hold"
    assert "ON HOLD" in run("trace", book, cloth).out.splitlines()[0]


def test_check_prints_the_last_digest_and_compares_it(run: Any, book: Path) -> None:
    digest = entered(run, book, "note", text="begun")["digest"]
    read = figures(run, "check", book)
    assert (read["entries"], read["last_digest"]) == (2, digest)
    assert (read["chain_ok"], read["replay_ok"]) == (True, True)
    for code in (digest, read["short_code"]):
        assert run("check", book, "--last", code).code == 0
    assert run("check", book, "--last", "0" * 64).code == 1


def test_figures_for_people_go_to_standard_output_only(run: Any, book: Path) -> None:
    for words in (("weights", book), ("fuel", book), ("trace", book, "TIP-L"), ("check", book)):
        ran = run(*words)
        assert ran.code == 0
        assert len(ran.out.splitlines()) > 3


def test_the_skin_shows_what_is_not_known_as_a_dash(run: Any, book: Path) -> None:
    row = next(line for line in run("weights", book).out.splitlines() if line.startswith("SKIN-L"))
    assert row.split()[2:7] == ["0/1", "planned", "E", "0.400", "-"]
