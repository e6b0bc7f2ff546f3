"""Surfaces, solids, cells and runs as OBJ files in millimetres."""

from __future__ import annotations

from collections.abc import Iterable, Iterator

from ledger.exchange.figure_texts import millimetres
from ledger.loft.lofted import Floats, Mesh


def mesh_file(mesh: Mesh, *, mirrored: bool = False, turned_over: bool = False) -> bytes:
    """A mesh with its corners and triangles in their order.

    mirrored : seen in the plane y = 0, its triangles turned so that they still look outward.
    turned_over : its triangles look to the other side.
    """
    backwards = mirrored != turned_over
    lines = list(_corner_lines(mesh.vertices_m, mirrored))
    for face in mesh.faces.tolist():
        a, b, c = reversed(face) if backwards else face
        lines.append(f"f {a + 1} {b + 1} {c + 1}")
    return _bytes(lines)


def run_file(lines_m: Iterable[Floats]) -> bytes:
    """Several lines (k, 3), metres, as one run; a line of one point has no length and is left out."""
    corners: list[str] = []
    lines: list[str] = []
    for line in lines_m:
        if len(line) < 2:
            continue
        begin = len(corners) + 1
        corners.extend(_corner_lines(line, False))
        lines.append("l " + " ".join(str(at) for at in range(begin, len(corners) + 1)))
    return _bytes(corners + lines)


def _corner_lines(vertices_m: Floats, mirrored: bool) -> Iterator[str]:
    for x, y, z in vertices_m.tolist():
        yield f"v {millimetres(x)} {millimetres(-y if mirrored else y)} {millimetres(z)}"


def _bytes(lines: list[str]) -> bytes:
    return ("\n".join(lines) + "\n").encode("ascii")
