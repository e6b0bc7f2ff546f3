"""A whole plan folder out of a layout and what was lofted from it, as bytes by path."""

from __future__ import annotations

from collections.abc import Mapping

from ledger.exchange.figure_texts import with_unit
from ledger.exchange.materials_table import LAMINATES, MATERIALS
from ledger.exchange.plan_toml import PLAN, PlanHead
from ledger.exchange.problems import Problems
from ledger.exchange.toml_lines import TomlValue, toml_keys, toml_table
from ledger.exchange.write_materials import add_beads
from ledger.exchange.write_parts import NewGeometry, parts_table
from ledger.exchange.write_tanks import tanks_file
from ledger.loft.layout import Layout
from ledger.loft.lofted import Lofted
from ledger.model.attitude import Attitude, Seen
from ledger.model.plan import FuelGrade
from ledger.model.progress import Progress, unwatched
from ledger.units import Dimension, Display

FORMAT = "plan-1"
_UNITS = {Display.METRIC: ("kg/m3", "L/h"), Display.US: ("lb/US gal", "US gal/h")}


def plan_files(
    head: PlanHead,
    layout: Layout,
    lofted: Lofted,
    *,
    materials: bytes,
    laminates: bytes,
    problems: Problems,
    progress: Progress = unwatched,
) -> Mapping[str, bytes]:
    """Every file of the plan folder; `progress` is told each drawing and mesh that comes next."""
    with_beads = add_beads(materials, layout, lofted.bonds, problems)
    geometry = NewGeometry()
    files = {PLAN: head_file(head), MATERIALS: with_beads.content, LAMINATES: laminates}
    path, content = parts_table(layout, lofted, with_beads.names, geometry, problems)
    files[path] = content
    if lofted.cells:
        path, content = tanks_file(lofted, mirrored=layout.mirrored, geometry=geometry)
        files[path] = content
    for done, (path, written) in enumerate(geometry.files.items()):
        progress("drawings", done, len(geometry.files))
        files[path] = written()
    return files


def head_file(head: PlanHead) -> bytes:
    """plan.toml."""
    text = [
        toml_keys({"format": FORMAT, "name": head.name, "title": head.title, "display": head.display.value})
    ]
    if head.fuel is not None:
        text.append(toml_table("[fuel]", _fuel(head.fuel, head.display)))
    text += [toml_table("[[attitude]]", _attitude(attitude)) for attitude in head.attitudes]
    for table, shares in (("[tolerance]", head.tolerances), ("[growth]", head.growths)):
        if shares:
            keys = {named.value: with_unit(share, "%", Dimension.FRACTION) for named, share in shares}
            text.append(toml_table(table, keys))
    return "".join(text).encode()


def _fuel(fuel: FuelGrade, display: Display) -> Mapping[str, TomlValue | None]:
    density_unit, flow_unit = _UNITS[display]
    density, flow = fuel.density_15c_kg_m3, fuel.feed_flow_m3_s
    return {
        "grade": fuel.grade,
        "density_15C": None if density is None else with_unit(density, density_unit, Dimension.DENSITY),
        "feed_flow": None if flow is None else with_unit(flow, flow_unit, Dimension.FLOW),
    }


def _attitude(attitude: Attitude) -> Mapping[str, TomlValue | None]:
    pushed = {key: getattr(attitude, key) or None for key in ("ax_g", "ay_g", "az_g")}
    return {
        "name": attitude.name,
        "pitch_deg": attitude.pitch_deg,
        "roll_deg": attitude.roll_deg,
        **pushed,
        "seen": attitude.seen.value if attitude.seen is not Seen.TRUE else None,
        "fill": True if attitude.fill else None,
        "flight": False if not attitude.flight else None,
    }
