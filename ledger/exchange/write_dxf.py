"""A flat panel as the drawing a router cuts: one closed outline and its round holes, in millimetres."""

from __future__ import annotations

import contextlib
import io
from collections.abc import Iterable, Iterator

from ledger.exchange.figure_texts import millimetres
from ledger.loft.lofted import Floats, RoundHole

LAYER = "CUT"


def panel_drawing(outline_m: Floats, holes: Iterable[RoundHole]) -> bytes:
    """DXF R2010 with unit code mm and all of it on layer CUT; the same panel gives the same bytes.

    outline_m : (n, 2) float
        Corners in metres, in the panel's own X and Y; the last is joined to the first.
    """
    import ezdxf

    with _without_time_stamps():
        drawing = ezdxf.new("R2010", units=ezdxf.units.MM)
        drawing.layers.add(LAYER)
        space = drawing.modelspace()
        corners = [(_mm(x), _mm(y)) for x, y in outline_m.tolist()]
        space.add_lwpolyline(corners, close=True, dxfattribs={"layer": LAYER})
        for hole in holes:
            centre = (_mm(hole.x_m), _mm(hole.y_m))
            space.add_circle(centre, _mm(hole.diameter_m) / 2.0, dxfattribs={"layer": LAYER})
        # The library walks a set of kinds when it writes, whose order is another in each process.
        for kind in sorted(drawing.entitydb.dxf_types_in_use()):
            drawing.classes.add_class(kind)
        text = io.StringIO()
        drawing.write(text)
    return text.getvalue().encode(drawing.output_encoding)


def _mm(value_m: float) -> float:
    return float(millimetres(float(value_m)))


@contextlib.contextmanager
def _without_time_stamps() -> Iterator[None]:
    # Else times, numbers drawn by lot and the library's version would make each drawing a new file.
    import ezdxf

    before = ezdxf.options.write_fixed_meta_data_for_testing
    ezdxf.options.write_fixed_meta_data_for_testing = True
    try:
        yield
    finally:
        ezdxf.options.write_fixed_meta_data_for_testing = before
