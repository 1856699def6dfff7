"""The step pictures: still views of the scene's meshes, as PNG."""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from itertools import pairwise

import numpy as np

from boomwright.book.content import Picture
from boomwright.book.facets import ridges_of, unit_normals
from boomwright.book.poses import ASSEMBLED, FORMER, LAID, MOULD_CLOSED, MOULD_OPEN, Pose
from boomwright.book.raster import FINE, Canvas, Colours, Points, Sheet, farthest_near_by, png
from boomwright.book.scene import ANTENNA, CRADLE, MOULD, Scene, ScenePart
from boomwright.data.lettering import strokes, text_width_mm

SIZE_PX = 640
PAPER = (255, 255, 255)
INK = (24, 30, 36)
LIGHT = (-0.35, 0.55, 0.76)
"""Toward the light: right, up, toward the viewer."""

MARGIN_PX = 10
ASPECT = (0.34, 0.78)
"""Least and most height of a picture, of its width."""

PALE, PALE_INK = 0.62, 0.45
"""How far the colours of a part that is not the point, and of its lines, are moved toward the paper."""

TAG_PX = 10.0

DIM, INK_SHARE = 0.55, 0.3
"""Shares of a part's colour: on a face that looks away from the light, and of its lines."""

HIDDEN = np.float32(1.0)
"""Samples that an edge may lie behind what is drawn and still count as its edge."""


ALTS = {
    Picture.ANTENNA: "the finished antenna, each rod with its tag",
    Picture.CRADLE: "the empty cradle, seen from above",
    Picture.CRADLE_RODS: "the rods laid in the cradle, each with its tag",
    Picture.CRADLE_BOOM: "the boom upside down on its saddles, over the rods in the cradle",
    Picture.CRADLE_DRIVEN: "the driven element in its place, the rest of the antenna pale",
    Picture.MOULD_OPEN: "the mould's two halves drawn apart, the feed point between them",
    Picture.MOULD_CLOSED: "the mould closed round the feed point",
    Picture.FORMER: "the former of the driven element",
}
"""What each picture shows, for who cannot see it."""


@dataclass(frozen=True)
class View:
    """Where the viewer stands: turned from the side of the boom toward its front, and raised, in degrees."""

    azimuth_deg: float
    elevation_deg: float

    @property
    def axes(self) -> Points:
        """Unit vectors right, up and toward the viewer, as rows, (3, 3)."""
        a, e = math.radians(self.azimuth_deg), math.radians(self.elevation_deg)
        toward = np.array([math.sin(a) * math.cos(e), -math.cos(a) * math.cos(e), math.sin(e)])
        right = np.array([math.cos(a), math.sin(a), 0.0])
        return np.stack([right, np.cross(toward, right), toward])


ABOVE = View(-28.0, 38.0)
HIGH = View(-20.0, 55.0)


@dataclass(frozen=True)
class Shot:
    """What one picture shows.

    keys       the parts to draw
    pose       key of the pose
    view       where the viewer stands
    highlight  parts to keep in full colour while the others are pale; none = all in full colour
    focus      parts that fill the picture, the others cut off at its edge; none = all
    tags       whether each rod's tag stands at its end
    """

    keys: tuple[str, ...]
    pose: str = ASSEMBLED
    view: View = ABOVE
    highlight: tuple[str, ...] = ()
    focus: tuple[str, ...] = ()
    tags: bool = False


def picture(scene: Scene, shot: Shot, size_px: int = SIZE_PX) -> bytes:
    """A still picture as a PNG file, `size_px` wide, as high as what it shows asks for.

    Raises KeyError for a part or pose that the scene does not have.
    """
    pose = scene.pose(shot.pose)
    if pose is None:
        raise KeyError(shot.pose)
    axes, parts = shot.view.axes, [scene.part(key) for key in shot.keys]
    seen = {part.key: _stood(part.vertices_mm, pose, part.key) @ axes.T for part in parts}
    tags = list(_tags(scene, pose, shot, axes)) if shot.tags else []
    frame = _Frame.around([seen[key] for key in shot.focus or shot.keys], bool(tags), size_px)
    drawn = [
        _drawn(part, frame.on_sheet(seen[part.key]), not shot.highlight or part.key in shot.highlight) for part in parts
    ]
    depths = np.concatenate([each.corners[:, :, 2].ravel() for each in drawn])
    canvas = Canvas(frame.width * FINE, frame.height * FINE, float(depths.min()) - 1.0, float(depths.max()) + 1.0)
    sheet = Sheet(canvas, PAPER)
    sheet.fill(np.concatenate([each.corners for each in drawn]), np.concatenate([each.shades for each in drawn]))
    behind = farthest_near_by(sheet.depth()) - HIDDEN
    for each in drawn:
        sheet.draw(each.lines, each.ink, FINE, behind)
    if tags:
        _write(sheet, [(text, frame.on_sheet(end)) for text, end in tags])
    return png(sheet.picture())


def pictures(scene: Scene, size_px: int = SIZE_PX) -> dict[Picture, bytes]:
    """Every step picture that the parts of this scene allow, as PNG files."""
    return {name: picture(scene, shot, size_px) for name, shot in shots_of(scene).items()}


def shots_of(scene: Scene) -> dict[Picture, Shot]:
    """What each step picture shows; pictures of parts that were not made are left out."""
    antenna, cradle, mould = (scene.keys(group) for group in (ANTENNA, CRADLE, MOULD))
    shots = {Picture.ANTENNA: Shot(antenna, tags=True)}
    laid = scene.pose(LAID)
    if laid is not None:
        lying = tuple(key for key in laid.shows if key in antenna)
        # A rod that passes through the boom never lies in the cradle without it.
        first = lying if scene.through else tuple(key for key in lying if key != "boom")
        rods = tuple(key for key in first if key != "boom")
        shots[Picture.CRADLE] = Shot(cradle, LAID, HIGH)
        shots[Picture.CRADLE_RODS] = Shot(cradle + first, LAID, HIGH, rods, tags=True)
        shots[Picture.CRADLE_BOOM] = Shot(cradle + lying, LAID, ABOVE, ("boom",))
    if laid is not None and scene.through and "DE" in laid.shows:
        shots[Picture.CRADLE_DRIVEN] = Shot(cradle + lying, LAID, HIGH, ("DE",))
    else:
        shots[Picture.CRADLE_DRIVEN] = Shot(antenna, view=HIGH, highlight=("DE",), tags=True)
    if scene.pose(MOULD_OPEN) is not None:
        shots[Picture.MOULD_OPEN] = Shot(antenna + mould, MOULD_OPEN, focus=mould)
        shots[Picture.MOULD_CLOSED] = Shot(antenna + mould, MOULD_CLOSED, focus=mould)
    former = scene.pose(FORMER)
    if former is not None:
        shots[Picture.FORMER] = Shot(former.shows, FORMER, HIGH)
    return shots


@dataclass(frozen=True)
class _Drawn:
    """A part on the sheet: triangles that look at the viewer with their colours; lines and their colour."""

    corners: Points
    shades: Colours
    lines: Points
    ink: tuple[int, int, int]


@dataclass(frozen=True)
class _Frame:
    """Which part of the view is on the picture [px]: its size, samples a millimetre, the view's middle [mm]."""

    width: int
    height: int
    scale: float
    middle: Points

    @classmethod
    def around(cls, seen: Sequence[Points], has_tags: bool, width_px: int) -> _Frame:
        """The frame that holds these points with a margin."""
        low = np.min([points[:, :2].min(axis=0) for points in seen], axis=0)
        high = np.max([points[:, :2].max(axis=0) for points in seen], axis=0)
        margin = MARGIN_PX + (3.0 * TAG_PX if has_tags else 0.0)
        wide, tall = np.maximum(high - low, 1e-3)
        inside = width_px - 2.0 * margin
        least, most = (round(share * width_px) for share in ASPECT)
        height = min(max(math.ceil(inside * tall / wide + 2.0 * margin), least), most)
        scale = min(inside / wide, (height - 2.0 * margin) / tall)
        return cls(width_px, height, FINE * scale, (low + high) / 2.0)

    def on_sheet(self, seen: Points) -> Points:
        """Points of the view [mm] in samples: x right, y down, depth toward the viewer."""
        x = (seen[..., 0] - self.middle[0]) * self.scale + FINE * self.width / 2.0
        y = (self.middle[1] - seen[..., 1]) * self.scale + FINE * self.height / 2.0
        return np.stack([x, y, seen[..., 2] * self.scale], axis=-1)


def _stood(points: Points, pose: Pose, key: str) -> Points:
    place = pose.places[key]
    return np.asarray(points @ place[:3, :3].T + place[:3, 3])


def _drawn(part: ScenePart, points: Points, in_full: bool) -> _Drawn:
    corners = points[part.triangles]
    # The sheet's y runs down: turned back up for the normals.
    normals = unit_normals(corners * (1.0, -1.0, 1.0))
    faces = normals[:, 2] > 0.0
    colour = np.array(part.colour) * 255.0
    lit = np.clip(normals[faces] @ (np.array(LIGHT) / np.linalg.norm(LIGHT)), 0.0, 1.0)
    shades = colour * (DIM + (1.08 - DIM) * lit)[:, None]
    ink = INK_SHARE * colour
    if not in_full:
        shades, ink = shades + PALE * (255.0 - shades), ink + PALE_INK * (255.0 - ink)
    ridges = ridges_of(part.triangles)
    outline = faces[ridges.sides[:, 0]] != faces[ridges.sides[:, 1]]
    ends = np.concatenate([part.edges, ridges.ends[outline]])
    red, green, blue = (round(value) for value in ink)
    shown = np.clip(np.round(shades), 0.0, 255.0).astype(np.uint8)
    return _Drawn(corners[faces], shown, points[ends], (red, green, blue))


def _tags(scene: Scene, pose: Pose, shot: Shot, axes: Points) -> Iterator[tuple[str, Points]]:
    """Tags with the end of their rod that is lower in the picture and the one that is not, in view [mm], (2, 3)."""
    for axis in scene.axes:
        if axis.key == axis.part != "boom" and axis.part in shot.keys:
            ends = _stood(np.array([axis.start, axis.end]), pose, axis.part) @ axes.T
            yield axis.key, ends[np.argsort(ends[:, 1])]


def _write(sheet: Sheet, tags: Sequence[tuple[str, Points]]) -> None:
    """Tags on patches of paper."""
    lines = np.array([line for text, end in tags for line in _lettered(text, end)])
    sheet.draw(lines, PAPER, 4 * FINE, None)
    sheet.draw(lines, INK, FINE + 1, None)


def _lettered(text: str, end: Points) -> Iterator[tuple[tuple[float, float, float], ...]]:
    """The lines of a tag beyond the end of what it belongs to, away from its other end."""
    height = FINE * TAG_PX
    away = end[0, :2] - end[1, :2]
    length = float(np.hypot(*away))
    away = away / length if length > 0.0 else np.array([0.0, 1.0])
    x, y = end[0, :2] + 1.7 * height * away
    x, y = x - text_width_mm(text, height) / 2.0, y + height / 2.0
    for stroke in strokes(text, height):
        for a, b in pairwise(stroke):
            yield (x + a[0], y - a[1], 0.0), (x + b[0], y - b[1], 0.0)
