"""Invented wings to loft: a plain one of which a test changes what it is about, and any wing at random."""

from __future__ import annotations

import random
from dataclasses import replace
from itertools import pairwise
from typing import Any

import numpy as np
import pytest
from numpy.typing import ArrayLike, NDArray

from ledger.errors import Where
from ledger.loft.layout import (
    NOSE,
    TAIL,
    Along,
    Axis,
    Cap,
    Edge,
    Fill,
    Height,
    Hole,
    Joint,
    Layout,
    Port,
    Rib,
    Row,
    Section,
    SkinZone,
    Surface,
    TankBays,
    Walls,
    Web,
)
from ledger.model.plan import PartClass
from ledger.model.tanks import Outside

Floats = NDArray[np.float64]

PROFILES = ("0012", "2412", "4415", "0009", "23012", "2415", "6409", "24018", "23112")


def place(thing: str) -> Where:
    return Where(file="layout.toml", thing=thing)


class Wings:
    """Records of a layout with everything said that the test leaves out."""

    @staticmethod
    def section(butt_line: float = 0.0, **other: Any) -> Section:
        said: dict[str, Any] = {
            "leading_edge_m": 1.0,
            "water_line_m": 0.0,
            "chord_m": 1.0,
            "twist_deg": 0.0,
            "profile": "2412",
            **other,
        }
        return Section(place=place(f"section {butt_line:g}"), butt_line_m=butt_line, **said)

    @staticmethod
    def skin(part: str, surface: Surface, chord: tuple[float, float], mm: float, **other: Any) -> SkinZone:
        return SkinZone(
            place=place(part),
            part=part,
            title=part,
            surface=surface,
            from_chord=chord[0],
            to_chord=chord[1],
            laminate="SKIN",
            thickness_m=mm / 1000.0,
            **other,
        )

    @staticmethod
    def web(name: str, chord: float | tuple[float, float] | None = None, **other: Any) -> Web:
        shares = (chord, chord) if isinstance(chord, float) else chord
        said: dict[str, Any] = {"thickness_m": 0.01, "chord_shares": shares, **other}
        return Web(place=place(f"web {name}"), name=name, title="web", laminate="PANEL", **said)

    @staticmethod
    def row(name: str, front: str, rear: str) -> Row:
        return Row(place=place(f"row {name}"), name=name, title="row", front=front, rear=rear)

    @staticmethod
    def rib(name: str, butt_line: float | None = None, **other: Any) -> Rib:
        said: dict[str, Any] = {"thickness_m": 0.006, "rows": ("R",), **other}
        return Rib(place=place(f"rib {name}"), name=name, laminate="PANEL", butt_line_m=butt_line, **said)

    @staticmethod
    def cap(web: str, surface: Surface, **other: Any) -> Cap:
        part = f"CAP.{web}.{surface.value}"
        said: dict[str, Any] = {"width_m": 0.03, "thickness_m": 0.004, **other}
        return Cap(place=place(part), part=part, title="cap", web=web, surface=surface, material="M", **said)

    @staticmethod
    def hole(name: str = "drain", **other: Any) -> Hole:
        said: dict[str, Any] = {
            "walls": Walls.RIBS,
            "diameter_m": 0.016,
            "along": Along(share=0.5),
            "height": Height(above_lower_m=0.003),
            **other,
        }
        return Hole(place=place(f"hole {name}"), name=name, **said)

    @staticmethod
    def port(outside: Outside, bay: str, **other: Any) -> Port:
        said: dict[str, Any] = {
            "diameter_m": 0.012,
            "along_chord": Along(share=0.5),
            "along_span": Along(share=0.5),
            "height": Height(share=0.5),
            "axis": Axis.UP,
            **other,
        }
        return Port(
            place=place(f"{outside.value} {bay}"), name=outside.value, outside=outside, bay=bay, **said
        )

    @staticmethod
    def ports(bay: str) -> tuple[Port, ...]:
        """What every tank needs."""
        return tuple(Wings.port(way, bay) for way in (Outside.OUTLET, Outside.VENT, Outside.FILLER))

    @staticmethod
    def tank(rows: tuple[str, ...] = ("R",), ribs: tuple[str, str] = ("1", "3"), name: str = "") -> TankBays:
        return TankBays(place=place(f"tank {name}"), name=name, rows=rows, ribs=ribs)

    @staticmethod
    def fill(part: str, rows: tuple[str, ...], ribs: tuple[str, str] | None = None) -> Fill:
        return Fill(
            place=place(part),
            part=part,
            title="foam",
            part_class=PartClass.FITTING,
            material="F",
            rows=rows,
            ribs=ribs,
        )

    @staticmethod
    def joint(part: str, walls: Any, edges: tuple[Edge, ...], fillet_m: float = 0.0, **other: Any) -> Joint:
        return Joint(
            place=place(part),
            part=part,
            title="bond",
            walls=walls,
            edges=edges,
            paste="P",
            fillet_m=fillet_m,
            **other,
        )

    @staticmethod
    def plain(**changed: Any) -> Layout:
        """Two sections, one skin, webs A and B, ribs 1, 2, 3, and a tank of the two bays between."""
        layout = Layout(
            place=place("layout"),
            sections=(Wings.section(0.0), Wings.section(2.0)),
            skins=(Wings.skin("SKIN", Surface.BOTH, (0.0, 1.0), 2.0),),
            webs=(Wings.web("A", 0.2), Wings.web("B", 0.6)),
            rows=(Wings.row("R", "A", "B"),),
            ribs=(Wings.rib("1", 0.1), Wings.rib("2", 1.0), Wings.rib("3", 1.9)),
            tanks=(Wings.tank(),),
            ports=Wings.ports("R1"),
            corners=16,
        )
        return replace(layout, **changed)

    @staticmethod
    def bare(sections: tuple[Section, ...], skin_mm: float = 2.0, **changed: Any) -> Layout:
        """Sections and one skin."""
        skins = (Wings.skin("SKIN", Surface.BOTH, (0.0, 1.0), skin_mm),)
        return replace(Layout(place=place("layout"), sections=sections, skins=skins), **changed)


class AnyWing:
    """A layout such as somebody might write, drawn from a source of chance; mostly one that can be built."""

    def __init__(self, chance: random.Random) -> None:
        self.chance = chance
        self.round_figures = self.often(0.5)

    def often(self, share: float) -> bool:
        return self.chance.random() < share

    def between(self, low: float, high: float) -> float:
        """Half of all wings are in round figures, so that things meet at one place."""
        value = self.chance.uniform(low, high)
        return round(value, 2) if self.round_figures else value

    def layout(self) -> Layout:
        self.sections = self._sections()
        self.lines = [section.butt_line_m for section in self.sections]
        self.webs = self._webs()
        self.rows = self._rows()
        self.ribs = self._ribs()
        tanks = tuple(self._tanks())
        return Layout(
            place=place("layout"),
            sections=self.sections,
            skins=self._skins(),
            webs=self.webs,
            rows=self.rows,
            ribs=self.ribs,
            caps=tuple(self._caps()),
            tanks=tanks,
            ports=tuple(port for tank in tanks for port in Wings.ports(f"{tank.rows[0]}{tank.ribs[0]}")),
            fills=tuple(Wings.fill(f"FOAM.{row.name}", (row.name,)) for row in self.rows if self.often(0.25)),
            holes=tuple(self._holes()) if tanks else (),
            joints=(Wings.joint("JNT", Walls.RIBS, (Edge.WALL,), 0.004),)
            if len({rib.thickness_m for rib in self.ribs}) == 1
            else (),
            gap_m=self.chance.choice([0.0, 0.0005, 0.001]),
            corners=self.chance.choice([8, 12, 16]),
        )

    def _sections(self) -> tuple[Section, ...]:
        count = self.chance.choice([2, 2, 2, 3, 3, 4])
        profiles = [self.chance.choice(PROFILES) for _ in range(count)]
        if self.often(0.5):
            profiles = profiles[:1] * count
        twisted = self.often(0.4)
        line, chord = self.chance.choice([0.0, 0.5]), self.between(0.7, 1.5)
        nose, level = self.between(-1.0, 2.0), self.between(-0.3, 0.3)
        found = []
        for profile in profiles:
            twist = self.between(-4.0, 4.0) if twisted else 0.0
            found.append(
                Wings.section(
                    line,
                    leading_edge_m=nose,
                    water_line_m=level,
                    chord_m=chord,
                    twist_deg=twist,
                    profile=profile,
                )
            )
            line += self.between(0.6, 2.0)
            chord *= self.chance.choice([1.0, self.between(0.6, 1.0)])
            nose += self.chance.choice([0.0, self.between(-0.1, 0.5)])
            level += self.chance.choice([0.0, self.between(-0.1, 0.2)])
        return tuple(found)

    def _skins(self) -> tuple[SkinZone, ...]:
        found: list[SkinZone] = []

        def add(surface: Surface, low: float, high: float, between: Any = None) -> None:
            mm = self.chance.choice([0.8, 1.2, 2.0, 3.0, 4.2])
            part = f"SKIN.{len(found)}"
            found.append(Wings.skin(part, surface, (low, high), mm, between_m=between))

        first = self.chance.choice([0.0, 0.05, 0.08, 0.15, 1.0])
        if first > 0.0:
            add(Surface.BOTH, 0.0, first)
        whole = (self.lines[0], self.lines[-1])
        for surface in (Surface.UPPER, Surface.LOWER) if first < 1.0 else ():
            cuts = sorted({first, 1.0, *self.chance.sample([0.25, 0.4, 0.5, 0.6, 0.65, 0.9], 2)})
            for low, high in pairwise(cuts):
                step = self.chance.choice([self.lines[1], self.between(whole[0] + 0.1, whole[1] - 0.1)])
                if self.often(0.3) and whole[0] < step < whole[1]:
                    add(surface, low, high, (whole[0], step))
                    add(surface, low, high, (step, whole[1]))
                else:
                    add(surface, low, high)
        return tuple(found)

    def _station(self, line: float, share: float) -> float:
        aft = [s.leading_edge_m + share * s.chord_m * np.cos(np.radians(s.twist_deg)) for s in self.sections]
        return float(np.interp(line, self.lines, aft))

    def _webs(self) -> tuple[Web, ...]:
        shares = self.chance.sample([0.12, 0.2, 0.3, 0.4, 0.5, 0.6, 0.7], self.chance.randrange(4))
        return tuple(self._web("ABC"[number], share) for number, share in enumerate(sorted(shares)))

    def _web(self, name: str, share: float) -> Web:
        low, high = self.lines[0], self.lines[-1]
        thickness = self.chance.choice([0.003, 0.0066, 0.0106])
        splices = {self.between(low + 0.2, high - 0.2)} if self.often(0.3) else set()
        if self.often(0.3):
            points = ((self._station(low, share), low), (self._station(high, share), high))
            return Wings.web(name, thickness_m=thickness, points_m=points, splices_m=tuple(splices))
        # Every kink of the wing is a splice of its webs.
        return Wings.web(
            name,
            (share, share + self.chance.choice([0.0, -0.03, 0.03])),
            thickness_m=thickness,
            splices_m=tuple(sorted(splices | set(self.lines[1:-1]))),
        )

    def _rows(self) -> tuple[Row, ...]:
        limits = [web.name for web in self.webs]
        if self.often(0.4) or not limits:
            limits.insert(0, NOSE)
        if self.often(0.4) or len(limits) < 2:
            limits.append(TAIL)
        rows = [Wings.row("RSTU"[n], *limits[n : n + 2]) for n in range(len(limits) - 1)]
        if len(rows) > 1 and self.often(0.15):
            rows.pop(self.chance.randrange(len(rows)))
        return tuple(rows)

    def _ribs(self) -> tuple[Rib, ...]:
        count, low, high = self.chance.randrange(7), self.lines[0] + 0.04, self.lines[-1] - 0.04
        return tuple(
            self._rib(str(n + 1), low + (high - low) * (n + self.chance.uniform(0.3, 0.7)) / count)
            for n in range(count)
        )

    def _rib(self, name: str, line: float) -> Rib:
        line = round(line, 2) if self.round_figures else line
        rows = tuple(row.name for row in self.rows if self.often(0.85)) or (self.rows[0].name,)
        fronts = {row.front for row in self.rows if row.name in rows}
        met = {row.rear for row in self.rows if row.name in rows} & fronts
        said: dict[str, Any] = {
            "rows": rows,
            "thickness_m": self.chance.choice([0.003, 0.0066, 0.0106]),
            "lean_deg": self.chance.choice([0.0, 0.0, 0.0, 5.0, -5.0]),
            "through": tuple(web for web in sorted(met) if self.often(0.3)),
        }
        if self.often(0.25):
            cant = self.chance.uniform(-0.03, 0.03)
            ends = ((self._station(line, 0.1), line - cant), (self._station(line, 0.8), line + cant))
            return Wings.rib(name, points_m=ends, **said)
        return Wings.rib(name, line, **said)

    def _caps(self) -> list[Cap]:
        found = []
        for web in self.webs:
            for surface in (Surface.UPPER, Surface.LOWER):
                if self.often(0.3):
                    end = self.between(self.lines[0] + 0.1, self.lines[-1])
                    between = None if self.often(0.7) else (self.lines[0], end)
                    width = self.chance.choice([0.02, 0.03, 0.05])
                    found.append(Wings.cap(web.name, surface, width_m=width, between_m=between))
        return found

    def _tanks(self) -> list[TankBays]:
        found = []
        for row in self.rows:
            names = [rib.name for rib in self.ribs if row.name in rib.rows]
            if len(names) >= 2 and self.often(0.6):
                first, last = sorted(self.chance.sample(range(len(names)), 2))
                found.append(Wings.tank((row.name,), (names[first], names[last]), f"t{row.name}"))
        return found

    def _holes(self) -> list[Hole]:
        heights = [Height(above_lower_m=0.003), Height(below_upper_m=0.003), Height(share=0.5)]
        return [
            Wings.hole(
                f"hole in {walls.value}",
                walls=walls,
                diameter_m=0.006,
                along=Along(share=self.between(0.3, 0.7)),
                height=self.chance.choice(heights),
            )
            for walls in Walls
            if self.often(0.5)
        ]


def volume_and_centroid(vertices: ArrayLike, faces: ArrayLike) -> tuple[float, Floats]:
    """Of a closed mesh, by tetrahedra from its first corner; written apart from the program's own."""
    corners = np.asarray(vertices, dtype=float)
    a, b, c = (corners - corners[0])[np.asarray(faces)].transpose(1, 0, 2)
    six = np.einsum("ij,ij->i", a, np.cross(b, c))
    volume = float(six.sum()) / 6.0
    return volume, corners[0] + (six[:, None] * (a + b + c)).sum(axis=0) / (24.0 * volume)


def shoelace(ring: Floats) -> tuple[float, Floats]:
    """Area and centroid of a polygon (n, 2)."""
    x, z = (ring - ring[0]).T
    cross = x * np.roll(z, -1) - np.roll(x, -1) * z
    area = 0.5 * float(cross.sum())
    middle = ((x + np.roll(x, -1)) @ cross, (z + np.roll(z, -1)) @ cross)
    return area, ring[0] + np.array(middle) / (6.0 * area)


@pytest.fixture(scope="session")
def wings() -> type[Wings]:
    return Wings


@pytest.fixture(scope="session")
def any_wing() -> type[AnyWing]:
    return AnyWing


@pytest.fixture(scope="session")
def measured() -> Any:
    return volume_and_centroid


@pytest.fixture(scope="session")
def polygon_moments() -> Any:
    return shoelace
