"""Whether the skins of a layout cover both surfaces of the wing, everywhere and once."""

from __future__ import annotations

from itertools import pairwise

from ledger.errors import Where
from ledger.exchange.toml_text import TomlTable
from ledger.loft.layout import SkinZone, Surface

_SAME_SHARE = 1e-9
_SAME_M = 1e-9


def check_cover(whole: TomlTable, skins: tuple[SkinZone, ...], span_m: tuple[float, float]) -> None:
    """Note the first gap and each overlap of the skins, surface by surface.

    span_m : butt lines of the first and the last section.
    """
    for surface in (Surface.UPPER, Surface.LOWER):
        here = [skin for skin in skins if skin.surface in (surface, Surface.BOTH)]
        told: set[tuple[str, str]] = set()
        for low, high in _stretches(skins, span_m):
            middle = 0.5 * (low + high)
            zones = sorted(
                (skin for skin in here if _reaches(skin, middle)), key=lambda skin: skin.from_chord
            )
            where = f"the {surface.value} surface between BL {low * 1000:g} and {high * 1000:g} mm"
            _check_stretch(zones, where, told, whole)


def _stretches(skins: tuple[SkinZone, ...], span_m: tuple[float, float]) -> list[tuple[float, float]]:
    lines = {*span_m, *(line for skin in skins for line in skin.between_m or ())}
    inside = sorted(line for line in lines if span_m[0] <= line <= span_m[1])
    return [(low, high) for low, high in pairwise(inside) if high - low > _SAME_M]


def _reaches(skin: SkinZone, butt_line_m: float) -> bool:
    return skin.between_m is None or skin.between_m[0] < butt_line_m < skin.between_m[1]


def _check_stretch(zones: list[SkinZone], where: str, told: set[tuple[str, str]], whole: TomlTable) -> None:
    reached, last = 0.0, None
    for zone in zones:
        if zone.from_chord > reached + _SAME_SHARE:
            _gap(zone.place, where, (reached, zone.from_chord), told, whole)
        elif last is not None and zone.from_chord < reached - _SAME_SHARE:
            both = (last.part, zone.part)
            if both not in told:
                told.add(both)
                whole.problems.stop(
                    "skins-overlap",
                    zone.place,
                    f"{zone.part} begins at {zone.from_chord:g} of the chord, and {last.part} reaches to"
                    f" {reached:g}, on {where}",
                    "end one where the other begins",
                )
        if zone.to_chord > reached:
            reached, last = zone.to_chord, zone
    if reached < 1.0 - _SAME_SHARE:
        place = last.place if last is not None else None
        _gap(place, where, (reached, 1.0), told, whole)


def _gap(
    place: Where | None, where: str, bare: tuple[float, float], told: set[tuple[str, str]], whole: TomlTable
) -> None:
    low, high = bare
    # One gap all along the span is told once.
    key = (where.partition(" between")[0], f"{low:g} {high:g}")
    if key not in told:
        told.add(key)
        whole.problems.stop(
            "skin-missing",
            place or whole.where("skin"),
            f"no skin covers {where} from {low:g} to {high:g} of the chord",
            "carry a skin on, or add a [[skin]] there",
        )
