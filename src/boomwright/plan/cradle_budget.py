"""The budget of positions in a cradle of several pieces: what the play of its joints may add up to."""

from __future__ import annotations

import math
from collections.abc import Sequence

from boomwright.errors import Fault
from boomwright.plan.cradle_model import NOTCH_ALLOWED_MM, CradlePlan, Section
from boomwright.plan.joint import ROOT_2, Joint, most_play_mm, position_deviation_mm
from boomwright.plan.size import Size
from boomwright.shop.profile import Shop


def joints_before(cradle: CradlePlan, section: Section) -> tuple[Joint, ...]:
    """The joints whose play counts at a section, innermost first: along x back to the first section for a section of
    the cradle, along y to the cradle for an outrigger.
    """
    along = abs(section.side)
    found, stem = list[Joint](), section.stem
    while (joint := _joint_at(cradle, stem, along)) is not None:
        found.append(joint)
        stem = joint.socket if along else joint.tenon
    return tuple(reversed(found))


def _joint_at(cradle: CradlePlan, stem: str, along: int) -> Joint | None:
    """The joint by which a piece holds on to the one before it; an outrigger bears its tenon, a section its socket."""
    for joint in cradle.joints:
        if abs(joint.way[1]) == along and (joint.tenon if along else joint.socket) == stem:
            return joint
    return None


def budget_faults(cradle: CradlePlan, shop: Shop) -> list[Fault]:
    """The worst piece whose joints' play adds up to more than one standard deviation of the shop's positions."""
    limit, worst = shop.accuracy.position_mm, None
    for section in cradle.sections:
        joints = joints_before(cradle, section)
        deviation = position_deviation_mm([j.play_mm for j in joints], NOTCH_ALLOWED_MM)
        if joints and deviation > limit and (worst is None or deviation > worst[0]):
            worst = (deviation, section, len(joints))
    if worst is None:
        return []
    deviation, section, count = worst
    most = math.floor(1e3 * most_play_mm(count, NOTCH_ALLOWED_MM, limit) / ROOT_2) / 1e3
    found = (
        f"{shop.printer.press_clearance_mm:g} gives the {count} joints before {section.stem} so much play that places "
        f"there are {deviation:.3f} mm off (one standard deviation), more than accuracy.position_mm {limit:g}"
    )
    fix = f"a press clearance of at most {most:g}, a printer with a larger bed, or a wider accuracy.position_mm"
    return [Fault("printer.press_clearance_mm", found, fix)]


def budget_sizes(cradle: CradlePlan, shop: Shop, cuts: Sequence[tuple[float, str]]) -> list[Size]:
    """Where it is cut, the joints' play, and the worst deviations it leads to; `cuts` as x [mm] and where that is."""
    sizes = [Size(f"cradle.cut.{i}_mm", x, "mm", words) for i, (x, words) in enumerate(cuts, 1)]
    if not cradle.joints:
        return sizes
    clearance = shop.printer.press_clearance_mm
    origin = f"flanks at 45 degrees: press clearance {clearance:g} x root 2; faces butt, all stand on one flat bench"
    sizes.append(Size("cradle.joint.play_mm", cradle.joints[0].play_mm, "mm", origin))
    for outrigger, key, what in ((False, "position", "along the boom"), (True, "centring", "of a rod's end along y")):
        pieces = [s for s in cradle.sections if bool(s.side) == outrigger]
        counts = [len(joints_before(cradle, s)) for s in pieces]
        if not counts or not max(counts):
            continue
        worst = pieces[counts.index(max(counts))]
        plays = [j.play_mm for j in joints_before(cradle, worst)]
        deviation = position_deviation_mm(plays, NOTCH_ALLOWED_MM)
        words = (
            f"place {what}, one standard deviation, {worst.stem}: {len(plays)} joints' play each over root 12, notch "
            f"{NOTCH_ALLOWED_MM:g} over root 3, squares added; accuracy.position_mm is {shop.accuracy.position_mm:g}"
        )
        sizes.append(Size(f"cradle.budget.{key}_mm", deviation, "mm", words))
    return sizes
