"""plan.toml: the plan's name, display, fuel, attitudes, tolerances and growth allowances."""

from __future__ import annotations

import re
from dataclasses import dataclass

from ledger.exchange.problems import Problems
from ledger.exchange.toml_text import TomlTable, read_toml
from ledger.model.attitude import Attitude, NotUpward, Seen
from ledger.model.plan import FuelGrade, PartClass
from ledger.units import Dimension, Display

PLAN = "plan.toml"
FORMAT = "plan-1"
GRADES = ("avgas", "jet", "mogas", "diesel")
# The name that a command gives to an attitude asked for by its angles.
RESERVED_ATTITUDE = "asked"

_KEYS = ("format", "name", "title", "display", "fuel", "attitude", "tolerance", "growth")
FUEL_KEYS = ("grade", "density_15C", "feed_flow")
ATTITUDE_KEYS = ("name", "pitch_deg", "roll_deg", "ax_g", "ay_g", "az_g", "seen", "fill", "flight")
_PLAIN_WORD = re.compile(r"[A-Za-z0-9][A-Za-z0-9._-]{0,63}")


@dataclass(frozen=True, slots=True, kw_only=True)
class PlanHead:
    """What plan.toml says. `name` is empty where it could not be read, with a finding."""

    name: str
    title: str
    display: Display
    attitudes: tuple[Attitude, ...]
    fuel: FuelGrade | None
    tolerances: tuple[tuple[PartClass, float], ...]
    growths: tuple[tuple[PartClass, float], ...]
    says_where_filled: bool


def read_plan_head(content: bytes, problems: Problems) -> PlanHead | None:
    """The whole of plan.toml; None where it is no TOML."""
    whole = read_toml(PLAN, content, problems)
    if whole is None:
        return None
    whole.refuse_others(_KEYS)
    check_format(whole, FORMAT)
    return read_head(whole)


def read_head(whole: TomlTable, meant: frozenset[str] = frozenset()) -> PlanHead:
    """Name, title, display, fuel, attitudes, tolerances and growths, in a plan or in a layout.

    `meant` are keys of which a misspelt one was told.
    """
    name = whole.text("name", wanted=None if "name" in meant else '"r1", the name of this iteration')
    if name is not None and _PLAIN_WORD.fullmatch(name) is None:
        whole.stop(
            "name-wrong",
            "name",
            f"{name!r} is not a plain word",
            "write letters, digits, dots and dashes, for example r2",
        )
    display = whole.choice("display", tuple(Display))
    return PlanHead(
        name=name or "",
        title=whole.text("title") or name or "",
        display=Display(display) if display is not None else Display.METRIC,
        attitudes=_attitudes(whole),
        fuel=_fuel(whole),
        tolerances=_shares(whole, "tolerance"),
        growths=_shares(whole, "growth"),
        says_where_filled=any(table.values.get("fill") is True for table in whole.tables("attitude")),
    )


def check_filling(head: PlanHead, has_tanks: bool, problems: Problems, file: str = PLAN) -> None:
    """Note a plan with tanks that says no attitude to fill them in."""
    if has_tanks and not head.says_where_filled:
        from ledger.errors import Where

        problems.stop(
            "fill-attitude-missing",
            Where(file=file, column="attitude"),
            "there are tanks and no attitude in which they are filled",
            "write fill = true at the attitude on the ground",
        )


def check_format(whole: TomlTable, wanted: str) -> None:
    """Note a file that is not of the one format that is read here."""
    said = whole.text("format", wanted=f'"{wanted}"')
    if said is not None and said != wanted:
        whole.stop(
            "format-unknown",
            "format",
            f"{said!r} is not a format this program reads",
            f'write format = "{wanted}"',
        )


def _fuel(whole: TomlTable) -> FuelGrade | None:
    table = whole.table("fuel")
    if table is None:
        return None
    table.refuse_others(FUEL_KEYS)
    grade = table.choice("grade", GRADES, required=True)
    density = table.quantity("density_15C", Dimension.DENSITY)
    flow = table.quantity("feed_flow", Dimension.FLOW)
    return None if grade is None else FuelGrade(grade=grade, density_15c_kg_m3=density, feed_flow_m3_s=flow)


def _attitudes(whole: TomlTable) -> tuple[Attitude, ...]:
    found: list[Attitude] = []
    names: set[str] = set()
    filled: str | None = None
    for table in whole.tables("attitude"):
        attitude = _attitude(table)
        if attitude is None:
            continue
        if attitude.name.casefold() in names:
            table.stop(
                "name-twice", "name", f"attitude {attitude.name!r} is there twice", "give each its own name"
            )
        names.add(attitude.name.casefold())
        if attitude.fill and filled is not None:
            table.stop(
                "fill-attitude-twice",
                "fill",
                f"the tanks are filled in attitude {filled!r} already",
                "leave fill = true at one attitude",
            )
        filled = attitude.name if attitude.fill and filled is None else filled
        found.append(attitude)
    return tuple(found)


def _attitude(table: TomlTable) -> Attitude | None:
    before = table.problems.count
    table.refuse_others(ATTITUDE_KEYS)
    name = table.text("name", wanted='"ground"')
    if name is not None and name.casefold() == RESERVED_ATTITUDE:
        table.stop(
            "name-wrong",
            "name",
            f"{name!r} is kept for an attitude asked by its angles",
            "give it another name",
        )
    angles = {key: table.number(key, 0.0) for key in ("pitch_deg", "roll_deg", "ax_g", "ay_g", "az_g")}
    seen = table.choice("seen", tuple(Seen))
    fill, flight = table.flag("fill", False), table.flag("flight", True)
    if table.problems.count != before or name is None:
        return None
    attitude = Attitude(
        name=name,
        seen=Seen(seen) if seen is not None else Seen.TRUE,
        fill=fill,
        flight=flight,
        **{key: value or 0.0 for key, value in angles.items()},
    )
    try:
        _ = attitude.up
    except NotUpward as error:
        what, _, do = str(error).partition("; ")
        table.stop("attitude-not-upward", None, what, do or "check its angles and accelerations")
        return None
    return attitude


def _shares(whole: TomlTable, key: str) -> tuple[tuple[PartClass, float], ...]:
    table = whole.table(key)
    if table is None:
        return ()
    table.refuse_others(tuple(PartClass))
    found = []
    for part_class in PartClass:
        share = table.quantity(part_class.value, Dimension.FRACTION, zero=key == "growth")
        if share is not None:
            found.append((part_class, share))
    return tuple(found)
