"""What is computed of a geometry file, its name whatever file holds it, and the bytes it is kept as."""

from __future__ import annotations

import hashlib
import json
from collections.abc import Iterable
from dataclasses import dataclass
from typing import TYPE_CHECKING

from ledger.errors import Severity
from ledger.model.vectors import Vector

if TYPE_CHECKING:
    from ledger.exchange.mesh_files import MeshObject
    from ledger.geometry.closed_cell import ClosedCell
    from ledger.geometry.curves import Curve


@dataclass(frozen=True, slots=True, kw_only=True)
class Remark:
    """Something about a file that is worth telling wherever it is used."""

    code: str
    severity: Severity
    what: str
    do: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Figures:
    """What was computed of one geometry, in its own axes and metres.

    `centroid` and `second` have two or three axes; `second` is about the centroid, measure times m2.
    `unit` is the one that counted and `digest` names the geometry whatever file holds it.
    """

    measure: float
    centroid: tuple[float, ...]
    second: tuple[tuple[float, ...], ...]
    unit: str
    digest: str
    remarks: tuple[Remark, ...] = ()


def curves_digest(curves: Iterable[Curve]) -> str:
    """A name for an outline, whatever file, order and direction it was drawn in."""
    # To 10 nm, so that a drawing saved again by another program is still the same outline.
    told = sorted(str(_corners_of(curve)) for curve in curves)
    return hashlib.sha256("\n".join(told).encode()).hexdigest()


def _corners_of(curve: Curve) -> list[tuple[float, float]]:
    from ledger.geometry.curves import Spline

    if isinstance(curve, Spline):
        points = curve.control_points
    else:
        points = curve.points(1e3)
    rounded = [(_rounded(x), _rounded(y)) for x, y in points]
    return min(rounded, rounded[::-1])


def _rounded(value: float) -> float:
    return round(value, 8) + 0.0


def mesh_digest(mesh: MeshObject, scale: float) -> str:
    """A name for a surface or run in metres, whatever else its file holds."""
    whole = hashlib.sha256((mesh.vertices * scale).round(9).tobytes())
    whole.update(mesh.faces.tobytes())
    for line in mesh.lines:
        whole.update(line.tobytes())
    return whole.hexdigest()


def figures_bytes(figures: Figures) -> bytes:
    """Figures as they are kept."""
    plain = {
        "measure": figures.measure,
        "centroid": figures.centroid,
        "second": figures.second,
        "unit": figures.unit,
        "digest": figures.digest,
        "remarks": [
            [remark.code, remark.severity.value, remark.what, remark.do] for remark in figures.remarks
        ],
    }
    return json.dumps(plain).encode()


def figures_from(kept: bytes) -> Figures:
    """Figures that `figures_bytes` made."""
    plain = json.loads(kept)
    return Figures(
        measure=plain["measure"],
        centroid=tuple(plain["centroid"]),
        second=tuple(tuple(row) for row in plain["second"]),
        unit=plain["unit"],
        digest=plain["digest"],
        remarks=tuple(
            Remark(code=code, severity=Severity(severity), what=what, do=do)
            for code, severity, what, do in plain["remarks"]
        ),
    )


def cell_bytes(cell: ClosedCell) -> bytes:
    """A proved cell as it is kept: a line of JSON, then its arrays."""
    head = {
        "digest": cell.digest,
        "volume_m3": cell.volume_m3,
        "centroid_m": cell.centroid_m,
        "vertices": len(cell.vertices_m),
        "faces": len(cell.faces),
    }
    arrays = cell.vertices_m.astype("<f8").tobytes() + cell.faces.astype("<i8").tobytes()
    return json.dumps(head).encode() + b"\n" + arrays


def cell_head(kept: bytes) -> tuple[str, float]:
    """Digest and volume (m3) of a cell that `cell_bytes` made, without its arrays."""
    head = json.loads(kept[: kept.index(b"\n")])
    return str(head["digest"]), float(head["volume_m3"])


def cell_place(kept: bytes) -> Vector:
    """The centroid (m) of a cell that `cell_bytes` made, without its arrays."""
    x, y, z = json.loads(kept[: kept.index(b"\n")])["centroid_m"]
    return (float(x), float(y), float(z))


def cell_from(kept: bytes) -> ClosedCell:
    """The cell that `cell_bytes` made, not proved again."""
    import numpy as np

    from ledger.geometry.closed_cell import ClosedCell

    begin = kept.index(b"\n") + 1
    head = json.loads(kept[:begin])
    vertices = np.frombuffer(kept, dtype="<f8", count=3 * head["vertices"], offset=begin)
    faces = np.frombuffer(kept, dtype="<i8", count=3 * head["faces"], offset=begin + vertices.nbytes)
    return ClosedCell.from_proved(vertices.reshape(-1, 3), faces.reshape(-1, 3))
