"""3MF files: a zip archive with a model in XML, objects, components and a unit of its own."""

from __future__ import annotations

import io
import zipfile
import zlib
from typing import Any

import numpy as np

from ledger.exchange.mesh_files import Floats, Indices, MeshFile, MeshFileRefused, MeshObject

_UNITS = {
    "micron": "um",
    "millimeter": "mm",
    "centimeter": "cm",
    "inch": "in",
    "foot": "ft",
    "meter": "m",
}
_MOST_BYTES = 512 * 1024 * 1024
_DEEPEST = 16


def read_3mf(content: bytes) -> MeshFile:
    """The objects that the build places, else every object, each with its components in place.

    Raises
        MeshFileRefused: not an archive with a model, broken, or too big to unpack.
    """
    root = _model(content)
    unit = _UNITS.get(root.get("unit", "millimeter"))
    if unit is None:
        raise _broken(f"the unit {root.get('unit')!r} is none of the format's")
    try:
        return MeshFile(objects=_objects(root), unit=unit)
    except (ValueError, TypeError, KeyError, IndexError) as error:
        raise _broken(f"the model cannot be read ({error})") from None


def _model(content: bytes) -> Any:
    from lxml import etree

    try:
        with zipfile.ZipFile(io.BytesIO(content)) as archive:
            name = next(
                (each for each in archive.namelist() if each.lower().endswith(".model")), "3D/3dmodel.model"
            )
            if archive.getinfo(name).file_size > _MOST_BYTES:
                raise _broken(f"the model unpacks to more than {_MOST_BYTES // 1024**2} MB")
            xml = archive.read(name)
    except (zipfile.BadZipFile, KeyError, OSError, EOFError, RuntimeError, zlib.error) as error:
        raise _broken(f"the archive cannot be opened ({error})") from None
    # Entities could read other files or swell without bound.
    parser = etree.XMLParser(resolve_entities=False, no_network=True, load_dtd=False, huge_tree=True)
    try:
        return etree.fromstring(xml, parser)
    except etree.XMLSyntaxError as error:
        raise _broken(f"the model is no XML ({error})") from None


def _broken(what: str) -> MeshFileRefused:
    return MeshFileRefused("mesh-broken", what, "export the mesh again")


def _objects(root: Any) -> tuple[MeshObject, ...]:
    resources = {each.get("id"): each for each in root.findall("{*}resources/{*}object")}
    items = root.findall("{*}build/{*}item")
    placed = [(item.get("objectid"), _matrix(item.get("transform"))) for item in items]
    if not placed:
        placed = [(number, np.eye(4)) for number in resources]
    return tuple(_object(resources, number, matrix) for number, matrix in placed)


def _object(resources: dict[str, Any], number: str, matrix: Floats) -> MeshObject:
    element = resources[number]
    parts = _meshes(resources, number, matrix, 0)
    shifts = np.cumsum([0, *(len(vertices) for vertices, _ in parts)])
    vertices = np.concatenate([vertices for vertices, _ in parts])
    faces = np.concatenate([faces + shift for (_, faces), shift in zip(parts, shifts, strict=False)])
    if np.linalg.det(matrix[:3, :3]) < 0:
        faces = faces[:, ::-1]
    name = element.get("name") or element.get("partnumber") or number
    other = tuple(word for word in (element.get("partnumber"), number) if word and word != name)
    return MeshObject(name=name, vertices=vertices, faces=faces, also_named=other)


def _meshes(
    resources: dict[str, Any], number: str, matrix: Floats, depth: int
) -> list[tuple[Floats, Indices]]:
    if depth > _DEEPEST:
        raise ValueError("components are nested without end")
    element = resources[number]
    found: list[tuple[Floats, Indices]] = []
    mesh = element.find("{*}mesh")
    if mesh is not None:
        found.append(_mesh(mesh, matrix))
    for component in element.findall("{*}components/{*}component"):
        inner = _matrix(component.get("transform"))
        each = _meshes(resources, component.get("objectid"), inner @ matrix, depth + 1)
        if np.linalg.det(inner[:3, :3]) < 0:
            each = [(vertices, faces[:, ::-1]) for vertices, faces in each]
        found.extend(each)
    if not found:
        raise ValueError(f"object {number} has no mesh")
    return found


def _mesh(mesh: Any, matrix: Floats) -> tuple[Floats, Indices]:
    corners = [
        (float(each.get("x")), float(each.get("y")), float(each.get("z")))
        for each in mesh.iterfind("{*}vertices/{*}vertex")
    ]
    faces = [
        (int(each.get("v1")), int(each.get("v2")), int(each.get("v3")))
        for each in mesh.iterfind("{*}triangles/{*}triangle")
    ]
    vertices = np.array(corners, dtype=np.float64).reshape(-1, 3)
    # Points are rows here, as in the format, so the matrix stands on their right.
    placed = vertices @ matrix[:3, :3] + matrix[3, :3]
    return placed, np.array(faces, dtype=np.intp).reshape(-1, 3)


def _matrix(text: str | None) -> Floats:
    matrix = np.eye(4)
    if text:
        numbers = [float(word) for word in text.split()]
        matrix[:, :3] = np.array(numbers, dtype=np.float64).reshape(4, 3)
    return matrix
