"""Scenes for tests: one of boxes that needs no CAD, and one read back from files written for it."""

from pathlib import Path

import numpy as np
import samples

from boomwright.book.axes import Axis, axes_of
from boomwright.book.poses import ASSEMBLED, Pose, Room, poses_of
from boomwright.book.scene import ANTENNA, CRADLE, ReadPart, Scene, part_of
from boomwright.design.model import Design
from boomwright.manifest import Manifest, write_manifest
from boomwright.pipeline import build_part
from boomwright.plan.plan import Plan, make_plan
from boomwright.shop.profile import Shop

GREY, RED = (0.6, 0.6, 0.6), (0.8, 0.2, 0.2)
NASTY = "</script><script>alert(1)</script> & 'beam' \"two\" <!--"
MADE = ("antenna", "cradle", "mould", "former")


def box(key: str, low: tuple, high: tuple, colour: tuple = GREY, *, label: str = "", group: str = ANTENNA) -> ReadPart:
    """A box as a closed mesh."""
    low, high = np.array(low, float), np.array(high, float)
    bits = np.array([(i & 1, i >> 1 & 1, i >> 2 & 1) for i in range(8)])
    quads = ((0, 2, 3, 1), (4, 5, 7, 6), (0, 1, 5, 4), (2, 6, 7, 3), (0, 4, 6, 2), (1, 3, 7, 5))
    triangles = [three for a, b, c, d in quads for three in ((a, b, c), (a, c, d))]
    return ReadPart(key, label or key, group, colour, np.where(bits, high, low), np.array(triangles))


def boxes(*parts: ReadPart, title: str = "boxes", axes: tuple[Axis, ...] = ()) -> Scene:
    """A scene of boxes that stand where their corners say, in one pose."""
    keys = tuple(part.key for part in parts)
    pose = Pose(ASSEMBLED, "Assembled", keys, {key: np.eye(4) for key in keys})
    return Scene(title, tuple(part_of(part) for part in parts), axes, (pose,))


def plain(design: Design = samples.GAUGE) -> Scene:
    """A design's own axes and poses, every part of the antenna and a cradle as boxes: no CAD."""
    plan = make_plan(design, Shop())
    axes = axes_of(plan)
    ends = {}
    for axis in axes:
        ends.setdefault(axis.part, []).extend(
            np.array(end) + s * axis.radius_mm for end in (axis.start, axis.end) for s in (-1, 1)
        )
    parts = [box(key, np.min(of, axis=0), np.max(of, axis=0), RED) for key, of in ends.items()]
    low, high = (tuple(span[i] for span in plan.cradle.extent_mm) for i in (0, 1))
    parts.append(box("cradle-1", low, (*high[:2], 2.0), group=CRADLE))
    frames = {"cradle-1": np.array(plan.cradle.frame)}
    rooms = [
        Room(p.key, p.group, frames.get(p.key, np.eye(4)), p.vertices.min(axis=0), p.vertices.max(axis=0))
        for p in parts
    ]
    return Scene(NASTY, tuple(part_of(part) for part in parts), axes, poses_of(plan, rooms))


def written(folder: Path, design: Design = samples.GAUGE) -> tuple[Plan, Manifest]:
    """Plan and manifest of a folder with the files of antenna, cradle, mould and former."""
    plan = make_plan(design, Shop())
    entries = [entry for name in MADE for entry in build_part(name, plan, folder)]
    return plan, write_manifest(folder, entries, MADE, {}, plan.sizes)
