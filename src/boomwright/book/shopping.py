"""What to buy and cut: bars, boom, cable, adhesive, resin, what to print and what to cut from sheet."""

from __future__ import annotations

from dataclasses import replace

from boomwright.book.content import Block, Chapter, Heading, Paragraph, Table
from boomwright.book.run import Run
from boomwright.book.words import figure, listed, mm, rough, span
from boomwright.data.tables import general_tolerance_mm
from boomwright.design.centreline import developed_length_mm
from boomwright.errors import CatalogueError
from boomwright.plan.estimate import (
    MEAN_SPEED_MM_S,
    SheetEstimate,
    comb_estimate,
    print_estimates,
    rate_mm3_s,
    sheet_estimate,
)
from boomwright.plan.mounting import groove_mm3, hole_mm3
from boomwright.plan.plan import Plan
from boomwright.plan.seat import Hole
from boomwright.plan.stock import plan_stock
from boomwright.units import ml_from_mm3

LEFT_IN_THE_CUP = 1.5
"""Mix so much more than is needed: cup, spatula and funnel keep the rest (common practice)."""


def chapter(run: Run) -> Chapter:
    """What to have on the bench before starting."""
    blocks: list[Block] = [
        Heading("To buy"),
        _purchases(run),
        Heading("To cut"),
        _cut_table(run),
        Paragraph(_stock_words(run)),
        _bar_table(run),
    ]
    if run.volumes_mm3:
        blocks += [Heading("To print"), _print_table(run), Paragraph(_print_words(run))]
    elif prints := [part for part in run.manifest.parts if run.pieces(part)]:
        blocks += [Heading("To print"), Paragraph(f"Printed parts: {listed(prints)}.")]
    if sheets := _sheets(run):
        blocks += [Heading("To cut from sheet"), _sheet_table(run, sheets)]
    return Chapter("What to buy and cut", "shopping", tuple(blocks))


def _purchases(run: Run) -> Table:
    plan, design, boom = run.plan, run.design, run.plan.boom
    length = plan.seat.end_mm - plan.seat.start_mm
    wall = "solid" if boom.wall_mm == 0.0 else f"wall {mm(boom.wall_mm)}"
    rows = [("Boom", f"{boom.material}, {boom.section}, {mm(boom.width_mm)}, {wall}", mm(length))]
    for group in plan_stock(design, run.shop)[0].groups:
        source = "buy" if group.bought else "from the shelf"
        lengths = [bar.length_mm for bar in group.cutting.bars]
        counts = [f"{lengths.count(one)} of {mm(one)}" for one in dict.fromkeys(lengths)]
        rows.append(("Bar or wire", f"{group.material}, {mm(group.diameter_mm)}", f"{source}: {listed(counts)}"))
    if run.cable is not None:
        rows.append(("Coax", run.cable.name, "as long as the way to the radio needs"))
    if run.is_glued:
        rows.append(("Adhesive", design.adhesive.name, f"about {rough(adhesive_ml(plan), 1)} ml for all joints"))
    if run.has_resin:
        volume = run.size("mould.resin_volume_ml")
        words = f"{figure(volume)} ml in the mould; mix {figure(LEFT_IN_THE_CUP * volume, 1)} ml"
        rows.append(("Resin", design.resin.name, words))
        rows.append(("Release wax", "for the mould's inner faces", "a little"))
    if sleeves := [hole for hole in plan.seat.holes if hole.sleeve_outer_mm > 0.0]:
        size = f"{mm(sleeves[0].sleeve_outer_mm)} outside, {mm(sleeves[0].sleeve_inner_mm)} inside"
        rows.append(("Sleeves", size, f"{len(sleeves)} of {mm(boom.width_mm)}"))
    if run.tips:
        rows.append(("Caps", "soft caps for rod ends", str(run.tips)))
    return Table(("What", "Which", "How much"), tuple(rows), "What goes into the antenna.")


def adhesive_ml(plan: Plan, tags: tuple[str, ...] | None = None) -> float:
    """Adhesive that fills all seats [ml]: each seat's hollow in the boom less its rod; pockets are the resin's.

    tags   of the seats that count; None = all
    """
    bare = {rod.tag: rod.outer_diameter_mm for rod in plan.design.rods}
    total = 0.0
    for groove in plan.seat.grooves:
        diameter = bare.get(groove.tag, plan.design.driven.outer_diameter_mm)
        rod = Hole(groove.tag, groove.at_mm, diameter)
        if tags is not None and groove.tag not in tags:
            continue
        total += max(groove_mm3(replace(groove, pocket=None), plan) - hole_mm3(rod, plan), 0.0)
    for hole in plan.seat.holes:
        inner = hole.sleeve_outer_mm or bare[hole.tag]
        total += hole_mm3(hole, plan) - hole_mm3(Hole(hole.tag, hole.at_mm, inner), plan)
    return ml_from_mm3(total)


def _cut_table(run: Run) -> Table:
    rows = [
        (rod.tag, mm(rod.length_mm), tolerance_words(rod.length_mm), mm(rod.diameter_mm), rod.material)
        for rod in run.design.rods
    ]
    driven = run.design.driven
    length = developed_length_mm(driven)
    halves = driven.form == "straight"
    each = length / 2.0 if halves else length
    words = "two halves, each " if halves else "before bending, "
    rows.append(("DE", words + mm(each), tolerance_words(each), mm(driven.diameter_mm), driven.material))
    return Table(
        ("Tag", "Length", "Tolerance", "Diameter", "Material"), tuple(rows), "The cut list: as cut, tip to tip."
    )


def tolerance_words(length_mm: float) -> str:
    """The fine general tolerance of a length, or where the standard gives none."""
    try:
        return f"+- {mm(general_tolerance_mm(length_mm))}"
    except CatalogueError:
        return "as true as the shop holds"


def _stock_words(run: Run) -> str:
    saw = run.shop.saw
    return (
        f"Every cut takes {mm(saw.kerf_mm)}, every piece {mm(saw.dress_mm)} more at each end for dressing square. Saw "
        "in the order of the table."
    )


def _bar_table(run: Run) -> Table:
    rows = []
    for number, (group, bar) in enumerate(plan_stock(run.design, run.shop)[0].bars, 1):
        tags = listed(piece.blank.tag for piece in bar.pieces)
        rows.append((str(number), group.words, mm(bar.length_mm), tags, mm(bar.offcut_mm, 1)))
    return Table(("Bar", "Of", "Length", "Saw from it", "Offcut"), tuple(rows), "The stock plan.")


def _print_table(run: Run) -> Table:
    rows = []
    for one in print_estimates(run.volumes_mm3, run.shop.printer):
        cells = (f"{figure(one.volume_mm3 / 1000.0, 1)}", span(one.mass_g, 1), span(one.hours, 1))
        rows.append((one.stem, *cells))
    head = ("Piece", "Volume [ml]", "Mass [g]", "Time [h]")
    return Table(head, tuple(rows), f"Printed pieces in {run.shop.printer.material}, printed solid.")


def _print_words(run: Run) -> str:
    printer = run.shop.printer
    return (
        f"Times are estimates from {figure(rate_mm3_s(printer), 1)} cubic millimetres a second: nozzle "
        f"{mm(printer.nozzle_mm)}, layer {mm(printer.layer_mm)}, {figure(MEAN_SPEED_MM_S)} mm a second on the mean. "
        "The slicer knows better. A sparse filling takes less of both."
    )


def _sheets(run: Run) -> list[SheetEstimate]:
    laser = run.shop.laser
    found = [comb_estimate(run.plan.comb, laser)] if run.has("spacing-comb") else []
    return found + [sheet_estimate(stem, 1, area, laser) for stem, area in sorted(run.areas_mm2.items())]


def _sheet_table(run: Run, sheets: list[SheetEstimate]) -> Table:
    rows = []
    for one in sheets:
        mass = "-" if one.mass_g is None else figure(one.mass_g, 1)
        rows.append((one.stem, str(one.pieces), figure(one.area_mm2 / 100.0, 1), mass))
    laser = run.shop.laser
    caption = f"Parts from {mm(laser.sheet_mm)} {laser.material}; the files have the kerf of {mm(laser.kerf_mm)} taken."
    return Table(("Part", "Pieces", "Area [cm²]", "Mass [g]"), tuple(rows), caption)
