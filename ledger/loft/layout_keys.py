"""Every table and key of a layout file, declared once: the reader, the schema and the manual follow.

A bare number of a length is in the file's `length_unit`; a text carries its own unit.
"""

from __future__ import annotations

from ledger.loft.keys import TableKeys, Takes, may, must, within
from ledger.loft.layout import NOSE, TAIL, Axis, Edge, FilletShape, Surface
from ledger.model.attitude import Seen
from ledger.model.plan import PartClass
from ledger.model.tanks import Join
from ledger.units import Display

FORMAT = "layout-1"


_PART = must("part", Takes.PART, "part number, without its side", '"SKIN.UPR"')
_TITLE = may(
    "title", Takes.TEXT, "what people call it; its part number or name where left out", '"upper skin"'
)
_CLASS = must("class", Takes.WORD, "class of part", '"fitting"', tuple(PartClass))
_BETWEEN = may(
    "between", Takes.TWO_STATIONS, "butt lines it runs between; the whole span where left out", "[550, 2350]"
)
_FROM = may("from", Takes.PLAN_POINT, "its inboard end in plan, with `to`", "[2860, 540]")
_TO = may("to", Takes.PLAN_POINT, "its outboard end in plan, with `from`", "[2860, 4360]")
_SHEET = must("sheet", Takes.NAME, "laminate of the sheet it is cut from", '"PANEL 6"')
_SURFACE = (Surface.UPPER.value, Surface.LOWER.value)
_EDGES = (Edge.UPPER.value, Edge.LOWER.value, Edge.WALL.value)
_HEIGHT = (
    may("above_lower", Takes.LENGTH_OR_ZERO, "clear distance of its edge above the lower skin", "3"),
    may("below_upper", Takes.LENGTH_OR_ZERO, "clear distance of its edge below the upper skin", "3"),
    may("height", Takes.SHARE, "its centre as a share from the lower to the upper skin", "0.5"),
)
_ONE_HEIGHT = (("above_lower",), ("below_upper",), ("height",))

TOP = TableKeys(
    word="",
    many=False,
    tip="the file itself",
    keys=(
        must("format", Takes.WORD, "which format the file is in", f'"{FORMAT}"', (FORMAT,)),
        must("name", Takes.TEXT, "name of the iteration", '"r1"'),
        may("title", Takes.TEXT, "what people call it", '"second web moved aft"'),
        may("display", Takes.WORD, "units of the screens", '"metric"', tuple(Display)),
        may("length_unit", Takes.TEXT, "unit of every bare length in the file", '"mm"'),
        within(
            8,
            400,
            may("corners", Takes.COUNT, "straight pieces of one surface of a section; 48 if left out", "48"),
        ),
        may("mirror", Takes.YES_NO, "whether a left wing is made too; it is if left out", "true"),
        may("materials", Takes.TEXT, "file of the materials; materials.csv if left out", '"materials.csv"'),
        may("laminates", Takes.TEXT, "file of the laminates; laminates.csv if left out", '"laminates.csv"'),
    ),
)

FUEL = TableKeys(
    word="fuel",
    many=False,
    tip="the fuel, as in plan.toml",
    keys=(
        must("grade", Takes.WORD, "grade of the fuel", '"avgas"', ("avgas", "jet", "mogas", "diesel")),
        may("density_15C", Takes.DENSITY, "density at 15 C", '"715 kg/m3"'),
        may("feed_flow", Takes.FLOW, "what the engine draws", '"40 L/h"'),
    ),
)

ATTITUDE = TableKeys(
    word="attitude",
    tip="an attitude in which fuel is reckoned, as in plan.toml",
    keys=(
        must("name", Takes.TEXT, "its name", '"cruise"'),
        may("pitch_deg", Takes.NUMBER, "nose up", "1.5"),
        may("roll_deg", Takes.NUMBER, "right wing down", "0.0"),
        may("ax_g", Takes.NUMBER, "acceleration forward", "0.12"),
        may("ay_g", Takes.NUMBER, "acceleration to the right", "0.0"),
        may("az_g", Takes.NUMBER, "acceleration upward", "0.0"),
        may("seen", Takes.WORD, "how the angles were read", f'"{Seen.TRUE.value}"', tuple(Seen)),
        may("fill", Takes.YES_NO, "whether the tanks are filled in it", "true"),
        may("flight", Takes.YES_NO, "whether it is flown", "false"),
    ),
)

_CLASS_SHARES = tuple(
    may(word.value, Takes.FRACTION, f"share of the estimated mass, parts of class {word.value}", '"5 %"')
    for word in PartClass
)
TOLERANCE = TableKeys(word="tolerance", many=False, tip="how far off a part may weigh", keys=_CLASS_SHARES)
GROWTH = TableKeys(word="growth", many=False, tip="what parts still to be built may grow", keys=_CLASS_SHARES)

THICKNESS = TableKeys(
    word="thickness",
    many=False,
    tip="thickness of laminates whose steps do not tell it",
    each=may("LAMINATE", Takes.LENGTH, "its finished thickness", "4.2"),
)
PLANNED = TableKeys(
    word="planned",
    many=False,
    tip="masses the plan is to hold",
    each=may("PART", Takes.MASS, "planned mass of the part, without its side", '"268 g"'),
)

SECTION = TableKeys(
    word="section",
    tip="the wing at one butt line, inboard first; two or more",
    keys=(
        must("butt_line", Takes.LENGTH_OR_ZERO, "its distance from the centre plane", "540"),
        must("leading_edge", Takes.STATION, "station of its nose, x", "2479.63"),
        must("water_line", Takes.STATION, "height of its nose, z", "-120.7"),
        must("chord", Takes.LENGTH, "its chord", "950.92"),
        within(
            -45,
            45,
            may("twist_deg", Takes.NUMBER, "turned about its nose, nose up positive; 0 if left out", "-1.5"),
        ),
        may("naca", Takes.TEXT, "section of the four- or five-digit family", '"2412"'),
        may("coordinates", Takes.TEXT, "file of its outline, two columns", '"profiles/root.dat"'),
    ),
    one_of=((("naca",), ("coordinates",)),),
)

SKIN = TableKeys(
    word="skin",
    tip="a skin: part of a surface, of one laminate; on each surface they cover the whole chord",
    keys=(
        _PART,
        _TITLE,
        must("surface", Takes.WORD, "which surface; both runs round the nose", '"upper"', tuple(Surface)),
        must("chord", Takes.TWO_SHARES, "from and to, shares of the chord", "[0.08, 1.0]"),
        must("laminate", Takes.NAME, "its laminate", '"SKIN 7"'),
        _BETWEEN,
        may("finish", Takes.NAME, "laminate of its finish, with finish_part", '"PAINT"'),
        may("finish_part", Takes.PART, "part number of the finish, with finish", '"FIN.UPR"'),
    ),
)

WEB = TableKeys(
    word="web",
    tip="a web along the span",
    keys=(
        must("name", Takes.SHORT, "short name, such as F", '"F"'),
        _TITLE,
        may(
            "chord",
            Takes.ONE_OR_TWO_SHARES,
            "where it stands, share of the chord; inboard and outboard end if two",
            "0.18",
        ),
        _FROM,
        _TO,
        _SHEET,
        _BETWEEN,
        may("splices", Takes.STATIONS, "butt lines where lengths meet, inboard first", "[2350]"),
        may("lengths", Takes.SHORTS, "names of the lengths, inboard first", '["IN", "OUT"]'),
    ),
    one_of=((("chord",), ("from", "to")),),
)

ROW = TableKeys(
    word="row",
    tip="a row of bays between two webs",
    keys=(
        must("name", Takes.SHORT, "short name, such as F", '"F"'),
        _TITLE,
        must("webs", Takes.NAMES, f'front and rear web; "{NOSE}" and "{TAIL}" for the ends', '["F", "M"]'),
    ),
)

RIB = TableKeys(
    word="rib",
    tip="a rib",
    keys=(
        must("name", Takes.SHORT, "short name, such as 1", '"1"'),
        may("butt_line", Takes.LENGTH_OR_ZERO, "where it stands", "550"),
        may("from", Takes.PLAN_POINT, "its front end in plan, with `to`", "[2450, 1190]"),
        may("to", Takes.PLAN_POINT, "its rear end in plan, with `from`", "[3100, 1210]"),
        must("rows", Takes.NAMES, "rows it stands in", '["F", "A"]'),
        _SHEET,
        within(-60, 60, may("lean_deg", Takes.NUMBER, "top leaning outboard; 0 if left out", "5.0")),
        may("through", Takes.NAMES, "webs that are cut for it; it is cut between the others", '["M"]'),
    ),
    one_of=((("butt_line",), ("from", "to")),),
)

CAP = TableKeys(
    word="cap",
    tip="a strip under a skin, centred on a web",
    keys=(
        _PART,
        _TITLE,
        must("web", Takes.NAME, "web it runs along", '"M"'),
        must("surface", Takes.WORD, "under which skin", '"upper"', _SURFACE),
        must("width", Takes.LENGTH, "its width", "30"),
        must("thickness", Takes.LENGTH, "its thickness", "6"),
        must("material", Takes.NAME, "its material, with a density", '"pultruded strip 60 x 3"'),
        may("let_in", Takes.YES_NO, "in the skin's own thickness, its material by length", "true"),
        _BETWEEN,
    ),
)

BOND = TableKeys(
    word="bond",
    many=False,
    tip="what all bonds share",
    keys=(
        may("gap", Takes.LENGTH_OR_ZERO, "paste between an edge and what it meets; none if left out", "0.5"),
    ),
)

JOINT = TableKeys(
    word="joint",
    tip="a bond along edges of walls",
    keys=(
        _PART,
        _TITLE,
        must("walls", Takes.WALLS, "all ribs, all webs, or some by name", '"webs"'),
        must("edges", Takes.WORDS, "which edges: what they meet", '["upper"]', _EDGES),
        must("paste", Takes.NAME, "its paste, with a density", '"bond base"'),
        may("fillet", Takes.LENGTH_OR_ZERO, "leg of the fillet on both faces; none if left out", "4"),
        may(
            "fillet_shape", Takes.WORD, "as a round stick leaves it, or flat", '"concave"', tuple(FilletShape)
        ),
    ),
)

TANK = TableKeys(
    word="tank",
    tip="the bays of some rows between two ribs, sealed as one tank a side",
    keys=(
        may("name", Takes.SHORT, "its name, without the side; tank if left out", '"main"'),
        must("rows", Takes.NAMES, "its rows", '["F", "A"]'),
        must("ribs", Takes.NAMES, "its end ribs, inboard first", '["1", "7"]'),
        may("expansion_percent", Takes.PERCENT, "share kept for expansion", "2.0"),
        may("sealant", Takes.LENGTH, "thickness of the sealant inside", "0.4"),
        may("sealant_material", Takes.NAME, "its material", '"tank sealant"'),
    ),
)

HOLE = TableKeys(
    word="hole",
    tip="a rule for round holes in walls",
    keys=(
        must("name", Takes.TEXT, "what people call them", '"drain"'),
        must("walls", Takes.WALLS, "all ribs or webs inside tanks, or some walls by name", '"ribs"'),
        must("diameter", Takes.LENGTH, "their diameter", "16"),
        may("along", Takes.SHARE, "share of the free length, from the front or the inboard end", "0.08"),
        may("from_start", Takes.LENGTH_OR_ZERO, "distance of the centre from the front or inboard end", "37"),
        may("from_end", Takes.LENGTH_OR_ZERO, "distance of the centre from the rear or outboard end", "37"),
        *_HEIGHT,
        may("leaving_out", Takes.NAMES, "walls that get none", '["A3"]'),
    ),
    one_of=((("along",), ("from_start",), ("from_end",)), _ONE_HEIGHT),
)


def _port(word: str, tip: str) -> TableKeys:
    return TableKeys(
        word=word,
        tip=tip,
        keys=(
            must("name", Takes.TEXT, "its name, without the side", f'"{word}"'),
            must("bay", Takes.NAME, "its bay: row and inboard rib", '"A1"'),
            must("diameter", Takes.LENGTH, "its diameter; the bore of a pipe", "12"),
            must("chord", Takes.ALONG, "where along the chord of the bay, front first", "0.5"),
            must(
                "span", Takes.ALONG, "where along the span of the bay, inboard first", "{ from_start = 27 }"
            ),
            *_HEIGHT,
            may("axis", Takes.WORD, "which way its rim faces; up if left out", '"fore-aft"', tuple(Axis)),
            may("pipe", Takes.POINTS, "further points of a pipe, from its mouth", "[[0, 100, 17]]"),
        ),
        one_of=(_ONE_HEIGHT,),
    )


OUTLET = _port("outlet", "where fuel leaves to the engine")
DRAIN = _port("drain", "where water is drained")
FILLER = _port("filler", "where fuel is filled in")
VENT = _port("vent", "where air comes and goes")
PORTS = (OUTLET, DRAIN, FILLER, VENT)

FEED = TableKeys(
    word="feed",
    tip="how the outlets of both sides join",
    keys=(
        must("name", Takes.TEXT, "its name", '"engine"'),
        must("join", Takes.WORD, "how they join", '"select"', tuple(Join)),
        may("outlets", Takes.NAMES, "outlets by name, without the side; all if left out", '["outlet"]'),
    ),
)

FILL = TableKeys(
    word="fill",
    tip="foam or another solid that fills the dry bays of some rows",
    keys=(
        _PART,
        _TITLE,
        _CLASS,
        must("material", Takes.NAME, "its material, with a density", '"block foam 80"'),
        must("rows", Takes.NAMES, "rows it fills", '["A"]'),
        may("ribs", Takes.NAMES, "between which two ribs; the whole span if left out", '["7", "9"]'),
    ),
)

CLOSEOUT = TableKeys(
    word="closeout",
    tip="a solid beyond the first or the last section",
    keys=(
        _PART,
        _TITLE,
        must("at", Takes.WORD, "at which end", '"tip"', ("tip", "root")),
        must("length", Takes.LENGTH, "how far it reaches", "60"),
        must("material", Takes.NAME, "its material, with a density", '"block foam 80"'),
    ),
)

BLOCK = TableKeys(
    word="block",
    tip="a solid box, such as a fitting milled from plate",
    keys=(
        _PART,
        _TITLE,
        _CLASS,
        must("material", Takes.NAME, "its material, with a density", '"plate alloy"'),
        must("corner", Takes.POINT, "its corner of least x, y and z", "[2866, 460, -130]"),
        must("size", Takes.SIZE, "its size along x, y and z", "[12, 150, 45]"),
    ),
)

ITEM = TableKeys(
    word="item",
    tip="a bought thing",
    keys=(
        _PART,
        _TITLE,
        _CLASS,
        must("mass", Takes.MASS, "mass of one", '"148 g"'),
        must("at", Takes.POINT, "where its mass is", "[3088, 550, -64]"),
        within(1, 999999, may("quantity", Takes.COUNT, "how many; 1 if left out", "3")),
    ),
)

TABLES = (
    FUEL,
    ATTITUDE,
    TOLERANCE,
    GROWTH,
    THICKNESS,
    PLANNED,
    SECTION,
    SKIN,
    WEB,
    ROW,
    RIB,
    CAP,
    BOND,
    JOINT,
    TANK,
    HOLE,
    *PORTS,
    FEED,
    FILL,
    CLOSEOUT,
    BLOCK,
    ITEM,
)
