"""How a change between two designs is said, in the command and on the screen alike."""

from __future__ import annotations

from ledger.model.vectors import Vector
from ledger.units import Dimension, Display, shown_number, shown_unit


def signed(change: float | None, dimension: Dimension, display: Display, *, places: int | None = None) -> str:
    """A change with its sign, without its unit; one too small to show has no sign, one not known is `-`."""
    return "-" if change is None else with_sign(shown_number(change, dimension, display, places=places))


def with_sign(text: str) -> str:
    """A number's text, its unit behind it or not, with a plus where it is above nothing."""
    return text if text.startswith("-") or float(text.split(maxsplit=1)[0]) == 0.0 else f"+{text}"


def cg_words(moved: Vector, display: Display, *, forward: str = "forward") -> str:
    """How far the CG goes along the wing's chord, and which way."""
    unit = shown_unit(Dimension.LENGTH, display)
    far = shown_number(abs(moved[0]), Dimension.LENGTH, display, places=length_places(display))
    if float(far) == 0.0:
        return "CG same"
    return f"CG {far} {unit} {'aft' if moved[0] > 0.0 else forward}"


def length_places(display: Display) -> int:
    """Decimals of a length in a line that has little room."""
    return 0 if display is Display.METRIC else 2


def cost_in_built_work(many: int) -> str:
    """What it costs in built work: `5 BUILT PIECES NO LONGER FIT`."""
    return f"{many} BUILT {'PIECE NO LONGER FITS' if many == 1 else 'PIECES NO LONGER FIT'}"
