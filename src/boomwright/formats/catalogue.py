"""The catalogue of formats: one line a format. Looking at it loads no CAD."""

from __future__ import annotations

from boomwright.formats.format import Format
from boomwright.registry import Catalogue


def _fill(catalogue: Catalogue[Format]) -> None:
    from boomwright.formats import csvtable, dxf, pdf, step, stl, svg, threemf, touchstone

    for entry in (step.STEP, stl.STL, threemf.THREEMF, dxf.DXF, csvtable.CSV, touchstone.TOUCHSTONE, svg.SVG, pdf.PDF):
        catalogue.enter(entry.name, entry)


FORMATS: Catalogue[Format] = Catalogue("format", _fill)
