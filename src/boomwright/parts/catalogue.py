"""The parts, one line each. Third parties add theirs through the entry-point group `boomwright.parts`."""

from __future__ import annotations

from importlib import import_module
from importlib.metadata import entry_points

from boomwright.pieces import Part
from boomwright.registry import Catalogue

ENTRY_POINTS = "boomwright.parts"
BOOK = "build-book"
BOOK_PURPOSE = "what to buy, cut, print, glue, solder and measure, step by step, with the figures of this run"
"""The book is no part: it is written from all of them, when they have been measured. It is asked for like one."""

_OWN = (
    "boomwright.parts.antenna:AntennaPart",
    "boomwright.parts.boom:BoomPart",
    "boomwright.parts.rod:RodPart",
    "boomwright.parts.sleeve:SleevePart",
    "boomwright.parts.driven:DrivenPart",
    "boomwright.parts.cut_list:CutListPart",
    "boomwright.parts.stock_plan:StockPlanPart",
    "boomwright.parts.wrap:WrapTemplate",
    "boomwright.parts.cradle:CradlePart",
    "boomwright.parts.sheet_cradle:SheetCradlePart",
    "boomwright.parts.mould:Mould",
    "boomwright.parts.comb:SpacingComb",
    "boomwright.parts.former:FormerPart",
    "boomwright.parts.gauge:LengthGauge",
    "boomwright.parts.guide:GrooveGuide",
    "boomwright.parts.cut_block:CutBlockPart",
    "boomwright.parts.drawings:DrawingsPart",
    "boomwright.parts.prediction:PredictionPart",
)


def _fill(catalogue: Catalogue[Part]) -> None:
    for line in _OWN:
        module, name = line.split(":")
        part = getattr(import_module(module), name)()
        catalogue.enter(part.name, part)
    for point in sorted(entry_points(group=ENTRY_POINTS), key=lambda p: p.name):
        part = point.load()()
        catalogue.enter(part.name, part)


PARTS: Catalogue[Part] = Catalogue("part", _fill)
