"""A DXF drawing: its unit, and the curves of its model space by layer, blocks opened."""

from __future__ import annotations

import io
import logging
from collections import Counter
from collections.abc import Iterator
from dataclasses import dataclass
from typing import Any

from ledger.errors import Unplaced
from ledger.exchange.dxf_curves import DRAWN, NotFlat, curves_of
from ledger.geometry.curves import Curve

# Header codes of $INSUNITS. Others (miles, parsecs …) are no unit of a part.
UNIT_CODES = {1: "in", 2: "ft", 4: "mm", 5: "cm", 6: "m", 10: "yd", 13: "um", 14: "dm"}
_BINARY = b"AutoCAD Binary DXF"
_DEEPEST = 32
_MOST_ENTITIES = 200_000


class DrawingRefused(Unplaced):
    """A drawing that cannot be read."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Drawn:
    """Curves of one entity in order, on its layer; `closed` where the entity itself says so."""

    layer: str
    curves: tuple[Curve, ...]
    closed: bool


@dataclass(frozen=True, slots=True, kw_only=True)
class Drawing:
    """An opened drawing. `recovered` says what had to be mended to open it at all."""

    document: Any
    unit_code: int
    recovered: str | None

    @property
    def layers(self) -> tuple[str, ...]:
        """Layers that something in model space is drawn on, blocks opened."""
        found = dict.fromkeys(layer for layer, _ in _entities(self.document))
        return tuple(found)

    def drawn(self, scale: float, picked: str | None) -> tuple[tuple[Drawn, ...], Counter[str]]:
        """Curves times `scale` on the picked layer or on all, and how many of what else was left out.

        Raises
            DrawingRefused: no such layer, or a curve that does not lie flat in X and Y.
        """
        wanted = None if picked is None else picked.casefold()
        found: list[Drawn] = []
        left_out: Counter[str] = Counter()
        known = wanted is None
        for layer, entity in _entities(self.document):
            if wanted is not None and layer.casefold() != wanted:
                continue
            known = True
            kind = entity.dxftype()
            if kind not in DRAWN:
                left_out[kind] += 1
                continue
            try:
                curves, closed = curves_of(entity, scale)
            except NotFlat as error:
                raise DrawingRefused(
                    "outline-not-flat",
                    f"a {kind} on layer {layer} does not lie in X and Y ({error})",
                    "draw the outline flat in the X-Y plane",
                ) from None
            # A damaged entity makes the library trip over whatever it lacks.
            except Exception as error:
                raise DrawingRefused(
                    "drawing-broken", f"a {kind} on layer {layer} cannot be read ({error})", "draw it again"
                ) from None
            if curves:
                found.append(Drawn(layer=layer, curves=curves, closed=closed))
        if not known:
            raise DrawingRefused(
                "layer-unknown",
                f"the drawing has nothing on layer {picked!r}",
                f"its layers are {', '.join(self.layers) or 'all empty'}",
            )
        return tuple(found), left_out


def read_drawing(content: bytes) -> Drawing:
    """Open a drawing as text or bytes; a damaged one by recovery, which is said.

    Raises
        DrawingRefused: not a drawing at all.
    """
    # Without a handler its warnings would go to the person's standard error, between the findings.
    log = logging.getLogger("ezdxf")
    if not log.handlers:
        log.addHandler(logging.NullHandler())
    if not content.strip():
        raise DrawingRefused("drawing-broken", "the file is empty", "export the drawing again")
    try:
        document, recovered = _opened(content), None
    # What the strict reader trips over may be anything; recovery then has its turn.
    except Exception as error:
        document, recovered = _recovered(content, str(error) or type(error).__name__)
    # A drawing without a header is given one that says metres when it is opened.
    code = document.header.get("$INSUNITS", 0) if b"$INSUNITS" in content else 0
    return Drawing(document=document, unit_code=code if isinstance(code, int) else 0, recovered=recovered)


def _opened(content: bytes) -> Any:
    import ezdxf
    from ezdxf.filemanagement import dxf_stream_info
    from ezdxf.lldxf.const import DXFStructureError

    if content.startswith(_BINARY):
        from ezdxf.document import Drawing as Document
        from ezdxf.lldxf.tagger import binary_tags_loader

        return Document.load(binary_tags_loader(content))
    info = dxf_stream_info(io.StringIO(content.decode("utf-8", errors="ignore")))
    text = content.decode(info.encoding, errors="surrogateescape")
    # A drawing that ends before its end mark opens all the same, with what came until then.
    if not text.rstrip().endswith("EOF"):
        raise DXFStructureError("it is cut short")
    return ezdxf.read(io.StringIO(text.replace("\r\n", "\n")))


def _recovered(content: bytes, why: str) -> tuple[Any, str | None]:
    from ezdxf import recover

    try:
        document, _ = recover.read(io.BytesIO(content))
    # Recovery of a file that is no drawing trips over anything.
    except Exception as error:
        raise DrawingRefused(
            "drawing-broken",
            f"the file is no drawing that can be read ({error or why})",
            "export it as DXF again",
        ) from None
    if not len(document.modelspace()):
        raise DrawingRefused(
            "drawing-broken", f"nothing in the drawing can be read ({why})", "export it as DXF again"
        )
    return document, why


def _entities(document: Any) -> Iterator[tuple[str, Any]]:
    """Every entity of model space with the layer it counts on, blocks opened to the bottom."""
    opened = enumerate(_opened_blocks(document.modelspace(), "0", 0))
    while True:
        try:
            count, (layer, entity) = next(opened)
        except StopIteration:
            return
        except DrawingRefused:
            raise
        except Exception as error:
            raise DrawingRefused(
                "drawing-broken", f"a block of the drawing cannot be opened ({error})", "explode it"
            ) from None
        if count >= _MOST_ENTITIES:
            raise DrawingRefused(
                "drawing-too-big",
                f"the drawing has more than {_MOST_ENTITIES} entities",
                "keep only the outline in it",
            )
        yield layer, entity


def _layer_of(entity: Any) -> str:
    from ezdxf.lldxf.const import DXFError

    # What another program's own kinds of entity are drawn on cannot be asked of them.
    try:
        return str(entity.dxf.get("layer", "0"))
    except DXFError:
        return "0"


def _opened_blocks(entities: Any, outer: str, depth: int) -> Iterator[tuple[str, Any]]:
    if depth > _DEEPEST:
        raise DrawingRefused(
            "drawing-broken", "a block holds itself", "explode the blocks and export the drawing again"
        )
    for entity in entities:
        own = _layer_of(entity)
        # What a block has on layer 0 counts on the layer that the block is put on.
        layer = outer if own == "0" and depth else own
        if entity.dxftype() != "INSERT":
            yield layer, entity
            continue
        skipped: list[str] = []
        for one in entity.multi_insert() if entity.mcount > 1 else (entity,):
            inner = one.virtual_entities(
                skipped_entity_callback=lambda _, why, skipped=skipped: skipped.append(why)
            )
            yield from _opened_blocks(inner, layer, depth + 1)
        if skipped:
            raise DrawingRefused(
                "drawing-broken",
                f"block {entity.dxf.name} holds what cannot be placed ({skipped[0]})",
                "explode the block and export the drawing again",
            )
