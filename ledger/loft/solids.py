"""Solids beside the panels: caps, foam, closeouts beyond the ends, and plain blocks."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from ledger.loft.bodies import Body, body_of, mesh_of, tube
from ledger.loft.division import Division
from ledger.loft.layout import Block, Closeout, Fill, Layout
from ledger.loft.lofted import Mesh, Solid
from ledger.loft.shell import Shell
from ledger.model.plan import PartClass


def lofted_solids(
    layout: Layout, shell: Shell, division: Division, fills: tuple[tuple[Fill, Body], ...]
) -> Iterator[Solid]:
    """Every solid part, those inside the box first."""
    for one in division.caps:
        cap = one.cap
        yield Solid(
            part=cap.part,
            title=cap.title,
            part_class=PartClass.CAP,
            material=cap.material,
            mesh=mesh_of(one.solid),
        )
    for fill, body in fills:
        yield Solid(
            part=fill.part,
            title=fill.title,
            part_class=fill.part_class,
            material=fill.material,
            mesh=mesh_of(body),
        )
    for closeout in layout.closeouts:
        yield Solid(
            part=closeout.part,
            title=closeout.title,
            part_class=PartClass.CLOSEOUT,
            material=closeout.material,
            mesh=_closeout(shell, closeout),
        )
    for block in layout.blocks:
        yield Solid(
            part=block.part,
            title=block.title,
            part_class=block.part_class,
            material=block.material,
            mesh=_block(block),
        )


def _closeout(shell: Shell, closeout: Closeout) -> Mesh:
    """The end section carried on along the leading edge."""
    nose = len(shell.shares) - 1
    ring, beside = (shell.outer_m[place] for place in ((-1, -2) if closeout.at_tip else (0, 1)))
    along = ring[nose] - beside[nose]
    beyond = ring + along * closeout.length_m / abs(along[1])
    return tube(np.stack((ring, beyond) if closeout.at_tip else (beyond, ring)))


def taken_by_blocks(layout: Layout, space: Body) -> float:
    """What blocks that stand in a space take of it, m3."""
    return sum(float((space ^ body_of(_block(block))).volume()) for block in layout.blocks)


def _block(block: Block) -> Mesh:
    x, y, z = block.corner_m
    wide, deep, high = block.size_m
    floor = np.array([(x, y, z), (x + wide, y, z), (x + wide, y + deep, z), (x, y + deep, z)])
    lid = floor + np.array([0.0, 0.0, high])
    return tube(np.stack((lid, floor)))
