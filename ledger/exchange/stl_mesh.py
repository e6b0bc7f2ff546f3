"""STL files, as text and as bytes."""

from __future__ import annotations

import re

import numpy as np

from ledger.exchange.mesh_files import MeshFile, MeshFileRefused, MeshObject

_HEAD = 84
_FACET = np.dtype([("normal", "<f4", 3), ("corners", "<f4", (3, 3)), ("more", "<u2")])
_SOLID = re.compile(r"^[ \t]*solid\b[ \t]*(.*?)[ \t]*$", re.MULTILINE | re.IGNORECASE)


def read_stl(content: bytes) -> MeshFile:
    """The solids of an STL file; the corners of its triangles are loose.

    Raises
        MeshFileRefused: cut short or not STL.
    """
    if len(content) >= _HEAD:
        count = int.from_bytes(content[80:84], "little")
        # A file of bytes may begin with `solid` too, so its length decides.
        if len(content) == _HEAD + _FACET.itemsize * count:
            return _read_bytes(content, count)
    if content.lstrip()[:5].lower() == b"solid" and b"facet" in content[:4096].lower():
        return _read_text(content.decode("utf-8", errors="replace"))
    raise MeshFileRefused(
        "mesh-broken", "the STL file is cut short or is something else", "export the mesh again"
    )


def _read_bytes(content: bytes, count: int) -> MeshFile:
    facets = np.frombuffer(content, dtype=_FACET, count=count, offset=_HEAD)
    vertices = facets["corners"].astype(np.float64).reshape(-1, 3)
    faces = np.arange(len(vertices), dtype=np.intp).reshape(-1, 3)
    return MeshFile(objects=(MeshObject(name="", vertices=vertices, faces=faces),))


def _read_text(text: str) -> MeshFile:
    starts = list(_SOLID.finditer(text))
    objects = []
    for at, start in enumerate(starts):
        end = starts[at + 1].start() if at + 1 < len(starts) else len(text)
        objects.append(_solid(start.group(1), text, start.end(), end))
    if not re.search(r"endsolid[^\n]*\s*$", text, re.IGNORECASE):
        raise MeshFileRefused("mesh-broken", "the STL file is cut short", "export the mesh again")
    return MeshFile(objects=tuple(objects))


def _solid(name: str, text: str, begin: int, end: int) -> MeshObject:
    words = text[begin:end].lower().split()
    corners: list[float] = []
    for at, word in enumerate(words):
        if word != "vertex":
            continue
        try:
            x, y, z = (float(number) for number in words[at + 1 : at + 4])
        except ValueError:
            row = text.count("\n", 0, begin) + 1
            raise MeshFileRefused(
                "mesh-broken",
                f"a corner of solid {name!r} cannot be read",
                "export the mesh again",
                row,
            ) from None
        corners += [x, y, z]
    vertices = np.array(corners, dtype=np.float64).reshape(-1, 3)
    if len(vertices) % 3 or words.count("endfacet") != len(vertices) // 3:
        raise MeshFileRefused(
            "mesh-broken", f"solid {name!r} has a facet without three corners", "export the mesh again"
        )
    faces = np.arange(len(vertices), dtype=np.intp).reshape(-1, 3)
    return MeshObject(name=name, vertices=vertices, faces=faces)
