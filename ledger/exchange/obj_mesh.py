"""OBJ files: corners, faces of any number of sides, polylines, objects and groups."""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np

from ledger.exchange.mesh_files import Floats, MeshFile, MeshFileRefused, MeshObject, compact, triangles_of


@dataclass(slots=True)
class _Gathered:
    """One object as its lines come."""

    name: str
    group: str
    faces: list[list[int]] = field(default_factory=list)
    face_rows: list[int] = field(default_factory=list)
    lines: list[list[int]] = field(default_factory=list)


def read_obj(content: bytes) -> MeshFile:
    """Objects by `o`; in a file without any, by `g`.

    Raises
        MeshFileRefused: a line that cannot be read, or an index without a corner; the row is named.
    """
    text = content.decode("utf-8-sig", errors="replace").replace("\\\n", " ").replace("\\\r\n", " ")
    corners: list[tuple[float, float, float]] = []
    gathered = [_Gathered(name="", group="")]
    for row, line in enumerate(text.splitlines(), start=1):
        words = line.split()
        if not words:
            continue
        try:
            match words[0]:
                case "v":
                    corners.append((float(words[1]), float(words[2]), float(words[3])))
                case "f":
                    gathered[-1].faces.append(_indices(words[1:], len(corners), least=3))
                    gathered[-1].face_rows.append(row)
                case "l":
                    gathered[-1].lines.append(_indices(words[1:], len(corners), least=2))
                case "o":
                    gathered.append(
                        _Gathered(name=line.split(None, 1)[1].strip() if words[1:] else "", group="")
                    )
                case "g":
                    gathered.append(_Gathered(name=gathered[-1].name, group=" ".join(words[1:])))
                case _:
                    continue
        except (ValueError, IndexError) as error:
            told = (
                str(error)
                if isinstance(error, _WrongIndex)
                else f"the line {line.strip()[:40]!r} cannot be read"
            )
            raise MeshFileRefused("mesh-broken", told, "export the mesh again", row) from None
    vertices = np.array(corners, dtype=np.float64).reshape(-1, 3)
    return MeshFile(objects=_objects(gathered, vertices))


class _WrongIndex(ValueError):
    """A face that names no corner."""


def _indices(words: list[str], count: int, *, least: int) -> list[int]:
    if len(words) < least:
        raise _WrongIndex(f"a face or line has only {len(words)} corner{'' if len(words) == 1 else 's'}")
    found = []
    for word in words:
        index = int(word.split("/", 1)[0])
        # A negative index counts back from the last corner so far.
        at = index - 1 if index > 0 else count + index
        if index == 0 or not 0 <= at < count:
            raise _WrongIndex(f"corner {index} does not exist ({count} so far)")
        found.append(at)
    return found


def _objects(gathered: list[_Gathered], vertices: Floats) -> tuple[MeshObject, ...]:
    by_group = not any(each.name for each in gathered)
    names: dict[str, list[_Gathered]] = {}
    for each in gathered:
        if each.faces or each.lines:
            names.setdefault(each.group if by_group else each.name, []).append(each)
    return tuple(_object(name, parts, vertices) for name, parts in names.items())


def _object(name: str, parts: list[_Gathered], vertices: Floats) -> MeshObject:
    triangles: list[tuple[int, int, int]] = []
    for part in parts:
        for polygon, row in zip(part.faces, part.face_rows, strict=True):
            try:
                triangles.extend(_cut(vertices, polygon))
            except MeshFileRefused as refused:
                raise MeshFileRefused(refused.code, refused.what, refused.do, row) from None
    lines = tuple(np.array(line, dtype=np.intp) for part in parts for line in part.lines)
    return compact(name, vertices, np.array(triangles, dtype=np.intp).reshape(-1, 3), lines)


def _cut(vertices: Floats, polygon: list[int]) -> list[tuple[int, int, int]]:
    if len(polygon) == 3:
        return [(polygon[0], polygon[1], polygon[2])]
    if len(polygon) == 4 and _is_convex_quad(vertices, polygon):
        a, b, c, d = polygon
        return [(a, b, c), (a, c, d)]
    return triangles_of(vertices, polygon)


def _is_convex_quad(vertices: Floats, polygon: list[int]) -> bool:
    # Plain floats: a file of quads asks this some ten thousand times, and arrays of four are slow.
    (ax, ay, az), (bx, by, bz), (cx, cy, cz), (dx, dy, dz) = vertices[polygon].tolist()
    ux, uy, uz = bx - ax, by - ay, bz - az
    vx, vy, vz = cx - ax, cy - ay, cz - az
    wx, wy, wz = dx - ax, dy - ay, dz - az
    first = (uy * vz - uz * vy, uz * vx - ux * vz, ux * vy - uy * vx)
    second = (vy * wz - vz * wy, vz * wx - vx * wz, vx * wy - vy * wx)
    return bool(first[0] * second[0] + first[1] * second[1] + first[2] * second[2] >= 0.0)
