"""Mesh files read into their objects: OBJ, STL, PLY and 3MF, told apart by the ending of the path."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ledger.errors import Unplaced

Floats = NDArray[np.float64]
Indices = NDArray[np.intp]

MESH_ENDINGS = (".obj", ".stl", ".ply", ".3mf")
_NAMED = 8


class MeshFileRefused(Unplaced):
    """A mesh file that cannot be read. `row` is the line of a text file where that is known."""

    def __init__(self, code: str, what: str, do: str, row: int | None = None) -> None:
        super().__init__(code, what, do)
        self.row = row


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class MeshObject:
    """One object of a mesh file.

    vertices : (n, 3) float, in the file's unit
    faces : (m, 3) int, triangles
    lines : each (k,) int, the corners of a polyline in order
    """

    name: str
    vertices: Floats
    faces: Indices
    lines: tuple[Indices, ...] = ()
    also_named: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class MeshFile:
    """The objects of a file and the unit it says, None where its format has none."""

    objects: tuple[MeshObject, ...]
    unit: str | None = None


def read_mesh_file(path: str, content: bytes) -> MeshFile:
    """Every object of a mesh file.

    Raises
        MeshFileRefused: not a format that is read, or broken.
    """
    ending = path[path.rfind(".") :].lower() if "." in path else ""
    if not content.strip():
        raise MeshFileRefused("mesh-empty", "the file is empty", "export it again")
    if ending == ".obj":
        from ledger.exchange.obj_mesh import read_obj

        return read_obj(content)
    if ending == ".stl":
        from ledger.exchange.stl_mesh import read_stl

        return read_stl(content)
    if ending == ".ply":
        return _read_ply(content)
    if ending == ".3mf":
        from ledger.exchange.threemf_mesh import read_3mf

        return read_3mf(content)
    raise MeshFileRefused(
        "geometry-kind", f"{ending or path!r} is not a mesh that is read", "export it as OBJ, STL, PLY or 3MF"
    )


def pick_object(mesh: MeshFile, picked: str | None, *, lines: bool = False) -> MeshObject:
    """The object of a name, or the only one; with `lines`, of those that have polylines.

    Raises
        MeshFileRefused: none of that name, or several and none picked.
    """
    having = [each for each in mesh.objects if (len(each.lines) if lines else len(each.faces))]
    what = "polyline" if lines else "face"
    if not having:
        raise MeshFileRefused("mesh-empty", f"the file has no {what}", "export it again")
    if picked is None:
        if len(having) == 1:
            return having[0]
        raise MeshFileRefused(
            "object-not-picked",
            f"the file has {len(having)} objects: {_names(having)}",
            f"pick one with #, for example #{having[0].name}",
        )
    found = [each for each in having if picked in (each.name, *each.also_named)]
    if len(found) == 1:
        return found[0]
    if found:
        raise MeshFileRefused(
            "object-not-picked", f"{len(found)} objects are named {picked!r}", "give each its own name"
        )
    raise MeshFileRefused(
        "object-unknown", f"the file has no object {picked!r} with a {what}", f"it has {_names(having)}"
    )


def _names(objects: list[MeshObject]) -> str:
    named = ", ".join(each.name or "one without a name" for each in objects[:_NAMED])
    return named + (f" and {len(objects) - _NAMED} more" if len(objects) > _NAMED else "")


def compact(name: str, vertices: Floats, faces: Indices, lines: tuple[Indices, ...] = ()) -> MeshObject:
    """An object with only the corners that it uses, in their order."""
    used = np.unique(np.concatenate([faces.ravel(), *lines])) if len(faces) or lines else faces.ravel()
    place = np.zeros(len(vertices), dtype=np.intp)
    place[used] = np.arange(len(used))
    return MeshObject(
        name=name,
        vertices=vertices[used],
        faces=place[faces].reshape(-1, 3),
        lines=tuple(place[line] for line in lines),
    )


def triangles_of(corners: Floats, polygon: list[int]) -> list[tuple[int, int, int]]:
    """A flat polygon of a mesh as triangles with its sense; a fan where it is convex, else by ears.

    A quad that is not flat is cut along the diagonal from its first corner, as mesh programs do.
    """
    if len(polygon) == 3:
        return [(polygon[0], polygon[1], polygon[2])]
    points = corners[polygon]
    following = np.roll(points, -1, axis=0)
    normal = np.cross(points, following).sum(axis=0)
    turns = np.cross(points[1:-1] - points[0], points[2:] - points[0]) @ normal
    if (turns >= 0.0).all():
        return [(polygon[0], polygon[i], polygon[i + 1]) for i in range(1, len(polygon) - 1)]
    return _by_ears(points, polygon, normal)


def _by_ears(points: Floats, polygon: list[int], normal: Floats) -> list[tuple[int, int, int]]:
    left = list(range(len(polygon)))
    found: list[tuple[int, int, int]] = []
    while len(left) > 3:
        for at in range(len(left)):
            a, b, c = left[at - 1], left[at], left[(at + 1) % len(left)]
            if _is_ear(points, (a, b, c), [i for i in left if i not in (a, b, c)], normal):
                found.append((polygon[a], polygon[b], polygon[c]))
                del left[at]
                break
        else:
            raise MeshFileRefused(
                "mesh-polygon", "a face crosses itself", "cut it into triangles and export the mesh again"
            )
    found.append((polygon[left[0]], polygon[left[1]], polygon[left[2]]))
    return found


def _is_ear(points: Floats, ear: tuple[int, int, int], others: list[int], normal: Floats) -> bool:
    a, b, c = (points[i] for i in ear)
    if np.cross(b - a, c - b) @ normal <= 0.0:
        return False
    for other in others:
        p = points[other]
        sides = [np.cross(q - o, p - o) @ normal for o, q in ((a, b), (b, c), (c, a))]
        if min(sides) >= 0.0:
            return False
    return True


def _read_ply(content: bytes) -> MeshFile:
    import io

    import trimesh

    if not content.startswith(b"ply"):
        raise MeshFileRefused("mesh-broken", "the file is not PLY", "export it again")
    try:
        mesh = trimesh.load(io.BytesIO(content), file_type="ply", process=False)
        vertices, faces = np.asarray(mesh.vertices, dtype=np.float64), np.asarray(mesh.faces, dtype=np.intp)
    # A broken file makes the library raise whatever its parser happens to trip over.
    except Exception as error:
        raise MeshFileRefused(
            "mesh-broken", f"the PLY file cannot be read ({type(error).__name__})", "export it again"
        ) from None
    return MeshFile(objects=(MeshObject(name="", vertices=vertices, faces=faces.reshape(-1, 3)),))
