"""The feed-point mould: closes round the finished antenna's feed, is filled with resin, and comes off again.

Drawn along z, `mould-upper` and `mould-lower` are what they say; drawn along x, `mould-upper` is the front half and
`mould-lower` the rear one. A loop has a clip besides.
"""

from __future__ import annotations

import math
from typing import TYPE_CHECKING, Any

from boomwright.design.centreline import straight_half_mm
from boomwright.parts.feet import expect_foot
from boomwright.parts.mould_halves import clip_shape, half_shape
from boomwright.parts.palette import PRINTED
from boomwright.pieces import Body, Expectation, Matrix, Part, Piece, Probe, SolidPiece
from boomwright.plan.compensation import printer_offsets
from boomwright.plan.mould_plan import HALVES, Half, MouldPlan

if TYPE_CHECKING:
    from boomwright.plan.plan import Plan

ANTENNA = "antenna.step"
CLIP_FILE = "print/mould-clip.step"
NOTHING_MM3 = 1e-6
DRAFT_ALLOWED_DEG = 1e-3
VOLUME_ALLOWED_SHARE = 0.01
PLACE_ALLOWED_MM = 0.005
CEILING_ALLOWED_MM = 0.05
END_ALLOWED_MM = 1.0
"""Cavity beyond an opening: less than the opening's own radius and this."""


class Mould(Part):
    """Two halves round the feed, and a clip for a loop."""

    name = "mould"
    purpose = "two-part form for the resin block at the feed point, with a clip that holds a loop upright"
    processes = ("print",)

    def build(self, plan: Plan) -> tuple[Piece, ...]:
        """Both halves and the clip, nominal and as drawn for this printer."""
        mould, offsets = plan.mould, printer_offsets(plan.shop.printer)
        taken = {"outline_growth_mm": offsets.outline_growth_mm, "hole_shrink_mm": offsets.hole_shrink_mm}

        def piece(stem: str, shape: Any, frame: Matrix) -> SolidPiece:
            printed = (Body(stem, shape(offsets), PRINTED),) if offsets else None
            return SolidPiece(stem, "print", (Body(stem, shape(), PRINTED),), frame, printed, taken)

        pieces = [
            piece(f"mould-{half}", lambda *offsets, half=half: half_shape(mould, half, *offsets), mould.frame(half))
            for half in HALVES
        ]
        if (clip := mould.clip) is not None:
            pieces.append(piece("mould-clip", lambda *offsets: clip_shape(clip, *offsets), clip.frame))
        return tuple(pieces)

    def expect(self, plan: Plan) -> tuple[Expectation, ...]:
        """Draft, release, no overlap, resin, a cavity in one, pins that fit, and the sizes of the block."""
        mould = plan.mould
        found = [e for half in HALVES for e in _expect_half(plan, half)]
        found += [expect_foot(f"mould-{half}") for half in HALVES]
        found += _expect_closed(plan)
        if mould.clip is not None:
            found += _expect_clip(plan)
        return tuple(found)


def _file(half: Half) -> str:
    return f"print/mould-{half}.step"


def _expect_half(plan: Plan, half: Half) -> list[Expectation]:
    mould, file = plan.mould, _file(half)
    frame, words = mould.frame(half), f"mould-{half}"
    pull = [math.copysign(1.0, move) if move else 0.0 for move in mould.legs[half][0]]
    cavity = {"frame": frame, "box": [list(corner) for corner in zip(*mould.cavity.box_mm, strict=True)]}
    draft = math.degrees(math.atan(mould.cavity.slope))
    probe = Probe("draft_deg", cavity | {"pull": pull, "taper_mm": mould.cavity.taper_mm})
    found = [Expectation(file, f"{words} least draft", draft, DRAFT_ALLOWED_DEG, "deg", probe, "at_least")]
    sweep = {"frame": frame, "legs": mould.legs[half], "solids": _coax(mould)}
    what = f"{words} meets antenna or coax on its way off"
    found.append(_nothing(file, what, Probe("sweep_overlap_mm3", sweep, (ANTENNA,))))
    found.append(
        _nothing(file, f"{words} overlap with the antenna", Probe("interference_mm3", {"frame": frame}, (ANTENNA,)))
    )
    if mould.coax is not None:
        probe = Probe("interference_mm3", {"frame": frame, "solids": _coax(mould)})
        found.append(_nothing(file, f"{words} overlap with the coax", probe))
    found += _expect_neighbours(plan, half)
    return found


def _expect_neighbours(plan: Plan, half: Half) -> list[Expectation]:
    """The clearance in front and behind to the conductor next to the block, where the plan keeps one."""
    mould, driven, found = plan.mould, plan.design.driven, []
    for place, behind in ((0, True), (1, False)):
        near = mould.ends.neighbours[place]
        if near is None or (mould.pull == "x" and behind == (half == "upper")):
            continue
        rod = next((r for r in plan.design.rods if r.tag == near.tag), driven)
        r, y = rod.diameter_mm / 2.0, straight_half_mm(driven) if rod is driven else (rod.length_mm or 0.0) / 2.0
        inner, outer = sorted((near.surface_mm, near.surface_mm + 2.0 * r * (-1.0 if behind else 1.0)))
        box = _moved_box(mould.frame(half), ((inner, -y, -r), (outer, y, r)))
        least = abs(near.surface_mm - mould.block[0][place])
        probe = Probe("clearance_mm", {"box": box})
        what = f"mould-{half} distance from {near.tag}"
        found.append(Expectation(_file(half), what, least, PLACE_ALLOWED_MM, "mm", probe, "at_least"))
    return found


def _expect_closed(plan: Plan) -> list[Expectation]:
    """What both halves and the antenna show together."""
    mould, file, other = plan.mould, _file("upper"), _file("lower")
    frames = {"frame": mould.frame("upper"), "also_frames": [mould.frame("lower")]}
    found = [_nothing(file, "mould-upper overlap with mould-lower", Probe("overlap_mm3", frames, (other,)))]
    whole = {
        "frame": mould.frame("upper"),
        "also_frames": [mould.frame("lower"), None],
        "solids": _coax(mould),
        "fill": _bore(plan),
        "hollows": _seats(plan),
    }
    corners = [list(corner) for corner in zip(*mould.cavity.box_mm, strict=True)]
    volume = mould.resin_mm3
    probe = Probe("cavity_volume_mm3", whole | {"box": corners}, (other, ANTENNA))
    allowed = VOLUME_ALLOWED_SHARE * volume
    found.append(Expectation(file, "resin volume", volume, allowed, "mm3", probe))
    density = plan.design.resin.density_g_cm3 / 1000.0
    probe = Probe("cavity_volume_mm3", whole | {"box": corners, "density_g_mm3": density}, (other, ANTENNA))
    found.append(Expectation(file, "resin mass", volume * density, allowed * density, "g", probe))
    ends = [_inside(mould.funnel.at, mould.funnel.mouth), _inside(mould.vent.at, mould.vent.mouth)]
    around = _with_openings(mould)
    probe = Probe("cavity_connected", whole | {"box": around, "points": ends}, (other, ANTENNA))
    found.append(Expectation(file, "cavity is one space from funnel to vent", 1.0, 0.0, "", probe))
    found += _expect_pouring(mould, whole | {"box": around})
    axes = [[_parting_point(mould, p.u_mm, p.y_mm), _pull_axis(mould)] for p in mould.face.pins]
    pins = {"frame": mould.frame("upper"), "also_frames": [mould.frame("lower")], "axes": axes}
    probe = Probe("pin_play_mm", pins, (other,))
    found.append(Expectation(file, "play of the pins in their sockets", mould.play_mm, PLACE_ALLOWED_MM, "mm", probe))
    return found


def _expect_pouring(mould: MouldPlan, room: dict[str, Any]) -> list[Expectation]:
    """Funnel and vent begin at the cavity's ceiling, one at each end of it."""
    named = {"funnel": mould.funnel, "vent": mould.vent}
    openings = [[list(one.at), max(radius for _, radius in one.stages) + 0.1] for one in named.values()]
    base = room | {"up": list(mould.funnel.direction), "openings": openings}
    if mould.coax is not None and mould.coax.start[:2] == mould.coax.end[:2]:
        base["passages"] = [[list(mould.coax.start), mould.coax.radius_mm + mould.clearance_mm + 0.1]]
    found = []
    for number, (word, opening) in enumerate(named.items()):
        for quantity, what, expected, allowed in (
            ("above_mm", f"cavity above the {word}'s beginning", 0.0, CEILING_ALLOWED_MM),
            ("beside_mm", f"{word} from the cavity's end", opening.stages[0][1], END_ALLOWED_MM),
        ):
            probe = Probe("ceiling", base | {"opening": number, "quantity": quantity}, (_file("lower"), ANTENNA))
            found.append(Expectation(_file("upper"), what, expected, allowed, "mm", probe, "at_most"))
    return found


def _expect_clip(plan: Plan) -> list[Expectation]:
    mould = plan.mould
    assert mould.clip is not None
    frame = mould.clip.frame
    frames = {"frame": frame, "also_frames": [None, mould.frame("upper"), mould.frame("lower")]}
    also = (ANTENNA, _file("upper"), _file("lower"))
    off = ((0.0, 0.0, mould.clip.top_mm - mould.clip.foot_mm),)
    return [
        expect_foot("mould-clip"),
        _nothing(CLIP_FILE, "mould-clip overlap with antenna and mould", Probe("interference_mm3", frames, also)),
        _nothing(
            CLIP_FILE,
            "mould-clip meets the antenna on its way off",
            Probe("sweep_overlap_mm3", {"frame": frame, "legs": off, "solids": []}, (ANTENNA,)),
        ),
    ]


def _nothing(file: str, what: str, probe: Probe) -> Expectation:
    return Expectation(file, what, 0.0, NOTHING_MM3, "mm3", probe, "at_most")


def _coax(mould: MouldPlan) -> list[dict[str, Any]]:
    if mould.coax is None:
        return []
    ends = {"start": list(mould.coax.start), "end": list(mould.coax.end)}
    return [ends | {"kind": "cylinder", "radius_mm": mould.coax.radius_mm}]


def _bore(plan: Plan) -> list[dict[str, Any]]:
    """What plugs a tube's bore."""
    boom, seat = plan.boom, plan.seat
    if boom.wall_mm <= 0.0:
        return []
    half, axis = seat.half_width_mm - boom.wall_mm, seat.axis_mm
    if boom.section == "square":
        corners = [[seat.start_mm, -half, axis - half], [seat.end_mm, half, axis + half]]
        return [{"kind": "box", "corners": corners}]
    ends = {"start": [seat.start_mm, 0.0, axis], "end": [seat.end_mm, 0.0, axis]}
    return [ends | {"kind": "cylinder", "radius_mm": half}]


def _seats(plan: Plan) -> list[dict[str, Any]]:
    """Grooves and pockets as they go through a plug: a round bottom and straight sides up."""
    found: list[dict[str, Any]] = []
    if plan.boom.wall_mm <= 0.0:
        return found
    top, y = plan.seat.top_mm + 1.0, plan.seat.half_width_mm
    for groove in plan.seat.grooves:
        x, r = groove.at_mm, groove.radius_mm
        found.append({"kind": "cylinder", "start": [x, -y, 0.0], "end": [x, y, 0.0], "radius_mm": r})
        found.append({"kind": "box", "corners": [[x - r, -y, 0.0], [x + r, y, top]]})
        if groove.pocket is not None:
            px, py = groove.pocket.half_x_mm, groove.pocket.half_y_mm
            found.append({"kind": "box", "corners": [[x - px, -py, -r], [x + px, py, top]]})
    return found


def _with_openings(mould: MouldPlan) -> list[list[float]]:
    """The cavity's box with the way out through funnel and vent."""
    low, high = ([span[end] for span in mould.cavity.box_mm] for end in (0, 1))
    for opening in (mould.funnel, mould.vent):
        for axis in range(3):
            low[axis] = min(low[axis], opening.mouth[axis])
            high[axis] = max(high[axis], opening.mouth[axis])
    return [low, high]


def _inside(at: tuple[float, float, float], mouth: tuple[float, float, float]) -> list[float]:
    """A point in an opening, nearly at its mouth."""
    return [a + 0.9 * (m - a) for a, m in zip(at, mouth, strict=True)]


def _parting_point(mould: MouldPlan, u_mm: float, y_mm: float) -> list[float]:
    level = mould.parting_mm[1]
    return [u_mm, y_mm, level] if mould.pull == "z" else [level, y_mm, u_mm]


def _pull_axis(mould: MouldPlan) -> list[float]:
    return [0.0, 0.0, 1.0] if mould.pull == "z" else [1.0, 0.0, 0.0]


def _moved_box(frame: Matrix, corners: tuple[tuple[float, ...], tuple[float, ...]]) -> list[list[float]]:
    """A box's corners in the file's frame; the frames here turn by right angles only."""
    moved = [[sum(m * c for m, c in zip(row[:3], p, strict=True)) + row[3] for row in frame[:3]] for p in corners]
    return [[min(pair) for pair in zip(*moved, strict=True)], [max(pair) for pair in zip(*moved, strict=True)]]
