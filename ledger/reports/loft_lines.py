"""What a layout became: parts, masses, cells, and whether the lofted box adds up."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from ledger.loft.lofted_plan import LoftedPlan
from ledger.reports.figures import finding_figures
from ledger.reports.plain import aligned, clean, how_many
from ledger.units import Dimension, show, shown_number, shown_unit

if TYPE_CHECKING:
    from ledger.loft.lofted import Account

CAUTION = "computed from the layout: check every drawing before cutting"
_ACCOUNT = ("skins", "panels", "paste", "solids", "cells", "dry")


def loft_lines(plan: LoftedPlan) -> tuple[str, ...]:
    """Everything `loft` prints, line by line."""
    holds = f"{how_many(plan.cells, 'cell')}, {how_many(plan.openings, 'opening')}"
    gross = show(plan.gross_m3, Dimension.VOLUME, plan.display)
    return (
        clean(f"LOFTED  {plan.name}  {plan.title}".rstrip()),
        CAUTION,
        "",
        clean(f"folder  {plan.folder}"),
        f"parts   {plan.parts}",
        f"tanks   {holds}, gross {gross}" if plan.cells else "tanks   none",
        "",
        *_class_lines(plan),
        "",
        *_account_lines(plan),
    )


def _class_lines(plan: LoftedPlan) -> tuple[str, ...]:
    def mass(value_kg: float | None) -> str:
        return "-" if value_kg is None else shown_number(value_kg, Dimension.MASS, plan.display)

    def area(value_m2: float | None) -> str:
        return "-" if value_m2 is None else shown_number(value_m2, Dimension.AREA, plan.display)

    heads = (
        "class",
        "pieces",
        f"area {shown_unit(Dimension.AREA, plan.display)}",
        f"estimated {shown_unit(Dimension.MASS, plan.display)}",
    )
    rows = [
        (each.part_class.value, str(each.pieces), area(each.area_m2), mass(each.estimated_kg))
        for each in plan.classes
    ]
    pieces = sum(each.pieces for each in plan.classes)
    return aligned(heads, [*rows, ("in all", str(pieces), "", mass(plan.estimated_kg))], right=(1, 2, 3))


def _account_lines(plan: LoftedPlan) -> tuple[str, ...]:
    """The box of one wing, and the sum of all that is in it."""

    def volume(value_m3: float) -> str:
        return shown_number(value_m3, Dimension.VOLUME, plan.display)

    unit = shown_unit(Dimension.VOLUME, plan.display)
    each = _volumes(plan.account)
    return (
        f"one wing's box {volume(plan.account.box_m3)} {unit} = "
        + " + ".join(f"{word} {volume(each[word])}" for word in _ACCOUNT),
        f"adds up within {plan.deviation:.1e} of the box",
    )


def _volumes(account: Account) -> dict[str, float]:
    return {word: getattr(account, f"{word}_m3") for word in _ACCOUNT}


def loft_figures(plan: LoftedPlan) -> dict[str, Any]:
    """What `loft --json` prints."""
    return {
        "iteration": plan.name,
        "folder": str(plan.folder),
        "parts": plan.parts,
        "cells": plan.cells,
        "openings": plan.openings,
        "classes": [
            {
                "class": each.part_class.value,
                "pieces": each.pieces,
                "area_m2": each.area_m2,
                "estimated_kg": each.estimated_kg,
            }
            for each in plan.classes
        ],
        "estimated_kg": plan.estimated_kg,
        "gross_m3": plan.gross_m3,
        "account": {
            "box_m3": plan.account.box_m3,
            **{f"{word}_m3": volume for word, volume in _volumes(plan.account).items()},
            "apart_m3": plan.account.apart_m3,
            "shared_m3": plan.account.shared_m3,
        },
        "findings": finding_figures(plan.findings),
    }
