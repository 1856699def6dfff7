"""What the files of the printed cradle must show, by arithmetic from its plan."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from typing import TYPE_CHECKING, Any

from boomwright.parts.feet import expect_foot
from boomwright.pieces import Expectation, Probe
from boomwright.plan.compensation import NOMINAL, Offsets
from boomwright.plan.cradle_budget import joints_before
from boomwright.plan.cradle_model import BASE_MM, NOTCH_ALLOWED_MM, CradlePlan, Section, mirrored
from boomwright.plan.joint import BORE_MM, Joint
from boomwright.plan.outrigger import REST_MM

if TYPE_CHECKING:
    from boomwright.plan.plan import Plan

EXTENT_ALLOWED_MM = 0.005
BORE_ALLOWED_MM = 0.015
PLAY_ALLOWED_MM = 0.002
BOND_NEAR_MM = 20.0
"""Bond lines farther along x than this from a section cannot come near it: its outer sizes are measured."""

STEP_BACK_MM = 1.0
"""From how far inside its pocket a stop is looked at."""

SIDES = ((1.0, "+y"), (-1.0, "-y"))


def step_of(section: Section) -> str:
    """The STEP file of a section."""
    return f"print/{section.stem}.step"


def expect_section(plan: Plan, section: Section, drawn: Offsets) -> Iterator[Expectation]:
    """Notches, stops, rests and bores in STEP and STL; relief, outer sizes and no overlap with what is laid in it."""
    yield expect_foot(section.stem)
    for suffix, offsets in (("step", NOMINAL), ("stl", drawn)):
        file = f"print/{section.stem}.{suffix}"
        yield from _notches(plan.cradle, section, file, offsets.outline_growth_mm)
        yield from _blocks(plan.cradle, section, file, offsets.outline_growth_mm)
        yield from _bores(section, file, offsets.hole_shrink_mm)
    yield from _relief(plan, section)
    yield from _extent(plan.cradle, section)
    yield _laid_in(plan, section)


def _notches(cradle: CradlePlan, section: Section, file: str, growth_mm: float) -> Iterator[Expectation]:
    x, y = section.shift_mm
    for bearer, notch in [(b, n) for b in section.bearers for n in b.notches]:
        for side, word in SIDES:
            low, high = mirrored(bearer.y_mm, side)
            place = {"at_mm": notch.at_mm + x, "side_y_mm": (low + y, high + y)}
            base = place | {"diameter_mm": 2.0 * notch.radius_mm, "growth_mm": growth_mm}
            for quantity, what, value in (
                ("height_mm", "axis height", cradle.axis_height_mm),
                ("at_mm", "axis position", notch.at_mm + x),
            ):
                words = f"{notch.tag} {what} resting at {word} {abs(bearer.y_mm[0]):g} to {abs(bearer.y_mm[1]):g}"
                probe = Probe("resting_axis", base | {"quantity": quantity})
                yield Expectation(file, words, value, NOTCH_ALLOWED_MM, "mm", probe)


def _blocks(cradle: CradlePlan, section: Section, file: str, growth_mm: float) -> Iterator[Expectation]:
    """End stops: where a conductor's tip may come to; rests: the underside of the conductor."""
    (x, y), places = section.shift_mm, {h.tag: h.at_mm for h in cradle.held}
    for block in section.blocks:
        side, word = SIDES[0] if block.y_mm[0] > 0.0 else SIDES[1]
        inner = min(block.y_mm, key=abs)
        if block.role == "stop":
            height = (cradle.axis_height_mm + block.top_mm) / 2.0
            at = (places[block.tag] + x, inner - side * STEP_BACK_MM + y, height)
            probe = Probe("free_mm", {"at": at, "along": (0.0, side, 0.0), "side": "ahead"})
            what = f"{block.tag} stop at {word} {abs(inner):g} from {STEP_BACK_MM:g} before it"
            yield Expectation(file, what, STEP_BACK_MM + growth_mm, EXTENT_ALLOWED_MM, "mm", probe)
        else:
            at = (places[block.tag] + x, inner + side * REST_MM / 2.0 + y, cradle.axis_height_mm)
            probe = Probe("free_mm", {"at": at, "along": (0.0, 0.0, -1.0), "side": "ahead"})
            under = cradle.axis_height_mm - block.top_mm
            what = f"{block.tag} rest at {word} under the axis"
            yield Expectation(file, what, under, EXTENT_ALLOWED_MM, "mm", probe)


def _bores(section: Section, file: str, shrink_mm: float) -> Iterator[Expectation]:
    x, y = section.shift_mm
    for number, bore in enumerate(section.bores, 1):
        at = (bore[0] + x, bore[1] + y, BASE_MM / 2.0)
        probe = Probe("free_mm", {"at": at, "along": (1.0, 0.0, 0.0), "side": "both"})
        yield Expectation(file, f"bore {number} for a screw", BORE_MM + shrink_mm, BORE_ALLOWED_MM, "mm", probe)


def _relief(plan: Plan, section: Section) -> Iterator[Expectation]:
    (x, y), height = section.shift_mm, plan.cradle.axis_height_mm
    low, high = section.plan_extent_mm[0]
    for bond in plan.seat.bond_lines:
        if section.side or not low - BOND_NEAR_MM < bond.at_mm < high + BOND_NEAR_MM:
            continue
        corners = [
            [bond.at_mm - bond.half_x_mm + x, y - bond.half_y_mm, height - bond.high_z_mm],
            [bond.at_mm + bond.half_x_mm + x, y + bond.half_y_mm, height - bond.low_z_mm],
        ]
        what, relief = f"distance from the bond line of {bond.tag}", plan.cradle.relief_mm
        probe = Probe("clearance_mm", {"box": corners})
        yield Expectation(step_of(section), what, relief, 1e-3, "mm", probe, "at_least")


def _extent(cradle: CradlePlan, section: Section) -> Iterator[Expectation]:
    spans = [
        (low + shift, high + shift) for (low, high), shift in zip(section.plan_extent_mm, section.shift_mm, strict=True)
    ]
    for axis, (low, high) in zip("xyz", [*spans, (0.0, cradle.top_of(section))], strict=True):
        for end, value in (("min", low), ("max", high)):
            probe = Probe("extent", {"quantity": f"{end}_{axis}_mm"})
            yield Expectation(step_of(section), f"cradle {end} {axis}", value, EXTENT_ALLOWED_MM, "mm", probe)


def _laid_in(plan: Plan, section: Section) -> Expectation:
    """Rods, boom and driven element stay where the first of them is laid: one boolean answers for every build stage."""
    names = [*(rod.tag for rod in plan.design.rods), "boom"]
    names += ["DE"] if any(h.tag == "DE" for h in plan.cradle.held) else []
    arguments = {"frame": plan.cradle.frame_of(section), "also_frames": [None], "also_names": names}
    probe = Probe("overlap_mm3", arguments, ("antenna.step",))
    what = f"overlap with what is laid in it ({', '.join(names)})"
    return Expectation(step_of(section), what, 0.0, 1e-6, "mm3", probe)


def expect_together(plan: Plan) -> Iterator[Expectation]:
    """Of pieces put together: no overlap, the play of every joint, and what it adds up to at every piece."""
    cradle = plan.cradle
    first, *others = cradle.sections
    if not others:
        return
    frames = [cradle.frame_of(section) for section in others]
    probe = Probe(
        "overlap_mm3", {"frame": cradle.frame_of(first), "also_frames": frames}, tuple(step_of(s) for s in others)
    )
    yield Expectation(step_of(first), "overlap of all pieces put together", 0.0, 1e-6, "mm3", probe)
    for joint in cradle.joints:
        yield _play(cradle, joint)
    for section in cradle.sections:
        yield _budget(plan, section)


def _play(cradle: CradlePlan, joint: Joint) -> Expectation:
    one, other = cradle.section(joint.tenon), cradle.section(joint.socket)
    frames = {"frame": cradle.frame_of(one), "also_frames": [cradle.frame_of(other)]}
    probe = Probe("joint_play_mm", _arguments(cradle, joint) | frames, (step_of(other),))
    what = f"play of the joint with {joint.socket}"
    return Expectation(step_of(one), what, joint.play_mm, PLAY_ALLOWED_MM, "mm", probe)


def _arguments(cradle: CradlePlan, joint: Joint) -> dict[str, Any]:
    """Where a joint is and which way it is drawn, in the design's frame."""
    ((x0, y0), (x1, y1)), height = joint.box, cradle.axis_height_mm
    low, high = (x0, -y1, height - cradle.top_mm - 1.0), (x1, -y0, height + 1.0)
    return {"along": (float(joint.way[0]), -float(joint.way[1]), 0.0), "box": (low, high)}


def _budget(plan: Plan, section: Section) -> Expectation:
    cradle, joints = plan.cradle, joints_before(plan.cradle, section)
    pieces = _pieces(cradle, section, joints)
    stems = [piece.stem for piece in pieces]
    chain = [
        {"files": (stems.index(joint.tenon), stems.index(joint.socket))} | _arguments(cradle, joint) for joint in joints
    ]
    arguments = {
        "chain": chain,
        "frames": [cradle.frame_of(piece) for piece in pieces],
        "notch_mm": NOTCH_ALLOWED_MM,
    }
    probe = Probe("position_deviation_mm", arguments, tuple(step_of(piece) for piece in pieces[1:]))
    what = "centring budget, behind" if section.side else "position budget, behind"
    words = f"{what} {len(joints)} joint{'' if len(joints) == 1 else 's'} (one standard deviation)"
    limit = plan.shop.accuracy.position_mm
    return Expectation(step_of(section), words, limit, 1e-9, "mm", probe, "at_most")


def _pieces(cradle: CradlePlan, section: Section, joints: Sequence[Joint]) -> list[Section]:
    """The section, then the others that its joints hold together."""
    stems = dict.fromkeys([section.stem, *(stem for joint in joints for stem in (joint.tenon, joint.socket))])
    return [cradle.section(stem) for stem in stems]
