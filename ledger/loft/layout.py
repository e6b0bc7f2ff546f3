"""A layout: the few figures from which a whole wing is lofted. Metres, degrees in names that say so.

The right wing is described; a mirrored layout makes the left one too. Shares run from 0 to 1: of the
chord from the nose aft, of a bay from its front or inboard wall.
"""

from __future__ import annotations

from dataclasses import dataclass
from enum import StrEnum

from ledger.errors import Where
from ledger.model.plan import PartClass
from ledger.model.tanks import Join, Outside
from ledger.model.vectors import Vector

PlanPoint = tuple[float, float]

NOSE = "nose"
TAIL = "tail"


class Surface(StrEnum):
    """Which surface of the wing. `both` runs round the nose from one to the other."""

    UPPER = "upper"
    LOWER = "lower"
    BOTH = "both"


class Edge(StrEnum):
    """What an edge of a panel meets: a skin, another wall, or nothing."""

    UPPER = "upper"
    LOWER = "lower"
    WALL = "wall"
    FREE = "free"


@dataclass(frozen=True, slots=True, kw_only=True)
class Section:
    """The wing at one butt line. `outline` is of unit chord, from the upper trailing edge round the nose.

    The leading edge stands at (leading_edge_m, butt_line_m, water_line_m); twist turns the section
    about it, nose up positive. `profile` names the family number or the file it came from.
    """

    place: Where
    butt_line_m: float
    leading_edge_m: float
    water_line_m: float
    chord_m: float
    twist_deg: float
    profile: str
    coordinates: tuple[PlanPoint, ...] = ()


@dataclass(frozen=True, slots=True, kw_only=True)
class SkinZone:
    """One skin: a surface between two chord shares and two butt lines, of one laminate."""

    place: Where
    part: str
    title: str
    surface: Surface
    from_chord: float
    to_chord: float
    laminate: str
    thickness_m: float
    between_m: tuple[float, float] | None = None
    finish: str | None = None
    finish_part: str | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Web:
    """A web: a line in plan by chord shares (inboard, outboard) or by two points, cut into lengths."""

    place: Where
    name: str
    title: str
    laminate: str
    thickness_m: float
    chord_shares: tuple[float, float] | None = None
    points_m: tuple[PlanPoint, PlanPoint] | None = None
    between_m: tuple[float, float] | None = None
    splices_m: tuple[float, ...] = ()
    lengths: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True, kw_only=True)
class Row:
    """A row of bays between two webs, front and rear; `nose` and `tail` stand for the wing's own ends."""

    place: Where
    name: str
    title: str
    front: str
    rear: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Rib:
    """A rib in one or more rows: at a butt line, or through two points in plan; leaning tip outboard.

    It is cut between the webs it meets, but for those in `through`, which are cut for it.
    """

    place: Where
    name: str
    laminate: str
    thickness_m: float
    rows: tuple[str, ...]
    butt_line_m: float | None = None
    points_m: tuple[PlanPoint, PlanPoint] | None = None
    lean_deg: float = 0.0
    through: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True, kw_only=True)
class Cap:
    """A strip along a web, centred on it: under the skin, where the web is cut shorter by its thickness,
    or let into the skin in place of its core, where it takes nothing from the bays.
    """

    place: Where
    part: str
    title: str
    web: str
    surface: Surface
    width_m: float
    thickness_m: float
    material: str
    between_m: tuple[float, float] | None = None
    let_in: bool = False


@dataclass(frozen=True, slots=True, kw_only=True)
class Along:
    """How far along a bay: a share of the free length, or a distance from its start or its end."""

    share: float | None = None
    from_start_m: float | None = None
    from_end_m: float | None = None

    def of(self, start_m: float, end_m: float) -> float:
        """The place between two faces."""
        if self.from_start_m is not None:
            return start_m + self.from_start_m
        if self.from_end_m is not None:
            return end_m - self.from_end_m
        if self.share is None:
            raise ValueError("nothing says how far along")
        return start_m + self.share * (end_m - start_m)


@dataclass(frozen=True, slots=True, kw_only=True)
class Height:
    """How high: the clear distance of the edge from the lower or the upper skin, or a share between them."""

    above_lower_m: float | None = None
    below_upper_m: float | None = None
    share: float | None = None


class Walls(StrEnum):
    """All ribs, or all webs, that part two bays of one tank."""

    RIBS = "ribs"
    WEBS = "webs"


@dataclass(frozen=True, slots=True, kw_only=True)
class Hole:
    """A rule for round holes.

    `walls` are all of a kind, or named: `A3` is rib 3 in row A, `web M3` is web M outboard of rib 3.
    """

    place: Where
    name: str
    walls: Walls | tuple[str, ...]
    diameter_m: float
    along: Along
    height: Height
    leaving_out: tuple[str, ...] = ()


class Axis(StrEnum):
    """Which way a port's round rim faces."""

    FORE_AFT = "fore-aft"
    SPANWISE = "spanwise"
    UP = "up"


@dataclass(frozen=True, slots=True, kw_only=True)
class Port:
    """An outlet, filler, vent or drain of one bay. With `pipe`, further points from its mouth, in metres."""

    place: Where
    name: str
    outside: Outside
    bay: str
    diameter_m: float
    along_chord: Along
    along_span: Along
    height: Height
    axis: Axis = Axis.UP
    pipe_m: tuple[Vector, ...] = ()


@dataclass(frozen=True, slots=True, kw_only=True)
class TankBays:
    """The bays of some rows between two ribs, sealed as one tank a side."""

    place: Where
    name: str
    rows: tuple[str, ...]
    ribs: tuple[str, str]
    expansion: float | None = None
    sealant_thickness_m: float | None = None
    sealant_material: str | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Fill:
    """Foam, or another solid, that fills the dry bays of some rows; `ribs` None for all along the span."""

    place: Where
    part: str
    title: str
    part_class: PartClass
    material: str
    rows: tuple[str, ...]
    ribs: tuple[str, str] | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Closeout:
    """A solid beyond the first or the last section, the section carried on straight."""

    place: Where
    part: str
    title: str
    at_tip: bool
    length_m: float
    material: str


class FilletShape(StrEnum):
    """Concave, as a round stick leaves it, or flat at 45 degrees."""

    CONCAVE = "concave"
    FLAT = "flat"


@dataclass(frozen=True, slots=True, kw_only=True)
class Joint:
    """A bond: which edges of which walls, with which paste, and the fillet on both faces."""

    place: Where
    part: str
    title: str
    walls: Walls | tuple[str, ...]
    edges: tuple[Edge, ...]
    paste: str
    fillet_m: float = 0.0
    fillet_shape: FilletShape = FilletShape.CONCAVE


@dataclass(frozen=True, slots=True, kw_only=True)
class Block:
    """A solid box by one corner and its size, such as a fitting milled from plate."""

    place: Where
    part: str
    title: str
    part_class: PartClass
    material: str
    corner_m: Vector
    size_m: Vector


@dataclass(frozen=True, slots=True, kw_only=True)
class Item:
    """A bought thing: a place and a mass."""

    place: Where
    part: str
    title: str
    part_class: PartClass
    mass_kg: float
    at_m: Vector
    quantity: int = 1


@dataclass(frozen=True, slots=True, kw_only=True)
class LayoutFeed:
    """How the outlets of both sides join on their way to the engine; `outlets` by port, empty for all."""

    place: Where
    name: str
    join: Join
    outlets: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True, kw_only=True)
class Layout:
    """Everything a layout file says of the wing itself.

    `corners` is how many straight pieces one surface of a section is drawn with; `gap_m` the paste
    between a panel's edge and what it meets; `planned_kg` the masses that the plan is to hold, by part.
    """

    place: Where
    sections: tuple[Section, ...]
    skins: tuple[SkinZone, ...]
    webs: tuple[Web, ...] = ()
    rows: tuple[Row, ...] = ()
    ribs: tuple[Rib, ...] = ()
    caps: tuple[Cap, ...] = ()
    holes: tuple[Hole, ...] = ()
    ports: tuple[Port, ...] = ()
    tanks: tuple[TankBays, ...] = ()
    fills: tuple[Fill, ...] = ()
    closeouts: tuple[Closeout, ...] = ()
    joints: tuple[Joint, ...] = ()
    blocks: tuple[Block, ...] = ()
    items: tuple[Item, ...] = ()
    feeds: tuple[LayoutFeed, ...] = ()
    planned_kg: tuple[tuple[str, float], ...] = ()
    gap_m: float = 0.0
    gap_place: Where | None = None
    corners: int = 48
    mirrored: bool = True
