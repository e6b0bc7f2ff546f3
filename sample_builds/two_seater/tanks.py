"""The sample's tanks.toml, and the holes that panels and openings share."""

from __future__ import annotations

from draw import MM, inside, rib_hole, row_ends
from wing import MIDDLE, TANK_RIBS, Point, station

DRAIN_MM, VENT_MM = 16.0, 8.0
PASTE_M = 0.003
FRONT_OF_BAY, BACK_OF_BAY = 0.08, 0.93
# The hole at the back of this rib was left out of the drawing: the planted fault of the sample.
NO_BACK_HOLE = 2


def bay_holes(row: str, index: int) -> list[tuple[str, Point, float]]:
    """Name, centre and diameter of each hole through one wet rib of a row."""
    y = TANK_RIBS[index]
    holes = [
        (
            "drain",
            rib_hole(row, y, share=FRONT_OF_BAY, side=-1, diameter_mm=DRAIN_MM, clear_m=PASTE_M),
            DRAIN_MM,
        ),
        (
            "vent",
            rib_hole(
                row, y, share=0.90 if row == "F" else 0.10, side=1, diameter_mm=VENT_MM, clear_m=PASTE_M
            ),
            VENT_MM,
        ),
    ]
    if not (row == "A" and index == NO_BACK_HOLE):
        holes.append(
            (
                "back drain",
                rib_hole(row, y, share=BACK_OF_BAY, side=-1, diameter_mm=DRAIN_MM, clear_m=PASTE_M),
                DRAIN_MM,
            )
        )
    return holes


def middle_web_points(bay: int) -> list[tuple[str, Point, float]]:
    """The holes that join the front and the rear bay of one pair."""
    inboard, outboard = TANK_RIBS[bay] + 0.040, TANK_RIBS[bay + 1] - 0.040
    low = inside(station(MIDDLE, inboard), inboard, -1) + DRAIN_MM / MM / 2 + PASTE_M
    high = inside(station(MIDDLE, outboard), outboard, 1) - VENT_MM / MM / 2 - PASTE_M
    return [
        ("web drain", (station(MIDDLE, inboard), inboard, low), DRAIN_MM),
        ("web vent", (station(MIDDLE, outboard), outboard, high), VENT_MM),
    ]


def cell_name(side: str, row: str, bay: int) -> str:
    """Odd cells in front, even behind, counted from the root: L1, L2, L3 …"""
    return f"{side}{2 * bay + (1 if row == 'F' else 2)}"


def opening_text(name: str, between: tuple[str, str], lines: list[str]) -> str:
    """One [[opening]] table."""
    head = ["[[opening]]", f'name = "{name}"', f'between = ["{between[0]}", "{between[1]}"]']
    return "\n".join(head + lines) + "\n"


def circle_lines(
    centre: Point, diameter_mm: float, normal: str, depth_mm: float | None, sign: int
) -> list[str]:
    """A round hole in millimetres, mirrored where sign is -1."""
    x, y, z = centre
    lines = [
        'shape = "circle"',
        f"centre = [{x * MM:.3f}, {sign * y * MM:.3f}, {z * MM:.3f}]",
        f"diameter = {diameter_mm}",
        f"normal = {normal}",
    ]
    return lines + ([f"depth = {depth_mm}"] if depth_mm is not None else [])


def side_text(side: str, sign: int) -> list[str]:
    """Cells and openings of one wing."""
    bays = range(len(TANK_RIBS) - 1)
    word = "left" if side == "L" else "right"
    parts = [
        f'[[cell]]\nname = "{cell_name(side, row, bay)}"\nmesh = "geometry/{cell_name(side, row, bay)}.obj"\n'
        f'sealant = "0.4 mm"\nsealant_material = "tank sealant"\n'
        for bay in bays
        for row in "FA"
    ]
    for bay in bays:
        pair = (cell_name(side, "F", bay), cell_name(side, "A", bay))
        for kind, centre, diameter in middle_web_points(bay):
            name = f"{kind} {pair[0]}-{pair[1]}"
            parts.append(opening_text(name, pair, circle_lines(centre, diameter, "[1, 0, 0]", 10.6, sign)))
    for row in "FA":
        for index in range(1, len(TANK_RIBS) - 1):
            pair = (cell_name(side, row, index - 1), cell_name(side, row, index))
            for kind, centre, diameter in bay_holes(row, index):
                name = f"{kind} {pair[0]}-{pair[1]}"
                parts.append(opening_text(name, pair, circle_lines(centre, diameter, "[0, 1, 0]", 6.6, sign)))
    return parts + outside_text(side, word, sign)


def outside_text(side: str, word: str, sign: int) -> list[str]:
    """Outlet, drain, filler and vent of one wing."""
    root, tip = cell_name(side, "A", 0), cell_name(side, "F", len(TANK_RIBS) - 2)
    low_y, high_y = TANK_RIBS[0] + 0.030, TANK_RIBS[-1] - 0.300
    first, last = row_ends("A", low_y)
    outlet_x = first + 0.50 * (last - first)
    outlet = (outlet_x, low_y, inside(outlet_x, low_y, -1) + 0.008)
    sump = (outlet_x - 0.02, low_y, inside(outlet_x - 0.02, low_y, -1) + 0.001)
    end = row_ends("F", high_y)
    neck_x = end[0] + 0.60 * (end[1] - end[0])
    neck = (neck_x, high_y, inside(neck_x, high_y, 1) - 0.016)
    vent_y = TANK_RIBS[-1] - 0.020
    vent = [
        (neck_x, vent_y, inside(neck_x, vent_y, 1) - 0.004),
        (neck_x, vent_y + 0.10, inside(neck_x, vent_y + 0.10, 1) + 0.010),
    ]
    points = ", ".join(f"[{x * MM:.3f}, {sign * y * MM:.3f}, {z * MM:.3f}]" for x, y, z in vent)
    return [
        opening_text(f"outlet {word}", (root, "outlet"), circle_lines(outlet, 12.0, "[1, 0, 0]", None, sign)),
        opening_text(f"sump drain {word}", (root, "drain"), circle_lines(sump, 6.0, "[0, 0, 1]", None, sign)),
        opening_text(f"filler {word}", (tip, "filler"), circle_lines(neck, 40.0, "[0, 0, 1]", None, sign)),
        opening_text(f"vent {word}", (tip, "vent"), ['shape = "pipe"', f"points = [{points}]", "bore = 6.0"]),
    ]


def tanks_text() -> str:
    """tanks.toml."""
    count = 2 * (len(TANK_RIBS) - 1)
    parts = ['length_unit = "mm"\n']
    for word, side in (("left", "L"), ("right", "R")):
        cells = ", ".join(f'"{side}{number}"' for number in range(1, count + 1))
        parts.append(f'[[tank]]\nname = "{word}"\ncells = [{cells}]\nexpansion_percent = 2.0\n')
    parts += side_text("L", -1) + side_text("R", 1)
    parts.append('[[feed]]\nname = "engine"\noutlets = ["outlet left", "outlet right"]\njoin = "select"\n')
    return "\n".join(parts)
