"""Make the sample's plan folder anew: `python sample_builds/two_seater/make_plan.py [FOLDER]`.

The result is committed beside this file; a test makes it again and compares. Everything in it is
invented, and nothing here flies.
"""

from __future__ import annotations

import csv
import sys
from collections.abc import Iterable
from pathlib import Path

sys.path.insert(0, str(Path(__file__).parent))
from draw import (
    box_mesh,
    cell_mesh,
    inside_origin,
    local,
    nose_mesh,
    rib_edges,
    skin_mesh,
    tip_mesh,
    web_outline,
    write_obj,
    write_panel,
    write_polyline,
    write_splined_panel,
)
from tanks import bay_holes, cell_name, middle_web_points, tanks_text
from wing import (
    DRY_RIBS,
    FRONT,
    MIDDLE,
    REAR,
    ROOT_Y,
    TANK_RIBS,
    TIP_Y,
    Point,
    spread,
    station,
    surface,
)

SPAN_JOINT = 2.35
SPANS = {"IN": (ROOT_Y, SPAN_JOINT), "OUT": (SPAN_JOINT, TIP_Y)}
WEBS = {"F": ("front", FRONT), "M": ("middle", MIDDLE), "R": ("rear", REAR)}

PART_HEAD = (
    *(
        "part",
        "title",
        "class",
        "side",
        "assembly",
        "form",
        "made_of",
        "geometry",
        "geometry_unit",
        "origin [m]",
    ),
    *("across", "up_axis", "face", "quantity", "planned_mass [g]", "mirror_of"),
)
Row = dict[str, str]


def numbers(*values: float) -> str:
    """Three numbers as a plan wants them."""
    return " ".join(f"{value:.6g}" for value in values)


# --- parts of the right wing; the left ones mirror them ------------------------------------------


def rib_rows(geometry: Path) -> list[Row]:
    """Ribs of both rows at the tank's stations, and the dry ones outboard."""
    rows = []
    for row, where in (("F", "front"), ("A", "rear")):
        for index, y in enumerate(TANK_RIBS + DRY_RIBS):
            if row == "A" and y in DRY_RIBS:
                continue
            name = f"rib_{row}{index + 1}.dxf"
            upper, lower = rib_edges(row, y)
            holes = rib_holes(row, index) if y in TANK_RIBS[1:-1] else []
            if row == "F" and index % 2:
                write_splined_panel(geometry / name, upper, lower, holes)
            else:
                write_panel(geometry / name, lower + upper[::-1], holes)
            rows.append(
                {
                    "part": f"RIB.{row}{index + 1}-R",
                    "title": f"{where} rib at BL {y:.2f}",
                    "class": "rib",
                    "assembly": "ribs",
                    "form": "panel",
                    "made_of": "PANEL 6",
                    "geometry": f"geometry/{name}#CUT",
                    "origin [m]": numbers(station(0.0, y), y, inside_origin(y)),
                    "across": "1 0 0",
                    "up_axis": "0 0 1",
                }
            )
    return rows


def rib_holes(row: str, index: int) -> list[tuple[float, float, float]]:
    """Drain, vent and wiring holes of a rib between two wet bays, as they are drawn for the router."""
    y = TANK_RIBS[index]
    return [(*local(centre, y), diameter) for _, centre, diameter in bay_holes(row, index)]


def web_rows(geometry: Path) -> list[Row]:
    """Three webs, each in two lengths that meet at the span joint."""
    rows = []
    for key, (where, u) in WEBS.items():
        for span, (first_y, last_y) in SPANS.items():
            name = f"web_{key}_{span.lower()}.dxf"
            holes = middle_web_holes(first_y, last_y) if key == "M" else []
            write_panel(geometry / name, web_outline(u, first_y, last_y), holes)
            across = (station(u, last_y) - station(u, first_y), last_y - first_y, 0.0)
            length = (across[0] ** 2 + across[1] ** 2) ** 0.5
            rows.append(
                {
                    "part": f"WEB.{key}.{span}-R",
                    "title": f"{where} web, {'in' if span == 'IN' else 'out'}board",
                    "class": "web",
                    "assembly": "webs",
                    "form": "panel",
                    "made_of": "PANEL 10",
                    "geometry": f"geometry/{name}#CUT",
                    "origin [m]": numbers(station(u, first_y), first_y, inside_origin(ROOT_Y)),
                    "across": numbers(*(value / length for value in across)),
                    "up_axis": "0 0 1",
                }
            )
    return rows


def middle_web_holes(first_y: float, last_y: float) -> list[tuple[float, float, float]]:
    """The same holes in the web's own X and Y."""
    holes = [hole for bay in range(len(TANK_RIBS) - 1) for hole in middle_web_points(bay)]
    base_z = inside_origin(ROOT_Y)
    return [(y - first_y, z - base_z, diameter) for _, (_, y, z), diameter in holes if first_y < y < last_y]


def skin_rows(geometry: Path) -> list[Row]:
    """Upper and lower skin, the nose, and the paint on them."""
    ys = spread(ROOT_Y, TIP_Y, 8)
    us = [0.08 + 0.90 * step / 18 for step in range(19)]
    for name, side in (("upper", 1), ("lower", -1)):
        write_obj(geometry / f"skin_{name}.obj", *skin_mesh(us, side, ys))
    write_obj(geometry / "skin_nose.obj", *nose_mesh(ys))
    table = (
        ("SKIN.UPR", "upper skin", "skin", "skins", "SKIN 7", "upper"),
        ("SKIN.LWR", "lower skin", "skin", "skins", "SKIN 7", "lower"),
        ("SKIN.LE", "leading edge skin", "skin", "skins", "NOSE 4", "nose"),
        ("FIN.UPR", "paint, upper", "finish", "finish", "PAINT", "upper"),
        ("FIN.LWR", "paint, lower", "finish", "finish", "PAINT", "lower"),
    )
    return [
        {
            "part": f"{part}-R",
            "title": title,
            "class": part_class,
            "assembly": assembly,
            "form": "skin",
            "made_of": laminate,
            "geometry": f"geometry/skin_{name}.obj",
        }
        for part, title, part_class, assembly, laminate, name in table
    ]


def run_rows(geometry: Path) -> list[Row]:
    """Caps along the middle web, and the bond lines of webs and ribs."""
    ys = spread(ROOT_Y, TIP_Y, 4)
    lines = {
        "cap_upper": [surface(MIDDLE, y, 1) for y in ys],
        "cap_lower": [surface(MIDDLE, y, -1) for y in ys],
        "bond_upper": [surface(FRONT, y, 1) for y in ys] + [surface(REAR, y, 1) for y in reversed(ys)],
        "bond_lower": [surface(FRONT, y, -1) for y in ys] + [surface(REAR, y, -1) for y in reversed(ys)],
        "bond_ribs": rib_bond_line(),
    }
    for name, points in lines.items():
        write_polyline(geometry / f"{name}.obj", points)
    table = (
        ("CAP.UPR", "upper cap, pultruded strip", "cap", "caps", "pultruded strip 30 x 6", "cap_upper"),
        ("CAP.LWR", "lower cap, pultruded strip", "cap", "caps", "pultruded strip 30 x 6", "cap_lower"),
        ("JNT.UPR", "webs to upper skin", "joint", "joints", "bond line 25", "bond_upper"),
        ("JNT.LWR", "webs to lower skin", "joint", "joints", "bond line 25", "bond_lower"),
        ("JNT.RIB", "ribs to lower skin", "joint", "joints", "bond line 25", "bond_ribs"),
    )
    return [
        {
            "part": f"{part}-R",
            "title": title,
            "class": part_class,
            "assembly": assembly,
            "form": "run",
            "made_of": material,
            "geometry": f"geometry/{name}.obj",
        }
        for part, title, part_class, assembly, material, name in table
    ]


def rib_bond_line() -> list[Point]:
    """Up and down the chord along every rib, one line."""
    points: list[Point] = []
    for index, y in enumerate(TANK_RIBS + DRY_RIBS):
        us = (FRONT, REAR) if index % 2 == 0 else (REAR, FRONT)
        points += [surface(u, y, -1) for u in us]
    return points


def solid_rows(geometry: Path) -> list[Row]:
    """The foam tip block and the main fitting."""
    write_obj(geometry / "tip_block.obj", *tip_mesh())
    corner = (station(MIDDLE, ROOT_Y) + 0.006, ROOT_Y - 0.090, ROOT_Z_OF_FITTING)
    write_obj(geometry / "main_fitting.obj", *box_mesh(corner, (0.012, 0.150, 0.045)))
    return [
        {
            "part": "CLO.TIP-R",
            "title": "tip block",
            "class": "closeout",
            "assembly": "closeouts",
            "form": "solid",
            "made_of": "block foam 80",
            "geometry": "geometry/tip_block.obj",
        },
        {
            "part": "FIT.MAIN-R",
            "title": "main spar fitting",
            "class": "fitting",
            "assembly": "fittings",
            "form": "solid",
            "made_of": "plate alloy",
            "geometry": "geometry/main_fitting.obj",
        },
    ]


ROOT_Z_OF_FITTING = -0.130


def item_rows() -> list[Row]:
    """Bought fittings: a place and a mass from the supplier's sheet."""
    low, outboard = TANK_RIBS[0] + 0.05, TANK_RIBS[-1] - 0.06
    table = (
        ("FIT.REAR", "rear spar pin", 1, 148.0, surface(REAR, ROOT_Y, 1)),
        ("FIT.OUTLET", "outlet with strainer", 1, 62.0, surface(0.50, low, -1)),
        ("FIT.FILLER", "filler neck and cap", 1, 118.0, surface(0.36, outboard, 1)),
        ("FIT.VENT", "vent line", 1, 41.0, surface(0.34, outboard, 1)),
        ("FIT.HINGE", "aileron hinge", 3, 36.0, surface(0.78, 3.60, 1)),
    )
    return [
        {
            "part": f"{part}-R",
            "title": title,
            "class": "fitting",
            "assembly": "fittings",
            "form": "item",
            "origin [m]": numbers(*place),
            "quantity": str(quantity),
            "planned_mass [g]": f"{mass_g:g}",
        }
        for part, title, quantity, mass_g, place in table
    ]


PLANNED_G = {"SKIN.UPR-R": 4560.0, "SKIN.LWR-R": 4530.0, "RIB.F1-R": 27.5, "WEB.M.IN-R": 268.0}


def both_sides(rows: Iterable[Row]) -> list[Row]:
    """Every right part and its left mirror."""
    whole = []
    for row in rows:
        right = {**row, "side": "R", "assembly": f"WING/RIGHT/{row['assembly']}"}
        if row.get("geometry"):
            right["geometry_unit"] = "mm"
        elif row["form"] == "item":
            right["geometry_unit"] = "m"
        if row["part"] in PLANNED_G:
            right["planned_mass [g]"] = f"{PLANNED_G[row['part']]:g}"
        left = {
            key: value
            for key, value in right.items()
            if key not in ("geometry", "geometry_unit", "origin [m]", "across", "up_axis")
        }
        left |= {
            "part": row["part"].removesuffix("-R") + "-L",
            "side": "L",
            "assembly": f"WING/LEFT/{row['assembly']}",
            "mirror_of": row["part"],
        }
        whole += [left, right]
    return whole


PLAN = """format = "plan-1"
name = "r2"
title = "Invented two-seat aeroplane: second web moved 40 mm aft"
display = "metric"

[fuel]
grade = "avgas"
density_15C = "715 kg/m3"
"""

ATTITUDES = (
    ("ground", 3.0, 0.0, "fill = true\nflight = false"),
    ("cruise", 1.5, 0.0, ""),
    ("best climb", 14.0, 0.0, ""),
    ("descent", -3.0, 0.0, ""),
    ("slip left wing down", 1.0, -1.5, ""),
    ("slip right wing down", 1.0, 1.5, ""),
    ("take-off run", 3.0, 0.0, "ax_g = 0.12"),
)

TOLERANCES = """[tolerance]
rib = "8 %"
web = "6 %"
skin = "5 %"
fitting = "3 %"

[growth]
rib = "2 %"
web = "2 %"
skin = "3 %"
"""

MATERIALS = (
    "material,kind,areal_mass [g/m2],density [kg/m3],thickness [mm],linear_mass [g/m],resin_uptake [g/m2],"
    "fibre_density [kg/m3],ratio,ratio_tolerance [%],pot_life [min],lot_spread [%]",
    "carbon twill 200,fabric,200,,,,,1770,,,,3",
    "glass plain 80,fabric,80,,,,,2540,,,,3",
    "lam resin,resin,,1150,,,,,100:27,4,25,",
    "lam hardener,hardener,,980,,,,,,,,",
    "bond base,paste,,1150,,,,,100:44,5,40,",
    "bond hardener,hardener,,1020,,,,,,,,",
    "foam 75 x 3,core,,75,3,,90,,,,,10",
    "foam 75 x 6,core,,75,6,,90,,,,,10",
    "foam 75 x 10,core,,75,10,,90,,,,,10",
    "block foam 80,solid,,80,,,,,,,,12",
    "plate alloy,solid,,2700,,,,,,,,",
    "pultruded strip 30 x 6,solid,,,,288,,,,,,2",
    "bond line 25,paste,,,,34,,,,,,15",
    "paint two-part,finish,150,,,,,,,,,15",
    "tank sealant,sealant,,1550,,,,,100:10,5,120,10",
    "sealant hardener,hardener,,1400,,,,,,,,",
    "peel ply 85,process,85,,,,,,,,,",
)

LAMINATES = (
    "laminate,areal_mass [g/m2],step,material,orientation [deg],coverage [%],resin_fraction [%]",
    "PANEL 6,,1,carbon twill 200,0,100,42",
    "PANEL 6,,2,foam 75 x 6,,100,",
    "PANEL 6,,3,carbon twill 200,0,100,42",
    "PANEL 10,,1,carbon twill 200,45,100,42",
    "PANEL 10,,2,foam 75 x 10,,100,",
    "PANEL 10,,3,carbon twill 200,45,100,42",
    "SKIN 7,,1,glass plain 80,0,100,50",
    "SKIN 7,,2,carbon twill 200,45,100,48",
    "SKIN 7,,3,carbon twill 200,45,100,48",
    "SKIN 7,,4,foam 75 x 3,,72,",
    "SKIN 7,,5,carbon twill 200,45,100,48",
    "SKIN 7,,6,carbon twill 200,0,30,48",
    "SKIN 7,,7,peel ply 85,,100,",
    "NOSE 4,,1,glass plain 80,0,100,50",
    "NOSE 4,,2,carbon twill 200,45,100,48",
    "NOSE 4,,3,carbon twill 200,0,100,48",
    "NOSE 4,,4,carbon twill 200,45,100,48",
    "PAINT,150,,,,,",
)


def write_tables(folder: Path, rows: list[Row]) -> None:
    """The text files of the plan."""
    attitudes = "\n".join(
        f'[[attitude]]\nname = "{name}"\npitch_deg = {pitch}\nroll_deg = {roll}\n'
        + (f"{more}\n" if more else "")
        for name, pitch, roll, more in ATTITUDES
    )
    (folder / "plan.toml").write_text(f"{PLAN}\n{attitudes}\n{TOLERANCES}")
    (folder / "materials.csv").write_text("\n".join(MATERIALS) + "\n")
    (folder / "laminates.csv").write_text("\n".join(LAMINATES) + "\n")
    (folder / "tanks.toml").write_text(tanks_text())
    with (folder / "parts.csv").open("w", newline="") as file:
        writer = csv.DictWriter(file, PART_HEAD, lineterminator="\n", restval="")
        writer.writeheader()
        writer.writerows(rows)


def make_plan(folder: Path) -> None:
    """The whole plan folder."""
    geometry = folder / "geometry"
    geometry.mkdir(parents=True, exist_ok=True)
    rows = [
        *rib_rows(geometry),
        *web_rows(geometry),
        *skin_rows(geometry),
        *run_rows(geometry),
        *solid_rows(geometry),
        *item_rows(),
    ]
    for side, mirrored in (("L", True), ("R", False)):
        for bay in range(len(TANK_RIBS) - 1):
            for row in "FA":
                mesh = cell_mesh(row, bay)
                write_obj(geometry / f"{cell_name(side, row, bay)}.obj", *mesh, mirrored=mirrored)
    write_tables(folder, both_sides(rows))


if __name__ == "__main__":
    make_plan(Path(sys.argv[1]) if len(sys.argv) > 1 else Path(__file__).parent / "plan")
