"""The feed-point mould: which way its halves are drawn off, its sizes with their origins, and what stands in its way.

Halves: drawn along z, `mould-upper` goes up and `mould-lower` down; drawn along x, `mould-upper` is the front half and
`mould-lower` the rear one. Pins stand on the lower (rear) half.
"""

from __future__ import annotations

from dataclasses import replace

from boomwright.design.model import Design
from boomwright.errors import Fault
from boomwright.plan.clip import plan_clip
from boomwright.plan.mould_layout import Ground, cavity_of, lay_out_mould, pull_of
from boomwright.plan.mould_plan import HALVES, Half, MouldPlan
from boomwright.plan.mould_room import MouldRoom
from boomwright.plan.seat import SeatPlan
from boomwright.plan.size import Size
from boomwright.shop.profile import Shop
from boomwright.units import g_from_mm3, ml_from_mm3

__all__ = ["HALVES", "Half", "MouldPlan", "plan_mould"]


def plan_mould(design: Design, shop: Shop, seat: SeatPlan) -> tuple[MouldPlan, list[Size], list[Fault]]:
    """The mould of a design with a boom, the sizes with their origins, and why this shop cannot make it."""
    assert design.boom is not None
    room = MouldRoom(pull_of(design.driven), design, shop, seat)
    ground = Ground(design, shop, seat, design.boom, room)
    cavity, ends, faults = cavity_of(ground)
    mould = lay_out_mould(ground, cavity, ends)
    faults += _pin_faults(mould)
    if design.driven.form == "loop":
        clip, clip_faults = plan_clip(design, shop, seat, mould.block[2][1])
        faults += clip_faults
        mould = replace(mould, clip=clip)
    mould = replace(mould, notes=_notes(ground, mould))
    return mould, _sizes(ground, mould), faults + _bed_faults(mould, shop)


def _notes(ground: Ground, mould: MouldPlan) -> tuple[str, ...]:
    form, notes = ground.driven.form, []
    if ground.boom.wall_mm > 0.0:
        notes.append("plug the boom's bore for the length of the mould before grooving, or the resin runs into it")
    if mould.pull == "x":
        notes.append("mould-upper is the front half, mould-lower the rear half; draw them off along the boom")
    else:
        notes.append("fill to the funnel's neck; break the sprue off there before the upper half is lifted")
    if form == "folded" and mould.pull == "x":
        notes.append("seal the joint between mould and boom with modelling clay before pouring")
    if form == "loop":
        notes.append("pot with the antenna upside down: funnel and vent are then the highest points")
        notes.append("mould-clip on the boom's top holds the loop upright while the resin sets")
    if not mould.face.ties:
        notes.append("no room for cable ties on the flanges: hold the halves together with tape or a clamp")
    return tuple(notes)


def _pin_faults(mould: MouldPlan) -> list[Fault]:
    if mould.face.pins:
        return []
    found = "the mould's flanges leave no room for alignment pins of 1.2 mm beside the conductor"
    return [Fault("driven.diameter_mm", found, "use a thinner driven element, or set its neighbours farther away")]


def _bed_faults(mould: MouldPlan, shop: Shop) -> list[Fault]:
    bed, faults = shop.printer.bed_mm, []
    sizes = [high - low for low, high in mould.block]
    for half in HALVES:
        low, high = mould.half_span_mm(half)
        across = sizes[0] if mould.pull == "z" else sizes[2]
        flat = sorted((across, sizes[1]))
        over = max(flat[1] - max(bed[:2]), flat[0] - min(bed[:2]), high - low - bed[2])
        if over > 1e-9:
            found = f"mould-{half} is {flat[1]:.4g} x {flat[0]:.4g} x {high - low:.4g}, {over:.4g} mm more than the bed"
            faults.append(Fault("printer.bed_mm", found, "use a larger printer, or leave the mould out"))
    clip = mould.clip
    if clip is not None:
        over = clip.top_mm - clip.foot_mm - bed[2]
        if over > 1e-9:
            found = f"mould-clip is {clip.top_mm - clip.foot_mm:.4g} high, {over:.4g} mm more than the bed allows"
            faults.append(Fault("printer.bed_mm", found, "use a larger printer, or leave the mould out"))
    return faults


def _sizes(ground: Ground, mould: MouldPlan) -> list[Size]:
    ends, shop = mould.ends, ground.shop
    sizes = []
    for side, place in (("rear", 0), ("front", 1)):
        sizes.append(Size(f"mould.resin_{side}_mm", ends.resin_mm[place], "mm", ends.why[place]))
        sizes.append(Size(f"mould.wall_{side}_mm", ends.wall_mm[place], "mm", ends.why[place]))
        if (gap := ends.clearance_mm[place]) is not None:
            sizes.append(Size(f"mould.clearance_{side}_mm", gap, "mm", ends.why[place]))
        if mould.pull == "x":
            words = "depth of its cavity + 0.5, then off the boom"
            sizes.append(Size(f"mould.travel_{side}_mm", ends.travel_mm[place], "mm", words))
    for axis, (low, high) in zip("xyz", mould.block, strict=True):
        sizes.append(Size(f"mould.size_{axis}_mm", high - low, "mm", "cavity + walls" + (" + flanges" * (axis == "y"))))
    words = f"conductor {2.0 * ground.radius_mm:g} + 2 x channel clearance {mould.clearance_mm:g}"
    sizes.append(Size("mould.conductor_channel_mm", 2.0 * mould.conductor_channel_mm, "mm", words))
    if mould.coax is not None:
        words = f"{ground.design.feed.coax} {2.0 * mould.coax.radius_mm:g} + 2 x channel clearance"
        sizes.append(Size("mould.coax_channel_mm", 2.0 * (mould.coax.radius_mm + mould.clearance_mm), "mm", words))
    if mould.face.pins:
        words = "as thick as the parting face allows; sockets wider by 2 x slide clearance"
        sizes.append(Size("mould.pin_diameter_mm", mould.face.pins[0].diameter_mm, "mm", words))
    volume, resin = mould.resin_mm3, ground.design.resin
    words = "cavity less boom, conductors and coax; groove and pocket filled; funnel and vent not counted"
    sizes.append(Size("mould.resin_volume_ml", ml_from_mm3(volume), "ml", words))
    words = f"volume x {resin.density_g_cm3:g} g/cm3"
    sizes.append(Size("mould.resin_mass_g", g_from_mm3(volume, resin.density_g_cm3), "g", words))
    sizes.append(Size("mould.draft_deg", shop.mould.draft_deg, "deg", "; ".join(mould.notes)))
    return sizes
